"""Plain-text tables."""

from collections.abc import Sequence
from itertools import zip_longest
from textwrap import fill, wrap

# No line is wider than a page of a report.
WIDTH = 100
_GAP = "  "
# Columns of words are not folded to less than this.
_LEAST = 24


def table(rows: Sequence[Sequence[str]], *, right: frozenset[int] = frozenset()) -> str:
    """Return rows as aligned columns, two spaces apart; columns in ``right`` are set flush right.

    Where the rows are wider than a page, the widest columns of words are folded.
    """
    if not rows:
        return ""
    widths = _fitting([max(map(len, column)) for column in zip(*rows, strict=True)], right)
    lines = []
    for row in rows:
        cells = [_folded(cell, width) for cell, width in zip(row, widths, strict=True)]
        for parts in zip_longest(*cells, fillvalue=""):
            set_ = [
                part.rjust(width) if i in right else part.ljust(width)
                for i, (part, width) in enumerate(zip(parts, widths, strict=True))
            ]
            lines.append(_GAP.join(set_).rstrip())
    return "\n".join(lines)


def _fitting(widths: list[int], right: frozenset[int]) -> list[int]:
    """Return the widths with the widest columns of words narrowed, evenly, until a row fits a page."""
    words = [i for i in range(len(widths)) if i not in right]
    over = sum(widths) + len(_GAP) * (len(widths) - 1) - WIDTH
    while over > 0 and any(widths[i] > _LEAST for i in words):
        widest = max(words, key=lambda i: widths[i])
        widths[widest] -= 1
        over -= 1
    return widths


def _folded(cell: str, width: int) -> list[str]:
    return wrap(cell, width, break_on_hyphens=False, subsequent_indent="  ") if len(cell) > width else [cell]


def wrapped(text: str, indent: str = "") -> str:
    """Return text in lines no wider than a page, all but the first indented."""
    return fill(text, WIDTH, subsequent_indent=indent, break_long_words=False, break_on_hyphens=False)
