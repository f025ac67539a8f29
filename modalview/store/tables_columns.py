"""What the columns of a table mean: headings with their units, and cells as typed values."""

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from modalview.errors import Fault, FileFaultsError, UnitError
from modalview.model.values import Entry
from modalview.store.tables import Table
from modalview.units import quantities as q
from modalview.units.numbers import split_number
from modalview.units.quantities import Quantity
from modalview.units.table import find_unit

# Units of molecules, which no field of a model file takes; a table is converted from them.
# 1 dalton = 1.66053906892(52)e-27 kg: CODATA recommended values 2022.
_SMALL: dict[Quantity, dict[str, Fraction]] = {
    q.LENGTH: {
        **dict.fromkeys(("angstrom", "ångström", "å", "a"), Fraction(1, 10**10)),
        "nm": Fraction(1, 10**9),
    },
    q.MASS: dict.fromkeys(("dalton", "da", "u", "amu"), Fraction("1.66053906892e-27")),
    q.STIFFNESS: {},
}
LONGEST_CELL = 60


@dataclass(frozen=True, slots=True)
class Role:
    """What a column is for.

    Parameters
    ----------
    name : str
        In messages.
    headings : tuple of str
        Accepted ones, in lower case, the preferred first; a unit may follow.
    quantity : Quantity or None
        Of its cells; None for names.
    required : bool
    """

    name: str
    headings: tuple[str, ...]
    quantity: Quantity | None = None
    required: bool = True


@dataclass(frozen=True, slots=True)
class Column:
    """A column found: its place in the table, and the unit of its heading or ""."""

    index: int
    unit: str


def find_columns(
    table: Table, roles: Sequence[Role], units: Mapping[Quantity, str]
) -> tuple[dict[str, Column], tuple[str, ...]]:
    """Return the column of each role that is there, and the headings that are not read.

    Parameters
    ----------
    table : Table
    roles : sequence of Role
    units : mapping
        Units for columns whose heading names none.

    Raises
    ------
    FileFaultsError
        A required column is missing or there twice, or has no unit; all are named.
    """
    faults: list[Fault] = []
    found: dict[str, Column] = {}
    for role in roles:
        matches = [
            (rank, Column(index, unit))
            for index, heading in enumerate(table.headings)
            for rank, unit in _matches(heading, role)
        ]
        best = min((rank for rank, _ in matches), default=None)
        of_rank = [column for rank, column in matches if role.quantity is not None or rank == best]
        if len(of_rank) > 1:
            names = " and ".join(f'"{table.headings[column.index]}"' for column in of_rank)
            faults.append(Fault(table.name, f"{names} are both the {role.name}; keep one"))
        elif of_rank:
            column = of_rank[0]
            if role.quantity is not None:
                column = Column(column.index, column.unit or units.get(role.quantity, ""))
                faults += _without_unit(table, role, role.quantity, column)
            found[role.name] = column
        elif role.required:
            there = ", ".join(f'"{heading[:LONGEST_CELL]}"' for heading in table.headings[:12])
            wanted = " or ".join(f'"{heading}"' for heading in role.headings[:3])
            faults.append(
                Fault(table.name, f"has no column of the {role.name}: {wanted}; its headings are {there}")
            )
    if faults:
        raise FileFaultsError(tuple(faults))
    used = {column.index for column in found.values()}
    return found, tuple(text for index, text in enumerate(table.headings) if index not in used and text)


def _without_unit(table: Table, role: Role, quantity: Quantity, column: Column) -> list[Fault]:
    if column.unit and is_unit(column.unit, quantity):
        return []
    heading = table.headings[column.index]
    if column.unit:
        what = f'"{column.unit}" is no unit of {quantity.name}'
    elif all(_needs_none(cells[column.index]) for _, cells in table.rows):
        return []
    else:
        what = f"has no unit: write it in the heading, such as {role.headings[0]}_{quantity.si_unit}, or give"
        what = f"{what} --{quantity.name}-unit"
    return [Fault(f'{table.name}, column "{heading}"', what)]


def _needs_none(cell: str) -> bool:
    """Tell whether a cell names its own unit, or holds no number."""
    parts = split_number(cell)
    return parts is None or bool(parts[1].strip())


def _matches(heading: str, role: Role) -> list[tuple[int, str]]:
    """Return (rank, unit) where a heading is one of the role's, with or without a unit."""
    plain = re.sub(r"\s+", " ", heading).strip()
    for rank, alias in enumerate(role.headings):
        if plain.lower().replace(" ", "_") == alias:
            return [(rank, "")]
    if role.quantity is None:
        return []
    for rank, alias in enumerate(role.headings):
        if plain.lower().replace(" ", "_").startswith(alias):
            unit = _unit_text(plain[len(alias) :])
            if unit and is_unit(unit, role.quantity):
                return [(rank, unit)]
    return []


def _unit_text(rest: str) -> str:
    """Return the unit of "_mm", " [mm]", " (mm)", " / mm", ", mm"; "" where nothing parts it off."""
    bracketed = re.fullmatch(r"[ _]?[\[(](.+)[\])]", rest)
    if bracketed:
        return bracketed[1].strip()
    parted = re.fullmatch(r"(?: ?/ ?|, ?|[ _])(.+)", rest)
    return parted[1].strip().replace("_per_", "/") if parted else ""


def is_unit(unit: str, quantity: Quantity) -> bool:
    """Tell whether a table may have its cells in a unit, those of molecules included."""
    return unit.lower() in _SMALL[quantity] or find_unit(unit, quantity) is not None


def cell_entry(cell: str, unit: str, quantity: Quantity, *, comma: bool) -> Entry:
    """Return a cell as a typed value; a unit in the cell goes before that of its column.

    Raises
    ------
    UnitError
        The cell is no number to its end, or its unit is none of the quantity.
    """
    plain = cell.replace("\u2212", "-").strip()
    parts = split_number(plain.replace(",", ".") if comma else plain)
    if parts is None:
        raise UnitError(f'"{cell[:LONGEST_CELL]}" is no number' if cell else "is empty; a number is wanted")
    number, own = parts[0], parts[1].strip()
    small = _SMALL[quantity].get((own or unit).lower())
    if small is None or find_unit(own or unit, quantity) is not None:
        return Entry.typed(f"{number} {own or unit}", quantity)
    typed = Entry.typed(f"{number} {quantity.si_unit}", quantity)  # refuses what is no number
    size = float(Fraction(number) * small)
    return Entry.typed(f"{size!r} {quantity.si_unit}", quantity) if typed.si else typed
