"""Lines drawn on bodies: pitch circles of gears, and the radius that shows how far a disc has turned."""

from collections.abc import Iterator

import numpy as np

from modalview.drawing.layout import GROUND, Layout
from modalview.drawing.outline import Outlines
from modalview.drawing.primitives import Floats
from modalview.model.gears import gear_ratio
from modalview.model.parts import Gear, Model, Motion

# A pitch circle is a thin chain line: long and short dashes by turns (drawing practice).
DASHES = 18  # long ones round a circle
LONG, SHORT, GAP = 0.62, 0.10, 0.14  # shares of the way from one long dash to the next
CHORDS = 4  # straight pieces of a long dash
THIN, RADIUS = 1.0, 1.6  # widths in pixels
EQUAL = 1e-9  # ratios closer to 1 than this have no pitch circles inside each other


def body_marks(model: Model, places: Layout, outline: Outlines) -> Iterator[tuple[int, Floats, float]]:
    """Yield body, arms (lines, 2, 3) from its centre of gravity, world, and width of what is drawn on it."""
    for number, link in enumerate(model.links):
        one, other = places.end_bodies[number].tolist()
        if isinstance(link, Gear) and GROUND not in (one, other):
            yield from _gear_marks(link, (one, other), places, model.motion)
    if model.motion is Motion.PLANE:
        for body, shape in enumerate(outline.shapes):
            if shape == "disc":
                radius = float((outline.high[body] - outline.low[body])[:2].mean()) / 2
                yield body, np.array([[[0.0, 0.0, 0.0], [0.0, radius, 0.0]]]), RADIUS


def _gear_marks(
    gear: Gear, pair: tuple[int, int], places: Layout, motion: Motion
) -> Iterator[tuple[int, Floats, float]]:
    axis = np.array([0.0, 0.0, 1.0])
    if motion is Motion.SPACE:
        axis = np.array(gear.axis or (1.0, 0.0, 0.0), dtype=float)
    step = places.centres[pair[1]] - places.centres[pair[0]]
    step = step - axis * (step @ axis) / (axis @ axis)
    distance = float(np.linalg.norm(step))
    ratio = gear_ratio(gear)
    radii = None if ratio is None else pitch_radii(float(ratio), distance)
    if radii is None or distance == 0:
        return
    along = step / distance
    across = np.cross(axis / np.linalg.norm(axis), along)
    for body, radius in zip(pair, radii, strict=True):
        yield body, radius * _chain_circle(along, across), THIN
        yield body, np.array([[np.zeros(3), radius * across]]), RADIUS


def pitch_radii(ratio: float, distance: float) -> tuple[float, float] | None:
    """Share the distance of two axes between the pitch radii of ``from`` and ``to``.

    Parameters
    ----------
    ratio : float
        Rotation of ``to`` over ``from``: negative outside each other, positive one inside the other.
    distance : float

    Returns
    -------
    pair of float, or None
        None where no circles roll on each other: inside each other at a ratio of 1.

    >>> pitch_radii(-4.0, 10.0), pitch_radii(3.0, 10.0)
    ((8.0, 2.0), (15.0, 5.0))
    """
    share = abs(ratio)
    if ratio < 0:
        return distance * share / (1 + share), distance / (1 + share)
    if abs(share - 1) < EQUAL:
        return None
    return distance * share / abs(share - 1), distance / abs(share - 1)


def _chain_circle(along: Floats, across: Floats) -> Floats:
    """Return a circle of radius 1 as a chain line (lines, 2, 3)."""
    period = 2 * np.pi / DASHES
    starts = period * np.arange(DASHES)[:, None]
    long = starts + period * LONG * np.linspace(0, 1, CHORDS + 1)
    short = starts + period * (LONG + GAP + SHORT * np.array([0.0, 1.0]))
    pieces = [np.stack([turns[:, :-1], turns[:, 1:]], axis=2).reshape(-1, 2) for turns in (long, short)]
    turns = np.vstack(pieces)[..., None]
    circle: Floats = np.cos(turns) * along + np.sin(turns) * across
    return circle
