"""What fields a part has and what may stand in each, read once from the dataclass types.

Reader, writer, edits, tables and the test of the schema all ask here, so that a new field is written
down in one place only.
"""

from dataclasses import MISSING, dataclass, fields, is_dataclass, replace
from enum import StrEnum
from functools import cache
from types import NoneType, UnionType
from typing import Annotated, Any, Union, get_args, get_origin, get_type_hints

from modalview.model.parts import Damper, Magnitude, Motion, Mount, RigidLink, Shaft
from modalview.model.values import Entry, JsonObject, Tolerance, Value
from modalview.units import quantities as q
from modalview.units.quantities import Quantity


@dataclass(frozen=True, slots=True)
class Shape:
    """What may stand in a field.

    Parameters
    ----------
    value, entry : Quantity or None
        Of a `Value` (with tolerance and source) or an `Entry` (a typed number alone).
    items : Shape or None
        Of each item of a list; ``length`` where their number is fixed.
    records : tuple of dataclass types
        Objects with named keys; several are told apart by ``kind``.
    choice : StrEnum type or None
        One of some words.
    text, number, integer, tolerance, mapping : bool
        Plain text, a number, a whole number, a tolerance, any JSON object.
    """

    value: Quantity | None = None
    entry: Quantity | None = None
    items: "Shape | None" = None
    length: int | None = None
    records: tuple[type, ...] = ()
    choice: type[StrEnum] | None = None
    text: bool = False
    number: bool = False
    integer: bool = False
    tolerance: bool = False
    mapping: bool = False

    @property
    def quantity(self) -> Quantity | None:
        """The quantity of the value or entry that may stand here."""
        return self.value or self.entry


@dataclass(frozen=True, slots=True)
class Field:
    """One field of a part: its name in the program, its key in the file and what may stand in it."""

    name: str
    key: str
    shape: Shape
    required: bool
    default: Any


def _merge(shape: Shape, hint: Any) -> Shape:
    """Add one type hint to what may stand in a field."""
    origin = get_origin(hint)
    if origin in (Union, UnionType):
        for choice in get_args(hint):
            shape = _merge(shape, choice)
        return shape
    if origin is Annotated:
        kind, quantity = get_args(hint)
        return replace(shape, value=quantity) if kind is Value else replace(shape, entry=quantity)
    if origin is tuple:
        inner = get_args(hint)
        length = None if inner[-1] is Ellipsis else len(inner)
        return replace(shape, items=shape_of(inner[0]), length=length)
    if is_dataclass(hint) and isinstance(hint, type) and hint not in (Entry, Tolerance):
        return replace(shape, records=(*shape.records, hint))
    if isinstance(hint, type) and issubclass(hint, StrEnum):
        return replace(shape, choice=hint)
    return _merge_plain(shape, hint)


def _merge_plain(shape: Shape, hint: Any) -> Shape:
    if hint not in (str, float, int, Tolerance, JsonObject, Entry, NoneType):
        raise TypeError(f"a field of the model has a type the file cannot hold: {hint!r}")
    return replace(
        shape,
        text=shape.text or hint is str,
        number=shape.number or hint is float,
        integer=shape.integer or hint is int,
        tolerance=shape.tolerance or hint is Tolerance,
        mapping=shape.mapping or hint is JsonObject,
    )


def shape_of(hint: Any) -> Shape:
    """Return what may stand in a field with this type hint.

    >>> shape_of(tuple[float, ...] | None).items
    Shape(value=None, entry=None, items=None, length=None, records=(), choice=None, text=False, \
number=True, integer=False, tolerance=False, mapping=False)
    """
    return _merge(Shape(), hint)


def fields_of(part: type) -> tuple[Field, ...]:
    """Return the fields of a part, in the file's order.

    >>> from modalview.model.parts import SpeedRange
    >>> [field.key for field in fields_of(SpeedRange)]
    ['from', 'to']
    """
    return _fields_of(part)


@cache
def _fields_of(part: type) -> tuple[Field, ...]:
    hints = get_type_hints(part, include_extras=True)
    return tuple(
        Field(
            name=one.name,
            key=one.name.rstrip("_"),
            shape=shape_of(hints[one.name]),
            required=one.default is MISSING and one.default_factory is MISSING,
            default=None if one.default is MISSING else one.default,
        )
        for one in fields(part)
    )


@cache
def quantity_in(part: type, name: str, declared: Quantity, motion: Motion) -> Quantity:
    """Return the quantity of a field in this motion; in a shaft train links turn instead of move.

    >>> quantity_in(Damper, "damping", q.DAMPING, Motion.SHAFT_TRAIN).si_unit
    'N m s/rad'
    """
    if part is Shaft and name == "rated_load":
        return q.TORQUE
    if motion is not Motion.SHAFT_TRAIN:
        return declared
    if part is Damper and name == "damping":
        return q.TORSIONAL_DAMPING
    if part in (Damper, Mount, RigidLink) and name == "rated_load":
        return q.TORQUE
    if part is Magnitude and name == "motion":
        return q.ANGLE
    return declared
