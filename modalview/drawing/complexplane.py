"""The complex plane of a model with dashpots: regions known before a solve, and the roots when found."""

from dataclasses import dataclass

import numpy as np

from modalview.drawing.axis import spread
from modalview.drawing.axislinear import round_ticks, tick_text
from modalview.drawing.complexplanecontent import LambdaContent, PlaneContent, PlaneRoot, disc_kinds
from modalview.drawing.labels import Board, Line, Spot, extent
from modalview.drawing.lambdaaxis import lambda_drawing
from modalview.drawing.legend import Entry, Mark, legend_items, legend_size
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
from modalview.drawing.symbols import dashed
from modalview.drawing.textsize import line_height
from modalview.units.show import significant

RAD_PER_HZ = 2 * np.pi
# A region this many times larger than the sharpest is left to run out of the picture.
FAR = 1.5
PAD = 1.04
ARC = 72  # sides of a half circle
RATIOS = (0.05, 0.2, 0.5)  # rays of constant damping ratio
MOST_LEGEND = 0.4  # share of the width or height that a legend may take
CROSS = 4.5  # half of a root's cross, pixels


@dataclass(frozen=True, slots=True)
class Plane:
    """Where the upper half of the complex plane lies on the sheet; one scale for both axes.

    Parameters
    ----------
    left, right, top, bottom : float
        Of the plot, pixels; ``bottom`` is the real axis.
    zero : float
        Pixel of the imaginary axis.
    per_rate : float
        Pixels per 1/s.
    """

    left: float
    right: float
    top: float
    bottom: float
    zero: float
    per_rate: float

    def place(self, points: np.ndarray) -> Floats:
        """Return pixels (..., 2) of complex points, 1/s."""
        x, y = self.zero + self.per_rate * points.real, self.bottom - self.per_rate * points.imag
        return np.stack([x, y], axis=-1)

    def shown(self, segments: Floats) -> Floats:
        """Return the segments (n, 4) that lie on the plot."""
        x, y = segments[:, [0, 2]], segments[:, [1, 3]]
        inside = (x >= self.left - 0.5) & (x <= self.right + 0.5) & (y >= self.top - 0.5)
        return segments[inside.all(axis=1)]


def plane_drawing(
    content: PlaneContent | LambdaContent, width: float, height: float, *, text_scale: float = 1.0
) -> Drawing:
    """Draw the complex-plane view.

    Parameters
    ----------
    content : PlaneContent or LambdaContent
        With dashpots the upper half plane of the roots; without them the axis of lambda.
    width, height : float
        Pixels.
    text_scale : float
    """
    if isinstance(content, LambdaContent):
        return lambda_drawing(content, width, height, text_scale=text_scale)
    plane, legend = _laid_out(content, (width, height), text_scale)
    board = Board(width, height, text_scale)
    items = _axes(plane, text_scale) + _rays(plane, board, text_scale) + _regions(plane, content)
    items += _roots(plane, content, board) + legend
    return Drawing(items, (0.0, 0.0, width, height), text_scale)


def _laid_out(
    content: PlaneContent, size: tuple[float, float], text_scale: float
) -> tuple[Plane, tuple[Item, ...]]:
    """Put the legend beside the plot or over it, whichever leaves the plot larger; shorten it to fit."""
    width, height = size
    left, right = 60.0 * text_scale, width - 62.0 * text_scale
    top, bottom = 34.0 * text_scale, height - 46.0 * text_scale
    full = _entries(content)
    for entries in (full, tuple(Entry(one.mark, one.role, one.lines[:1]) for one in full[:-1])):
        found: list[tuple[Plane, tuple[Item, ...]]] = []
        one, tall = legend_size(entries, 1, text_scale)
        columns = min(int((width - 16.0) / one), len(entries))
        high = legend_size(entries, columns, text_scale)[1] if columns else height
        if high <= MOST_LEGEND * height:
            items = legend_items(entries, 8.0, 8.0, columns, text_scale)
            found.append((_fitted(content, left, top + high + 12.0, right, bottom), items))
        if one <= MOST_LEGEND * width and tall <= height - 16.0:
            items = legend_items(entries, width - one, 8.0, 1, text_scale)
            found.append((_fitted(content, left, top, right - one - 14.0, bottom), items))
        if found:
            return max(found, key=lambda pair: pair[0].per_rate)
    return _fitted(content, left, top, right, bottom), ()


def _fitted(content: PlaneContent, left: float, top: float, right: float, bottom: float) -> Plane:
    regions = content.regions
    sharp = max(regions.scaled.reach, regions.rectangle.decay, regions.rectangle.frequency, 1e-300)
    sizes = (regions.rows.reach, regions.columns.reach, regions.circle)
    reach = PAD * max([sharp, *(size for size in sizes if size <= FAR * sharp)])
    ahead = float((regions.scaled.centres + regions.scaled.radii).max(initial=0.0))
    ahead = max(PAD * min(ahead, reach), 0.12 * reach)
    scale = max(min((right - left) / (reach + ahead), (bottom - top) / reach), 1e-300)
    spare = (right - left) - scale * (reach + ahead)
    zero = left + spare / 2 + scale * reach
    return Plane(left, right, max(top, bottom - scale * reach), bottom, zero, scale)


def _axes(plane: Plane, text_scale: float) -> tuple[Item, ...]:
    apart = 62.0 * text_scale
    left, right = (plane.left - plane.zero) / plane.per_rate, (plane.right - plane.zero) / plane.per_rate
    up = (plane.bottom - plane.top) / plane.per_rate
    across = round_ticks(left, right, apart / plane.per_rate)
    rad = round_ticks(0.0, up, 0.5 * apart / plane.per_rate)
    hertz = round_ticks(0.0, up / RAD_PER_HZ, 0.5 * apart / plane.per_rate / RAD_PER_HZ)
    grid = [
        [plane.zero + plane.per_rate * x, plane.top, plane.zero + plane.per_rate * x, plane.bottom]
        for x in across
    ]
    grid += [
        [plane.left, plane.bottom - plane.per_rate * y, plane.right, plane.bottom - plane.per_rate * y]
        for y in rad
    ]
    items: list[Item] = [
        Lines(np.array(grid), Role.GRID, 1.0),
        Lines(np.array([[plane.left, plane.bottom, plane.right, plane.bottom]]), Role.MUTED, 1.2),
        Lines(np.array([[plane.zero, plane.top, plane.zero, plane.bottom]]), Role.MUTED, 1.2),
    ]
    small = Size.SMALL
    for x in across:
        place = plane.zero + plane.per_rate * x
        items.append(
            Text(place, plane.bottom + 12 * text_scale, tick_text(x), Role.MUTED, small, Anchor.MIDDLE)
        )
    for y in rad:
        place = plane.bottom - plane.per_rate * y
        items.append(Text(plane.left - 6, place, tick_text(y), Role.MUTED, small, Anchor.RIGHT))
    for hz in hertz:
        place = plane.bottom - plane.per_rate * RAD_PER_HZ * hz
        items.append(Lines(np.array([[plane.right, place, plane.right + 4, place]]), Role.MUTED, 1.0))
        items.append(Text(plane.right + 7, place, tick_text(hz), Role.MUTED, small))
    y = plane.top - 16.0 * text_scale
    items.append(Text(plane.left - 6, y, "rad/s", Role.INK, small, Anchor.RIGHT, bold=True))
    items.append(Text(plane.right + 7, y, "Hz", Role.INK, small, bold=True))
    foot = plane.bottom + 30.0 * text_scale
    middle = (plane.left + plane.right) / 2
    items.append(
        Text(middle, foot, "real part of the root, 1/s (left: decays)", Role.INK, small, Anchor.MIDDLE)
    )
    return tuple(items)


def _rays(plane: Plane, board: Board, text_scale: float) -> tuple[Item, ...]:
    """Draw rays of constant damping ratio, each with its ratio at its outer end."""
    items: list[Item] = []
    for ratio in RATIOS:
        across, up = -ratio, float(np.sqrt(1 - ratio * ratio))
        length = min((plane.zero - plane.left) / -across, (plane.bottom - plane.top) / up)
        end = (plane.zero + length * across, plane.bottom - length * up)
        ray = np.array([[plane.zero, plane.bottom, *end]])
        items.append(Lines(dashed(ray, 2.0, 5.0), Role.GHOST, 0.9, 0.7))
        line = Line(f"{100 * ratio:.0f} %", Role.MUTED, Size.SMALL)
        items += board.place(
            (line,), [Spot(end[0], end[1] - 2 * text_scale, 0, -1), Spot(end[0] - 2, end[1], -1, 0)]
        )
    return tuple(items)


def _arcs(plane: Plane, centres: Floats, radii: Floats) -> Floats:
    """Return upper half circles as points (n, ARC + 1, 2), pixels."""
    turn = np.exp(1j * np.linspace(0.0, np.pi, ARC + 1))
    return plane.place(centres[:, None] + radii[:, None] * turn)


def _segments(chains: Floats, shown: int = 1, every: int = 1) -> Floats:
    """Return the sides of chains (n, corners, 2), of each ``every`` in a row the first ``shown``."""
    sides = np.concatenate([chains[:, :-1], chains[:, 1:]], axis=2)
    kept: Floats = sides[:, np.arange(sides.shape[1]) % every < shown].reshape(-1, 4)
    return kept


def _regions(plane: Plane, content: PlaneContent) -> tuple[Item, ...]:
    regions = content.regions
    rows, columns, scaled = (_arcs(plane, discs.centres, discs.radii) for discs in disc_kinds(regions))
    circle = _arcs(plane, np.zeros(1), np.array([regions.circle]))
    decay, high = regions.rectangle.decay, regions.rectangle.frequency
    corner, opposite = plane.place(np.array([-decay + 1j * high, 0])).tolist()
    wide, tall = opposite[0] - corner[0], opposite[1] - corner[1]
    pale = min(0.8, max(0.1, 16.0 / max(len(scaled), 1)))
    return (
        Polygons(_union(plane, content)[None], None, Role.ACCENT, 0.0, 0.12),
        Lines(plane.shown(_segments(scaled)), Role.ACCENT, 1.0, 0.6 * pale),
        Lines(plane.shown(_segments(rows)), Role.GHOST, 1.0, pale),
        Lines(plane.shown(_segments(columns, 1, 2)), Role.GHOST, 1.0, pale),
        Lines(plane.shown(_segments(circle, 2, 3)), Role.WARN, 1.4),
        Box(corner[0], corner[1], wide, tall, 0.0, Role.GOOD, Role.GOOD, 2.0, 0.14),
    )


def _union(plane: Plane, content: PlaneContent) -> Floats:
    """Return the outline (n, 2) of all scaled discs together, kept on the plot."""
    discs = content.regions.scaled
    low, high = (discs.centres - discs.radii).min(initial=0.0), (discs.centres + discs.radii).max(initial=0.0)
    across = np.linspace(low, high, 4 * ARC)
    height = discs.radii[:, None] ** 2 - (across - discs.centres[:, None]) ** 2
    up = np.sqrt(np.maximum(height.max(axis=0, initial=0.0), 0.0))
    outline = plane.place(np.concatenate([across + 1j * up, [high, low]]))
    return np.clip(outline, [plane.left, plane.top], [plane.right, plane.bottom])


def _roots(plane: Plane, content: PlaneContent, board: Board) -> tuple[Item, ...]:
    if not content.roots and not content.zero_roots:
        return ()
    places = plane.place(np.array([root.place for root in content.roots], dtype=complex))
    board.take(np.hstack([places - CROSS, places + CROSS]))
    falling, rising = np.array([-CROSS, CROSS]), np.array([CROSS, -CROSS])
    crosses = np.vstack(
        [np.hstack([places - CROSS, places + CROSS]), np.hstack([places + falling, places + rising])]
    )
    items: list[Item] = [Lines(crosses, Role.BAD, 2.0)]
    if content.zero_roots:
        ring = np.array([[plane.zero, plane.bottom]])
        board.take(np.hstack([ring - 6, ring + 6]))
        items.append(Circles(ring, 6.0, Role.BAD, None, 2.0))
    oscillating = [i for i, root in enumerate(content.roots) if root.oscillates]
    items += _column(plane, [(content.roots[i], places[i]) for i in oscillating], board)
    steps = [7.0 + 15.0 * board.text_scale * level for level in range(6)]
    for root, (x, y) in zip(content.roots, places.tolist(), strict=True):
        if root.oscillates:
            continue
        placed = _placed(root, [Spot(x, y - step, side, -1) for step in steps for side in (0, -1, 1)], board)
        if placed and y - placed[0].y > steps[1]:
            items.append(Lines(np.array([[x, y - CROSS, x, placed[0].y + steps[0]]]), Role.MUTED, 0.8))
        items += placed
    return tuple(items)


def _column(plane: Plane, found: list[tuple[PlaneRoot, Floats]], board: Board) -> list[Item]:
    """Write the figures of oscillations in a column right of the imaginary axis, where no root lies.

    Of too many every second, third, ... is written, as far as there is room.
    """
    apart = 1.15 * line_height(Size.SMALL, text_scale=board.text_scale)
    low, high = plane.top + apart, plane.bottom - apart
    ranked = sorted(found, key=lambda pair: float(pair[1][1]))
    every = max(1, int(np.ceil(len(ranked) * apart / max(high - low, 1.0))))
    written = ranked[::-1][::every][::-1]
    heights = spread([float(place[1]) for _, place in written], apart, low, high)
    x = plane.zero + 26.0
    items: list[Item] = []
    for (root, (a, b)), y in zip(written, heights, strict=True):
        placed = _placed(root, [Spot(x, y, 1, 0)], board)
        if placed:
            left, top, right, bottom = extent(placed, board.text_scale)
            items.append(Lines(np.array([[a + CROSS + 1, b, x - 4.0, y]]), Role.MUTED, 0.8))
            items.append(Box(left - 2, top, right - left + 4, bottom - top, 2.0, None, Role.PAPER, 0.0, 0.8))
            items += placed
    return items


def _placed(root: PlaneRoot, spots: list[Spot], board: Board) -> list[Text]:
    """Write a root's figures where there is room, else its number, else nothing."""
    for text in (root.text, root.number):
        placed = board.place((Line(text, Role.INK, Size.SMALL),), spots)
        if placed:
            return placed
    return []


def _entries(content: PlaneContent) -> tuple[Entry, ...]:
    regions = content.regions
    entries = [
        Entry(
            Mark.FILL,
            Role.GOOD,
            (
                "Bendixson's rectangle",
                f"decay to {_figure(regions.rectangle.decay)} 1/s",
                f"frequency to {_hz(regions.rectangle.frequency)} Hz",
            ),
        ),
        Entry(Mark.FILL, Role.ACCENT, ("discs, scaled", f"reach {_figure(regions.scaled.reach)} 1/s")),
        Entry(Mark.LINE, Role.GHOST, ("discs by rows", f"reach {_figure(regions.rows.reach)} 1/s")),
        Entry(Mark.DASHES, Role.GHOST, ("discs by columns", f"reach {_figure(regions.columns.reach)} 1/s")),
        Entry(Mark.DASHES, Role.WARN, ("norm circle", f"radius {_figure(regions.circle)} 1/s")),
        Entry(Mark.DOTS, Role.GHOST, ("rays: damping ratio",)),
    ]
    if content.roots:
        pairs = sum(root.oscillates for root in content.roots)
        single = len(content.roots) - pairs
        said = [f"{pairs} pair{'s' if pairs != 1 else ''} of roots found"] if pairs else []
        said += [f"{single} real root{'s' if single != 1 else ''} found"] if single else []
        entries.append(Entry(Mark.CROSS, Role.BAD, tuple(said)))
    if content.zero_roots:
        number = content.zero_roots
        entries.append(
            Entry(
                Mark.RING,
                Role.BAD,
                (
                    f"{number} root{'s' if number != 1 else ''} at 0: free motion",
                    "which the discs leave out",
                ),
            )
        )
    entries.append(
        Entry(
            Mark.NONE, Role.MUTED, ("Every root lies in each region;", "the lower half is the mirror image.")
        )
    )
    return tuple(entries)


def _figure(value: float) -> str:
    return significant(value, 3)


def _hz(omega: float) -> str:
    return significant(omega / RAD_PER_HZ, 3)
