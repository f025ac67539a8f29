"""What lies along the line of sight of a straight view: links seen end-on, arrows to and from the eye."""

import numpy as np

from modalview.drawing.primitives import Circles, Floats, Item, Lines, Role
from modalview.drawing.symbols import Symbol, outline

RING = 7.5  # radius of a link seen end-on, pixels
EYE = 7.0  # radius of an arrow along the line of sight
_DIAMOND = np.array([[0.0, -1.0], [1.0, 0.0], [0.0, 1.0], [-1.0, 0.0]])
_SQUARE = np.array([[-1.0, -1.0], [1.0, -1.0], [1.0, 1.0], [-1.0, 1.0]])
# Strokes of the hatching at the lower side of a ring whose link stands on the ground, in radii.
_HATCH = np.array([[x, 1.3, x - 0.55, 1.85] for x in (-0.7, 0.0, 0.7, 1.4)] + [[-1.25, 1.3, 1.4, 1.3]])


def end_on_items(symbol: Symbol, ends: Floats, grounded: Floats, grow: float = 1.0) -> tuple[Item, ...]:
    """Return links seen end-on: a ring with what the link is in it, hatched where it stands on the ground.

    Parameters
    ----------
    ends : array (n, 2, 2)
        Pixels; both at one place at rest, apart where a body moves.
    grounded : array (n, 2) of bool
        Which ends stand on the ground.
    grow : float
    """
    radius = RING * grow
    moving = np.where(grounded[:, :1], ends[:, 1], ends[:, 0])
    still = np.where(grounded[:, :1], ends[:, 0], ends[:, 1])
    feet = still[grounded.any(axis=1)]
    hatch = (feet[:, None] + _HATCH.reshape(-1, 2) * radius).reshape(-1, 4)
    lead = np.hstack([moving, still])[np.hypot(*(moving - still).T) > 1.0]
    width = max(1.4 * grow, 1.0)
    items: list[Item] = [
        Lines(hatch, Role.INK, max(1.2 * grow, 0.8)),
        Lines(lead, Role.INK, width),
        Circles(moving, radius, Role.INK, Role.PAPER, width),
    ]
    return *items, *_inside(symbol, moving, radius, width)


def _inside(symbol: Symbol, at: Floats, radius: float, width: float) -> tuple[Item, ...]:
    """Return what tells kinds of links apart: a coil, a rod, a diamond, a bar."""
    match symbol:
        case Symbol.SPRING:
            return (Circles(at, 0.45 * radius, Role.INK, None, width),)
        case Symbol.MOUNT:
            diamond = outline(at[:, None] + 0.62 * radius * _DIAMOND)
            return (Lines(diamond, Role.INK, width),)
        case Symbol.BEAM:
            return (Lines(outline(at[:, None] + 0.45 * radius * _SQUARE), Role.INK, 2.0 * width),)
        case Symbol.SHAFT:
            return (Circles(at, 0.7 * radius, Role.INK, None, width), _dots(at, 0.15 * radius))
        case Symbol.RIGID:
            return (_dots(at, 0.55 * radius),)
        case _:
            return (_dots(at, 0.28 * radius),)


def _dots(at: Floats, radius: float) -> Circles:
    return Circles(at, max(radius, 1.2), Role.INK, Role.INK)


def sight_segments(at: tuple[float, float], *, towards: bool, radius: float = EYE) -> Floats:
    """Return an arrow along the line of sight (n, 4): in a circle its point, or the cross of its feathers."""
    x, y = at
    turns = np.linspace(0.0, 2 * np.pi, 25)
    rim = np.stack([x + radius * np.cos(turns), y + radius * np.sin(turns)], axis=1)
    ring = np.hstack([rim[:-1], rim[1:]])
    reach = 0.7 * radius
    if not towards:
        cross = [[x - reach, y - reach, x + reach, y + reach], [x - reach, y + reach, x + reach, y - reach]]
        return np.vstack([ring, cross])
    dot = outline(np.array([[x, y]])[:, None] + 0.14 * radius * _DIAMOND)
    return np.vstack([ring, dot, [[x - 0.14 * radius, y, x + 0.14 * radius, y]]])
