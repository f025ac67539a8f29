"""Tables of text: cells by row and heading, however a spreadsheet wrote them.

Rows count from 1 with the headings, as a spreadsheet shows them.
"""

import codecs
import csv
import io
import re
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from modalview.errors import Fault, FileFaultsError
from modalview.store.reading import read_bytes
from modalview.units.numbers import split_number

# Told by the first line: what separates cells. A comma comes last, since it may be a decimal sign.
SEPARATORS = (";", "\t", ",")
# Some spreadsheets write this line before the headings, and do not count it as a row.
_NAMED_SEPARATOR = re.compile(r'"?sep=(;|,|\t)"?;*,*\r?\n', re.IGNORECASE)

# A number with one comma between groups of three digits: "1,200" may be 1.2 or 1200.
_LIKE_THOUSANDS = re.compile(r"[+-]?[1-9][0-9]{0,2},[0-9]{3}", re.ASCII)


@dataclass(frozen=True, slots=True)
class Table:
    """A table as read: every cell is text on one line, without blanks around it.

    Parameters
    ----------
    name : str
        Of the file, for messages.
    headings : tuple of str
    rows : tuple of (int, tuple of str)
        Number of each row and its cells, as many as headings.
    separator : str
        What stood between cells.
    """

    name: str
    headings: tuple[str, ...]
    rows: tuple[tuple[int, tuple[str, ...]], ...]
    separator: str

    def place(self, row: int, column: int) -> str:
        """Return the place of a cell in words."""
        return f'{self.name}, row {row}, column "{self.headings[column]}"'


def read_table(path: Path) -> Table:
    """Read a table with one line of headings; comma, semicolon or tab between the cells.

    Empty rows, and rows that start with #, are passed over. A line ``sep=;`` at the top names the separator.

    Raises
    ------
    FileAccessError
        The file cannot be read.
    FileFaultsError
        It is no text, has no headings or no rows, or rows do not fit the headings; all are named.
    """
    name = path.name
    text, separator = _separated(_decoded(read_bytes(path), name))
    try:
        found = list(csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True))
    except csv.Error as error:
        raise FileFaultsError((Fault(name, f"is no table that can be read: {error}"),)) from None
    lines = [
        (number, tuple(" ".join(cell.split()) for cell in cells))  # a cell may hold line breaks
        for number, cells in enumerate(found, 1)
        if any(cell.strip() for cell in cells) and not cells[0].lstrip().startswith("#")
    ]
    if len(lines) < 2:
        what = "no row below its headings" if lines else "nothing; a table has a line of headings and rows"
        raise FileFaultsError((Fault(name, f"holds {what}"),))
    (_, headings), *rows = lines
    return Table(name, headings, _fitting(rows, headings, name, separator), separator)


def _separated(text: str) -> tuple[str, str]:
    """Return the table without a line that names its separator, and the separator."""
    named = _NAMED_SEPARATOR.match(text)
    if named:
        return text[named.end() :], named[1]
    first = next((line for line in text.splitlines() if line.strip() and not line.startswith("#")), "")
    return text, next((one for one in SEPARATORS if one in first), ",")


def _decoded(data: bytes, name: str) -> str:
    try:
        # Some spreadsheets write "Unicode text" in pairs of bytes, and mark it.
        pairs = data.startswith((codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE))
        text = data.decode("utf-16" if pairs else "utf-8-sig")
    except UnicodeDecodeError as fault:
        reason = "the table is not UTF-8 text; save it as CSV in UTF-8"
        raise FileFaultsError((Fault(f"{name}, byte {fault.start}", reason),)) from None
    if "\0" in text:
        raise FileFaultsError((Fault(name, "holds zero bytes; it is no text, save it as CSV in UTF-8"),))
    return text


def _fitting(
    rows: Sequence[tuple[int, tuple[str, ...]]], headings: tuple[str, ...], name: str, separator: str
) -> tuple[tuple[int, tuple[str, ...]], ...]:
    """Return the rows with as many cells as headings; empty cells at the end do not count."""
    wide, faults, found = len(headings), [], []
    for number, cells in rows:
        if len(cells) < wide or any(cells[wide:]):
            advice = ""
            if separator == "," and len(cells) > wide:
                advice = "; where numbers have decimal commas, separate the cells by semicolons"
            reason = f"has {len(cells)} cells under {wide} headings{advice}"
            faults.append(Fault(f"{name}, row {number}", reason))
        found.append((number, cells[:wide]))
    if faults:
        raise FileFaultsError(tuple(faults))
    return tuple(found)


def decimal_comma(table: Table, columns: Sequence[int], *, told: bool = False) -> str:
    """Return a cell of these columns whose comma is a decimal sign; "" where no cell has a comma.

    Parameters
    ----------
    table : Table
    columns : sequence of int
        Those that hold numbers.
    told : bool
        True where the person says that commas are decimal signs.

    Raises
    ------
    FileFaultsError
        Every number with a comma has two readings: "1,200" is 1.2 or 1200, also between semicolons.
    """
    cells = [(row, column, cells[column]) for row, cells in table.rows for column in columns]
    with_comma = [(row, column, cell) for row, column, cell in cells if "," in cell]
    if not with_comma:
        return ""
    row, column, cell = with_comma[0]
    plain = next((one for *_, one in with_comma if not _like_thousands(one)), cell if told else "")
    both = next((place for place in with_comma if "." in _number(place[2])), None)
    if both:
        row, column, cell = both
        reason = (
            f'"{cell}" has a comma and a point; write it with one point and without a thousands separator'
        )
    elif any("." in _number(other) for *_, other in cells):
        reason = f'"{cell}" has a comma where other numbers have a point; write all with a point'
    elif plain:
        return plain
    else:
        reason = (
            f'"{cell}" can be read as {cell.replace(",", ".")} or {cell.replace(",", "")}; '
            "write a point, or say --decimal-comma"
        )
    raise FileFaultsError((Fault(table.place(row, column), reason),))


def _like_thousands(cell: str) -> bool:
    return _LIKE_THOUSANDS.fullmatch(_number(cell)) is not None


def _number(cell: str) -> str:
    """Return the number a cell starts with, without its unit."""
    parts = split_number(cell.replace("\N{MINUS SIGN}", "-"))
    return parts[0] if parts else cell
