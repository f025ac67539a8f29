"""A legend: marks with what they mean, in columns."""

from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from modalview.drawing.primitives import Box, Circles, Item, Lines, Role, Size, Text
from modalview.drawing.symbols import dashed
from modalview.drawing.textsize import line_height, text_width

_MARK = 26.0  # room of a mark, pixels
_GAP = 6.0  # between entries


class Mark(StrEnum):
    """The sample before an entry."""

    FILL = "fill"
    LINE = "line"
    DASHES = "dashes"
    DOTS = "dots"
    CROSS = "cross"
    RING = "ring"
    NONE = "none"


@dataclass(frozen=True, slots=True)
class Entry:
    """One mark and its lines of text."""

    mark: Mark
    role: Role
    lines: tuple[str, ...]


def legend_size(entries: tuple[Entry, ...], columns: int, text_scale: float) -> tuple[float, float]:
    """Return width and height of a legend in so many columns, pixels."""
    step = line_height(Size.SMALL, text_scale=text_scale)
    return columns * _column_width(entries, text_scale), _filled(entries, columns, step)[1]


def _column_width(entries: tuple[Entry, ...], text_scale: float) -> float:
    lines = [line for entry in entries for line in entry.lines]
    return max(text_width(line, Size.SMALL, text_scale=text_scale) for line in lines) + _MARK + 14.0


def _filled(entries: tuple[Entry, ...], columns: int, step: float) -> tuple[list[list[Entry]], float]:
    """Spread entries in their order over columns of the least height that holds them, pixels."""
    sizes = [len(entry.lines) * step + _GAP for entry in entries]
    high = max(*sizes, sum(sizes) / columns)
    while True:
        found: list[list[Entry]] = [[]]
        reached = 0.0
        for entry, size in zip(entries, sizes, strict=True):
            if reached + size > high + 1e-6:
                found.append([])
                reached = 0.0
            found[-1].append(entry)
            reached += size
        if len(found) <= columns:
            return found, high - _GAP
        high += step


def legend_items(
    entries: tuple[Entry, ...], x: float, y: float, columns: int, text_scale: float
) -> tuple[Item, ...]:
    """Draw a legend in columns with its upper left corner at (x, y)."""
    step = line_height(Size.SMALL, text_scale=text_scale)
    items: list[Item] = []
    for column in _filled(entries, columns, step)[0]:
        down = y
        for entry in column:
            items += _sample(entry, x, down + step / 2)
            role = entry.role if entry.mark is Mark.NONE else Role.INK
            for line in entry.lines:
                items.append(Text(x + _MARK + 4, down + step / 2, line, role, Size.SMALL))
                down += step
            down += _GAP
        x += _column_width(entries, text_scale)
    return tuple(items)


def _sample(entry: Entry, x: float, y: float) -> list[Item]:
    line = np.array([[x, y, x + _MARK - 4, y]])
    middle = x + _MARK / 2 - 2
    cross = [[middle - 4.5, y - 4.5, middle + 4.5, y + 4.5], [middle - 4.5, y + 4.5, middle + 4.5, y - 4.5]]
    samples: dict[Mark, Item] = {
        Mark.FILL: Box(x, y - 5, _MARK - 4, 10, 0.0, entry.role, entry.role, 1.4, 0.15),
        Mark.LINE: Lines(line, entry.role, 1.4),
        Mark.DASHES: Lines(dashed(line, 6.0, 4.0), entry.role, 1.4),
        Mark.DOTS: Lines(dashed(line, 2.0, 5.0), entry.role, 1.2),
        Mark.CROSS: Lines(np.array(cross), entry.role, 2.0),
        Mark.RING: Circles(np.array([[middle, y]]), 5.0, entry.role, None, 2.0),
    }
    return [samples[entry.mark]] if entry.mark in samples else []
