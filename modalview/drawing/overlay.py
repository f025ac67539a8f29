"""What is drawn over the sheet while a hand is at work: what is chosen, what is about to be, alignments."""

import numpy as np

from modalview.drawing.geometry import SheetGeometry
from modalview.drawing.hits import HANDLE, frame_of, handles
from modalview.drawing.primitives import Anchor, Box, Circles, Floats, Item, Lines, Role, Size, Text
from modalview.drawing.snap import Snapped
from modalview.drawing.symbols import TEMPLATES, Symbol, between, dashed, ground, outline
from modalview.drawing.textsize import line_height, text_width

_GRIP = 7.0  # side of a handle, pixels
_ROOM = 5.0  # between a part and the frame about it
MOST_FRAMES = 200  # more chosen parts than this are framed together


def chosen_items(geometry: SheetGeometry, chosen: tuple[str, ...]) -> tuple[Item, ...]:
    """Return frames about what is chosen, and the handles of a single part."""
    frames = [frame for part in chosen[:MOST_FRAMES] if (frame := frame_of(geometry, part)) is not None]
    items: list[Item] = []
    for x1, y1, x2, y2 in (frame.tolist() for frame in frames):
        wide, high = x2 - x1 + 2 * _ROOM, y2 - y1 + 2 * _ROOM
        items.append(Box(x1 - _ROOM, y1 - _ROOM, wide, high, 5.0, Role.ACCENT, None, 1.6))
    for grip in handles(geometry, chosen):
        x, y = grip.x - _GRIP / 2, grip.y - _GRIP / 2
        items.append(Box(x, y, _GRIP, _GRIP, 1.5, Role.ACCENT, Role.PAPER, 1.4))
    return tuple(items)


def carried_items(frames: Floats, across: float, down: float) -> tuple[Item, ...]:
    """Return the frames of parts (n, 4) as far away as the pointer carries them."""
    return tuple(
        Box(x1 + across, y1 + down, x2 - x1, y2 - y1, 2.0, Role.ACCENT, None, 1.2)
        for x1, y1, x2, y2 in frames.tolist()
    )


def band_items(start: tuple[float, float], stop: tuple[float, float]) -> tuple[Item, ...]:
    """Return the rubber band."""
    x1, x2 = sorted((start[0], stop[0]))
    y1, y2 = sorted((start[1], stop[1]))
    fill = Box(x1, y1, x2 - x1, y2 - y1, 0.0, None, Role.ACCENT, 0.0, 0.10)
    corners = np.array([[[x1, y1], [x2, y1], [x2, y2], [x1, y2]]])
    return fill, Lines(dashed(outline(corners)), Role.ACCENT, 1.2)


def hint_items(snapped: Snapped | None) -> tuple[Item, ...]:
    """Return the alignments a pointer was drawn to, and a small cross where it stands."""
    if snapped is None:
        return ()
    x, y = snapped.x, snapped.y
    cross = np.array([[x - 5, y, x + 5, y], [x, y - 5, x, y + 5]])
    lines = Lines(dashed(snapped.lines, 3.0, 3.0), Role.ACCENT, 1.0) if len(snapped.lines) else None
    return *((lines,) if lines is not None else ()), Lines(cross, Role.ACCENT, 1.2)


def cursor_items(x: float, y: float) -> tuple[Item, ...]:
    """Return the cross that the arrow keys move."""
    arms = np.array([[-18.0, 0, -6, 0], [6, 0, 18, 0], [0, -18, 0, -6], [0, 6, 0, 18]])
    return (
        Lines(arms + np.array([x, y, x, y]), Role.ACCENT, 2.0),
        Circles(np.array([[x, y]]), 3.0, Role.ACCENT, None, 1.4),
    )


def body_items(start: tuple[float, float], stop: tuple[float, float], shape: str) -> tuple[Item, ...]:
    """Return the body that is about to be drawn, between two corners."""
    x1, x2 = sorted((start[0], stop[0]))
    y1, y2 = sorted((start[1], stop[1]))
    if shape == "point":
        return (Circles(np.array([[(x1 + x2) / 2, (y1 + y2) / 2]]), 5.0, Role.ACCENT, Role.PAPER, 1.6),)
    return (Box(x1, y1, x2 - x1, y2 - y1, 0.0, Role.ACCENT, Role.PAPER, 1.6, 0.6),)


def link_items(
    kind: str, start: tuple[float, float], stop: tuple[float, float], *, on_ground: bool
) -> tuple[Item, ...]:
    """Return the link that is about to be made, with the ground it will stand on."""
    ends = np.array([[start, stop]], dtype=float)
    template, width = TEMPLATES[Symbol(kind)]
    if not len(template):
        template = np.array([[0.0, 0.0, 1.0, 0.0]])
    items: list[Item] = [Lines(between(template, ends), Role.ACCENT, max(width, 1.2))]
    if on_ground:
        step = ends[0, 1] - ends[0, 0]
        level = abs(step[0]) > abs(step[1])
        sign = -1.0 if (step[0] if level else step[1]) < 0 else 1.0
        outward = np.array([[sign, 0.0]]) if level else np.array([[0.0, sign]])
        items.append(Lines(ground(ends[:, 1], outward), Role.ACCENT, 1.2))
    return tuple(items)


def target_items(frame: tuple[float, float, float, float]) -> tuple[Item, ...]:
    """Return the mark on the part that a link would be joined to."""
    x1, y1, x2, y2 = frame
    return (Box(x1 - 3, y1 - 3, x2 - x1 + 6, y2 - y1 + 6, 4.0, Role.GOOD, None, 2.0),)


def grip_items(x: float, y: float) -> tuple[Item, ...]:
    """Return the mark of a place on a body where something would be attached."""
    return (Circles(np.array([[x, y]]), HANDLE - 2.5, Role.GOOD, Role.PAPER, 1.6),)


def note_items(
    x: float, y: float, lines: tuple[str, ...], text_scale: float, sheet: tuple[float, float]
) -> tuple[Item, ...]:
    """Return a small note beside the pointer, on whichever side there is room.

    Parameters
    ----------
    sheet : width and height, pixels
    """
    if not lines:
        return ()
    width, height = sheet
    wide = max(text_width(line, Size.SMALL, text_scale=text_scale) for line in lines) + 12.0
    step = line_height(Size.SMALL, text_scale=text_scale)
    left = x + 16.0 if x + 20.0 + wide < width else max(x - 16.0 - wide, 4.0)
    top = y + 16.0 if y + 26.0 + step * len(lines) < height else y - 22.0 - step * len(lines)
    items: list[Item] = [
        Box(left, top, wide, step * len(lines) + 6.0, 3.0, Role.GHOST, Role.PAPER, 1.0, 0.92)
    ]
    for number, line in enumerate(lines):
        at = top + 3.0 + step * (number + 0.5)
        items.append(Text(left + 6.0, at, line, Role.INK, Size.SMALL, Anchor.LEFT))
    return tuple(items)


def hint_line(text: str, width: float, height: float, text_scale: float) -> tuple[Item, ...]:
    """Return a line at the foot of the sheet that says what to do, or why something was not done."""
    rows = wrapped(text, width - 40.0, text_scale)
    step = line_height(Size.SMALL, text_scale=text_scale)
    wide = max(text_width(row, Size.SMALL, text_scale=text_scale) for row in rows) + 16.0
    top = height - step * len(rows) - 10.0
    box = Box(8.0, top, wide, step * len(rows) + 6.0, 3.0, Role.GHOST, Role.PAPER, 1.0, 0.94)
    lines = tuple(
        Text(16.0, top + 3.0 + step * (number + 0.5), row, Role.INK, Size.SMALL)
        for number, row in enumerate(rows)
    )
    return box, *lines


def invitation_items(
    lines: tuple[str, ...], width: float, height: float, text_scale: float
) -> tuple[Item, ...]:
    """Return what an empty sheet says in its middle: the first line stands out."""
    texts: list[Item] = []
    y = 0.5 * height
    for number, line in enumerate(lines):
        size = Size.SMALL if number else Size.NORMAL
        for row in wrapped(line, width - 60.0, text_scale, size):
            role = Role.MUTED if number else Role.INK
            texts.append(Text(0.5 * width, y, row, role, size, Anchor.MIDDLE, bold=not number))
            y += 1.25 * line_height(Size.NORMAL, text_scale=text_scale)
    return tuple(texts)


def wrapped(text: str, room: float, text_scale: float, size: Size = Size.SMALL) -> list[str]:
    """Break a text into lines that fit into so many pixels."""
    rows: list[str] = [""]
    for word in text.split():
        longer = f"{rows[-1]} {word}".strip()
        if rows[-1] and text_width(longer, size, text_scale=text_scale) > room:
            rows.append(word)
        else:
            rows[-1] = longer
    return rows
