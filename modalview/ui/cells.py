"""Cells on the clipboard as spreadsheets write them: tabs between, one line each, quoted where needed."""

import csv
from io import StringIO


def cells_of(text: str) -> list[list[str]]:
    r"""Return the cells of a text, line by line.

    >>> cells_of('175 kN/mm\t10 %\r\n4,2 t\t\n')
    [['175 kN/mm', '10 %'], ['4,2 t', '']]
    """
    return [line for line in csv.reader(StringIO(text, newline=""), dialect="excel-tab") if line]


def text_of(cells: list[list[str]]) -> str:
    r"""Return cells as a text that spreadsheets take.

    >>> text_of([["175 kN/mm", "10 %"], ["4,2 t", ""]])
    '175 kN/mm\t10 %\n4,2 t\t\n'
    """
    made = StringIO(newline="")
    csv.writer(made, dialect="excel-tab", lineterminator="\n").writerows(cells)
    return made.getvalue()
