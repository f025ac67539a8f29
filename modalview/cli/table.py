"""Plain-text tables."""

from collections.abc import Sequence


def table(rows: Sequence[Sequence[str]], *, right: frozenset[int] = frozenset()) -> str:
    """Return rows as aligned columns, two spaces apart; columns in ``right`` are set flush right."""
    widths = [max(len(row[i]) for row in rows) for i in range(len(rows[0]))] if rows else []
    lines = []
    for row in rows:
        cells = [
            cell.rjust(width) if i in right else cell.ljust(width)
            for i, (cell, width) in enumerate(zip(row, widths, strict=True))
        ]
        lines.append("  ".join(cells).rstrip())
    return "\n".join(lines)
