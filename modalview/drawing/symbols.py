"""Symbols of links and ground as arrays: a template along each link, stretched between its ends."""

from enum import StrEnum

import numpy as np

from modalview.drawing.primitives import Floats


class Symbol(StrEnum):
    """How a link is drawn."""

    SPRING = "spring"
    DAMPER = "damper"
    MOUNT = "mount"
    SHAFT = "shaft"
    BEAM = "beam"
    RIGID = "rigid link"
    GEAR = "gear"


def _chain(points: list[tuple[float, float]]) -> Floats:
    """Return segments (n, 4) through points."""
    line = np.array(points)
    return np.hstack([line[:-1], line[1:]])


def _zigzag(start: float, stop: float, teeth: int, half: float) -> list[tuple[float, float]]:
    """Return the points of a spring between two places along the link, leads not included."""
    step = (stop - start) / teeth
    peaks = [(start + step * (tooth + 0.5), half if tooth % 2 == 0 else -half) for tooth in range(teeth)]
    return [(start, 0.0), *peaks, (stop, 0.0)]


_SPRING = _chain([(0.0, 0.0), *_zigzag(0.15, 0.85, 10, 7.0), (1.0, 0.0)])
_CUP = _chain([(0.68, -7.0), (0.38, -7.0), (0.38, 7.0), (0.68, 7.0)])
_DAMPER = np.vstack(
    [
        _chain([(0.0, 0.0), (0.38, 0.0)]),
        _CUP,
        _chain([(0.56, -5.0), (0.56, 5.0)]),
        _chain([(0.56, 0.0), (1.0, 0.0)]),
    ]
)
_DIAMOND = _chain([(0.38, 0.0), (0.5, 7.0), (0.62, 0.0), (0.5, -7.0), (0.38, 0.0)])
_MOUNT = np.vstack(
    [
        _chain([(0.0, 0.0), *_zigzag(0.08, 0.38, 4, 6.0)]),
        _DIAMOND,
        _chain([*_zigzag(0.62, 0.92, 4, 6.0), (1.0, 0.0)]),
    ]
)
_SHAFT = np.array([[0.0, -3.0, 1.0, -3.0], [0.0, 3.0, 1.0, 3.0]])
_RIGID = np.array([[0.0, -2.5, 1.0, -2.5], [0.0, 2.5, 1.0, 2.5]])
_LINE = np.array([[0.0, 0.0, 1.0, 0.0]])
STRAIGHT = _LINE  # of links too many and too small for a symbol
_NOTHING = np.zeros((0, 4))

BEAM_WIDTH = 4.5  # pixels
BEAM_PIECES = 14  # straight ones of a bent beam

# Segments in (share of the link's length, pixels to its left); and the width of the line.
TEMPLATES: dict[Symbol, tuple[Floats, float]] = {
    Symbol.SPRING: (_SPRING, 1.4),
    Symbol.DAMPER: (_DAMPER, 1.4),
    Symbol.MOUNT: (_MOUNT, 1.4),
    Symbol.SHAFT: (_SHAFT, 1.4),
    Symbol.BEAM: (_LINE, BEAM_WIDTH),
    Symbol.RIGID: (_RIGID, 2.2),
    Symbol.GEAR: (_NOTHING, 1.0),
}

# The same where two bodies touch and the link lies across the joint.
JOINTS: dict[Symbol, Floats] = {
    Symbol.SPRING: _chain([(0.0, 0.0), *_zigzag(0.2, 0.8, 4, 6.0), (1.0, 0.0)]),
    Symbol.MOUNT: np.vstack(
        [
            _chain([(0.0, 0.0), (0.25, 0.0), (0.5, 7.0), (0.75, 0.0), (0.5, -7.0), (0.25, 0.0)]),
            _chain([(0.75, 0.0), (1.0, 0.0)]),
            np.array([[0.0, -5.0, 0.0, 5.0], [1.0, -5.0, 1.0, 5.0]]),
        ]
    ),
}

STROKES = 6  # hatching one ground symbol

# With more links of a kind than MANY, lines of one pixel and fewer teeth: a fifth of the painting.
MANY = 150
COARSE: dict[Symbol, Floats] = {
    Symbol.SPRING: _chain([(0.0, 0.0), *_zigzag(0.2, 0.8, 4, 5.0), (1.0, 0.0)]),
    Symbol.MOUNT: _chain(
        [(0.0, 0.0), (0.3, 0.0), (0.5, 5.0), (0.7, 0.0), (0.5, -5.0), (0.3, 0.0), (1.0, 0.0)]
    ),
}


def between(template: Floats, ends: Floats, thick: float = 1.0) -> Floats:
    """Return the segments of one symbol along many links.

    Parameters
    ----------
    template : array (k, 4)
        Segments as t1, o1, t2, o2: share of the length, and pixels to the left of from-to.
    ends : array (n, 2, 2)
        From and to of every link, pixels.
    thick : float
        Times the sideways pixels.

    Returns
    -------
    array (n * k, 4)
        Pixels.
    """
    start = ends[:, 0]
    along = ends[:, 1] - start
    length = np.hypot(along[:, 0], along[:, 1])
    length[length == 0] = 1.0
    left = np.stack([along[:, 1], -along[:, 0]], axis=1) * (thick / length)[:, None]
    corners = template.reshape(-1, 2)
    placed = start[:, None] + corners[:, :1] * along[:, None] + corners[:, 1:] * left[:, None]
    lines: Floats = placed.reshape(-1, 4)
    return lines


def bent(rest: Floats, moved: Floats, slopes: Floats) -> Floats:
    """Return the segments of beams that follow displacement and rotation of both ends: cubics.

    Parameters
    ----------
    rest : array (n, 2, 2)
        Ends at rest, pixels.
    moved : array (n, 2, 2)
        Their displacements.
    slopes : array (n, 2, 2)
        How far the rotation of each end alone would move the other one.

    Notes
    -----
    A slender beam without load between its ends bends to the cubic fixed by both ends (Euler-Bernoulli).
    """
    t = np.linspace(0.0, 1.0, BEAM_PIECES + 1)[None, :, None]
    shape = (1 - 3 * t**2 + 2 * t**3) * moved[:, None, 0] + (3 * t**2 - 2 * t**3) * moved[:, None, 1]
    # A rotation of the far end moves the near one the other way round: its slope along the beam is the same.
    shape = shape + (t - 2 * t**2 + t**3) * slopes[:, None, 0] + (t**3 - t**2) * slopes[:, None, 1]
    line = rest[:, None, 0] + t * (rest[:, None, 1] - rest[:, None, 0]) + shape
    lines: Floats = np.concatenate([line[:, :-1], line[:, 1:]], axis=2).reshape(-1, 4)
    return lines


def ground(feet: Floats, outward: Floats, half: float = 20.0) -> Floats:
    """Return the segments of ground symbols: a line across, hatched on the far side.

    Parameters
    ----------
    feet : array (n, 2)
        Where links meet the ground, pixels.
    outward : array (n, 2)
        Unit steps into the ground.
    half : float
        Half the width, pixels.
    """
    if not len(feet):
        return np.zeros((0, 4))
    across = np.stack([-outward[:, 1], outward[:, 0]], axis=1)
    surface = np.hstack([feet - half * across, feet + half * across])
    steps = np.linspace(-0.75 * half, half, STROKES)
    tops = feet[:, None] + steps[:, None] * across[:, None]
    strokes = np.concatenate([tops, tops + 0.33 * half * (outward - across)[:, None]], axis=2)
    lines: Floats = np.vstack([surface, strokes.reshape(-1, 4)])
    return lines


def dashed(segments: Floats, dash: float = 5.0, gap: float = 4.0) -> Floats:
    """Cut segments (n, 4) into dashes, so that no pen has to; lengths in pixels."""
    steps = segments[:, 2:] - segments[:, :2]
    lengths = np.hypot(steps[:, 0], steps[:, 1])
    counts = np.ceil(lengths / (dash + gap)).astype(int)
    rows = np.repeat(np.arange(len(segments)), counts)
    ranks = np.arange(len(rows)) - np.repeat(np.cumsum(counts) - counts, counts)
    starts = ranks * (dash + gap)
    stops = np.minimum(starts + dash, lengths[rows])
    unit = steps[rows] / lengths[rows, None]
    corner = segments[rows, :2]
    lines: Floats = np.hstack([corner + starts[:, None] * unit, corner + stops[:, None] * unit])
    return lines


def outline(corners: Floats) -> Floats:
    """Return the sides (n * k, 4) of closed outlines (n, k, 2)."""
    sides: Floats = np.concatenate([corners, np.roll(corners, -1, axis=1)], axis=2).reshape(-1, 4)
    return sides


def hatched(x: float, y: float, width: float, height: float, spacing: float = 9.0) -> Floats:
    """Return rising lines at 45 degrees that fill a rectangle; pixels."""
    starts = np.arange(spacing, width + height, spacing)
    x1 = x + np.maximum(0.0, starts - height)
    y1 = y + np.minimum(starts, height)
    x2 = x + np.minimum(starts, width)
    y2 = y + np.maximum(0.0, starts - width)
    return np.stack([x1, y1, x2, y2], axis=1)


def arrow(start: Floats, step: Floats, head: float = 6.0) -> Floats:
    """Return the segments (n * 3, 4) of straight arrows from ``start`` (n, 2) along ``step`` (n, 2)."""
    tip = start + step
    length = np.hypot(step[:, 0], step[:, 1])
    length[length == 0] = 1.0
    unit = step / length[:, None]
    side = np.stack([-unit[:, 1], unit[:, 0]], axis=1)
    size = np.minimum(head, 0.6 * length)[:, None]
    back = tip - size * unit
    shafts = np.hstack([start, tip])
    wings = [np.hstack([tip, back + turn * 0.65 * size * side]) for turn in (1, -1)]
    return np.vstack([shafts, *wings])


def turning_arrow(
    centre: tuple[float, float], radius: float, start: float, sweep: float, head: float = 7.0
) -> Floats:
    """Return the segments of an arrow along an arc; angles in radians, anticlockwise as seen."""
    turns = start + sweep * np.linspace(0.0, 1.0, 20)
    points = np.stack([centre[0] + radius * np.cos(turns), centre[1] - radius * np.sin(turns)], axis=1)
    arc = np.hstack([points[:-1], points[1:]])
    tip, before = points[-1], points[-4]
    back = (before - tip) / (np.hypot(*(before - tip)) or 1.0) * head
    side = np.array([-back[1], back[0]])
    wings = np.array([[*tip, *(tip + back + turn * 0.6 * side)] for turn in (1, -1)])
    return np.vstack([arc, wings])
