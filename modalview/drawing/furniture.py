"""What stands on every sheet: grid, axes and title block."""

from dataclasses import dataclass

import numpy as np

from modalview.drawing.captions import in_two, shortened
from modalview.drawing.endon import sight_segments
from modalview.drawing.primitives import Anchor, Box, Drawing, Floats, Item, Lines, Role, Size, Text
from modalview.drawing.symbols import arrow
from modalview.drawing.textsize import text_width
from modalview.drawing.view import Viewpoint, projection
from modalview.model.parts import FREEDOMS, Model, Motion

GRID_STEP = 24.0
MARGIN = 12.0
CAPTION = 28.0  # height of the strip below a picture that says what it shows
TWO_LINES = 0.6  # of the block: a title wider than this at the smaller size stands in two lines
ROW, SECOND = 35.0, 15.0  # height of a row, and of the second line in one
BLOCK = 2 * ROW
STRIP = 21.0  # height of the block as a strip of one line
MOST_SHARE = 0.13  # of the sheet: a block that would take more is a strip
PADDING = 14.0  # of a cell, both sides
SWITCH = (212.0, 22.0)  # of the switch of the views, width and height
SWITCH_LEFT = 92.0  # where it stands beside the axes
SWITCH_TOP = (38.0, 66.0)  # or below them, whose arrows keep their length whatever the size of the text
AXES = 60.0  # pixels that the axes keep beside the strip
TURNING = "rotation about the shafts"
TITLE_SHARE = (0.45, 0.68)  # of the block, for the left column: least and most


@dataclass(frozen=True, slots=True)
class TitleLines:
    """What the title block says."""

    title: str
    revision: str
    motion: str
    checked: str


def title_lines(model: Model, *, checked: str = "not yet", freedoms: int | None = None) -> TitleLines:
    """Return the title block's texts.

    Parameters
    ----------
    model : Model
    checked : str
        The verdict in a few words.
    freedoms : int or None
        Number of independent coordinates; None counts those of the bodies.
    """
    if freedoms is None:
        whole = FREEDOMS[model.motion]
        freedoms = sum(len(whole if body.dof is None else body.dof) for body in model.bodies)
    block = model.title_block
    words = [block.revision, block.date] if block is not None else []
    revision = " ".join(word for word in words if word) or "none"
    return TitleLines(model.title or "untitled", revision, f"{model.motion} · {freedoms} DOF", checked)


def title_size(title: str, sheet: tuple[float, float], text_scale: float) -> tuple[float, float]:
    """Return width and height of the title block in pixels, on a sheet of a width and height.

    It is wide enough for the title, to three fifths of the sheet. Where it would take too much of the sheet
    it is a strip of one line.
    """
    need = (text_width(title, text_scale=text_scale) + 20.0) / TITLE_SHARE[1]
    width = min(max(need, 330.0 * text_scale), max(0.6 * sheet[0], 200.0), sheet[0] - 2 * MARGIN)
    two = text_width(title, Size.SMALL, text_scale=text_scale) > TWO_LINES * width - 14.0
    height = (BLOCK + (SECOND if two else 0.0)) * text_scale
    if width * height > MOST_SHARE * sheet[0] * sheet[1]:
        return max(sheet[0] - 2 * MARGIN - AXES, 100.0), STRIP * text_scale
    return width, height


def title_block(lines: TitleLines, sheet: tuple[float, float], text_scale: float) -> tuple[Item, ...]:
    """Return the title block at the top right of a sheet, as wide as its longest texts, two by two."""
    width, height = title_size(lines.title, sheet, text_scale)
    right = sheet[0] - MARGIN
    if height < BLOCK * text_scale:
        return _strip(lines, right, width, text_scale)
    left, top = right - width, MARGIN
    wide, narrow = (
        max(text_width(text, text_scale=text_scale) for text in column) + 16.0
        for column in ((lines.title, lines.motion), (lines.revision, lines.checked))
    )
    share = min(max(wide / (wide + narrow), TITLE_SHARE[0]), TITLE_SHARE[1])
    # The verdict is never cut short: the title gives way.
    least = text_width(lines.checked, Size.SMALL, text_scale=text_scale) + 16.0
    rooms = _two_columns(min(share, 1.0 - least / width) * width, width)
    above, below = (lines.title, lines.revision), (lines.motion, lines.checked)
    fits = all(
        text_width(text, text_scale=text_scale) <= room
        for row in (above, below)
        for text, room in zip(row, rooms, strict=True)
    )
    size = Size.NORMAL if fits else Size.SMALL
    broken = [
        in_two(text, room, text_scale) if not fits and height > BLOCK * text_scale else (text,)
        for text, room in zip(above, rooms, strict=True)
    ]
    first = (ROW + SECOND * (max(map(len, broken)) - 1)) * text_scale
    split, middle, bottom = left + rooms[0] + PADDING, top + first, top + first + ROW * text_scale
    cross = np.array([[left, middle, right, middle], [split, top, split, bottom]])
    items: list[Item] = [
        Box(left, top, width, bottom - top, 0.0, Role.INK, Role.PAPER, 1.2),
        Lines(cross, Role.INK, 1.0),
    ]
    cells = (
        ("title", broken[0], left, top, rooms[0]),
        ("revision", broken[1], split, top, rooms[1]),
        ("motion", (lines.motion,), left, middle, rooms[0]),
        ("checked", (lines.checked,), split, middle, rooms[1]),
    )
    for name, rows, x, y, room in cells:
        items.append(Text(x + 8, y + 9.0 * text_scale, name, Role.MUTED, Size.SMALL))
        for row, part in enumerate(rows):
            text = shortened(part, room, size, text_scale)
            items.append(Text(x + 8, y + (24.0 + SECOND * row) * text_scale, text, Role.INK, size))
    return tuple(items)


def _two_columns(split: float, width: float) -> tuple[float, float]:
    return split - PADDING, width - split - PADDING


def _strip(lines: TitleLines, right: float, most: float, text_scale: float) -> tuple[Item, ...]:
    """Return title and verdict beside each other on one line."""
    size, height = Size.SMALL, STRIP * text_scale
    checked = text_width(lines.checked, size, text_scale=text_scale) + PADDING
    title = shortened(lines.title, max(most - checked - PADDING, 0.0), size, text_scale)
    split = right - checked
    left = split - text_width(title, size, text_scale=text_scale) - PADDING
    middle = MARGIN + height / 2
    return (
        Box(left, MARGIN, right - left, height, 0.0, Role.INK, Role.PAPER, 1.2),
        Lines(np.array([[split, MARGIN, split, MARGIN + height]]), Role.INK, 1.0),
        Text(left + 8, middle, title, Role.INK, size),
        Text(split + 8, middle, lines.checked, Role.INK, size),
    )


def grid(width: float, height: float) -> Lines:
    """Return the faint squares of the paper."""
    x = np.arange(GRID_STEP, width, GRID_STEP)
    y = np.arange(GRID_STEP, height, GRID_STEP)
    upright = np.stack([x, 0 * x, x, 0 * x + height], axis=1)
    level = np.stack([0 * y, y, 0 * y + width, y], axis=1)
    return Lines(np.vstack([upright, level]), Role.GRID, 1.0)


def axes(
    motion: Motion, text_scale: float, room: float = np.inf, viewpoint: Viewpoint = Viewpoint.TURNED
) -> tuple[tuple[Item, ...], Floats]:
    """Return the arrows of the model's axes at the top left, and the rectangles (n, 4) they take.

    What is said beside the axis of a shaft train is left out where it would pass ``room``, pixels from the
    left. Seen straight, the axis to or from the eye is a dot or a cross in a circle. In space the rectangle
    keeps room for the switch of the views.
    """
    length = 34.0
    shown = {
        Motion.SINGLE_AXIS: ("y",),
        Motion.SHAFT_TRAIN: ("x",),
        Motion.PLANE: ("x", "y"),
        Motion.SPACE: ("x", "y", "z"),
    }[motion]
    matrix = projection(motion, viewpoint)
    steps = matrix[:, ["xyz".index(name) for name in shown]].T * np.array([length, -length])
    low = np.minimum(steps.min(axis=0), 0.0)
    origin = np.array([26.0, 30.0 * text_scale]) - low
    starts = np.tile(origin, (len(steps), 1))
    seen = steps.any(axis=1)
    items: list[Item] = [Lines(arrow(starts[seen], steps[seen]), Role.INK, 1.3)]
    for name, step in zip(shown, steps, strict=True):
        x, y = origin + step * (1 + 9.0 * text_scale / max(float(np.hypot(*step)), 1.0))
        if not step.any():
            towards = float(np.cross(*matrix)["xyz".index(name)]) > 0
            end = sight_segments(tuple(origin.tolist()), towards=towards, radius=5.0)
            items.append(Lines(end, Role.INK, 1.3))
            x, y = x - 11.0 * text_scale, y + 7.0 * text_scale
        items.append(Text(float(x), float(y), name, Role.INK, Size.SMALL, Anchor.MIDDLE))
    high = origin + np.maximum(steps.max(axis=0), 0.0) + 20.0 * text_scale
    if motion is Motion.SHAFT_TRAIN:
        x = float(origin[0] + length + 22 * text_scale)
        wide = text_width(TURNING, Size.SMALL, text_scale=text_scale)
        if x + wide <= room:
            items.append(Text(x, float(origin[1]), TURNING, Role.MUTED, Size.SMALL))
            high[0] += wide
    rooms = [[0.0, 0.0, *high]]
    if motion is Motion.SPACE:
        x, y, wide, tall = switch_room(text_scale, room)
        rooms.append([x, y, x + wide, y + tall])
    if viewpoint is not Viewpoint.TURNED:
        y = float(high[1]) + 4.0 * text_scale
        items.append(Text(14.0, y, f"{viewpoint} view", Role.MUTED, Size.SMALL))
        rooms[0][3] = y + 10.0 * text_scale
    return tuple(items), np.array(rooms)


def switch_room(text_scale: float, room: float) -> tuple[float, float, float, float]:
    """Return x, y, width, height kept free for the window's switch of the views, in pixels.

    Beside the axes of a space model, or below them where it would pass ``room``, pixels from the left.
    """
    wide, high = (side * text_scale for side in SWITCH)
    if SWITCH_LEFT * text_scale + wide < room:
        return SWITCH_LEFT * text_scale, 8.0, wide, high
    return 8.0, SWITCH_TOP[0] + SWITCH_TOP[1] * text_scale, wide, high


def captioned(drawing: Drawing, caption: str) -> Drawing:
    """Return a drawing with a line of text in a strip of ``CAPTION`` pixels below it."""
    left, top, width, height = drawing.bounds
    strip, room = CAPTION * drawing.text_scale, width - 2 * MARGIN
    line = shortened(caption, room, Size.NORMAL, drawing.text_scale)
    text = Text(left + MARGIN, top + height + strip / 2, line, Role.INK, Size.NORMAL)
    return Drawing((*drawing.items, text), (left, top, width, height + strip), drawing.text_scale)


def sheet_of(items: tuple[Item, ...], width: float, height: float, text_scale: float) -> Drawing:
    """Return items as a drawing with the sheet's bounds."""
    return Drawing(items, (0.0, 0.0, width, height), text_scale)
