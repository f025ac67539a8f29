"""New values written into a model: as typed texts with few digits, tolerances moved along, as one edit."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, fields, replace
from typing import Any

from modalview.advice.changes.numbers import NEAREST, Written, rounded
from modalview.advice.changes.results import ValueChange
from modalview.advice.changes.values import Variable, address_of
from modalview.assembly.assemble import Assembly
from modalview.assembly.parameters import Parameter
from modalview.model.addresses import look, put, quantity_of
from modalview.model.loadcases import with_number
from modalview.model.parts import InertiaTensor, Model
from modalview.model.values import Entry, Value
from modalview.units.quantities import INERTIA, PRODUCT_OF_INERTIA
from modalview.units.show import short

# Moments of a tensor keep so many digits, so that none outgrows the sum of the others by rounding.
TENSOR_DIGITS = 10
# Values that change by one factor and are not all equal keep so many.
COMMON_DIGITS = 4
PROPOSED = "proposed; before:"


@dataclass(frozen=True, slots=True, eq=False)
class Writer:
    """Writes factors of variables into a model.

    Parameters
    ----------
    model : Model
    parameters : mapping of str to Parameter
    """

    model: Model
    parameters: Mapping[str, Parameter]

    @classmethod
    def of(cls, assembly: Assembly, model: Model) -> "Writer":
        """Collect the parameters of an assembly; ``model`` is the one to be edited."""
        return cls(model, {p.id: p for p in assembly.parameters})

    def nominal(self, variable: Variable) -> float:
        """Return today's value of a variable, SI; 1 where several values change by one factor."""
        return self.parameters[variable.members[0]].nominal if self.is_single(variable) else 1.0

    def is_single(self, variable: Variable) -> bool:
        """Return whether it is one typed value, or several that are equal and so shown as one."""
        known = [self.parameters[m] for m in variable.members]
        keys = {p.id.partition(".")[2] for p in known}
        return len({p.nominal for p in known}) == 1 and len(keys) == 1 and known[0].entry is not None

    def unit(self, variable: Variable) -> str:
        """Return the SI unit of its values; "1" for a factor."""
        written = self.written(variable)
        return written.quantity.si_unit if written else "1"

    def written(self, variable: Variable) -> Written | None:
        """Return how its values are written; None for a factor."""
        return self._written(self.parameters[variable.members[0]]) if self.is_single(variable) else None

    def _written(self, p: Parameter) -> Written | None:
        quantity = quantity_of(self.model, address_of(self.model, p)) if p.entry is not None else None
        if p.entry is None or quantity is None:
            return None
        return Written(quantity, p.entry, self.model.units or "SI")

    def text(self, variable: Variable, value: float, digits: int) -> str:
        """Return a value of a variable for people: "271 kN/mm", or "1.55 times"."""
        written = self.written(variable)
        return written.entry_of(value, digits).text if written else f"{short(value, digits)} times"

    def spelled(self, variable: Variable, value: float, digits: int, side: int = NEAREST) -> float:
        """Round a value of a variable to so many digits, to a side, in the unit it is shown in."""
        written = self.written(variable)
        return written.entry_of(value, digits, side).si if written else rounded(value, digits, side)

    def factor_spelled(self, variable: Variable, factor: float, digits: int, side: int = NEAREST) -> float:
        """Round a factor so that the value it gives has so many digits."""
        nominal = self.nominal(variable)
        return self.spelled(variable, factor * nominal, digits, side) / nominal

    def told(self, variables: Sequence[Variable], factors: Sequence[float], digits: int) -> str:
        """Say what `changed` does: "Raise stiffness of base support from 175 kN/mm to 271 kN/mm"."""
        words = []
        for one, factor in zip(variables, factors, strict=True):
            if factor == 1.0:
                continue
            verb = "raise" if factor > 1 else "lower"
            entry = self.parameters[one.members[0]].entry
            after = self.text(one, factor * self.nominal(one), digits)
            if entry is not None and self.is_single(one):
                each = " each" if len(one.members) > 1 else ""
                words.append(f"{verb} {one.label} from {entry.text} to {after}{each}")
            else:
                words.append(f"{verb} {one.label} to {after} what it is")
        text = "; ".join(words)
        return text[:1].upper() + text[1:]

    def changed(
        self, variables: Sequence[Variable], factors: Sequence[float], digits: int
    ) -> tuple[Model, tuple[ValueChange, ...]]:
        """Return the model with the values times their factors, and what changed: nothing by factor 1."""
        model, changes = self.model, []
        for variable, factor in zip(variables, factors, strict=True):
            if factor == 1.0:
                continue
            places = digits if self.is_single(variable) else max(digits, COMMON_DIGITS)
            for member in variable.members:
                p = self.parameters[member]
                model, change = self._put(model, p, factor, places)
                changes.append(change)
        return model, tuple(changes)

    def _put(self, model: Model, p: Parameter, factor: float, digits: int) -> tuple[Model, ValueChange]:
        address = address_of(model, p)
        old = look(model, address)
        if isinstance(old, InertiaTensor):
            text = f"{short(factor, TENSOR_DIGITS)} times"
            change = ValueChange(p.id, f"inertia of {p.label}", "as typed", text, 1.0, factor)
            return put(model, address, _scaled(old, factor)), change
        written = self._written(p)
        if written is None or not isinstance(old, Value):
            raise LookupError(f"{p.id} holds no value")
        entry = written.entry_of(p.nominal * factor, digits)
        new = proposed(with_number(old, entry), old)
        key = p.id.partition(f"{p.part}.")[2].replace(".", " ").replace("_", " ")
        change = ValueChange(p.id, f"{key} of {p.label}", old.text, entry.text, old.si, entry.si)
        return put(model, address, new), change


def proposed(new: Value, old: Value) -> Value:
    """Return a value that says where its number comes from: no datasheet any more."""
    return replace(new, source=f"{PROPOSED} {old.text}", status="assumed", by=None, given=None)


def _scaled(tensor: InertiaTensor, factor: float) -> InertiaTensor:
    new: dict[str, Any] = {}
    for field in fields(tensor):
        value = getattr(tensor, field.name)
        if isinstance(value, Value):
            quantity = PRODUCT_OF_INERTIA if field.name.startswith("P") else INERTIA
            entry = Entry.typed(f"{short(value.si * factor, TENSOR_DIGITS)} kg m2", quantity)
            new[field.name] = proposed(with_number(value, entry), value)
    return replace(tensor, **new)
