"""The lines of the tables: every value of every part, as typed and in SI."""

from bisect import bisect_right
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, is_dataclass
from itertools import accumulate
from typing import Any

from modalview.model.addresses import Address, look
from modalview.model.editable import EditableField, editable_fields_of
from modalview.model.fields import fields_of
from modalview.model.forms import FormLine
from modalview.model.parts import Body, End, Machine, Model
from modalview.model.tolerance_text import tolerance_text
from modalview.model.values import Entry, Tolerance, Value
from modalview.ui.front import give_way
from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.show import show, significant

# The story is prose and stands beside the results; the system of units is no value of a part.
# Parts counted between two looks whether the window has something to show.
_PIECE = 16
_NOT_IN_TABLE = ("notes", "units")
# What of a machine stands in the results, to be changed while looking at the verdict.
_IN_FORM = ("speed", "speed_tolerance", "margin")
_MASS_LIKE = (q.MASS, q.INERTIA, q.PRODUCT_OF_INERTIA)


@dataclass(frozen=True, slots=True)
class ValueRow:
    """One line.

    Parameters
    ----------
    address : Address
        Where the value stands in the model.
    part : str
        Name of the part, or its id.
    part_id : str
        Id of the part; "" for the model itself.
    what : str
        "stiffness x".
    text : str
        As typed.
    converted : str
        In SI, or hertz for what turns; "" where that says nothing new.
    tolerance_address : Address or None
        Where a tolerance can be typed.
    tolerance : str
        As typed; "" for none of its own.
    inherited : str
        What holds where the value has none of its own: "5 % (part)", "10 % (default)", "exact".
    """

    address: Address
    part: str
    part_id: str
    what: str
    text: str
    converted: str
    tolerance_address: Address | None
    tolerance: str
    inherited: str


def converted(si: float, quantity: Quantity, system: str = "SI") -> str:
    """Return a value in a system of units; in SI in the unit the core keeps it in. What turns is in hertz.

    >>> converted(1.75e8, q.STIFFNESS), converted(308.923, q.SPEED), converted(0.15, q.RATIO)
    ('1.75e8 N/m', '49.167 Hz', '')
    >>> converted(620.0, q.MASS, "inch-pound")
    '1366.9 lb'
    """
    if quantity == q.RATIO:
        return ""
    if quantity in (q.SPEED, q.FREQUENCY):
        return show(si, q.FREQUENCY, digits=5)
    if system != "SI":
        return show(si, quantity, system, digits=5)
    number = significant(si, 5)
    mantissa, e, power = number.partition("e")
    if "." in mantissa:
        mantissa = mantissa.rstrip("0").rstrip(".")
    return f"{mantissa}{e}{power} {quantity.si_unit}"


class Lines(Sequence[ValueRow]):
    """Every line of the parts table, made when it is asked for; parts in the order of the file.

    What is found at the start is how many lines each part has; of parts that an edit left alone even that is
    taken from before. May be made in a thread.
    """

    def __init__(self, model: Model, system: str = "SI", before: "Lines | None" = None) -> None:
        self.model, self._system = model, system
        self.parts = tuple(_parts(model))
        counts = self._counted(before)
        self.starts = [0, *accumulate(counts)]
        self._first: dict[str, int] = {}
        for number, part in enumerate(self.parts):
            if counts[number]:
                self._first.setdefault(part.part_id, number)
        self._made: dict[int, tuple[ValueRow, ...]] = {}

    def _counted(self, before: "Lines | None") -> list[int]:
        """Return how many lines each part has."""
        alike: dict[Any, int] = {}
        counts = []
        kept = before.parts if before is not None and before.model.motion is self.model.motion else ()
        for number, part in enumerate(self.parts):
            if number % _PIECE == 0:
                give_way()
            if number < len(kept) and kept[number].item is part.item:
                counts.append(before.starts[number + 1] - before.starts[number])
                continue
            key = _shape(part.item)
            if key not in alike:
                alike[key] = sum(1 for _ in self._fields_of(part))
            counts.append(alike[key])
        return counts

    def _fields_of(self, part: "_Part") -> Iterator[EditableField]:
        for field in editable_fields_of(part.item, part.address, self.model.motion):
            if field.name not in _NOT_IN_TABLE:
                yield field

    def __len__(self) -> int:
        """Return the number of lines."""
        return self.starts[-1]

    def __getitem__(self, number: int) -> ValueRow:
        """Return a line."""
        if not 0 <= number < len(self):
            raise IndexError(number)
        at = bisect_right(self.starts, number) - 1
        made = self._made.get(at)
        if made is None:
            part = self.parts[at]
            made = self._made[at] = tuple(
                _row(self.model, field, part, self._system) for field in self._fields_of(part)
            )
        return made[number - self.starts[at]]

    def row_of_part(self, part_id: str) -> int:
        """Return the first line of a part, -1 when it has none."""
        number = self._first.get(part_id)
        return -1 if number is None else self.starts[number]

    def like(self, other: "Lines") -> bool:
        """Return whether every line stands for the same value of the same part."""
        return self.starts == other.starts and all(
            one.address == two.address for one, two in zip(self.parts, other.parts, strict=True)
        )


def _shape(item: Any) -> Any:
    """Return what decides how many lines a part has: two with the same shape have as many."""
    kind = type(item)
    if isinstance(item, tuple):
        return kind, len(item), type(item[0]) if item else None
    if not is_dataclass(item) or isinstance(item, _ONE_LINE):
        return kind
    return kind, *(_shape(getattr(item, field.name)) for field in fields_of(kind))


# What stands in one line, or in none because it names another part.
_ONE_LINE = (Value, Entry, Tolerance, End)


def machine_rows(model: Model, machine: Machine, system: str = "SI") -> list[ValueRow]:
    """Return the lines of a machine that decide its bands: speed and margin."""
    part = _Part(("machines", machine.id), machine, machine.name or machine.id, machine.id)
    fields = editable_fields_of(machine, part.address, model.motion)
    return [_row(model, field, part, system) for field in fields if field.address[2] in _IN_FORM]


@dataclass(frozen=True, slots=True)
class _Part:
    """What has lines of its own: where it stands, its name, and the id of the part it belongs to."""

    address: Address
    item: Any
    name: str
    part_id: str


def _parts(model: Model) -> Iterator[_Part]:
    for kind in ("bodies", "links", "supports", "machines"):
        for part in getattr(model, kind):
            yield _Part((kind, part.id), part, part.name or part.id, part.id)
            for excitation in part.excitations if isinstance(part, Machine) else ():
                name = f"{part.name or part.id}, {excitation.name or excitation.id}"
                yield _Part((kind, part.id, "excitations", excitation.id), excitation, name, part.id)
    for kind in ("measured", "limits"):
        for part in getattr(model, kind):
            yield _Part((kind, part.id), part, part.id, part.id)
    yield _Part((), model, "model", "")


def _row(model: Model, field: EditableField, part: _Part, system: str) -> ValueRow:
    standing = look(part.item, field.address[len(part.address) :])
    si = getattr(standing, "si", None)
    known = si is not None and field.quantity is not None
    return ValueRow(
        address=field.address,
        part=part.name,
        part_id=part.part_id,
        what="tolerance of the part" if field.name == "tolerance" else field.name,
        text=field.text,
        converted=converted(si, field.quantity, system) if known else "",
        tolerance_address=field.tolerance_address,
        tolerance=field.tolerance,
        inherited=_inherited(model, field, part.item) if field.tolerance_address else "",
    )


def inherited(model: Model, field: EditableField | FormLine) -> str:
    """Return the tolerance of a value that has none of its own: the part's, the default, else exact."""
    return _inherited(model, field, look(model, field.address[:2]))


def _inherited(model: Model, field: EditableField | FormLine, part: Any) -> str:
    own = getattr(part, "tolerance", None)
    inner = getattr(getattr(part, "inertia", None), "tolerance", None)
    if isinstance(part, Body) and "inertia" in field.address and inner is not None:
        own = inner
    if own is not None:
        return f"{tolerance_text(own)} (part)"
    default = model.default_tolerance
    if default is not None:
        mass_like = field.quantity in _MASS_LIKE
        general = default.mass if mass_like else default.stiffness
        if general is not None and field.quantity is not None:
            return f"{tolerance_text(general)} (default)"
    return "exact"
