"""Curves on a chart: cut off at its edges, dashed along their length."""

import numpy as np

from modalview.drawing.primitives import Floats

# Pieces that dashes are put together from, pixels.
_PIECE = 1.5
_LEVEL = 1e-9  # pixels: a segment that changes by less is level
# Values beyond what can be drawn stand so many pixels outside of the chart.
FAR = 1e5


def chained(xs: Floats, ys: Floats) -> Floats:
    """Return the segments (n - 1, 4) of a curve through points; what is not finite lies far above."""
    ys = np.nan_to_num(ys, nan=-FAR, posinf=FAR, neginf=-FAR)
    ys = np.clip(ys, -FAR, FAR)
    return np.stack([xs[:-1], ys[:-1], xs[1:], ys[1:]], axis=1)


def clipped(segments: Floats, box: tuple[float, float, float, float]) -> Floats:
    """Return what of segments (n, 4) lies within x1, y1, x2, y2.

    Notes
    -----
    Y.-D. Liang and B. A. Barsky (1984), ACM Transactions on Graphics 3, 1-22 (from memory).

    >>> clipped(np.array([[0.0, 0.0, 10.0, 10.0]]), (2.0, 0.0, 20.0, 5.0)).tolist()
    [[2.0, 2.0, 5.0, 5.0]]
    """
    start, step = segments[:, :2], segments[:, 2:] - segments[:, :2]
    enter, leave = np.zeros(len(segments)), np.ones(len(segments))
    outside = np.zeros(len(segments), dtype=bool)
    for axis, (low, high) in enumerate(((box[0], box[2]), (box[1], box[3]))):
        for way, room in ((-step[:, axis], start[:, axis] - low), (step[:, axis], high - start[:, axis])):
            crosses = np.abs(way) > _LEVEL
            share = np.divide(room, way, out=np.zeros_like(room), where=crosses)
            enter = np.where(crosses & (way < 0), np.maximum(enter, share), enter)
            leave = np.where(crosses & (way > 0), np.minimum(leave, share), leave)
            outside |= ~crosses & (room < 0)
    kept = ~outside & (enter < leave)
    start, step, enter, leave = start[kept], step[kept], enter[kept, None], leave[kept, None]
    return np.hstack([start + enter * step, start + leave * step])


def dashed_along(segments: Floats, pattern: tuple[float, ...]) -> Floats:
    """Return dashes of a pattern (dash, gap, dash, gap, ... in pixels) along segments that follow each other.

    An empty pattern leaves the line whole.
    """
    if not pattern or not len(segments):
        return segments
    step = segments[:, 2:] - segments[:, :2]
    length = np.hypot(step[:, 0], step[:, 1])
    counts = np.maximum(np.ceil(length / _PIECE).astype(int), 1)
    rows = np.repeat(np.arange(len(segments)), counts)
    ranks = np.arange(len(rows)) - np.repeat(np.cumsum(counts) - counts, counts)
    first, last = ranks / counts[rows], (ranks + 1) / counts[rows]
    along = (np.cumsum(length) - length)[rows] + (first + last) / 2 * length[rows]
    ends = np.cumsum(pattern)
    shown = np.searchsorted(ends, along % ends[-1], side="right") % 2 == 0
    rows, first, last = rows[shown], first[shown, None], last[shown, None]
    corner = segments[rows, :2]
    return np.hstack([corner + first * step[rows], corner + last * step[rows]])
