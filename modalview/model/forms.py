"""What the form of a part asks for, as lines: one description for each field, given or not.

The window draws the lines by one loop and types them by `filling.typed_together`.
"""

from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import Any

from modalview.model.addresses import Address
from modalview.model.composites import composite_text, is_composite
from modalview.model.filling import place_at
from modalview.model.parts import (
    FREEDOMS,
    Beam,
    Body,
    Damper,
    End,
    Excitation,
    Gear,
    InertiaTensor,
    Link,
    Machine,
    Model,
    Motion,
    Mount,
    RigidLink,
    Shaft,
    Spring,
    Support,
)
from modalview.model.rules_machines import MAGNITUDES
from modalview.model.tolerance_text import tolerance_text
from modalview.model.values import Value
from modalview.units.quantities import Quantity
from modalview.units.show import short

_SPACE, _PLANE, _TRAIN = Motion.SPACE, Motion.PLANE, Motion.SHAFT_TRAIN
_DRAWN_ONLY = (Motion.SINGLE_AXIS, Motion.SHAFT_TRAIN)


@dataclass(frozen=True, slots=True)
class FormLine:
    """One line of a form.

    Parameters
    ----------
    key : str
        The same for the same line of another part.
    label : str
        As a person reads it: "stiffness x".
    address : Address
        Where its text is typed.
    text : str
        As typed; "" where nothing stands.
    quantity, si : Quantity and float, or None
        For the converted value.
    tolerance_address, tolerance : Address or None, str
        Where a tolerance is typed, and the one given; None where there can be none (yet).
    noted : bool
        Whether source and status can be typed: a value stands there.
    source, status : str
    choices : tuple of pairs
        What may stand there and how it is called, where it is one of some words.
    blank : str
        How it is called that none of them stands there.
    hint : str
        What is shown where nothing stands.
    more : bool
        Whether it is folded away with the less usual ones.
    section : str
        Name of the excitation it belongs to; "" for the part itself.
    clears : tuple of Address
        What is taken away when this is given.
    emptied : tuple of Address
        What is taken away when this is emptied.
    group : str
        Lines that must be given together have the same one; ``needed`` tells which cannot be left out.
    needed : bool
    """

    key: str
    label: str
    address: Address
    text: str = ""
    quantity: Quantity | None = None
    si: float | None = None
    tolerance_address: Address | None = None
    tolerance: str = ""
    noted: bool = False
    source: str = ""
    status: str = ""
    choices: tuple[tuple[str, str], ...] = ()
    blank: str = "not told"
    hint: str = ""
    more: bool = False
    section: str = ""
    clears: tuple[Address, ...] = ()
    emptied: tuple[Address, ...] = ()
    group: str = ""
    needed: bool = False

    def typed(self, text: str) -> tuple[tuple[Address, str], ...]:
        """Return what typing a text here types, for `filling.typed_together`."""
        if text.strip():
            return (*((one, "") for one in self.clears), (self.address, text))
        return tuple((one, "") for one in self.emptied or (self.address,))


@dataclass(frozen=True, slots=True)
class _Spec:
    """How a line is made.

    Parameters
    ----------
    steps : tuple of str
        From the part to the field.
    label : str
    more : bool
        Folded away.
    motions : tuple of Motion
        Where it has a meaning; elsewhere it is shown only when it is given.
    hint : str
    group : str
    needed : bool
    clears : tuple of steps
    emptied : tuple of steps
    """

    steps: tuple[str | int, ...]
    label: str
    more: bool = False
    motions: tuple[Motion, ...] = tuple(Motion)
    hint: str = ""
    group: str = ""
    needed: bool = False
    clears: tuple[tuple[str | int, ...], ...] = ()
    emptied: tuple[tuple[str | int, ...], ...] = ()
    choices: tuple[tuple[str, str], ...] = ()


def form_lines(model: Model, part_id: str) -> tuple[FormLine, ...]:
    """Return the lines of the form of a part; of a machine also those of its excitations.

    Raises
    ------
    LookupError
        When there is no such part.

    Examples
    --------
    >>> from modalview.units.quantities import MASS
    >>> model = Model(bodies=(Body(id="motor", mass=Value.typed("620 kg", MASS, "3 %")),))
    >>> [(one.label, one.text, one.tolerance) for one in form_lines(model, "motor") if not one.more]
    [('mass', '620 kg', '3 %'), ('name', '', '')]
    """
    address, part = part_of(model, part_id)
    lines = [_line(model, address, spec) for spec in _specs(model, part)]
    found = [
        line for line, spec in zip(lines, _specs(model, part), strict=True) if _wanted(model, spec, line)
    ]
    if isinstance(part, Machine):
        for one in part.excitations:
            found.extend(_excitation_lines(model, (*address, "excitations", one.id), one))
    return tuple(found)


def part_of(model: Model, part_id: str) -> tuple[Address, Body | Support | Link | Machine]:
    """Return where a part stands, and the part; LookupError when there is none such."""
    for group in ("bodies", "links", "supports", "machines"):
        for part in getattr(model, group):
            if part.id == part_id:
                return (group, part_id), part
    raise LookupError(f'the model has no part "{part_id}"')


def bodies_of(model: Model) -> tuple[tuple[str, str], ...]:
    """Return every body with what it is called."""
    return tuple((body.id, body.name or body.id) for body in model.bodies)


def kind_of(part: Body | Support | Link | Machine) -> str:
    """Return what a part is called by kind."""
    if isinstance(part, Body):
        massless = part.mass is not None and part.mass.si == 0 and part.inertia is None
        return "junction" if massless else "body"
    if isinstance(part, Support):
        return "support"
    return "machine" if isinstance(part, Machine) else part.kind


def _wanted(model: Model, spec: _Spec, line: FormLine) -> bool:
    return model.motion in spec.motions or bool(line.text)


def _line(model: Model, address: Address, spec: _Spec) -> FormLine:
    at = (*address, *spec.steps)
    place = place_at(model, at)
    name = place.field.name if place.field is not None else ""
    value = place.item if isinstance(place.item, Value) else None
    line = FormLine(
        key=spec.label,
        label=spec.label,
        address=at,
        text=_text(place.kind, name, place.item),
        quantity=place.quantity if not is_composite(place.kind, name) else None,
        si=getattr(place.item, "si", None),
        hint=spec.hint or (f"such as {place.quantity.example}" if place.quantity is not None else ""),
        more=spec.more,
        group=spec.group,
        needed=spec.needed,
        clears=tuple((*address, *steps) for steps in spec.clears),
        emptied=tuple((*address, *steps) for steps in spec.emptied),
        choices=spec.choices,
    )
    return line if value is None else _known(line, place.owner, name, value)


def _known(line: FormLine, owner: Any, name: str, value: Value) -> FormLine:
    """Add what is known about a value that stands there."""
    line = replace(line, noted=True, source=value.source or "", status=value.status or "")
    if not isinstance(owner, InertiaTensor):
        own = (*line.address, "tolerance")
        return replace(line, tolerance_address=own, tolerance=tolerance_text(value.tolerance))
    if name != "Ixx":  # the tolerance of a tensor scales it as a whole; it stands at the first line
        return line
    own = (*line.address[:-1], "tolerance")
    return replace(line, tolerance_address=own, tolerance=tolerance_text(owner.tolerance))


def _text(kind: type, name: str, item: Any) -> str:
    composite = composite_text(kind, name, item)
    if composite is not None:
        return composite
    if item is None:
        return ""
    if name == "tolerance":
        return tolerance_text(item)
    if isinstance(item, float | int):
        return short(item, 15)
    return item if isinstance(item, str) else str(item.text)


# What each kind of part asks for

_NAME = _Spec(("name",), "name")
_WHOLE = _Spec(("tolerance",), "tolerance of the part", more=True, hint="such as 5 %")
_MOMENTS = ("Ixx", "Iyy", "Izz")


def _specs(model: Model, part: Body | Support | Link | Machine) -> Iterator[_Spec]:
    if isinstance(part, Body):
        yield from _body(model, part)
    elif isinstance(part, Support):
        yield _NAME
        yield from _point(model, ("position",), "position", more=False)
    elif isinstance(part, Machine):
        yield from _machine(model)
    else:
        yield from _link(model, part)


def _body(model: Model, part: Body) -> Iterator[_Spec]:
    train = model.motion is _TRAIN
    # What does not turn is not asked for an inertia first.
    still = part.inertia is None and part.dof is not None and not any(one[0] == "r" for one in part.dof)
    if not train:
        yield _Spec(("mass",), "mass")
    if model.motion is _SPACE:
        for key in _MOMENTS:
            yield _Spec(("inertia", key), key, still, group="inertia", needed=True, emptied=(("inertia",),))
        for key in ("Pxy", "Pxz", "Pyz"):
            yield _Spec(("inertia", key), key, more=True, group="inertia")
    else:
        yield _Spec(("inertia",), "inertia", still, motions=(_PLANE, _TRAIN))
    yield _NAME
    if train:
        yield _Spec(("mass",), "mass", more=True)
    yield from _point(model, ("position",), "position")
    yield _WHOLE
    yield _Spec(("dof",), "moves in", more=True, hint=f"all: {', '.join(FREEDOMS[model.motion])}")
    yield _Spec(("drawn", "width"), "drawn width", more=True)
    yield _Spec(("drawn", "height"), "drawn height", more=True)


def _point(model: Model, steps: tuple[str, ...], label: str, *, more: bool = True) -> Iterator[_Spec]:
    for number, axis in enumerate("xyz" if model.motion is _SPACE else "xy"):
        yield _Spec((*steps, number), f"{label} {axis}", more=more, hint="such as 0.85 m")


def _link(model: Model, part: Link) -> Iterator[_Spec]:
    yield from _values(model, part)
    yield _NAME
    if isinstance(part, Spring | Damper):
        yield _Spec(("direction",), "direction", more=True, motions=(_PLANE, _SPACE), hint="along its ends")
    if isinstance(part, Shaft | Gear):
        yield _Spec(("axis",), "axis", more=True, motions=(_SPACE,), hint="1 0 0, along x")
    if isinstance(part, Mount):
        for key in ("x", "y"):
            yield _Spec(
                ("axes", key), f"own axis {key}", more=True, motions=(_PLANE, _SPACE), hint="as the model"
            )
    if isinstance(part, Beam):
        yield _Spec(("axes", "y"), "own axis y", more=True, motions=(_SPACE,), hint="such as 0 1 0")
    yield from _ends(model, part)
    yield _WHOLE
    stiff = tuple(Motion) if isinstance(part, Spring | Mount | Shaft | Beam | Gear) else ()
    yield _Spec(("dynamic_ratio",), "dynamic ratio", more=True, motions=stiff, hint="such as 1.2")
    yield _Spec(("loss_factor",), "loss factor", more=True, motions=stiff, hint="such as 0.1")
    yield _Spec(("rated_load",), "rated load", more=True)


def _values(model: Model, part: Link) -> Iterator[_Spec]:
    """Yield the values that make the link what it is."""
    if isinstance(part, Spring | Shaft):
        yield _Spec(("stiffness",), "stiffness")
    elif isinstance(part, Damper):
        yield _Spec(("damping",), "damping")
    elif isinstance(part, Mount):
        ways = FREEDOMS[model.motion]
        yield from (_Spec(("stiffness", way), f"stiffness {way}", hint="none") for way in ways)
        yield from (_Spec(("damping", way), f"damping {way}", more=True, hint="none") for way in ways)
    elif isinstance(part, Gear):
        yield _Spec(("teeth",), "teeth", hint="such as 84 : 20", clears=(("ratio",),))
        yield _Spec(("ratio",), "ratio", hint="such as -4.2", clears=(("teeth",),))
        yield _Spec(("stiffness",), "mesh stiffness", more=True, hint="rigid", group="mesh", needed=True)
        for key, label in (("from_", "pitch radius, from"), ("to", "pitch radius, to")):
            yield _Spec(
                ("pitch_radius", key),
                label,
                more=True,
                group="mesh",
                needed=True,
                emptied=(("stiffness",), ("pitch_radius",)),
            )
    elif isinstance(part, Beam):
        keys = ("E", "Iy", "Iz", "A", "G", "J") if model.motion is _SPACE else ("E", "I", "A")
        yield from (_Spec((key,), key) for key in keys)
    elif isinstance(part, RigidLink):
        yield _Spec(("directions",), "joins", hint=f"all: {', '.join(FREEDOMS[model.motion])}")


def _ends(model: Model, part: Link) -> Iterator[_Spec]:
    for side, end in (("from_", part.from_), ("to", part.to)):
        yield from _offset(model, (side,), end, f"{'first' if side == 'from_' else 'second'} end")


def _offset(model: Model, steps: tuple[str, ...], end: End | None, label: str) -> Iterator[_Spec]:
    """Yield the lines of where on its body an end stands."""
    if end is None or end.body is None or (model.motion in _DRAWN_ONLY and end.offset is None):
        return
    for number, axis in enumerate("xyz" if model.motion is _SPACE else "xy"):
        yield _Spec((*steps, "offset", number), f"{label}, offset {axis}", more=True, hint="0 m")


def _machine(model: Model) -> Iterator[_Spec]:
    yield _Spec(("speed",), "speed", hint="such as 600 to 1800 rpm")
    yield _Spec(("margin",), "margin", hint="such as 15 %")
    yield _NAME
    yield _Spec(("speed_tolerance",), "speed tolerance", more=True, hint="such as 1 %")
    bodies = bodies_of(model)
    yield _Spec(("on",), "speed is that of", more=True, motions=(_TRAIN, _PLANE, _SPACE), choices=bodies)
    yield _Spec(("run_up", "acceleration"), "run-up", more=True, hint="such as 50 rpm/s")


def _excitation_lines(model: Model, address: Address, given: Excitation) -> Iterator[FormLine]:
    section = given.name or given.id
    for spec in _excitation(model, given):
        line = _line(model, address, spec)
        if _wanted(model, spec, line):
            yield replace(line, key=f"{given.id}: {line.key}", section=section)


def _excitation(model: Model, given: Excitation) -> Iterator[_Spec]:
    bodies = bodies_of(model)
    yield _Spec(("order",), "order", hint="such as 1", clears=(("frequency",),))
    yield _Spec(("frequency",), "fixed frequency", clears=(("order",), ("of",)))
    yield _Spec(("direction",), "direction", hint="not told")
    yield _NAME
    if given.at is None or given.at.body is not None:
        yield _Spec(("at", "body"), "acts on", more=True, choices=bodies)
    yield from _offset(model, ("at",), given.at, "where it acts")
    yield from _strength(model, given)
    yield _Spec(("margin",), "margin of its own", more=True, hint="the machine's")
    yield _Spec(("axis",), "axis", more=True, motions=(_SPACE,), hint="1 0 0, along x")
    turning = (_TRAIN, _PLANE, _SPACE)
    yield _Spec(("of",), "order of the speed of", more=True, motions=turning, choices=bodies)


_GRADE = ("grade", "rotor_mass", "service_speed")


def _strength(model: Model, given: Excitation) -> Iterator[_Spec]:
    """Yield the kinds of magnitude that make sense at its place; giving one takes the others away."""
    kinds = MAGNITUDES[model.motion]
    supported = given.at is not None and given.at.support is not None
    for kind in kinds:
        if (kind == "motion") is not supported:
            continue
        own = _GRADE if kind == "grade" else (kind,)
        others = (*(one for one in kinds if one not in own), *(one for one in _GRADE if one not in own))
        clears = tuple(("magnitude", one) for one in dict.fromkeys(others))
        emptied = tuple(("magnitude", one) for one in own)
        for key in own:
            label = {"grade": "balance grade", "service_speed": "grade at"}.get(key, key.replace("_", " "))
            needed = kind == "grade" and key != "service_speed"
            hint = "the top speed" if key == "service_speed" else ""
            group = "grade" if kind == "grade" else ""
            taken = emptied if needed else ()
            yield _Spec(("magnitude", key), label, True, tuple(Motion), hint, group, needed, clears, taken)
