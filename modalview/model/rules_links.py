"""Rules of links: ends, kinds that make sense in a motion, and what each kind needs."""

from collections.abc import Callable
from typing import Any

from modalview.errors import UnitError
from modalview.model.fields import fields_of
from modalview.model.gears import gear_ratio
from modalview.model.parts import (
    Beam,
    Damper,
    Gear,
    Link,
    Motion,
    Mount,
    MountDamping,
    MountStiffness,
    RigidLink,
    Shaft,
    Spring,
)
from modalview.model.rules_context import Context, Findings
from modalview.model.rules_values import (
    above_zero,
    axes,
    cosine,
    direction,
    end,
    listed,
    not_negative,
    positive_value,
    space_axis,
    tolerance,
)
from modalview.model.values import Value
from modalview.units.parse import read
from modalview.units.quantities import (
    DAMPING,
    RATIO,
    STIFFNESS,
    TORSIONAL_DAMPING,
    TORSIONAL_STIFFNESS,
    Quantity,
)
from modalview.units.show import short

# Where each kind of link has a meaning. A shaft train only turns: its springs are shafts.
KINDS: dict[Motion, tuple[type[Link], ...]] = {
    Motion.SINGLE_AXIS: (Spring, Damper, Mount, RigidLink),
    Motion.SHAFT_TRAIN: (Shaft, Gear, Damper, RigidLink),
    Motion.PLANE: (Spring, Damper, Mount, Shaft, Gear, Beam, RigidLink),
    Motion.SPACE: (Spring, Damper, Mount, Shaft, Gear, Beam, RigidLink),
}
# Pitch radii are rounded when typed; a ratio further off than this share does not belong to them.
PITCH_MISMATCH = 0.01
# A beam's y axis nearer to its own line than this (1 - cosine) leaves its section unturned.
ALONG = 1e-6


def link(given: Link, context: Context) -> Findings:
    """Yield every rule that a link breaks."""
    yield from _ends(given, context)
    if not isinstance(given, KINDS[context.motion]):
        known = ", ".join(kind.kind for kind in KINDS[context.motion])
        yield "kind", f"a {given.kind} has no meaning in {context.motion.value}; links here are {known}"
        return
    yield from _RULES[type(given)](given, context)
    yield from tolerance("tolerance", given.tolerance, None)
    yield from not_negative("loss_factor", given.loss_factor)
    yield from positive_value("dynamic_ratio", given.dynamic_ratio)
    yield from above_zero("rated_load", given.rated_load)
    if given.vary_limits is not None:
        yield from _vary_limits(given, context)


def _ends(given: Link, context: Context) -> Findings:
    yield from end("from", given.from_, context)
    yield from end("to", given.to, context)
    start, stop = given.from_, given.to
    if start.body and start.body == stop.body:
        yield "to", f'both ends are on "{start.body}"; a link joins two parts'
    if start.support is not None and stop.support is not None:
        yield "to", "both ends are on supports; a link needs a body that moves"
    if isinstance(given, Gear | RigidLink):
        for key, one in (("from", start), ("to", stop)):
            if one.support is not None:
                yield key, f"a {given.kind} joins two bodies; a body is held still by its dof"


def _line_of_action(given: Spring | Damper, context: Context) -> Findings:
    yield from direction("direction", given.direction, context)
    if given.direction is None and not context.drawn_only:
        line = context.line(given.from_, given.to)
        if line is not None and not any(line):
            yield "direction", 'the ends coincide, so it must be told in which direction it acts, such as "y"'


def _spring(given: Spring, context: Context) -> Findings:
    yield from positive_value("stiffness", given.stiffness, "; leave out a spring that resists nothing")
    yield from _line_of_action(given, context)


def _damping(key: str, value: Value | None) -> Findings:
    if value is not None:
        yield from not_negative(key, value)
        yield from tolerance(f"{key} . tolerance", value.tolerance, value.entry)


def _damper(given: Damper, context: Context) -> Findings:
    yield from _damping("damping", given.damping)
    yield from _line_of_action(given, context)


def _parts_of(key: str, given: MountStiffness | MountDamping | None, context: Context) -> Findings:
    if given is None:
        return
    for field in fields_of(type(given)):
        value: Value | None = getattr(given, field.name)
        if value is None:
            continue
        where = f"{key} . {field.key}"
        if field.key not in context.freedoms:
            yield (
                where,
                f"{context.motion.value} has no direction {field.key}; it has {', '.join(context.freedoms)}",
            )
        if key == "stiffness":
            yield from positive_value(where, value, "; leave out a direction that is not resisted")
        else:
            yield from _damping(where, value)


def _mount(given: Mount, context: Context) -> Findings:
    yield from _parts_of("stiffness", given.stiffness, context)
    yield from _parts_of("damping", given.damping, context)
    yield from axes("axes", given.axes, context)
    if given.stiffness in (None, MountStiffness()) and given.damping in (None, MountDamping()):
        yield "stiffness", f"a mount needs stiffness or damping in {' or '.join(context.freedoms)}"
    if given.axes is not None and given.axes.x is None and given.axes.y is None:
        yield "axes", "need x or y; the missing one is taken level, square to the other"


def _shaft(given: Shaft, context: Context) -> Findings:
    yield from positive_value("stiffness", given.stiffness)
    yield from space_axis("axis", given.axis, context)


def _gear(given: Gear, context: Context) -> Findings:
    yield from space_axis("axis", given.axis, context)
    if (given.ratio is None) == (given.teeth is None):
        found = "both are given" if given.teeth is not None else "neither is given"
        yield "ratio", f"a gear has a ratio or teeth; {found}"
    elif gear_ratio(given) is None and given.teeth is not None:
        yield (
            "teeth",
            f"are two whole numbers, neither zero, at most one negative (a ring gear); found {given.teeth}",
        )
    elif gear_ratio(given) is None:
        yield "ratio", f'is a number or a fraction such as "-21/5", not zero; found {given.ratio!r}'
    yield from positive_value("stiffness", given.stiffness, "; leave it out for an exact ratio")
    radii = given.pitch_radius
    if given.stiffness is not None and radii is None:
        yield "pitch_radius", "is missing; the stiffness of a mesh acts at it, give from and to"
    if radii is not None:
        yield from above_zero("pitch_radius . from", radii.from_)
        yield from above_zero("pitch_radius . to", radii.to)
        ratio = gear_ratio(given)
        if ratio and radii.from_.si > 0 and radii.to.si > 0:
            drawn, told = radii.from_.si / radii.to.si, abs(float(ratio))
            if abs(drawn / told - 1) > PITCH_MISMATCH:
                yield "pitch_radius", f"from over to is {short(drawn, 4)}, but the ratio is {short(told, 4)}"


def _beam(given: Beam, context: Context) -> Findings:
    keys = ("E", "A", "Iy", "Iz", "G", "J") if context.motion is Motion.SPACE else ("E", "A", "I")
    for key in ("E", "A", "I", "Iy", "Iz", "G", "J"):
        value: Value | None = getattr(given, key)
        if value is None and key in keys:
            yield key, f"is missing; a beam in {context.motion.value} needs {', '.join(keys)}"
        elif value is not None and key not in keys:
            yield key, f"does not belong to a beam in {context.motion.value}, which has {', '.join(keys)}"
        yield from positive_value(key, value)
    line = context.line(given.from_, given.to)
    if line is not None and not any(line):
        yield "to", "the ends coincide, so the beam has no length"
        return
    yield from _section_axes(given, context, line)


def _section_axes(given: Beam, context: Context, line: tuple[float, ...] | None) -> Findings:
    own = given.axes
    if own is None:
        if context.motion is Motion.SPACE and given.Iy and given.Iz and given.Iy.si != given.Iz.si:
            yield "axes", 'are missing; Iy and Iz differ, so y of the section must be told: {"y": [0, 1, 0]}'
        return
    if context.motion is Motion.PLANE:
        yield "axes", "have no meaning for a beam in plane; leave them out"
        return
    wrong = list(axes("axes", own, context))
    yield from wrong
    if own.x is not None or own.y is None:
        yield "axes", "of a beam are y alone; x runs along it"
    elif not wrong and line is not None and cosine(own.y, line) > 1 - ALONG:
        yield "axes . y", "runs along the beam; it must point across it"


def _rigid(given: RigidLink, context: Context) -> Findings:
    yield from listed("directions", given.directions, context.freedoms, context.motion.value)
    if given.directions == ():
        yield "directions", "is empty; leave it out to join all directions"


def varied_quantity(given: Link, context: Context) -> Quantity | None:
    """Return what the limits of a link's change are typed in: its value's quantity, or a ratio to it."""
    if isinstance(given, Mount | Beam):
        return RATIO
    if isinstance(given, Damper):
        return TORSIONAL_DAMPING if context.motion is Motion.SHAFT_TRAIN else DAMPING
    if isinstance(given, Shaft):
        return TORSIONAL_STIFFNESS
    return STIFFNESS if isinstance(given, Spring) or (isinstance(given, Gear) and given.stiffness) else None


def _vary_limits(given: Link, context: Context) -> Findings:
    quantity = varied_quantity(given, context)
    limits = given.vary_limits
    if quantity is None or limits is None:
        yield "vary_limits", f"a {given.kind} has no value that could be changed here; leave them out"
        return
    found = []
    for key, text in (("low", limits.low), ("high", limits.high)):
        if text is None:
            continue
        try:
            found.append(read(text, quantity))
        except UnitError as reason:
            yield f"vary_limits . {key}", str(reason)
    if any(number < 0 for number in found) or (len(found) == 2 and found[0] > found[1]):
        yield "vary_limits", f'must rise from low to high; found "{limits.low}" to "{limits.high}"'


_RULES: dict[type[Link], Callable[[Any, Context], Findings]] = {
    Spring: _spring,
    Damper: _damper,
    Mount: _mount,
    Shaft: _shaft,
    Gear: _gear,
    Beam: _beam,
    RigidLink: _rigid,
}
