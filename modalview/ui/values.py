"""The lines of the tables: every value of every part, as typed and in SI."""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from modalview.model.addresses import Address, look
from modalview.model.editable import EditableField, editable_fields
from modalview.model.forms import FormLine
from modalview.model.parts import Body, Machine, Model
from modalview.model.tolerance_text import tolerance_text
from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.show import show, significant

# The story is prose and stands beside the results; the system of units is no value of a part.
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


class ValueRows:
    """Every line of the parts table; lines of parts that an edit left alone are kept."""

    def __init__(self) -> None:
        self._kept: dict[Address, tuple[Any, tuple[Any, ...], tuple[ValueRow, ...]]] = {}

    def of(self, model: Model, system: str = "SI") -> list[ValueRow]:
        """Return the lines: parts in the order of the file, the model's own at the end."""
        kept, self._kept = self._kept, {}
        rows: list[ValueRow] = []
        for address, part, name, part_id in _parts(model):
            context = (name, model.motion, model.default_tolerance, system)
            before = kept.get(address)
            if before is None or before[0] is not part or before[1] != context:
                before = part, context, tuple(_rows_of(model, address, name, part_id, system))
            self._kept[address] = before
            rows.extend(before[2])
        return rows


def machine_rows(model: Model, machine: Machine, system: str = "SI") -> list[ValueRow]:
    """Return the lines of a machine that decide its bands: speed and margin."""
    rows = _rows_of(model, ("machines", machine.id), machine.name or machine.id, machine.id, system)
    return [row for row in rows if row.address[2] in _IN_FORM]


def _parts(model: Model) -> Iterator[tuple[Address, Any, str, str]]:
    """Walk over what has lines of its own: address, part, name and id."""
    for kind in ("bodies", "links", "supports", "machines"):
        for part in getattr(model, kind):
            address = (kind, part.id)
            yield address, part, part.name or part.id, part.id
            for excitation in part.excitations if isinstance(part, Machine) else ():
                name = f"{part.name or part.id}, {excitation.name or excitation.id}"
                yield (*address, "excitations", excitation.id), excitation, name, part.id
    for kind in ("measured", "limits"):
        for part in getattr(model, kind):
            yield (kind, part.id), part, part.id, part.id
    yield (), model, "model", ""


def _rows_of(model: Model, address: Address, part: str, part_id: str, system: str) -> Iterator[ValueRow]:
    for field in editable_fields(model, address):
        if field.name not in _NOT_IN_TABLE:
            yield _row(model, field, part, part_id, system)


def _row(model: Model, field: EditableField, part: str, part_id: str, system: str) -> ValueRow:
    standing = look(model, field.address)
    si = getattr(standing, "si", None)
    known = si is not None and field.quantity is not None
    return ValueRow(
        address=field.address,
        part=part,
        part_id=part_id,
        what="tolerance of the part" if field.name == "tolerance" else field.name,
        text=field.text,
        converted=converted(si, field.quantity, system) if known else "",
        tolerance_address=field.tolerance_address,
        tolerance=field.tolerance,
        inherited=inherited(model, field) if field.tolerance_address else "",
    )


def inherited(model: Model, field: EditableField | FormLine) -> str:
    """Return the tolerance of a value that has none of its own: the part's, the default, else exact."""
    part = look(model, field.address[:2])
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
