"""What each link contributes: the stretch of its springs and dashpots, and what it holds together exactly.

A form is kept unnormalised beside the length it is to be divided by, so that the same code gives the
rows in doubles and, with fractions, their exact rank.
"""

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from fractions import Fraction

from modalview.assembly.directions import across, axes_vectors, direction_vector, length
from modalview.assembly.kinematics import (
    AXES,
    ROTATIONS,
    TRANSLATIONS,
    Form,
    Number,
    Places,
    Vector,
    combined,
    cross,
    dot,
    midpoint,
    minus,
)
from modalview.errors import Fault, ModelFaultsError
from modalview.model.gears import gear_ratio
from modalview.model.parts import (
    FREEDOMS,
    Beam,
    Damper,
    Gear,
    Link,
    Motion,
    Mount,
    RigidLink,
    Shaft,
    Spring,
)


@dataclass(frozen=True, slots=True)
class Stretch:
    """One rank-one term of a link.

    Parameters
    ----------
    family : str
        "stiffness" or "damping".
    form : Form
        Stretch times the length of ``over``, as a form in the freedoms of bodies and supports.
    over : Vector
        The form is divided by the length of this vector.
    keys : tuple of str
        Fields of the link whose product is the term's value ("E", "I" of a beam, "stiffness.x").
    times : int
        Constant beside that product, such as 3 of 3 / L.
    per : Vector or None
        That constant is divided by the length of this vector.
    """

    family: str
    form: Form
    over: Vector
    keys: tuple[str, ...]
    times: int = 1
    per: Vector | None = None

    @property
    def divide(self) -> float:
        """Length that normalises the form."""
        return length(self.over)

    @property
    def factor(self) -> float:
        """Constant beside the product of the fields, such as 3 / L."""
        return self.times if self.per is None else self.times / length(self.per)


def acting_point(link: Link, places: Places) -> Vector:
    """Return the one point at which a mount, or a spring in a given direction, acts.

    It is the attachment on the body when the other end is a support, otherwise midway between the two.
    """
    if link.to.support is not None:
        return places.point(link.from_)
    if link.from_.support is not None:
        return places.point(link.to)
    return midpoint(places.point(link.from_), places.point(link.to))


def relative_motion(link: Link, places: Places, at: Vector, direction: Vector) -> Form:
    """Return the motion of ``to`` against ``from`` along a direction, both taken at one point."""
    start, end = places.part(link.from_), places.part(link.to)
    return combined(((1, places.moves(end, at, direction)), (-1, places.moves(start, at, direction))))


def relative_turn(link: Link, places: Places, axis: Vector) -> Form:
    """Return the rotation of ``to`` against ``from`` about an axis."""
    start, end = places.part(link.from_), places.part(link.to)
    return combined(((1, places.turns(end, axis)), (-1, places.turns(start, axis))))


def _along(link: Spring | Damper, places: Places) -> tuple[Form, Vector]:
    if places.motion is Motion.SINGLE_AXIS:
        return relative_motion(link, places, acting_point(link, places), AXES["y"]), AXES["y"]
    if link.direction is not None:
        line = direction_vector(link.direction, places)
        return relative_motion(link, places, acting_point(link, places), line), line
    start, end = places.point(link.from_), places.point(link.to)
    line = minus(end, start)
    moves = (
        (1, places.moves(places.part(link.to), end, line)),
        (-1, places.moves(places.part(link.from_), start, line)),
    )
    return combined(moves), line


def _spring(link: Spring, places: Places) -> Iterator[Stretch]:
    form, line = _along(link, places)
    yield Stretch("stiffness", form, line, ("stiffness",))


def _damper(link: Damper, places: Places) -> Iterator[Stretch]:
    if places.motion is Motion.SHAFT_TRAIN:
        yield Stretch("damping", relative_turn(link, places, AXES["z"]), AXES["z"], ("damping",))
        return
    form, line = _along(link, places)
    yield Stretch("damping", form, line, ("damping",))


def _mount(link: Mount, places: Places) -> Iterator[Stretch]:
    at = acting_point(link, places)
    axes = axes_vectors(link.axes, places)
    for family, group in (("stiffness", link.stiffness), ("damping", link.damping)):
        if group is None:
            continue
        for name, axis in zip(TRANSLATIONS, axes, strict=True):
            if getattr(group, name) is not None:
                form = relative_motion(link, places, at, axis)
                yield Stretch(family, form, axis, (f"{family}.{name}",))
        for name, axis in zip(ROTATIONS, axes, strict=True):
            if getattr(group, name) is not None:
                form = relative_turn(link, places, axis)
                yield Stretch(family, form, axis, (f"{family}.{name}",))


def rotation_axis(link: Shaft | Gear, places: Places) -> Vector:
    """Return the axis a shaft or gear turns about: z, in space the one given or x along the machine."""
    if places.motion is not Motion.SPACE:
        return AXES["z"]
    return places.vector(link.axis) if link.axis is not None else AXES["x"]


def _shaft(link: Shaft, places: Places) -> Iterator[Stretch]:
    axis = rotation_axis(link, places)
    yield Stretch("stiffness", relative_turn(link, places, axis), axis, ("stiffness",))


def exact_ratio(link: Gear) -> Fraction:
    """Return the rotation of ``to`` over that of ``from``, exactly as typed; -from/to for teeth."""
    ratio = gear_ratio(link)
    if ratio is None:
        raise ModelFaultsError((Fault(f'gear "{link.id}"', "its ratio or its teeth cannot be read"),))
    return ratio


def _ratio(link: Gear, places: Places) -> Number:
    return exact_ratio(link) if places.exact else float(exact_ratio(link))


def _gear(link: Gear, places: Places) -> Iterator[Stretch]:
    if link.stiffness is None or link.pitch_radius is None:
        return
    axis = rotation_axis(link, places)
    radius = places.number(link.pitch_radius.from_.si)
    other = radius / _ratio(link, places)
    start, end = places.part(link.from_), places.part(link.to)
    form = combined(((radius, places.turns(start, axis)), (-other, places.turns(end, axis))))
    yield Stretch("stiffness", form, axis, ("stiffness",))


def _beam(link: Beam, places: Places) -> Iterator[Stretch]:
    start, end = places.point(link.from_), places.point(link.to)
    line = minus(end, start)
    yield Stretch("stiffness", _ends_apart(link, places, line), line, ("E", "A"), per=line)
    if places.motion is not Motion.SPACE:
        side: Vector = (-line[1], line[0], 0)
        yield from _bending(link, places, line, side, AXES["z"], "I")
        return
    y = across(places.vector(link.axes.y), line) if link.axes and link.axes.y else _any_side(line)
    z = cross(line, y)
    yield from _bending(link, places, line, y, z, "Iz")
    yield from _bending(link, places, line, z, (-y[0], -y[1], -y[2]), "Iy")
    yield Stretch("stiffness", relative_turn(link, places, line), line, ("G", "J"), per=line)


def _any_side(line: Vector) -> Vector:
    """Return some direction across a beam whose section has no preferred one."""
    size = [abs(float(component)) for component in line]
    least = size.index(min(size))
    return cross(line, tuple(AXES.values())[least])


def _ends_apart(link: Beam, places: Places, direction: Vector) -> Form:
    """Return the motion of the far end against the near end along a direction."""
    moves = (
        (1, places.moves(places.part(link.to), places.point(link.to), direction)),
        (-1, places.moves(places.part(link.from_), places.point(link.from_), direction)),
    )
    return combined(moves)


def _bending(
    link: Beam, places: Places, line: Vector, side: Vector, axis: Vector, second_moment: str
) -> Iterator[Stretch]:
    """Give the two bending terms of a beam in one plane: EI/L a a^T + 3 EI/L b b^T.

    a is the difference of the end rotations, b their sum less twice the chord's; rotations about
    ``axis``, deflections along ``side``, where axis = line x side up to a factor.
    Slope-deflection relations of a slender beam (Euler-Bernoulli), from memory.
    """
    start, end = places.part(link.from_), places.part(link.to)
    yield Stretch("stiffness", relative_turn(link, places, axis), axis, ("E", second_moment), per=line)
    # chord = (side . du) / (|side| L). Turned into the scale of the axis it is
    # (side . du) (axis . (line x side)) / (|side|^2 |line|^2), free of roots.
    turned = dot(axis, cross(line, side))
    weight: Number = 2 * turned / (dot(side, side) * dot(line, line))
    form = combined(
        (
            (1, places.turns(start, axis)),
            (1, places.turns(end, axis)),
            (-weight, _ends_apart(link, places, side)),
        )
    )
    yield Stretch("stiffness", form, axis, ("E", second_moment), 3, line)


def _rigid(_link: RigidLink, _places: Places) -> Iterator[Stretch]:
    return iter(())


_OF_KIND: dict[type[Link], Callable[..., Iterator[Stretch]]] = {
    Spring: _spring,
    Damper: _damper,
    Mount: _mount,
    Shaft: _shaft,
    Gear: _gear,
    Beam: _beam,
    RigidLink: _rigid,
}


def stretches(link: Link, places: Places) -> list[Stretch]:
    """Return the terms of a link, their forms reduced to the freedoms its motion has."""
    freedoms = FREEDOMS[places.motion]
    return [_reduced(term, freedoms) for term in _OF_KIND[type(link)](link, places)]


def _reduced(term: Stretch, freedoms: tuple[str, ...]) -> Stretch:
    form = {freedom: entry for freedom, entry in term.form.items() if freedom[1] in freedoms}
    return replace(term, form=form)


def exact_joints(link: Link, places: Places) -> list[Form]:
    """Return the forms that a link holds at zero: an exact gear, or a rigid link in listed directions."""
    freedoms = FREEDOMS[places.motion]
    if isinstance(link, Gear) and link.stiffness is None:
        axis = rotation_axis(link, places)
        ratio = _ratio(link, places)
        start, end = places.part(link.from_), places.part(link.to)
        return [combined(((1, places.turns(end, axis)), (-ratio, places.turns(start, axis))))]
    if isinstance(link, RigidLink) and link.directions is not None:
        at = acting_point(link, places)
        forms = [
            relative_motion(link, places, at, AXES[name])
            if name in AXES
            else relative_turn(link, places, AXES[name[1:]])
            for name in link.directions
        ]
        return [{f: entry for f, entry in form.items() if f[1] in freedoms} for form in forms]
    return []
