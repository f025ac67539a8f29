"""New parts as they are drawn: bodies, supports and links with starting values.

A drawn part can be analysed at once, with values that nobody has given yet. Each such value says so in its
source, so that a doubt can name it until it is typed.
"""

import math
from collections.abc import Sequence
from dataclasses import replace
from typing import Any

from modalview.errors import Fault, InputError, ModelFaultsError
from modalview.model import rules_bodies, rules_links
from modalview.model.adding_machines import add_excitation, add_machine
from modalview.model.entries import decimal_of, length_like, point_of
from modalview.model.ids import fresh_id
from modalview.model.parts import (
    LINK_KINDS,
    Body,
    Drawn,
    End,
    InertiaTensor,
    Link,
    Model,
    Motion,
    MountStiffness,
    Support,
)
from modalview.model.rules_context import Context, Finding, place_of
from modalview.model.values import STARTING, Value
from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.show import show

__all__ = [
    "BODY_KINDS",
    "STARTING",
    "STARTING_SECTION",
    "add_body",
    "add_excitation",
    "add_link",
    "add_machine",
    "add_support",
    "end_at",
    "fresh_id",
    "starting_value",
]

# What a beam's starting values stand for: A = pi d^2 / 4, I = pi d^4 / 64, J = 2 I, of steel.
STARTING_SECTION = "solid round steel bar, diameter 100 mm"
_BEAM = {"E": ("210 GPa", q.MODULUS), "A": ("7854 mm2", q.AREA)}
_BEAM_IN_PLANE = {"I": ("4.909e6 mm4", q.SECOND_MOMENT)}
_BEAM_IN_SPACE = {
    "Iy": ("4.909e6 mm4", q.SECOND_MOMENT),
    "Iz": ("4.909e6 mm4", q.SECOND_MOMENT),
    "G": ("81 GPa", q.MODULUS),
    "J": ("9.817e6 mm4", q.SECOND_MOMENT),
}
_TEXTS: dict[Quantity, str] = {
    q.MASS: "100 kg",
    q.INERTIA: "1 kg m2",
    q.STIFFNESS: "1e6 N/m",
    q.DAMPING: "1e3 N s/m",
    q.TORSIONAL_STIFFNESS: "1e5 N m/rad",
    q.TORSIONAL_DAMPING: "10 N m s/rad",
}
_TEETH = (40, 20)
# Metres of a body that is put down with one click.
_SIZE = (0.6, 0.4)

# Which bodies have a meaning: a single axis does not turn, a shaft train does nothing else.
BODY_KINDS: dict[Motion, tuple[str, ...]] = {
    Motion.SINGLE_AXIS: ("mass", "junction"),
    Motion.SHAFT_TRAIN: ("disc", "junction"),
    Motion.PLANE: ("mass", "body", "disc", "junction"),
    Motion.SPACE: ("mass", "body", "junction"),
}
_STEMS = {
    "mass": "m",
    "body": "b",
    "disc": "d",
    "junction": "j",
    "spring": "k",
    "damper": "c",
    "mount": "mt",
    "shaft": "sh",
    "gear": "g",
    "beam": "bm",
    "rigid link": "r",
}


def starting_value(text: str, quantity: Quantity) -> Value:
    """Return a value that nobody has given yet; its source says so.

    >>> starting_value("100 kg", q.MASS).source
    'starting value, not given yet'
    """
    return replace(Value.typed(text, quantity), source=STARTING, status="assumed")


def _start(quantity: Quantity) -> Value:
    return starting_value(_TEXTS[quantity], quantity)


def add_body(
    model: Model, kind: str, position: tuple[float, ...], size: tuple[float, float] | None = None
) -> tuple[Model, str]:
    """Add a body with starting values.

    Parameters
    ----------
    kind : str
        "mass" (does not turn), "body", "disc" or "junction" (no mass); those of ``BODY_KINDS``.
    position : tuple of float
        Of the centre of gravity, m; two numbers, in space three.
    size : (width, height) or None
        As drawn, m. The inertia of a body is that of the solid rectangle m (w^2 + h^2) / 12, in
        space of the box whose depth is the smaller of both, of a disc in plane m w^2 / 8.

    Returns
    -------
    (Model, str)
        The model with the body at the end of its list, and the body's id.

    Raises
    ------
    InputError
        When the kind has no meaning in this motion or the size is not above zero.
    """
    known = BODY_KINDS[model.motion]
    if kind not in known:
        raise InputError(
            f"a {kind} has no meaning in {model.motion.value}; bodies here are {', '.join(known)}"
        )
    if size is not None and not (min(size) > 0 and math.isfinite(max(size))):
        raise InputError(f"a {kind} needs a width and a height above zero; found {size[0]:g} and {size[1]:g}")
    units = model.units or "SI"
    bare = Body(
        id=fresh_id(model, _STEMS[kind]),
        position=point_of(position, units),
        drawn=_drawn(kind, size, units),
    )
    new = _weighed(bare, kind, model, size or _SIZE)
    _refuse("bodies", len(model.bodies), new, list(rules_bodies.body(new, Context.of(model))))
    return replace(model, bodies=(*model.bodies, new)), new.id


def _drawn(kind: str, size: tuple[float, float] | None, units: str) -> Drawn | None:
    if kind == "junction":
        return Drawn(shape="point")
    shape = "disc" if kind == "disc" else None
    if size is None and kind != "body":
        return Drawn(shape=shape) if shape else None
    width, height = point_of(size or _SIZE, units)
    return Drawn(width=width, height=height, shape=shape)


def _weighed(bare: Body, kind: str, model: Model, size: tuple[float, float]) -> Body:
    """Give a body its starting mass and inertia; a junction has exactly none."""
    motion = model.motion
    if kind == "junction":
        if motion is Motion.SHAFT_TRAIN:
            return replace(bare, inertia=Value.typed("0 kg m2", q.INERTIA))
        return replace(bare, mass=Value.typed("0 kg", q.MASS))
    if motion is Motion.SHAFT_TRAIN:
        return replace(bare, inertia=_start(q.INERTIA))
    mass = _start(q.MASS)
    weighed = replace(bare, mass=mass)
    if kind == "mass":
        # A point has no inertia: left free to turn, it would have nothing to turn with.
        still = {Motion.PLANE: ("x", "y"), Motion.SPACE: ("x", "y", "z")}
        return replace(weighed, dof=still.get(motion))
    width, height = size
    if motion is Motion.SPACE:
        return replace(weighed, inertia=_box(mass.si, width, height, model.units or "SI"))
    moment = mass.si * (width**2 / 8 if kind == "disc" else (width**2 + height**2) / 12)
    return replace(weighed, inertia=_inertia(moment, model.units or "SI"))


def _inertia(moment: float, units: str) -> Value:
    return starting_value(show(moment, q.INERTIA, units), q.INERTIA)


def _box(mass: float, width: float, height: float, units: str) -> InertiaTensor:
    """Return the tensor of a box: width along x, height along z, the smaller of both along y."""
    depth = min(width, height)
    along = ((depth, height), (width, height), (width, depth))
    moments = [_inertia(mass * (a**2 + b**2) / 12, units) for a, b in along]
    return InertiaTensor(Ixx=moments[0], Iyy=moments[1], Izz=moments[2])


def add_support(model: Model, position: tuple[float, ...]) -> tuple[Model, str]:
    """Add a place on the ground at a position in m; return the model and the support's id."""
    new = Support(id=fresh_id(model, "s"), position=point_of(position, model.units or "SI"))
    _refuse("supports", len(model.supports), new, list(rules_bodies.support(new, Context.of(model))))
    return replace(model, supports=(*model.supports, new)), new.id


def end_at(model: Model, body_id: str, point: tuple[float, ...]) -> End:
    """Return the end of a link on a body at a point of the sheet.

    Parameters
    ----------
    point : tuple of float
        In the model's coordinates, m.

    Returns
    -------
    End
        With the offset from the centre of gravity, or with none where that is zero, where the body has
        no position, and in a shaft train, whose links lie on the axis.

    Raises
    ------
    LookupError
        When there is no such body.
    """
    body = next((one for one in model.bodies if one.id == body_id), None)
    if body is None:
        raise LookupError(f'there is no body "{body_id}"')
    if body.position is None or model.motion is Motion.SHAFT_TRAIN:
        return End(body=body_id)
    steps = [decimal_of(there) - decimal_of(one.si) for there, one in zip(point, body.position, strict=True)]
    if not any(steps):
        return End(body=body_id)
    return End(
        body=body_id,
        offset=tuple(length_like(one, float(step)) for one, step in zip(body.position, steps, strict=True)),
    )


def add_link(
    model: Model, kind: str, from_end: End, to_end: End, *, drag: Sequence[float] | None = None
) -> tuple[Model, str]:
    """Add a link with starting values between two ends.

    Parameters
    ----------
    kind : str
        One of `parts.LINK_KINDS`.
    from_end, to_end : End
        On a body or a support that is there.
    drag : sequence of float or None
        How the pointer went, in the model's coordinates. A spring or damper whose ends coincide acts along
        its largest component; without it such a link is refused.

    Returns
    -------
    (Model, str)
        The model with the link at the end of its list, and the link's id.

    Raises
    ------
    InputError
        When the kind has no meaning in this motion.
    ModelFaultsError
        When an end or the direction breaks a rule.
    """
    known = [one.kind for one in rules_links.KINDS[model.motion]]
    if kind not in known:
        raise InputError(
            f"a {kind} has no meaning in {model.motion.value}; links here are {', '.join(known)}"
        )
    context = Context.of(model)
    line = context.line(from_end, to_end)
    values = _values(kind, context, line)
    if kind in ("spring", "damper"):
        values["direction"] = _direction(context, line, drag)
    new = LINK_KINDS[kind](id=fresh_id(model, _STEMS[kind]), from_=from_end, to=to_end, **values)
    _refuse("links", len(model.links), new, list(rules_links.link(new, context)))
    return replace(model, links=(*model.links, new)), new.id


def _values(kind: str, context: Context, line: tuple[float, ...] | None) -> dict[str, Any]:
    """Return the starting values of a kind of link, by field; a rigid link has none."""
    shaft_train, space = context.motion is Motion.SHAFT_TRAIN, context.motion is Motion.SPACE
    shifts = {name: _start(q.STIFFNESS) for name in context.freedoms if not name.startswith("r")}
    section = _BEAM | (_BEAM_IN_SPACE if space else _BEAM_IN_PLANE)
    values: dict[str, dict[str, Any]] = {
        "spring": {"stiffness": _start(q.STIFFNESS)},
        "damper": {"damping": _start(q.TORSIONAL_DAMPING if shaft_train else q.DAMPING)},
        "mount": {"stiffness": MountStiffness(**shifts)},
        "shaft": {"stiffness": _start(q.TORSIONAL_STIFFNESS), "axis": _axis(context, line)},
        "gear": {"teeth": _TEETH},
        "beam": {key: starting_value(*typed) for key, typed in section.items()},
    }
    return values.get(kind, {})


def _direction(context: Context, line: tuple[float, ...] | None, drag: Sequence[float] | None) -> str | None:
    """Return along which axis a link acts whose ends coincide; None where the ends tell."""
    if context.drawn_only or line is None or any(line) or drag is None or not any(drag):
        return None
    sizes = [abs(step) for step in drag]
    return "xyz"[sizes.index(max(sizes))]


def _axis(context: Context, line: tuple[float, ...] | None) -> tuple[float, ...] | None:
    """Return the axis of a shaft in space: along its ends; None is along x."""
    if context.motion is not Motion.SPACE or line is None or not any(line[1:]):
        return None
    length = math.hypot(*line)
    return tuple(float(decimal_of(round(step / length, 12))) for step in line)


def _refuse(group: str, number: int, part: Body | Support | Link, findings: list[Finding]) -> None:
    if findings:
        place = place_of(group, number, part.id)
        raise ModelFaultsError(tuple(Fault(f"{place} . {key}", reason) for key, reason in findings))
