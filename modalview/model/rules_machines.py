"""Rules of machines: speeds, margins, excitations and how strong they are."""

import math

from modalview.model.parts import Excitation, Machine, Magnitude, Margin, Motion, SpeedRange
from modalview.model.rules_context import Context, Findings, place_of
from modalview.model.rules_names import plain_id, plain_name
from modalview.model.rules_values import above_zero, direction, end, not_negative, share, space_axis
from modalview.model.values import Entry, is_sane
from modalview.units.show import short

KINDS_OF_MAGNITUDE = ("force", "torque", "unbalance", "grade", "motion")
# A single axis cannot turn and a shaft train cannot shift.
MAGNITUDES: dict[Motion, tuple[str, ...]] = {
    Motion.SINGLE_AXIS: ("force", "unbalance", "grade", "motion"),
    Motion.SHAFT_TRAIN: ("torque", "motion"),
    Motion.PLANE: KINDS_OF_MAGNITUDE,
    Motion.SPACE: KINDS_OF_MAGNITUDE,
}


def machine(given: Machine, context: Context) -> Findings:
    """Yield every rule that a machine breaks."""
    yield from _speed("speed", given.speed)
    yield from share("speed_tolerance", given.speed_tolerance)
    yield from _margin("margin", given.margin)
    if given.on is not None and given.on not in context.bodies:
        yield "on", f'there is no body "{given.on}" whose speed this could be'
    if given.run_up is not None:
        yield from above_zero("run_up . acceleration", given.run_up.acceleration)
    for number, barred in enumerate(given.barred_ranges):
        yield from _speed(f"barred_ranges[{number}]", barred)
    yield from _margins_given(given)
    seen: set[str] = set()
    for number, excitation in enumerate(given.excitations):
        place = place_of("excitations", number, excitation.id)
        if excitation.id in seen:
            yield (
                f"{place} . id",
                f'"{excitation.id}" is already an excitation of this machine; ids are unique',
            )
        seen.add(excitation.id)
        for key, reason in _excitation(excitation, given, context):
            yield f"{place} . {key}", reason


def _speed(key: str, speed: Entry | SpeedRange | None) -> Findings:
    if isinstance(speed, SpeedRange):
        yield from not_negative(f"{key} . from", speed.from_)
        yield from above_zero(f"{key} . to", speed.to)
        if speed.from_.si > speed.to.si:
            yield (
                key,
                f'must rise from the lowest to the highest; found "{speed.from_.text}" to "{speed.to.text}"',
            )
    else:
        yield from above_zero(key, speed)


def _margin(key: str, margin: Entry | Margin | None) -> Findings:
    if isinstance(margin, Margin):
        yield from share(f"{key} . below", margin.below)
        yield from share(f"{key} . above", margin.above)
    else:
        yield from share(key, margin)


def _margins_given(given: Machine) -> Findings:
    without = [one.id for one in given.excitations if one.margin is None]
    if given.margin is None and without:
        names = ", ".join(f'"{name}"' for name in without)
        yield (
            "margin",
            (
                f"is missing for {names}; a margin is required and has no default: "
                'give one here, such as "15 %", or at the excitation'
            ),
        )


def _excitation(given: Excitation, owner: Machine, context: Context) -> Findings:
    yield from plain_id("id", given.id)
    yield from plain_name("name", given.name)
    yield from _order(given, owner, context)
    yield from above_zero("frequency", given.frequency)
    yield from _margin("margin", given.margin)
    if given.at is not None:
        yield from end("at", given.at, context)
    torque = given.magnitude is not None and given.magnitude.torque is not None
    yield from direction("direction", given.direction, context, rotating=True, turning=torque)
    yield from space_axis("axis", given.axis, context)
    if given.axis is not None and not torque and given.direction != "rotating":
        yield "axis", 'belongs to a torque or to the direction "rotating"'
    if given.magnitude is not None:
        yield from _magnitude(given, given.magnitude, owner, context)


def _order(given: Excitation, owner: Machine, context: Context) -> Findings:
    if (given.order is None) == (given.frequency is None):
        found = "both are given" if given.order is not None else "neither is given"
        yield "order", f"an excitation has an order of the speed or a fixed frequency; {found}"
    if given.order is not None:
        if given.order <= 0 or not (is_sane(given.order) or math.isnan(given.order)):
            yield "order", f"must be above zero and a number of a machine; found {short(given.order)}"
        if owner.speed is None:
            yield "order", "is a multiple of the machine's speed, which is missing; give the machine a speed"
    if given.of is None:
        return
    if given.order is None:
        yield "of", "tells whose rotation an order counts; a fixed frequency has none"
    if owner.on is None:
        yield "of", "needs the machine's on: the body whose speed its speed is"
    if given.of not in context.bodies:
        yield "of", f'there is no body "{given.of}"'
    if context.motion is Motion.SINGLE_AXIS:
        yield "of", "has no meaning in single axis, where nothing turns"


def _magnitude(given: Excitation, magnitude: Magnitude, owner: Machine, context: Context) -> Findings:
    kinds = [kind for kind in KINDS_OF_MAGNITUDE if getattr(magnitude, kind) is not None]
    if len(kinds) != 1:
        found = f"found {' and '.join(kinds)}" if kinds else "none is given"
        yield "magnitude", f"is one of {', '.join(KINDS_OF_MAGNITUDE)}; {found}"
        return
    kind = kinds[0]
    yield from above_zero(f"magnitude . {kind}", getattr(magnitude, kind))
    if kind not in MAGNITUDES[context.motion]:
        known = ", ".join(MAGNITUDES[context.motion])
        yield f"magnitude . {kind}", f"has no meaning in {context.motion.value}, which knows {known}"
    yield from _companions(kind, magnitude, owner)
    supported = given.at is not None and given.at.support is not None
    if kind == "motion" and not supported:
        yield "at", 'a motion is imposed at a support: {"support": "..."}'
    if kind != "motion" and supported:
        yield "at", f"a {kind} acts on a body; at a support only a motion can be given"


def _companions(kind: str, magnitude: Magnitude, owner: Machine) -> Findings:
    yield from above_zero("magnitude . rotor_mass", magnitude.rotor_mass)
    yield from above_zero("magnitude . service_speed", magnitude.service_speed)
    if kind != "grade":
        for key in ("rotor_mass", "service_speed"):
            if getattr(magnitude, key) is not None:
                yield f"magnitude . {key}", "belongs to a balance quality grade"
    elif magnitude.rotor_mass is None:
        yield "magnitude . rotor_mass", "is missing; a balance quality grade needs the mass of the rotor"
    elif magnitude.service_speed is None and owner.speed is None:
        yield "magnitude . service_speed", "is missing, and the machine has no speed to take it from"
