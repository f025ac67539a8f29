"""Where a part or a field stands in a model: ("links", "k1", "stiffness").

Parts in a list are named by their id, other items by their number.
"""

from dataclasses import is_dataclass, replace
from typing import Any

from modalview.model.fields import Field, Shape, fields_of, quantity_in
from modalview.model.parts import Model
from modalview.units.quantities import Quantity

Address = tuple[str | int, ...]


def _index(items: tuple[Any, ...], step: str | int) -> int:
    if isinstance(step, int) and 0 <= step < len(items):
        return step
    for number, item in enumerate(items):
        if getattr(item, "id", None) == step:
            return number
    raise LookupError(f"the model has no part {step!r} there")


def _step(whole: Any, step: str | int) -> Any:
    if isinstance(whole, tuple):
        return whole[_index(whole, step)]
    return getattr(whole, field_named(type(whole), step).name)


def field_named(part: type, step: str | int) -> Field:
    """Return a part's field by its name or its key in the file; LookupError when it has none such."""
    for field in fields_of(part) if is_dataclass(part) else ():
        if step in (field.name, field.key):
            return field
    raise LookupError(f"{part.__name__} has no field {step!r}")


def look(model: Model, address: Address) -> Any:
    """Return what stands at an address; LookupError when it is no longer there.

    >>> look(Model(title="Pump"), ("title",))
    'Pump'
    """
    found: Any = model
    for step in address:
        found = _step(found, step)
    return found


def put(model: Model, address: Address, item: Any) -> Model:
    """Return the model with ``item`` at an address; everything else is shared with the old model.

    >>> put(Model(), ("title",), "Fan").title
    'Fan'
    """
    changed: Model = _put(model, address, item)
    return changed


def _put(whole: Any, address: Address, item: Any) -> Any:
    if not address:
        return item
    inner = _put(_step(whole, address[0]), address[1:], item)
    if isinstance(whole, tuple):
        at = _index(whole, address[0])
        return (*whole[:at], inner, *whole[at + 1 :])
    return replace(whole, **{field_named(type(whole), address[0]).name: inner})


def shape_at(model: Model, address: Address) -> tuple[Shape, Quantity | None]:
    """Return what may stand at an address, and in which quantity a value or entry is typed there.

    An empty optional field has both too: they say what may be typed there.
    """
    whole: Any = model
    shape, quantity = Shape(), None
    for step in address:
        if isinstance(whole, tuple):
            shape = shape.items or Shape()
            quantity = shape.quantity
        else:
            part: type = type(whole)
            field = field_named(part, step)
            shape, quantity = field.shape, field.shape.quantity
            if quantity:
                quantity = quantity_in(part, field.name, quantity, model.motion)
        whole = _step(whole, step)
    return shape, quantity


def quantity_of(model: Model, address: Address) -> Quantity | None:
    """Return the quantity of the value or entry at an address, or None where none is held.

    >>> from modalview.model.parts import Body
    >>> quantity_of(Model(bodies=(Body(id="rotor"),)), ("bodies", "rotor", "mass")).name
    'mass'
    """
    return shape_at(model, address)[1]
