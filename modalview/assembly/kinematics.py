"""Motion of points as linear forms in the freedoms of bodies and supports.

Everything here works on any number type: with floats it gives the rows of the model, with
fractions the same rows exactly, for ranks. Exact means as typed: "0.3 m" is 3/10, not the double
nearest to it, so that three points on one line stay on one line.
"""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from modalview.model.parts import Body, End, Model, Motion, Support

Number = float | Fraction
Vector = tuple[Number, Number, Number]
# Which part and which of x, y, z, rx, ry, rz.
Freedom = tuple[str, str]
Form = dict[Freedom, Number]

TRANSLATIONS = ("x", "y", "z")
ROTATIONS = ("rx", "ry", "rz")
AXES: dict[str, Vector] = {"x": (1, 0, 0), "y": (0, 1, 0), "z": (0, 0, 1)}


# A double holds every decimal of so many digits; what was typed comes back from it unharmed, also through
# the rounding of a change of unit.
DIGITS = 15


def as_typed(value: float) -> Fraction:
    """Return the decimal number that was typed to give this double.

    Examples
    --------
    >>> as_typed(0.3), as_typed(3 * 0.1)
    (Fraction(3, 10), Fraction(3, 10))
    """
    return Fraction(f"{value:.{DIGITS}g}")


def combined(forms: Iterable[tuple[Number, Mapping[Freedom, Number]]]) -> Form:
    """Return the weighted sum of forms, without entries that cancel."""
    total: Form = {}
    for weight, form in forms:
        if weight:
            for freedom, entry in form.items():
                total[freedom] = total.get(freedom, 0) + weight * entry
    return {freedom: entry for freedom, entry in total.items() if entry}


def dot(a: Sequence[Number], b: Sequence[Number]) -> Number:
    """Return the scalar product."""
    return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]


def cross(a: Sequence[Number], b: Sequence[Number]) -> Vector:
    """Return the vector product."""
    return (a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0])


def minus(a: Sequence[Number], b: Sequence[Number]) -> Vector:
    """Return a - b."""
    return (a[0] - b[0], a[1] - b[1], a[2] - b[2])


def midpoint(a: Sequence[Number], b: Sequence[Number]) -> Vector:
    """Return the point midway."""
    return ((a[0] + b[0]) / 2, (a[1] + b[1]) / 2, (a[2] + b[2]) / 2)


@dataclass(frozen=True, slots=True)
class Places:
    """Where bodies and supports are, in floats or in fractions as typed.

    Parameters
    ----------
    motion : Motion
    centre : mapping
        Centre of gravity of every body and place of every support, by id, m.
    supports : frozenset of str
        Which of the ids are supports.
    exact : bool
        Whether the numbers are fractions.
    """

    motion: Motion
    centre: Mapping[str, Vector]
    supports: frozenset[str]
    exact: bool

    def number(self, value: float) -> Number:
        """Take a typed number over, as a fraction where this is exact."""
        return as_typed(value) if self.exact else value

    def vector(self, components: Sequence[float]) -> Vector:
        """Take two or three components over."""
        x, y, z = (*components, 0.0)[:3]
        return (self.number(x), self.number(y), self.number(z))

    def part(self, end: End) -> str:
        """Return the id of the body or the support at an end."""
        return str(end.body if end.body is not None else end.support)

    def point(self, end: End) -> Vector:
        """Return the attachment point of an end, m."""
        centre = self.centre[self.part(end)]
        if end.offset is None:
            return centre
        offset = self.vector([entry.si for entry in end.offset])
        return (centre[0] + offset[0], centre[1] + offset[1], centre[2] + offset[2])

    def moves(self, part: str, point: Sequence[Number], direction: Sequence[Number]) -> Form:
        """Return the motion of a point of a part along a direction: d . (u + theta x r)."""
        form: Form = {
            (part, freedom): entry for freedom, entry in zip(TRANSLATIONS, direction, strict=True) if entry
        }
        arm = minus(point, self.centre[part])
        form.update(self.turns(part, cross(arm, direction)))
        return form

    def turns(self, part: str, axis: Sequence[Number]) -> Form:
        """Return the rotation of a part about an axis: axis . theta."""
        return {(part, freedom): entry for freedom, entry in zip(ROTATIONS, axis, strict=True) if entry}


def places(model: Model, *, exact: bool = False) -> Places:
    """Read off where everything is; without a position (single axis, shaft train) that is the origin."""
    number = as_typed if exact else float
    zero = (number(0), number(0), number(0))

    def place(position: Sequence[float] | None) -> Vector:
        if position is None:
            return zero
        x, y, z = (*position, 0.0)[:3]
        return (number(x), number(y), number(z))

    parts: tuple[Body | Support, ...] = (*model.bodies, *model.supports)
    centre = {p.id: place([c.si for c in p.position] if p.position else None) for p in parts}
    return Places(model.motion, centre, frozenset(s.id for s in model.supports), exact)
