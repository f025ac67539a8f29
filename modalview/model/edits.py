"""Changes of a model that can be applied and reverted: the one path by which the window changes anything.

A function here reads what a person typed, refuses what the rules refuse, and returns the edit; the
window wraps it for undo and redo. Applying and reverting never fail and never read the text again.
"""

from dataclasses import dataclass, replace
from typing import Any, Protocol

from modalview.errors import Fault, ModelFaultsError, UnitError
from modalview.model.addresses import Address, field_named, look, put, shape_at
from modalview.model.parts import Model
from modalview.model.rules import faults
from modalview.model.starting import with_mass
from modalview.model.tolerance_text import tolerance_text, typed_entry, typed_tolerance
from modalview.model.values import STARTING, Entry, Tolerance, Value
from modalview.units.numbers import read_number, split_number
from modalview.units.show import short


class Edit(Protocol):
    """A change with its way back."""

    @property
    def text(self) -> str:
        """What it does, for the undo menu."""

    def apply(self, model: Model) -> Model:
        """Return the model with the change."""

    def revert(self, model: Model) -> Model:
        """Return the model without it again."""


@dataclass(frozen=True, slots=True)
class SetField:
    """Puts one thing in the place of another.

    Parameters
    ----------
    address : Address
        Such as ("links", "k1", "stiffness").
    old, new : Any
        What stands there before and after.
    text : str
        For the undo menu.
    """

    address: Address
    old: Any
    new: Any
    text: str

    def apply(self, model: Model) -> Model:
        """Return the model with ``new`` in place."""
        return put(model, self.address, self.new)

    def revert(self, model: Model) -> Model:
        """Return the model with ``old`` in place."""
        return put(model, self.address, self.old)


def set_field(model: Model, address: Address, new: Any, text: str) -> SetField:
    """Return the edit that puts ``new`` at an address, unless it would break a rule.

    Raises
    ------
    ModelFaultsError
        With the faults that the edit would add; those the model has already do not stand in the way.
    LookupError
        When the address is not there (any more).
    """
    edit = SetField(address, look(model, address), new, text)
    added = faults(edit.apply(model))
    if added:
        known = set(faults(model))
        added = tuple(fault for fault in added if fault not in known)
    if added:
        raise ModelFaultsError(added)
    return edit


def set_value_text(model: Model, address: Address, text: str) -> SetField:
    """Return the edit that types a value anew, by the window's rule (a decimal comma is accepted).

    Tolerance, source and status of the value stay, but for those of a starting value; ``by`` and ``given``
    go, for the number no longer comes from there. An empty text takes an optional value away. With the mass
    of a body goes its inertia, while that is a starting value.

    Raises
    ------
    UnitError
        When the text is no value of the field's quantity.
    ModelFaultsError
        When the value breaks a rule.

    Examples
    --------
    >>> from modalview.model.parts import Body
    >>> from modalview.units.quantities import MASS
    >>> model = Model(bodies=(Body(id="motor", mass=Value.typed("620 kg", MASS)),))
    >>> set_value_text(model, ("bodies", "motor", "mass"), "0,7 t").apply(model).bodies[0].mass.si
    700.0
    """
    shape, quantity = shape_at(model, address)
    if quantity is None:
        raise LookupError(f"{_named(address)} holds no value with a unit")
    old = look(model, address)
    if not text.strip():
        return set_field(model, address, _emptied(model, address), f"Clear {_named(address)}")
    entry = typed_entry(text, quantity)
    new = retyped(old if isinstance(old, Value) else None, entry) if shape.value else entry
    told = f"Set {_named(address)} to {entry.text}"
    if isinstance(new, Value) and len(address) == 3 and address[2] == "mass":
        body = look(model, address[:2])
        heavier = with_mass(body, new, model.units or "SI")
        if heavier.inertia != body.inertia:
            return set_field(model, address[:2], heavier, told)
    return set_field(model, address, new, told)


def retyped(old: Value | None, entry: Entry) -> Value:
    """Return a value with another number, and what is still true of it.

    Typing over a starting value gives it, even with the same number: it no longer counts as not given yet.
    """
    if old is None:
        return Value(entry)
    if old.source == STARTING:
        return replace(old, entry=entry, source=None, status=None, by=None, given=None)
    return old if entry == old.entry else replace(old, entry=entry, by=None, given=None)


def set_tolerance_text(model: Model, address: Address, text: str) -> SetField:
    """Return the edit that types the tolerance at an address, such as (..., "mass", "tolerance").

    "10 %", "-10 % / +20 %", limits such as "3 kN/mm to 5 kN/mm", or nothing for none of its own.

    Raises
    ------
    UnitError
        When the text is no tolerance.
    ModelFaultsError
        When the tolerance breaks a rule.
    """
    owner = look(model, address[:-1])
    quantity = shape_at(model, address[:-1])[1] if isinstance(owner, Value) else None
    new = typed_tolerance(text, quantity)
    what = f"to {tolerance_text(new)}" if new else "to none of its own"
    return set_field(model, address, new, f"Set {_named(address)} {what}")


def set_number_text(model: Model, address: Address, text: str) -> SetField:
    """Return the edit that types a plain number, such as an order; a decimal comma is accepted."""
    number = typed_number(text)
    if number is None:
        raise UnitError(
            f'"{text}" cannot be read as a number for {_named(address)}: write it like "7" or "0.5"'
        )
    return set_field(model, address, number, f"Set {_named(address)} to {short(number)}")


def typed_number(text: str) -> float | None:
    """Read a plain number, with a decimal comma where one is meant; None when it is none.

    UnitError when a comma has two readings, or for a number that floating point cannot hold.
    """
    parts = split_number(text.strip().replace("\u2212", "-"))
    if parts is None or parts[1].strip():
        return None
    return float(read_number(parts[0], window=True)[0])


def set_plain_text(model: Model, address: Address, text: str) -> SetField:
    """Return the edit that types a name, the title or a note; an empty text takes it away."""
    if address[-1] == "id":
        raise ModelFaultsError(
            (Fault(_named(address), "other parts refer to an id; change the name instead"),)
        )
    new = text.strip() or _emptied(model, address)
    return set_field(model, address, new, f"Set {_named(address)} to {text.strip() or 'nothing'}")


def set_typed(model: Model, address: Address, text: str) -> SetField:
    """Return the edit for whatever may be typed at an address: a value, a tolerance, a number or a text."""
    shape, quantity = shape_at(model, address)
    if quantity is not None:
        return set_value_text(model, address, text)
    if shape.tolerance:
        return set_tolerance_text(model, address, text)
    # A gear's ratio is a number, or a fraction as text.
    if shape.number and text.strip() and not (shape.text and typed_number(text) is None):
        return set_number_text(model, address, text)
    if shape.text or shape.number:
        return set_plain_text(model, address, text)
    raise LookupError(f"nothing can be typed at {_named(address)}")


def _emptied(model: Model, address: Address) -> Any:
    """Return what stands in an optional field that is taken away; refuse for a required one."""
    owner = look(model, address[:-1])
    if not isinstance(owner, tuple | Tolerance):
        field = field_named(type(owner), address[-1])
        if not field.required:
            return field.default
    raise ModelFaultsError((Fault(_named(address), "cannot be left empty"),))


def _named(address: Address) -> str:
    """Say an address in words: "stiffness of k1"."""
    words = [str(step).rstrip("_").replace("_", " ") for step in address]
    if len(words) < 3:
        return words[-1]
    nested = 4 if words[2] == "excitations" and len(words) > 4 else 2
    return f"{' '.join(words[nested:])} of {words[nested - 1]}"
