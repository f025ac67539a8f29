"""Gershgorin discs of an undamped model on the axis of lambda = omega^2, with the counts they prove."""

from dataclasses import dataclass

import numpy as np

from modalview.bounds.discs import Group
from modalview.drawing.axislinear import round_ticks, tick_text
from modalview.drawing.captions import shortened
from modalview.drawing.complexplanecontent import LambdaContent, LambdaRow
from modalview.drawing.labels import Board, Line, Spot
from modalview.drawing.primitives import (
    Anchor,
    Circles,
    Drawing,
    Floats,
    Item,
    Lines,
    Polygons,
    Role,
    Size,
    Text,
)
from modalview.drawing.textsize import text_width
from modalview.units.show import significant

RAD_PER_HZ = 2 * np.pi
SIDES = 120  # of an ellipse
PAD = 0.03  # of the span, beyond the outermost disc


@dataclass(frozen=True, slots=True)
class _Frame:
    """Where the axis lies on the sheet."""

    left: float
    right: float
    low: float
    high: float
    board: Board

    @property
    def text_scale(self) -> float:
        """Multiple of the text sizes."""
        return self.board.text_scale

    def x(self, value: float) -> float:
        """Pixel of a lambda."""
        return self.left + (value - self.low) / (self.high - self.low) * (self.right - self.left)


def lambda_drawing(
    content: LambdaContent, width: float, height: float, *, text_scale: float = 1.0
) -> Drawing:
    """Draw the discs row by row over one axis, groups and their counts under each row.

    The discs are drawn flattened: all eigenvalues are real, so only where a disc cuts the axis matters.
    """
    board = Board(width, height, text_scale)
    if not content.rows:
        text = "No discs: the mass matrix couples its coordinates. Counts give the bounds."
        shown = shortened(text, width - 24.0, Size.NORMAL, text_scale)
        return Drawing(
            (Text(12.0, 24.0 * text_scale, shown, Role.INK),), (0.0, 0.0, width, height), text_scale
        )
    low, high = _range(content)
    frame = _Frame(24.0, width - 24.0, low, high, board)
    top, bottom = 58.0 * text_scale, height - 48.0 * text_scale
    items = _ticks(frame, top, bottom) + _numbers(frame, content, top - 12 * text_scale)
    room = (bottom - top) / len(content.rows)
    for index, row in enumerate(content.rows):
        items += _row(frame, row, top + index * room, room, content.eigenvalues)
    return Drawing(items, (0.0, 0.0, width, height), text_scale)


def _range(content: LambdaContent) -> tuple[float, float]:
    groups = [group for row in content.rows for group in row.groups]
    low, high = min(0.0, *(group.low for group in groups)), max(group.high for group in groups)
    span = max(high - low, 1e-300)
    return low - PAD * span, high + PAD * span


def _ticks(frame: _Frame, top: float, bottom: float) -> tuple[Item, ...]:
    """Draw the axis of lambda below, and its frequencies above as far as they stay apart."""
    text_scale, small = frame.text_scale, Size.SMALL
    per = (frame.high - frame.low) / (frame.right - frame.left)
    below = round_ticks(frame.low, frame.high, 110.0 * text_scale * per)
    lines = [[frame.x(value), top, frame.x(value), bottom] for value in below]
    items: list[Item] = [
        Lines(np.array(lines).reshape(-1, 4), Role.GRID, 1.0),
    ]
    foot = bottom + 12 * text_scale
    items += [Text(frame.x(one), foot, tick_text(one), Role.MUTED, small, Anchor.MIDDLE) for one in below]
    items.append(
        Text(
            (frame.left + frame.right) / 2,
            bottom + 30 * text_scale,
            "λ = ω², rad²/s²",
            Role.INK,
            small,
            Anchor.MIDDLE,
        )
    )
    items.append(Text(frame.left, 12 * text_scale, "Hz", Role.INK, small, bold=True))
    highest = float(np.sqrt(frame.high)) / RAD_PER_HZ if frame.high > 0 else 0.0
    unit = text_width("Hz", small, bold=True, text_scale=text_scale)
    free = max(frame.x(0.0) - 1e-9, frame.left + unit + 6 * text_scale)
    for hz in round_ticks(0.0, highest, highest / 40):
        place = frame.x((RAD_PER_HZ * hz) ** 2)
        text = tick_text(hz)
        half = text_width(text, small, text_scale=text_scale) / 2
        if place - half >= free and place + half <= frame.right + 12:
            items.append(Lines(np.array([[place, 20 * text_scale, place, 25 * text_scale]]), Role.MUTED, 1.0))
            items.append(Text(place, 12 * text_scale, text, Role.MUTED, small, Anchor.MIDDLE))
            free = place + half + 8 * text_scale
    items.append(
        Lines(np.array([[frame.x(0.0), 25 * text_scale, frame.right, 25 * text_scale]]), Role.MUTED, 1.0)
    )
    return tuple(items)


def _numbers(frame: _Frame, content: LambdaContent, y: float) -> tuple[Item, ...]:
    """Write the numbers of the modes found over their eigenvalues, as far as there is room."""
    items: list[Item] = []
    for number, value in enumerate(content.eigenvalues.tolist(), start=1):
        line = Line(str(number), Role.BAD, Size.SMALL, bold=True)
        items += frame.board.place((line,), [Spot(frame.x(value), y, 0, 0)])
    return tuple(items)


def _row(frame: _Frame, row: LambdaRow, top: float, room: float, found: Floats) -> tuple[Item, ...]:
    text_scale = frame.text_scale
    head = 22.0 * text_scale
    foot = 40.0 * text_scale
    middle = top + head + (room - head - foot) / 2
    half = max((room - head - foot) / 2 - 2.0, 4.0)
    reach = half + 6.0 * text_scale
    ticks = np.array([[frame.x(one), middle - reach, frame.x(one), middle + reach] for one in found.tolist()])
    ticks = ticks.reshape(-1, 4)
    items: list[Item] = [
        _shapes(frame, row, middle, half),
        Lines(np.array([[frame.left, middle, frame.right, middle]]), Role.GHOST, 0.8),
        Lines(np.array([[frame.x(0.0), middle - reach, frame.x(0.0), middle + reach]]), Role.MUTED, 1.6),
        Circles(np.array([[frame.x(c), middle] for c in row.centres.tolist()]), 2.2, None, Role.ACCENT, 0.0),
        Lines(ticks, Role.BAD, 1.3),
    ]
    placed = frame.board.place(
        (Line(f"{row.title}{_verdict(row)}", Role.INK, Size.SMALL, bold=True),),
        [Spot(frame.left, top + 8 * text_scale, 1, 0)],
    )
    items += placed
    for group in row.groups:
        items += _group(frame, group, middle + half + 6.0 * text_scale)
    return tuple(items)


def _verdict(row: LambdaRow) -> str:
    if len(row.groups) == 1:
        return ": all overlap, no group of modes stands apart"
    return f": {len(row.groups)} groups apart, each with as many modes as discs"


def _shapes(frame: _Frame, row: LambdaRow, middle: float, half: float) -> Polygons:
    """Return the discs as ellipses; where only groups are known, a bar for each."""
    opacity = min(0.16, 0.8 / max(len(row.centres), 1))
    if not row.centres.size:
        ends = [(frame.x(group.low), frame.x(group.high)) for group in row.groups]
        up, down = middle - half / 2, middle + half / 2
        bars = np.array([[[a, up], [b, up], [b, down], [a, down]] for a, b in ends])
        return Polygons(bars, Role.ACCENT, Role.ACCENT, 1.0, opacity)
    turn = np.linspace(0.0, 2 * np.pi, SIDES, endpoint=False)
    per = (frame.right - frame.left) / (frame.high - frame.low)
    x = frame.left + (row.centres[:, None] + row.radii[:, None] * np.cos(turn) - frame.low) * per
    y = middle + half * row.radii[:, None] / max(float(row.radii.max()), 1e-300) * np.sin(turn)
    return Polygons(np.stack([x, y], axis=-1), Role.ACCENT, Role.ACCENT, 1.0, opacity)


def _group(frame: _Frame, group: Group, y: float) -> list[Item]:
    """Draw a bracket under a group, with its number of modes and, where there is room, its frequencies."""
    low, high = max(frame.x(group.low), frame.left), min(frame.x(group.high), frame.right)
    foot = 5.0
    bracket = np.array([[low, y, high, y], [low, y - foot, low, y], [high, y - foot, high, y]])
    ends = [float(np.sqrt(max(end, 0.0))) / RAD_PER_HZ for end in (group.low, group.high)]
    count = f"{group.number} mode{'s' if group.number != 1 else ''}"
    span = f"{count}, {significant(ends[0], 3)} to {significant(ends[1], 3)} Hz"
    centre, below = (low + high) / 2, y + 11.0 * frame.text_scale
    items: list[Item] = [Lines(bracket, Role.INK, 1.4)]
    for text in (span, count, str(group.number)):
        half = text_width(text, Size.SMALL, text_scale=frame.text_scale) / 2
        within = min(max(centre, frame.left + half), frame.right - half)
        line = Line(text, Role.INK, Size.SMALL, bold=text != span)
        drop = 14.0 * frame.text_scale
        placed = frame.board.place((line,), [Spot(within, below, 0, 0), Spot(within, below + drop, 0, 0)])
        if placed:
            return items + placed
    return items
