"""Selections mirrored and turned: positions, offsets, directions, axes, tensors, and what refers to them."""

import math
from collections.abc import Callable, Collection, Sequence
from dataclasses import dataclass, replace
from typing import Any, TypeVar

from modalview.errors import InputError
from modalview.model.entries import decimal_of, length_like
from modalview.model.moving import lone_supports, upright_axis
from modalview.model.parts import (
    FREEDOMS,
    Axes,
    Beam,
    Body,
    Damper,
    Direction,
    Drawn,
    End,
    Excitation,
    Gear,
    InertiaTensor,
    Limit,
    Link,
    LoadCase,
    LoadChange,
    Machine,
    MeasuredPeak,
    Model,
    Motion,
    Mount,
    Point,
    RigidLink,
    Shaft,
    ShapePoint,
    Spring,
    Support,
)
from modalview.model.turns import (
    AXES,
    DIGITS,
    Turn,
    Vector,
    negated_entry,
    parallel,
    reflection,
    rotation,
    turned_direction,
    turned_names,
    turned_tensor,
)
from modalview.model.values import Entry
from modalview.units.quantities import PRODUCT_OF_INERTIA

Item = TypeVar("Item")


def mirrored(
    model: Model,
    ids: Collection[str],
    axis: str,
    about: Sequence[float],
    *,
    lone_supports_follow: bool = True,
) -> Model:
    """Return the model with bodies and supports mirrored.

    Parameters
    ----------
    ids : collection of str
        Bodies and supports; other ids stand for nothing here. Links between them follow with their
        directions and axes, ends on them with their offsets, excitations, limits and measured points on them.
    axis : str
        Whose coordinate changes sides: "x" exchanges left and right.
    about : sequence of float
        A point that stays where it is along that axis, m.
    lone_supports_follow : bool
        Whether a support that carries nothing but these bodies is mirrored with them.

    Raises
    ------
    InputError
        When the model has no such axis.
    """
    _known(axis, tuple(AXES[: _dimensions(model)]))
    return _turned(model, ids, _About(reflection(axis), tuple(about)), follow=lone_supports_follow)


def rotated(
    model: Model,
    ids: Collection[str],
    degrees: float,
    about: Sequence[float],
    axis: str = "z",
    *,
    lone_supports_follow: bool = True,
) -> Model:
    """Return the model with bodies and supports turned.

    Parameters
    ----------
    ids : collection of str
        As for `mirrored`.
    degrees : float
        By the right-hand rule about ``axis``: from x towards y about z.
    about : sequence of float
        A point that stays where it is, m.
    axis : str
        "z" in a plane; "x", "y" or "z" in space.
    lone_supports_follow : bool
        Whether a support that carries nothing but these bodies turns with them.

    Raises
    ------
    InputError
        When a body or rigid link is limited to directions that would no longer lie along the model's
        axes, when a load case changes a moment of inertia that would mix with others, when the model cannot
        turn so, or the angle is not finite.
    """
    space = model.motion is Motion.SPACE
    _known(axis, tuple(AXES) if space else ("z",))
    if not math.isfinite(degrees):
        raise InputError(f"an angle must be a finite number; found {degrees}")
    if model.motion in (Motion.SINGLE_AXIS, Motion.SHAFT_TRAIN) and degrees % 180 != 0:
        raise InputError(
            f"in {model.motion.value} every part keeps its direction; it can be turned by 180 deg or mirrored"
        )
    if degrees % 360 == 0:
        return model
    return _turned(model, ids, _About(rotation(degrees, axis), tuple(about)), follow=lone_supports_follow)


def _known(axis: str, known: tuple[str, ...]) -> None:
    if axis not in known:
        raise InputError(f'this model has no axis "{axis}" here; it has {", ".join(known)}')


def _dimensions(model: Model) -> int:
    return 3 if model.motion is Motion.SPACE else 2


@dataclass(frozen=True, slots=True)
class _About:
    """A turn about a point."""

    turn: Turn
    centre: Vector

    def position(self, point: Point) -> Point:
        """Return a position turned; each coordinate keeps its unit."""
        return self._about(point, self.centre)

    def offset(self, point: Point) -> Point:
        """Return an offset turned."""
        return self._about(point, (0.0,) * len(point))

    def _about(self, point: Point, centre: Vector) -> Point:
        found = list(point)
        if self.turn.exact:
            for axis, one in enumerate(point):
                sign, to = self.turn.image(axis)
                arm = decimal_of(one.si) - decimal_of(centre[axis])
                new = decimal_of(centre[to]) + (arm if sign > 0 else -arm)
                found[to] = length_like(one, float(new))
            return tuple(found)
        arms = [one.si - middle for one, middle in zip(point, centre, strict=True)]
        reach = max(abs(number) for number in (*(one.si for one in point), *centre))
        turned = self.turn.vector(arms)
        for axis in self.turn.plane:
            if axis < len(found):
                found[axis] = length_like(point[axis], _kept(turned[axis] + centre[axis], reach))
        return tuple(found)


def _kept(number: float, reach: float) -> float:
    """Round a turned coordinate to the digits that a number of the size of ``reach`` has."""
    return round(number, DIGITS - 1 - math.floor(math.log10(reach))) if reach else number


def _turned(model: Model, ids: Collection[str], about: _About, *, follow: bool) -> Model:
    parts: tuple[Body | Support, ...] = (*model.bodies, *model.supports)
    chosen = {part.id for part in parts if part.id in ids}
    if follow:
        chosen |= set(lone_supports(model, chosen))
    one = _Turning(model, frozenset(chosen), about)
    changes: dict[str, Any] = {}
    for name, change in one.changes().items():
        old = getattr(model, name)
        new = tuple(change(item) for item in old)
        if any(a is not b for a, b in zip(old, new, strict=True)):
            changes[name] = new
    return replace(model, **changes) if changes else model


@dataclass(frozen=True, slots=True)
class _Turning:
    """What one turn makes of every part of a model."""

    model: Model
    chosen: frozenset[str]
    about: _About

    @property
    def turn(self) -> Turn:
        return self.about.turn

    def changes(self) -> dict[str, Callable[[Any], Any]]:
        """Return what happens to the items of each list of the model."""
        return {
            "bodies": self.body,
            "supports": self.support,
            "links": self.link,
            "machines": self.machine,
            "measured": self.peak,
            "limits": self.limit,
            "load_cases": self.case,
        }

    def body(self, body: Body) -> Body:
        if body.id not in self.chosen:
            return body
        freedoms, inertia = FREEDOMS[self.model.motion], body.inertia
        return _changed(
            body,
            position=body.position and self.about.position(body.position),
            dof=body.dof and turned_names(body.dof, freedoms, self.turn, f'body "{body.id}"'),
            inertia=turned_tensor(inertia, self.turn) if isinstance(inertia, InertiaTensor) else inertia,
            drawn=body.drawn and self.drawn(body.drawn),
        )

    def drawn(self, drawn: Drawn) -> Drawn:
        """Exchange width and height where a quarter turn exchanges their axes."""
        upright = upright_axis(self.model.motion)
        if not self.turn.exact or self.turn.image(0)[1] != upright:
            return drawn
        return replace(drawn, width=drawn.height, height=drawn.width)

    def support(self, support: Support) -> Support:
        if support.id not in self.chosen:
            return support
        return _changed(support, position=support.position and self.about.position(support.position))

    def end(self, end: End) -> End:
        if end.body not in self.chosen or end.offset is None:
            return end
        return _changed(end, offset=self.about.offset(end.offset))

    def holds(self, end: End | None) -> bool:
        return end is not None and (end.body in self.chosen or end.support in self.chosen)

    def link(self, link: Link) -> Link:
        new = _changed(link, from_=self.end(link.from_), to=self.end(link.to))
        if not (self.holds(link.from_) and self.holds(link.to)) or self.flat:
            return new
        if isinstance(new, Spring | Damper):
            return _changed(new, direction=new.direction and self.line(new.direction))
        if isinstance(new, Mount):
            return _changed(new, axes=self.axes(new.axes))
        if isinstance(new, Beam):
            return _changed(new, axes=new.axes and self.section(new.axes))
        if isinstance(new, RigidLink):
            known, whose = FREEDOMS[self.model.motion], f'rigid link "{new.id}"'
            names = new.directions and turned_names(new.directions, known, self.turn, whose)
            return _changed(new, directions=names)
        return self.shaft(new)

    @property
    def flat(self) -> bool:
        """Whether nothing has directions of its own here: a shaft train's positions are a drawing only."""
        return self.model.motion is Motion.SHAFT_TRAIN

    def shaft(self, link: Shaft | Gear) -> Shaft | Gear:
        """Turn the axis of rotation, which is x in space where none is given."""
        if self.model.motion is not Motion.SPACE:
            return link
        return _changed(link, axis=self.axis(link.axis))

    def axis(self, given: Vector | None) -> Vector | None:
        """Return the line of an axis that is x where none is given."""
        old = given or (1.0, 0.0, 0.0)
        new = self.turn.vector(old)
        return given if parallel(old, new) else _forward(new)

    def line(self, given: Direction) -> Direction:
        """Return the line along which a link acts; its sense has no meaning."""
        new = turned_direction(given, self.turn, _dimensions(self.model))
        if isinstance(given, str) and isinstance(new, str):
            bare = new.removeprefix("-") if new[-1] in AXES else new
            return given if bare == given.strip().lstrip("+-\u2212") else bare
        if isinstance(given, tuple) and isinstance(new, tuple):
            return given if parallel(given, new) else new
        return new

    def axes(self, given: Axes | None) -> Axes | None:
        """Return a mount's own axes turned; None where they are the model's again."""
        count = _dimensions(self.model)
        old = _completed(given, count)
        new = [self.turn.vector(axis) for axis in old]
        if all(parallel(a, b) for a, b in zip(old, new, strict=True)):
            return given
        own = [tuple(1.0 if i == axis else 0.0 for i in range(count)) for axis in range(count)]
        if all(parallel(a, b) for a, b in zip(own, new, strict=False)):
            return None
        return Axes(x=_forward(new[0]), y=_forward(new[1]) if count == 3 else None)

    def section(self, given: Axes) -> Axes:
        """Return the y axis of a beam's section turned."""
        if given.y is None:
            return given
        new = self.turn.vector(given.y)
        return given if parallel(given.y, new) else replace(given, y=_forward(new))

    def told(self, given: Direction | None) -> Direction | None:
        """Return a direction with its sense."""
        if given is None or self.flat:
            return given
        return turned_direction(given, self.turn, _dimensions(self.model))

    def machine(self, machine: Machine) -> Machine:
        return _changed(machine, excitations=tuple(self.excitation(one) for one in machine.excitations))

    def excitation(self, one: Excitation) -> Excitation:
        if one.at is None or not self.holds(one.at):
            return one
        axis = one.axis
        spun = one.direction == "rotating" or (axis is not None)
        if self.model.motion is Motion.SPACE and spun:
            old = axis or (1.0, 0.0, 0.0)
            new = self.turn.axial(old)
            axis = axis if new == old else new
        return _changed(one, at=self.end(one.at), direction=self.told(one.direction), axis=axis)

    def peak(self, peak: MeasuredPeak) -> MeasuredPeak:
        shape = tuple(self.shape_point(point) for point in peak.shape)
        if peak.at is None or not self.holds(peak.at):
            return _changed(peak, shape=shape)
        return _changed(peak, at=self.end(peak.at), direction=self.told(peak.direction), shape=shape)

    def shape_point(self, point: ShapePoint) -> ShapePoint:
        if not self.holds(point.at):
            return point
        return _changed(point, at=self.end(point.at), direction=self.told(point.direction))

    def limit(self, limit: Limit) -> Limit:
        if not self.holds(limit.at):
            return limit
        return _changed(limit, at=self.end(limit.at), direction=self.told(limit.direction))

    def case(self, case: LoadCase) -> LoadCase:
        return _changed(case, changes=tuple(self.load_change(case, one) for one in case.changes))

    def load_change(self, case: LoadCase, change: LoadChange) -> LoadChange:
        """Follow a moment of a tensor to the axis it comes to lie on."""
        group, _, key = change.key.partition(".")
        if group != "inertia" or not key or change.part not in self.chosen:
            return change
        if not self.turn.exact:
            raise InputError(
                f'load case "{case.id}" changes {change.key} of "{change.part}", which mixes with other '
                f"moments when turned {self.turn.words}; turn by quarter turns, or take the change out first"
            )
        images = [self.turn.image(AXES.index(letter)) for letter in key[1:]]
        letters = sorted(AXES[to] for _, to in images)
        value = change.value
        if images[0][0] * images[1][0] < 0:
            value = negated_entry(Entry.typed(value, PRODUCT_OF_INERTIA), PRODUCT_OF_INERTIA).text
        return _changed(change, key=f"inertia.{key[0]}{''.join(letters)}", value=value)


def _changed(item: Item, **fields: Any) -> Item:
    """Return an item with other fields; the very same object where none differs."""
    new = {name: field for name, field in fields.items() if field != getattr(item, name)}
    return replace(item, **new) if new else item  # type: ignore[type-var]  # every part is a dataclass


def _forward(vector: Vector) -> Vector:
    """Return one of the two vectors along a line: that with a positive first component."""
    first = next((number for number in vector if number), 1.0)
    return vector if first > 0 else tuple(-number + 0.0 for number in vector)


def _completed(axes: Axes | None, count: int) -> list[Vector]:
    """Return a mount's axes x and y; in a plane x alone, which tells the other.

    The missing one is level, square to the other, and along y where x is upright, as the program takes it.
    """
    if axes is None or (axes.x is None and axes.y is None):
        return [tuple(1.0 if i == axis else 0.0 for i in range(count)) for axis in range(count - 1)]
    y = axes.y or (0.0, 1.0, 0.0)
    if count == 2:
        return [axes.x or (y[1], -y[0])]
    if axes.x is not None:
        return [axes.x, axes.y if axes.y is not None else _level(axes.x)]
    return [tuple(-number for number in _level(y)), y]


def _level(vector: Vector) -> Vector:
    side = (-vector[1], vector[0], 0.0)
    return side if any(side) else (0.0, 1.0, 0.0)
