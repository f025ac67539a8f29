"""Typing at several addresses as one edit, also where nothing stands yet.

`edits.set_typed` types one text where its owner exists. Here an absent owner is made (the stiffness of a
mount that had damping alone, a tensor of inertia, an offset), and the rules look at the end of it all.
"""

from collections.abc import Sequence
from dataclasses import dataclass, is_dataclass
from typing import Any

from modalview.errors import Fault, ModelFaultsError, UnitError
from modalview.model.addresses import Address, field_named, look, put
from modalview.model.composites import is_composite, read_composite
from modalview.model.differences import Rewrite, checked_edit
from modalview.model.edits import retyped, typed_number
from modalview.model.fields import Field, Shape, fields_of, quantity_in
from modalview.model.parts import Body, Model, Motion
from modalview.model.starting import with_mass
from modalview.model.tolerance_text import typed_entry, typed_tolerance
from modalview.model.values import Entry, Tolerance, Value
from modalview.units.quantities import Quantity

Typed = Sequence[tuple[Address, str]]


def typed_together(model: Model, typed: Typed, text: str) -> Rewrite:
    """Return the edit that types several texts, unless one cannot be read or the whole breaks a rule.

    Parameters
    ----------
    model : Model
        The model.
    typed : sequence of (Address, str)
        An empty text takes an optional field away. Where the owner of a field is absent it is made, from all
        the fields of it that are typed here.
    text : str
        For the undo menu.

    Raises
    ------
    UnitError
        When a text is not what its field asks for.
    ModelFaultsError
        With the faults that the edit would add.
    LookupError
        When an address is not there (any more).

    Examples
    --------
    >>> from modalview.model.parts import Body
    >>> model = Model(bodies=(Body(id="fan"),))
    >>> edit = typed_together(model, [(("bodies", "fan", "mass"), "4*180 kg")], "Weigh the fan")
    >>> edit.apply(model).bodies[0].mass.si
    720.0
    """
    return checked_edit(model, filled(model, typed), text)


def filled(model: Model, typed: Typed) -> Model:
    """Return the model with several texts typed, unchecked by the rules; raises as `typed_together`."""
    made: dict[Address, dict[str | int, Any]] = {}
    changed = model
    for address, text in typed:
        place = place_at(changed, address)
        if place.owner is not None:
            item = _item(changed, place, address, text)
            if isinstance(place.owner, Body) and address[-1] == "mass" and isinstance(item, Value):
                changed = put(changed, address[:-1], with_mass(place.owner, item, model.units or "SI"))
            else:
                changed = put(changed, address, item)
        elif text.strip():
            made.setdefault(address[:-1], {})[address[-1]] = _item(changed, place, address, text)
    for address, items in made.items():
        changed = put(changed, address, _made(changed, address, items))
    return _without_empty(changed, [address[:-1] for address, _ in typed])


@dataclass(frozen=True, slots=True)
class Place:
    """What stands at an address and what may.

    Parameters
    ----------
    owner : Any
        The part, record or list that holds the field; None where it is absent.
    kind : type
        Of the owner; ``tuple`` for a list.
    field : Field or None
        None within a list.
    shape, quantity : Shape, Quantity or None
        What may stand there.
    item : Any
        What stands there; None for nothing.
    """

    owner: Any
    kind: type
    field: Field | None
    shape: Shape
    quantity: Quantity | None
    item: Any


def place_at(model: Model, address: Address) -> Place:
    """Return what stands at an address whose owner may be absent; LookupError when there can be none such.

    >>> from modalview.model.parts import End, Mount
    >>> mount = Mount(id="m", from_=End(body="a"), to=End(support="g"))
    >>> place_at(Model(links=(mount,)), ("links", "m", "stiffness", "y")).quantity.name
    'stiffness'
    """
    above: Any = look(model, address[:-2])
    step = address[-2]
    owner = look(model, address[:-1])
    if owner is None:
        shape = field_named(type(above), step).shape
        kind = _record_of(shape)
    else:
        shape, kind = Shape(), type(owner)
    if kind is tuple:
        items = shape.items or field_named(type(above), step).shape.items or Shape()
        present = look(model, address) if owner is not None else None
        return Place(owner, tuple, None, items, items.quantity, present)
    field = field_named(kind, address[-1])
    quantity = field.shape.quantity
    if quantity is not None:
        quantity = quantity_in(kind, field.name, quantity, model.motion)
    return Place(owner, kind, field, field.shape, quantity, owner and getattr(owner, field.name))


def _record_of(shape: Shape) -> type:
    """Return what is made where nothing stands: the one record that may, or a list."""
    if len(shape.records) == 1:
        return shape.records[0]
    if shape.items is not None:
        return tuple
    raise LookupError("nothing can be made there")


def _item(model: Model, place: Place, address: Address, text: str) -> Any:
    """Read a text for its place."""
    if not text.strip():
        return _emptied(place, address)
    if place.field is not None and is_composite(place.kind, place.field.name):
        return read_composite(place.kind, place.field.name, text)
    if place.quantity is not None:
        entry = typed_entry(text, place.quantity)
        return retyped(place.item, entry) if place.shape.value else entry
    if place.shape.tolerance:
        of_value = isinstance(place.owner, Value)
        return typed_tolerance(text, place_at(model, address[:-1]).quantity if of_value else None)
    return _plain(place, address, text)


def _plain(place: Place, address: Address, text: str) -> Any:
    """Read a number or a name."""
    number = typed_number(text) if place.shape.number else None
    if number is not None:
        return number
    if not place.shape.text:
        raise UnitError(
            f'"{text}" cannot be read as {address[-1]}: write a plain number such as "7" or "0.5"'
        )
    return text.strip()


def _emptied(place: Place, address: Address) -> Any:
    if place.field is None or place.field.required or isinstance(place.owner, Tolerance):
        raise ModelFaultsError((Fault(str(address[-1]), "cannot be left empty"),))
    return place.field.default


def _made(model: Model, address: Address, items: dict[str | int, Any]) -> Any:
    """Return a new owner of the items typed in it."""
    shape = field_named(type(look(model, address[:-1])), address[-1]).shape
    kind = _record_of(shape)
    if kind is tuple:
        dimensions = 3 if model.motion is Motion.SPACE else 2
        return tuple(items.get(number, Entry("0 m", 0.0)) for number in range(dimensions))
    named = {field_named(kind, key).name: item for key, item in items.items()}
    missing = [field.key for field in fields_of(kind) if field.required and field.name not in named]
    if missing:
        raise UnitError(f"{' and '.join(missing)} must be given too")
    return kind(**named)


def _without_empty(model: Model, owners: list[Address]) -> Model:
    """Take away records that hold nothing any more, such as the damping of a mount; parts of lists stay."""
    for address in dict.fromkeys(owners):
        owner, above = look(model, address), look(model, address[:-1])
        if not is_dataclass(owner) or isinstance(above, tuple):
            continue
        kind: type = type(owner)
        optional = not field_named(type(above), address[-1]).required
        if optional and all(getattr(owner, one.name) is None for one in fields_of(kind)):
            model = put(model, address, None)
    return model
