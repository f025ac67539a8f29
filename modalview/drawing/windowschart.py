"""The windows of one value on its own logarithmic axis, with today's value and its tolerance."""

import math
from dataclasses import dataclass

import numpy as np

from modalview.drawing.axislinear import tick_text
from modalview.drawing.changescontent import ValueAxis
from modalview.drawing.flowing import Sample, flowing
from modalview.drawing.labels import Board, Line, Spot
from modalview.drawing.primitives import Anchor, Box, Drawing, Item, Lines, Polygons, Role, Size, Text
from modalview.drawing.symbols import hatched
from modalview.drawing.textsize import line_height, text_width
from modalview.units.show import short

BEYOND = 2.0  # the axis goes on by this factor beyond all it shows
FARTHEST = 1e3  # ends of windows farther from today's value than this factor are off the axis
LEAST_LINES = 8.0  # of text, that the chart needs
_STEPS = ((1.0, 1.5, 2.0, 3.0, 5.0, 7.0), (1.0, 2.0, 5.0), (1.0,))
_EDGE = 14.0


@dataclass(frozen=True, slots=True, eq=False)
class WindowsChart:
    """The chart and its axis.

    Parameters
    ----------
    drawing : Drawing
    content : ValueAxis
    ends : pair of float
        Values at the left and the right end.
    pixels : pair of float
        Where these are.
    rows : pair of float
        Top and bottom of the bars, pixels.
    """

    drawing: Drawing
    content: ValueAxis
    ends: tuple[float, float]
    pixels: tuple[float, float]
    rows: tuple[float, float]

    def x_of(self, value: float) -> float:
        """Return the pixel of a value, kept on the axis."""
        return _x_of(value, self.ends, self.pixels)

    def value_at(self, x: float) -> float:
        """Return the value of a pixel."""
        (low, high), (left, right) = self.ends, self.pixels
        share = min(max((x - left) / (right - left), 0.0), 1.0)
        return float(low * (high / low) ** share)


def windows_chart(
    content: ValueAxis, width: float, height: float, *, text_scale: float = 1.0
) -> WindowsChart:
    """Draw the windows of a value.

    Parameters
    ----------
    content : ValueAxis
    width, height : float
        Pixels.
    text_scale : float
    """
    step = line_height(Size.SMALL, text_scale=text_scale)
    legend, reached = flowing(_legend(content), width, 4.0 + step / 2, text_scale)
    top = reached + 3.5 * step
    bottom = max(height - 2.0 * step, top + 0.8 * step)
    rows = (top, min(bottom, top + 2.6 * step))
    ends, pixels = axis_ends(content), (_EDGE, max(width - _EDGE, _EDGE + 40.0))
    board = Board(width, max(height, rows[1] + 2.0 * step), text_scale)
    board.take(np.array([[0.0, 0.0, width, reached + step / 2]]))
    items: list[Item] = [*legend, *_bars(content, ends, pixels, rows)]
    items += _ticks(content, ends, pixels, rows[1], text_scale)
    items += _today(content, ends, pixels, rows, board)
    items += _names(content, ends, pixels, rows, board)
    drawing = Drawing(tuple(items), (0.0, 0.0, width, height), text_scale)
    return WindowsChart(drawing, content, ends, pixels, rows)


def axis_ends(content: ValueAxis) -> tuple[float, float]:
    """Return the lowest and the highest value of the axis: what matters, and a little more."""
    now = content.now
    ends = [now, *content.tolerance]
    ends += [end for one in content.windows for end in (one.low, one.high)]
    ends += list(content.limits)
    ends = [end for end in ends if now / FARTHEST <= end <= now * FARTHEST]
    return min(ends) / BEYOND, max(ends) * BEYOND


def _x_of(value: float, ends: tuple[float, float], pixels: tuple[float, float]) -> float:
    (low, high), (left, right) = ends, pixels
    kept = min(max(value, low), high)
    return left + math.log(kept / low) / math.log(high / low) * (right - left)


def _legend(content: ValueAxis) -> list[Sample]:
    found = []
    if content.windows:
        words = "every check clear" if content.proven else "every check clear (not proven)"
        found.append(Sample(words, _clear_box(4.0, -5.0, 16.0, 10.0)))
    found.append(Sample("some check not clear", _shut_box(4.0, -5.0, 16.0, 10.0)))
    line = Lines(np.array([[12.0, -6.0, 12.0, 6.0]]), Role.ACCENT, 2.4)
    found.append(Sample("today", (line,)))
    if content.tolerance[0] < content.tolerance[1]:
        band = Box(2.0, -2.0, 20.0, 4.0, 0.0, None, Role.ACCENT, 0.0, 0.6)
        found.append(Sample("its tolerance", (band,)))
    if _limited(content):
        edge = Lines(np.array([[10.0, -6.0, 10.0, 6.0], [14.0, -6.0, 14.0, 6.0]]), Role.INK, 1.6)
        found.append(Sample("your limits", (edge,)))
    return found


def _limited(content: ValueAxis) -> bool:
    return content.limits[0] > 0 or math.isfinite(content.limits[1])


def _clear_box(x: float, y: float, width: float, height: float) -> tuple[Item, ...]:
    return (Box(x, y, width, height, 0.0, Role.GOOD, Role.GOOD, 1.6, 0.25),)


def _clear_bar(box: tuple[float, float, float, float], *, open_: tuple[bool, bool]) -> tuple[Item, ...]:
    """Return a bar whose open ends have no line."""
    x, y, width, height = box
    edges = [[x, y, x + width, y], [x, y + height, x + width, y + height]]
    edges += [[at, y, at, y + height] for at, free in zip((x, x + width), open_, strict=True) if not free]
    return (
        Box(x, y, width, height, 0.0, None, Role.GOOD, 0.0, 0.25),
        Lines(np.array(edges), Role.GOOD, 1.6),
    )


def _shut_box(x: float, y: float, width: float, height: float) -> tuple[Item, ...]:
    return (
        Box(x, y, width, height, 0.0, None, Role.BAD, 0.0, 0.05),
        Lines(hatched(x, y, width, height), Role.BAD, 0.8, 0.5),
    )


def _bars(
    content: ValueAxis, ends: tuple[float, float], pixels: tuple[float, float], rows: tuple[float, float]
) -> list[Item]:
    """Draw windows as bars and what lies between as hatched; beyond the user's limits nothing was asked."""
    top, high = rows[0], rows[1] - rows[0]
    low_x, high_x = (_x_of(end, ends, pixels) for end in content.limits)
    items: list[Item] = [*_shut_box(low_x, top, high_x - low_x, high)]
    for one in content.windows:
        left, right = (_x_of(end, ends, pixels) for end in (one.low, one.high))
        if right - left < 1e-9:
            continue  # off the axis
        wide = max(right - left, 2.0)
        items.append(Box(left, top, wide, high, 0.0, None, Role.PAPER, 0.0))
        items += _clear_bar((left, top, wide, high), open_=(one.low <= ends[0], one.high >= ends[1]))
    if _limited(content):
        edges = [x for x, end in zip((low_x, high_x), content.limits, strict=True) if 0 < end < math.inf]
        items.append(Lines(np.array([[x, top - 4.0, x, rows[1] + 4.0] for x in edges]), Role.INK, 1.8))
    return items


def _ticks(
    content: ValueAxis,
    ends: tuple[float, float],
    pixels: tuple[float, float],
    y: float,
    text_scale: float,
) -> list[Item]:
    low, high = (end / content.per for end in ends)
    unit = content.unit or "times today's"
    taken = pixels[1] - text_width(unit, Size.SMALL, text_scale=text_scale) - 8.0
    places: list[tuple[float, str]] = []
    for steps in _STEPS:
        first, last = (math.floor(math.log10(end)) for end in (low, high))
        numbers = [float(f"{s}e{p}") for p in range(first, last + 1) for s in steps]
        shown = [number for number in numbers if low <= number <= high]
        places = [(_x_of(number * content.per, ends, pixels), tick_text(number)) for number in shown]
        if not _crowded(places, text_scale):
            break
    else:
        places = places[:: max(1, len(places) // 4)]
    lines = np.array([[x, y, x, y + 5.0] for x, _ in places]).reshape(-1, 4)
    items: list[Item] = [
        Lines(np.array([[pixels[0], y, pixels[1], y]]), Role.INK, 1.2),
        Lines(lines, Role.INK, 1.2),
    ]
    down = y + 5.0 + line_height(Size.SMALL, text_scale=text_scale) * 0.6
    for x, text in places:
        half = text_width(text, Size.SMALL, text_scale=text_scale) / 2
        if x - half >= 0 and x + half <= taken:
            items.append(Text(x, down, text, Role.MUTED, Size.SMALL, Anchor.MIDDLE))
    items.append(Text(pixels[1], down, unit, Role.INK, Size.SMALL, Anchor.RIGHT))
    return items


def _crowded(places: list[tuple[float, str]], text_scale: float) -> bool:
    wide = [text_width(text, Size.SMALL, text_scale=text_scale) for _, text in places]
    return any(
        b[0] - a[0] < (one + other) / 2 + 8.0
        for a, b, one, other in zip(places, places[1:], wide, wide[1:], strict=False)
    )


def _today(
    content: ValueAxis,
    ends: tuple[float, float],
    pixels: tuple[float, float],
    rows: tuple[float, float],
    board: Board,
) -> list[Item]:
    """Mark today's value and its tolerance, and write it above."""
    x = _x_of(content.now, ends, pixels)
    low, high = (_x_of(end, ends, pixels) for end in content.tolerance)
    top, bottom = rows
    middle = (top + bottom) / 2
    items: list[Item] = []
    if high > low:
        items.append(Box(low, middle - 3.0, high - low, 6.0, 0.0, None, Role.ACCENT, 0.0, 0.6))
        ends_ = np.array([[low, middle - 6.0, low, middle + 6.0], [high, middle - 6.0, high, middle + 6.0]])
        items.append(Lines(ends_, Role.ACCENT, 1.6))
    items.append(Lines(np.array([[x, top - 6.0, x, bottom + 3.0]]), Role.ACCENT, 2.6))
    tip = np.array([[[x, top - 2.0], [x - 5.0, top - 10.0], [x + 5.0, top - 10.0]]])
    items.append(Polygons(tip, None, Role.ACCENT, 0.0))
    board.take(np.array([[x - 5.0, top - 10.0, x + 5.0, bottom]]))
    label = (Line(content.today, Role.ACCENT, Size.SMALL, bold=True),)
    row = board.size(label)[1]
    spots = [Spot(x, top - 5.0 - row, side, -1) for side in (0, 1, -1)]
    return [*items, *board.place(label, spots)]


def _names(
    content: ValueAxis,
    ends: tuple[float, float],
    pixels: tuple[float, float],
    rows: tuple[float, float],
    board: Board,
) -> list[Item]:
    """Write the ends of the windows above them where there is room, in the unit of the axis."""
    items: list[Item] = []
    y = rows[0] - 2.0
    for one in content.windows:
        for end, side in ((one.low, -1), (one.high, 1)):
            if ends[0] < end < ends[1]:
                x = _x_of(end, ends, pixels)
                label = (Line(short(end / content.per, 4), Role.GOOD, Size.SMALL),)
                spots = [Spot(x, y, right, -1) for right in (0, side, -side)]
                spots += [Spot(x, y - board.size(label)[1], right, -1) for right in (0, side, -side)]
                items += board.place(label, spots)
    return items


def reading_line(chart: WindowsChart, value: float) -> tuple[Item, ...]:
    """Return the mark of a value that is read."""
    x = chart.x_of(value)
    return (Lines(np.array([[x, chart.rows[0] - 8.0, x, chart.rows[1] + 8.0]]), Role.INK, 1.4),)
