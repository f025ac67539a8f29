"""What of a part a table can show and edit: every quantity, name and number, with its tolerance."""

from collections.abc import Iterator
from dataclasses import dataclass, is_dataclass
from typing import Any

from modalview.model.addresses import Address, look
from modalview.model.fields import Shape, fields_of, quantity_in
from modalview.model.parts import Model, Motion
from modalview.model.tolerance_text import tolerance_text
from modalview.model.values import Entry, Value
from modalview.units.quantities import Quantity
from modalview.units.show import short

_POINT = ("x", "y", "z")
# Fields that name another part: drawn on the sheet, not typed in a table.
_ENDS = (("from",), ("to",), ("at",))


@dataclass(frozen=True, slots=True)
class EditableField:
    """One line of a table.

    Parameters
    ----------
    address : Address
        For `edits.set_typed`.
    name : str
        As a person reads it: "stiffness x", "position y".
    text : str
        As typed.
    quantity : Quantity or None
        None for names and plain numbers.
    tolerance_address : Address or None
        Where a tolerance of its own can be typed; None where there is none.
    tolerance : str
        As typed; "" for none of its own.
    """

    address: Address
    name: str
    text: str
    quantity: Quantity | None = None
    tolerance_address: Address | None = None
    tolerance: str = ""


def editable_fields(model: Model, address: Address) -> tuple[EditableField, ...]:
    """Return every field of a part that is given and can be typed, in the file's order.

    Parameters
    ----------
    model : Model
        The model.
    address : Address
        Of a part: ("bodies", "motor"), ("machines", "pump set", "excitations", "1x"), or () for the model's
        own fields.

    Examples
    --------
    >>> from modalview.model.parts import Body
    >>> from modalview.units.quantities import MASS
    >>> model = Model(bodies=(Body(id="motor", mass=Value.typed("620 kg", MASS, "3 %")),))
    >>> [(one.name, one.text, one.tolerance) for one in editable_fields(model, ("bodies", "motor"))]
    [('name', '', ''), ('mass', '620 kg', '3 %'), ('tolerance', '', '')]
    """
    return editable_fields_of(look(model, address), address, model.motion)


def editable_fields_of(part: Any, address: Address, motion: Motion) -> tuple[EditableField, ...]:
    """Return the same of a part that is at hand, without looking for it in its model."""
    return tuple(_fields(part, _Spot(address, (), motion)))


@dataclass(frozen=True, slots=True)
class _Spot:
    """Where the walk over a part has come to."""

    address: Address
    words: tuple[str, ...]
    motion: Motion

    def at(self, step: str | int, word: str) -> "_Spot":
        return _Spot((*self.address, step), (*self.words, word), self.motion)

    @property
    def name(self) -> str:
        return " ".join(self.words).replace("_", " ")


def _fields(part: Any, spot: _Spot) -> Iterator[EditableField]:
    kind: type = type(part)
    for field in fields_of(kind):
        if field.name == "id":
            continue
        declared = field.shape.quantity
        quantity = quantity_in(kind, field.name, declared, spot.motion) if declared else None
        yield from _field(getattr(part, field.name), field.shape, quantity, spot.at(field.name, field.key))


def _field(item: Any, shape: Shape, quantity: Quantity | None, spot: _Spot) -> Iterator[EditableField]:
    if isinstance(item, Value):
        own = (*spot.address, "tolerance")
        yield EditableField(spot.address, spot.name, item.text, quantity, own, tolerance_text(item.tolerance))
    elif isinstance(item, Entry):
        yield EditableField(spot.address, spot.name, item.text, quantity)
    elif shape.tolerance:
        yield EditableField(spot.address, spot.name, tolerance_text(item))
    elif isinstance(item, str | int | float) and (shape.text or shape.number):
        yield EditableField(spot.address, spot.name, item if isinstance(item, str) else short(item, 15))
    elif item is None and spot.words == ("name",):
        yield EditableField(spot.address, spot.name, "")
    elif is_dataclass(item) and spot.words not in _ENDS:
        yield from _fields(item, spot)
    elif isinstance(item, tuple) and shape.items and shape.items.entry:
        for number, one in enumerate(item):
            axis = _POINT[number] if number < len(_POINT) else str(number)
            yield from _field(one, shape.items, shape.items.entry, spot.at(number, axis))
