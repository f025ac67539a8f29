"""The sketch of mounts at rest: where they stand, what each carries, the weight over the middle of them."""

import numpy as np

from modalview.drawing.captions import shortened
from modalview.drawing.flowing import SAMPLE, Sample, flowing
from modalview.drawing.labels import Board, Line, Spot, round_about
from modalview.drawing.mountschartcontent import CentreMark, MountMark, MountsContent
from modalview.drawing.primitives import (
    Anchor,
    Box,
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
from modalview.drawing.symbols import arrow, dashed, hatched
from modalview.drawing.textsize import line_height, text_width
from modalview.model.parts import Motion
from modalview.units.show import significant

FULL = 44.0  # pixels of the largest load's arrow, or twice the side of its square
LEAST, LEAST_ARROW = 3.0, 14.0
BAR, MOST_BAR = 12.0, 1.25  # height of a bar; share of the rated load that the bars reach to
_FACETS = 24


def mounts_chart(content: MountsContent, width: float, height: float, *, text_scale: float = 1.0) -> Drawing:
    """Draw mounts from above (space), from the side (plane), or as bars (single axis).

    Parameters
    ----------
    content : MountsContent
    width, height : float
        Pixels.
    text_scale : float
    """
    step = line_height(Size.SMALL, text_scale=text_scale)
    legend, reached = flowing(_legend(content), width, 4.0 + step / 2, text_scale)
    area = (8.0, reached + step, width - 8.0, height - 8.0)
    if content.motion is Motion.SINGLE_AXIS or not content.centres:
        items = _bars(content, area, text_scale)
    else:
        items = _sketch(content, (width, height), area, text_scale)
    return Drawing((*legend, *items), (0.0, 0.0, width, height), text_scale)


def _legend(content: MountsContent) -> list[Sample]:
    bars = content.motion is Motion.SINGLE_AXIS or not content.centres
    mark: Item = Box(4.0, -5.0, 14.0, 10.0, 0.0, Role.ACCENT, Role.ACCENT, 1.2, 0.3)
    if content.motion is Motion.PLANE and not bars:
        mark = Lines(arrow(np.array([[SAMPLE / 2, 6.0]]), np.array([[0.0, -12.0]])), Role.ACCENT, 1.8)
    found = [Sample("load at rest" if bars else "load at rest, by size", (mark,))]
    if any(one.overloaded for one in content.mounts):
        found.append(Sample("over its rated load", _bad(4.0, -5.0, 14.0, 10.0)))
    if any(one.lifted for one in content.mounts):
        pulled = Box(4.0, -5.0, 14.0, 10.0, 0.0, Role.BAD, None, 1.6)
        found.append(Sample("pulled upward", (pulled,)))
    if bars:
        if any(one.share is not None for one in content.mounts):
            line = Lines(np.array([[SAMPLE / 2, -6.0, SAMPLE / 2, 6.0]]), Role.INK, 2.0)
            found.append(Sample("rated load", (line,)))
        return found
    found.append(Sample("centre of gravity", _gravity(SAMPLE / 2, 0.0)))
    return [*found, Sample("centroid of the mounts, by stiffness", _centroid(SAMPLE / 2, 0.0))]


def _bad(x: float, y: float, width: float, height: float) -> tuple[Item, ...]:
    return (
        Box(x, y, width, height, 0.0, Role.BAD, Role.BAD, 1.6, 0.12),
        Lines(hatched(x, y, width, height, 4.0), Role.BAD, 1.0),
    )


def _gravity(x: float, y: float, radius: float = 6.0) -> tuple[Item, ...]:
    """Return a circle with two filled quarters, as drawings mark a centre of gravity."""
    turns = np.linspace(0.0, np.pi / 2, _FACETS // 4)
    quarter = np.stack([np.cos(turns), -np.sin(turns)], axis=1) * radius
    corners = np.vstack([quarter, [[0.0, 0.0]]])
    both = np.stack([corners, -corners]) + np.array([x, y])
    return (
        Circles(np.array([[x, y]]), radius, Role.INK, Role.PAPER, 1.4),
        Polygons(both, None, Role.INK, 0.0),
    )


def _centroid(x: float, y: float, half: float = 7.0) -> tuple[Item, ...]:
    cross = np.array([[x - half, y, x + half, y], [x, y - half, x, y + half]])
    return (Lines(cross, Role.WARN, 2.0),)


# Seen from above or from the side


def _sketch(
    content: MountsContent,
    size: tuple[float, float],
    area: tuple[float, float, float, float],
    text_scale: float,
) -> tuple[Item, ...]:
    board = Board(*size, text_scale)
    board.take(np.array([[0.0, 0.0, size[0], area[1] - 8.0]]))
    places, centres, centroids = _placed(content, area, text_scale)
    items: list[Item] = []
    largest = max((abs(one.load) for one in content.mounts), default=0.0) or 1.0
    boxes = []
    for one, place in zip(content.mounts, places, strict=True):
        drawn, box = _mount(one, place, largest, above=content.motion is Motion.SPACE)
        items += drawn
        boxes.append(box)
    board.take(np.array(boxes).reshape(-1, 4))
    for here, there in zip(centres, centroids, strict=True):
        items.append(Lines(dashed(np.array([[*there, *here]]) + 1e-9, 4.0, 3.0), Role.MUTED, 1.0))
        items += (*_centroid(*there), *_gravity(*here))
        board.take(np.array([[x - 7, y - 7, x + 7, y + 7] for x, y in (here, there)]))
    items += _words(content, boxes, board)
    for mark, here in zip(content.centres, centres, strict=True):
        items += _centre_words(mark, here, board)
    return tuple(items)


def _placed(
    content: MountsContent, area: tuple[float, float, float, float], text_scale: float
) -> tuple[list[tuple[float, float]], list[tuple[float, float]], list[tuple[float, float]]]:
    """Return the pixels of mounts, centres of gravity and centroids: one scale for both axes."""
    worlds = [(one.x, one.y) for one in content.mounts]
    worlds += [one.centre for one in content.centres] + [one.centroid for one in content.centres]
    points = np.array(worlds)
    low, high = points.min(axis=0), points.max(axis=0)
    widths = [text_width(one.label, Size.SMALL, bold=True, text_scale=text_scale) for one in content.mounts]
    side = min(max(widths, default=0.0) + 16.0, 0.25 * (area[2] - area[0]))
    x1, y1, x2, y2 = area[0] + side, area[1] + FULL, area[2] - side, area[3] - FULL
    spans = np.maximum(high - low, 1e-9)
    scale = min(max(x2 - x1, 20.0) / spans[0], max(y2 - y1, 20.0) / spans[1])
    middle = (low + high) / 2
    at = np.stack(
        [
            (x1 + x2) / 2 + scale * (points[:, 0] - middle[0]),
            (y1 + y2) / 2 - scale * (points[:, 1] - middle[1]),
        ],
        axis=1,
    )
    pairs = [(float(x), float(y)) for x, y in at]
    feet, groups = len(content.mounts), len(content.centres)
    return pairs[:feet], pairs[feet : feet + groups], pairs[feet + groups :]


def _mount(
    one: MountMark, place: tuple[float, float], largest: float, *, above: bool
) -> tuple[tuple[Item, ...], Floats]:
    """Draw a mount as a square whose area is its load, or from the side as an arrow as long as its load."""
    x, y = place
    share = abs(one.load) / largest
    if above:
        half = max(FULL / 4 * float(np.sqrt(share)), LEAST)
        box = np.array([x - half, y - half, x + half, y + half])
        return _square(one, box), box
    length = max(FULL * share, LEAST_ARROW)
    start = np.array([[x, y + length]]) if not one.lifted else np.array([[x, y]])
    step = np.array([[0.0, -length]]) if not one.lifted else np.array([[0.0, length]])
    role = Role.BAD if one.overloaded or one.lifted else Role.ACCENT
    bar = np.array([[x - 10.0, y, x + 10.0, y]])
    drawn = (Lines(np.vstack([arrow(start, step), bar]), role, 2.4 if one.overloaded else 1.8),)
    return drawn, np.array([x - 10.0, y - 2.0, x + 10.0, y + length])


def _square(one: MountMark, box: Floats) -> tuple[Item, ...]:
    x, y, width, height = box[0], box[1], box[2] - box[0], box[3] - box[1]
    if one.overloaded:
        return _bad(x, y, width, height)
    if one.lifted:
        return (Box(x, y, width, height, 0.0, Role.BAD, None, 1.6),)
    return (Box(x, y, width, height, 0.0, Role.ACCENT, Role.ACCENT, 1.2, 0.3),)


def _words(content: MountsContent, boxes: list[Floats], board: Board) -> list[Item]:
    """Write beside each mount what it carries; where that has no room, its name."""
    items: list[Item] = []
    for one, (x1, y1, x2, y2) in zip(content.mounts, boxes, strict=True):
        role = Role.BAD if one.overloaded or one.lifted else Role.INK
        share = "" if one.share is None else f", {significant(100 * one.share, 3)} % of rated"
        figures = Line(f"{one.load_text}{share}", role, Size.SMALL)
        down = Line(one.deflection_text, Role.MUTED, Size.SMALL)
        name = Line(one.label, Role.INK, Size.SMALL, bold=True)
        spots = round_about((x1, y1, x2 - x1, y2 - y1), 4.0)
        for lines in ((name, figures, down), (name, figures), (name,)):
            placed = board.place(lines, spots)
            if placed:
                items += placed
                break
    return items


def _centre_words(mark: CentreMark, here: tuple[float, float], board: Board) -> list[Item]:
    x, y = here
    line = Line(mark.label, Role.INK, Size.SMALL, bold=True)
    spots = [Spot(x, y - 9.0, 0, -1), Spot(x, y + 9.0, 0, 1), Spot(x + 10, y, 1, 0), Spot(x - 10, y, -1, 0)]
    return list(board.place((line,), spots))


# As bars


def _bars(
    content: MountsContent, area: tuple[float, float, float, float], text_scale: float
) -> tuple[Item, ...]:
    """Draw loads as bars; with rated loads each as its share of it, so that all end at one line."""
    step = max(line_height(Size.SMALL, text_scale=text_scale), BAR) + 6.0
    rated = all(one.share is not None for one in content.mounts)
    largest = max((abs(one.load) for one in content.mounts), default=0.0) or 1.0
    names = [text_width(one.label, Size.SMALL, text_scale=text_scale) for one in content.mounts]
    name_room = min(max(names, default=0.0) + 10.0, 0.3 * (area[2] - area[0]))
    figures = [f"{one.load_text}, {one.deflection_text}" for one in content.mounts]
    room = max((text_width(one, Size.SMALL, text_scale=text_scale) for one in figures), default=0.0) + 10.0
    left, right = area[0] + name_room, max(area[2] - room, area[0] + name_room + 30.0)
    most = int(max((area[3] - area[1]) // step, 1))
    items: list[Item] = []
    shown = content.mounts[:most]
    for row, (one, text) in enumerate(zip(shown, figures, strict=False)):
        y = area[1] + step * (row + 0.5)
        share = (one.share or 0.0) / MOST_BAR if rated else abs(one.load) / largest
        box = np.array([left, y - BAR / 2, left + max(min(share, 1.0) * (right - left), 1.0), y + BAR / 2])
        items += _square(one, box)
        name = shortened(one.label, name_room - 8.0, Size.SMALL, text_scale)
        items.append(Text(left - 6.0, y, name, Role.INK, Size.SMALL, Anchor.RIGHT))
        items.append(Text(right + 6.0, y, text, Role.BAD if one.overloaded else Role.MUTED, Size.SMALL))
    if rated and shown:
        x = left + (right - left) / MOST_BAR
        items.append(Lines(np.array([[x, area[1], x, area[1] + step * len(shown)]]), Role.INK, 2.0))
    return tuple(items)
