"""Turns and reflections: what they make of points, directions, freedoms and tensors of inertia.

Quarter turns and reflections exchange axes and signs only, so they are exact on what was typed. Any
other turn rounds to fourteen digits.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from modalview.errors import InputError
from modalview.model.entries import decimal_of
from modalview.model.parts import Direction, InertiaTensor
from modalview.model.values import Entry, Value
from modalview.units.parse import read
from modalview.units.quantities import ANGLE, INERTIA, PRODUCT_OF_INERTIA, Quantity
from modalview.units.show import short

Vector = tuple[float, ...]
AXES = "xyz"
# Digits kept of a turned number, beside the largest of its vector: two fewer than a double has.
DIGITS = 14
# A turned component below this share of its vector is rounding of zero.
NOTHING = 1e-15
# A quarter of a turn, in degrees.
QUARTER = 90.0

_MOMENTS = ("Ixx", "Iyy", "Izz")
_PRODUCTS = {"Pxy": (0, 1), "Pxz": (0, 2), "Pyz": (1, 2)}


@dataclass(frozen=True, slots=True)
class Turn:
    """An orthogonal map of space.

    Parameters
    ----------
    rows : three rows of three numbers
    words : str
        "by 30 deg", for messages.
    plane : tuple of int
        The two axes that a turn mixes; empty for a reflection.
    """

    rows: tuple[Vector, Vector, Vector]
    words: str
    plane: tuple[int, ...] = ()

    @property
    def exact(self) -> bool:
        """Whether axes only change places and signs."""
        return all(number in (0.0, 1.0, -1.0) for row in self.rows for number in row)

    @property
    def sense(self) -> float:
        """Return 1 for a turn and -1 for a reflection: what becomes of senses of rotation."""
        return -1.0 if not self.plane else 1.0

    def image(self, axis: int) -> tuple[float, int]:
        """Return sign and number of the axis that an axis comes to lie on; only where ``exact``."""
        column = [row[axis] for row in self.rows]
        to = next(number for number, entry in enumerate(column) if entry)
        return column[to], to

    def vector(self, given: Sequence[float]) -> Vector:
        """Return a vector turned; two numbers stay two."""
        size = max((abs(number) for number in given), default=0.0)
        full = (*given, 0.0, 0.0)[:3]
        if self.exact:
            turned = [0.0, 0.0, 0.0]
            for axis, number in enumerate(full):
                sign, to = self.image(axis)
                turned[to] = sign * number + 0.0  # no negative zero
            return tuple(turned[: len(given)])
        sums = [math.fsum(a * b for a, b in zip(row, full, strict=True)) for row in self.rows]
        mixed = (_rounded(number, size) for number in sums)
        return tuple(
            new if axis in self.plane else old
            for axis, (old, new) in enumerate(zip(given, mixed, strict=False))
        )

    def axial(self, given: Sequence[float]) -> Vector:
        """Return a vector along an axis of rotation, whose sense a reflection turns round."""
        return tuple(self.sense * number + 0.0 for number in self.vector(given))


def rotation(degrees: float, axis: str = "z") -> Turn:
    """Return the turn about an axis through the origin, by the right-hand rule.

    >>> rotation(90).vector((1.0, 0.0))
    (0.0, 1.0)
    """
    about = AXES.index(axis)
    one, other = (about + 1) % 3, (about + 2) % 3
    cosine, sine = _cosine_and_sine(degrees)
    rows = [[float(i == j) for j in range(3)] for i in range(3)]
    rows[one][one] = rows[other][other] = cosine
    rows[one][other], rows[other][one] = -sine, sine
    return Turn(_rows(rows), f"by {degrees:g} deg", (one, other))


def reflection(axis: str) -> Turn:
    """Return the reflection that turns the sign of one coordinate round.

    >>> reflection("x").vector((0.5, 0.2)), reflection("x").axial((1.0, 0.0, 0.0))
    ((-0.5, 0.2), (1.0, 0.0, 0.0))
    """
    at = AXES.index(axis)
    rows = [[(-1.0 if i == at else 1.0) if i == j else 0.0 for j in range(3)] for i in range(3)]
    return Turn(_rows(rows), f"in {axis}")


def _rows(rows: list[list[float]]) -> tuple[Vector, Vector, Vector]:
    first, second, third = (tuple(row) for row in rows)
    return first, second, third


def _cosine_and_sine(degrees: float) -> tuple[float, float]:
    quarters = degrees / QUARTER
    if quarters == round(quarters):
        return ((1.0, 0.0), (0.0, 1.0), (-1.0, 0.0), (0.0, -1.0))[round(quarters) % 4]
    angle = math.radians(math.fmod(degrees, 360.0))
    return math.cos(angle), math.sin(angle)


def _rounded(number: float, size: float) -> float:
    """Round a number to ``DIGITS`` digits of the largest it stands beside."""
    if not size or abs(number) <= NOTHING * size:
        return 0.0
    return round(number, DIGITS - 1 - math.floor(math.log10(size))) + 0.0


def parallel(one: Sequence[float], other: Sequence[float]) -> bool:
    """Tell whether two vectors lie along one line, to the digits that are kept."""
    scale, other_scale = math.hypot(*one), math.hypot(*other)
    apart = [
        max(abs(a / scale - sign * b / other_scale) for a, b in zip(one, other, strict=True))
        for sign in (1, -1)
    ]
    return min(apart) < 10 * NOTHING


def turned_names(names: Sequence[str], known: Sequence[str], turn: Turn, whose: str) -> tuple[str, ...]:
    """Return freedoms, or directions of a rigid link, turned: "x" and "rz", in the order of ``known``.

    Raises
    ------
    InputError
        When what they are after the turn cannot be told along the model's axes.
    """
    if turn.exact:
        turned = {_prefix(name) + AXES[turn.image(_axis(name))[1]] for name in names}
        return tuple(name for name in known if name in turned)
    mixed = [AXES[axis] for axis in turn.plane]
    for prefix in ("", "r"):
        among = [prefix + axis for axis in mixed if prefix + axis in known]
        if 0 < sum(name in names for name in among) < len(among):
            raise InputError(
                f"{whose} is limited to {', '.join(names)} along the model's axes; it can be turned by "
                f"quarter turns, not {turn.words}"
            )
    return tuple(names)


def _prefix(name: str) -> str:
    return "r" if name.startswith("r") else ""


def _axis(name: str) -> int:
    return AXES.index(name[-1])


def turned_direction(given: Direction, turn: Turn, dimensions: int) -> Direction:
    """Return a direction turned, its sense kept: "x", "-rz", "30 deg" or components; "rotating" stays."""
    if not isinstance(given, str):
        return turn.vector(given)
    plain = given.strip().replace("\u2212", "-")
    sign, name = (-1.0, plain[1:]) if plain.startswith("-") else (1.0, plain.removeprefix("+"))
    if name == "rotating":
        return given
    if name.removeprefix("r") in tuple(AXES):
        axis = [0.0, 0.0, 0.0]
        axis[_axis(name)] = sign
        spun = name.startswith("r")
        return _told(turn.axial(axis) if spun else turn.vector(axis), _prefix(name), dimensions)
    angle = math.degrees(read(plain, ANGLE))
    return _told((*turn.vector(_cosine_and_sine(round(angle, 12))), 0.0), "", dimensions)


def _told(vector: Vector, prefix: str, dimensions: int) -> Direction:
    """Write a unit vector as a letter where it is one, as an angle in a plane, else as components."""
    for number, axis in enumerate(AXES):
        if abs(vector[number]) == 1.0:
            return f"{'-' if vector[number] < 0 else ''}{prefix}{axis}"
    if dimensions == 3:
        return vector
    degrees = math.degrees(math.atan2(vector[1], vector[0]))
    return f"{decimal_of(round(degrees, 11)).normalize():f} deg"


def turned_tensor(tensor: InertiaTensor, turn: Turn) -> InertiaTensor:
    """Return an inertia tensor about axes that stay while the body turns: R J R^T.

    What is exchanged keeps its text; any other turn computes new numbers, whose source is that of the
    moments where they share one.
    """
    return _exchanged(tensor, turn) if turn.exact else _computed(tensor, turn)


def _exchanged(tensor: InertiaTensor, turn: Turn) -> InertiaTensor:
    images = [turn.image(axis) for axis in range(3)]
    fields: dict[str, Value | None] = {
        _MOMENTS[images[axis][1]]: _elsewhere(getattr(tensor, key), stays=images[axis][1] == axis)
        for axis, key in enumerate(_MOMENTS)
    }
    for key, (a, b) in _PRODUCTS.items():
        value: Value | None = getattr(tensor, key)
        (sign, to), (other_sign, other) = images[a], images[b]
        new_key = f"P{AXES[min(to, other)]}{AXES[max(to, other)]}"
        if value is not None:
            value = _elsewhere(value, stays=new_key == key)
            value = negated(value, PRODUCT_OF_INERTIA) if sign * other_sign < 0 else value
        fields[new_key] = value
    new = replace(tensor, **fields)  # type: ignore[arg-type]  # the moments are values, products may be None
    return tensor if new == tensor else new


def _elsewhere(value: Value, *, stays: bool) -> Value:
    """Return a value about another axis, which is not what its handbook entry computed."""
    return (
        value if stays or (value.by is None and value.given is None) else replace(value, by=None, given=None)
    )


def negated(value: Value, quantity: Quantity) -> Value:
    """Return a value with the other sign."""
    if value.si == 0:
        return value
    return replace(value, entry=negated_entry(value.entry, quantity), by=None, given=None)


def negated_entry(entry: Entry, quantity: Quantity) -> Entry:
    """Return an entry with the other sign, as typed but for it."""
    plain = entry.text.strip().replace("\u2212", "-")
    text = plain[1:].lstrip() if plain.startswith("-") else f"-{plain.removeprefix('+').lstrip()}"
    return Entry(text, read(text, quantity))


def _computed(tensor: InertiaTensor, turn: Turn) -> InertiaTensor:
    pxy, pxz, pyz = (0.0 if p is None else p.si for p in (tensor.Pxy, tensor.Pxz, tensor.Pyz))
    old = ((tensor.Ixx.si, -pxy, -pxz), (-pxy, tensor.Iyy.si, -pyz), (-pxz, -pyz, tensor.Izz.si))
    size = max(tensor.Ixx.si, tensor.Iyy.si, tensor.Izz.si)

    def entry(i: int, j: int) -> float:
        terms = (turn.rows[i][k] * old[k][m] * turn.rows[j][m] for k in range(3) for m in range(3))
        return _rounded(math.fsum(terms), size)

    source, status = _shared(tensor)
    moments = {key: _typed(entry(i, i), INERTIA) for i, key in enumerate(_MOMENTS)}
    products = {
        key: _typed(-entry(i, j), PRODUCT_OF_INERTIA) for key, (i, j) in _PRODUCTS.items() if entry(i, j)
    }
    values = {key: Value(entry, source=source, status=status) for key, entry in (moments | products).items()}
    return InertiaTensor(
        Ixx=values["Ixx"],
        Iyy=values["Iyy"],
        Izz=values["Izz"],
        Pxy=values.get("Pxy"),
        Pxz=values.get("Pxz"),
        Pyz=values.get("Pyz"),
        tolerance=tensor.tolerance,
    )


def _typed(number: float, quantity: Quantity) -> Entry:
    return Entry.typed(f"{short(number, DIGITS + 1)} kg m2", quantity)


def _shared(tensor: InertiaTensor) -> tuple[str | None, str | None]:
    known = {(value.source, value.status) for value in (tensor.Ixx, tensor.Iyy, tensor.Izz)}
    return known.pop() if len(known) == 1 else (None, None)
