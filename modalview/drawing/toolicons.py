"""Small pictures of what each tool draws, made of the sheet's own symbols."""

import numpy as np

from modalview.drawing.primitives import Box, Circles, Drawing, Item, Lines, Polygons, Role
from modalview.drawing.symbols import TEMPLATES, Symbol, arrow, between, ground

SIZE = 24.0
_MIDDLE = 14.0
_SLANT = np.array([[[5.0, 23.0], [23.0, 5.0]]])
_UPRIGHT = np.array([[[_MIDDLE, 3.0], [_MIDDLE, 25.0]]])


def tool_icon(name: str) -> Drawing:
    """Return the picture of a tool, SIZE pixels square."""
    return Drawing(_items(name), (2.0, 2.0, SIZE, SIZE))


def _items(name: str) -> tuple[Item, ...]:
    made = _OWN.get(name)
    if made is not None:
        return made
    template, width = TEMPLATES[Symbol(name)]
    thin = 0.62 if name in ("spring", "damper", "mount") else 0.8
    ends = _UPRIGHT if name in ("spring", "damper", "mount") else _SLANT
    items: tuple[Item, ...] = (Lines(between(template, ends, thin), Role.INK, min(width, 2.6)),)
    if name == "rigid link":
        items += (Circles(ends.reshape(-1, 2), 2.6, Role.INK, Role.INK),)
    return items


def _quartered(x: float, y: float, radius: float) -> tuple[Item, ...]:
    turns = np.linspace(0, np.pi / 2, 7)
    quarter = np.vstack([[[0.0, 0.0]], np.stack([np.cos(turns), -np.sin(turns)], axis=1)]) * radius
    centre = np.array([[x, y]])
    return (
        Circles(centre, radius, Role.INK, Role.PAPER, 1.0),
        Polygons(np.stack([centre + quarter, centre - quarter]), None, Role.INK),
    )


_POINTER = np.array(
    [[[8.0, 4.0], [8.0, 21.0], [12.2, 17.4], [15.0, 23.6], [17.6, 22.4], [14.9, 16.4], [20.2, 16.0]]]
)
_OWN: dict[str, tuple[Item, ...]] = {
    "choose": (Polygons(_POINTER, Role.INK, Role.PAPER, 1.4),),
    "mass": (Box(4.0, 9.0, 20.0, 11.0, 0.0, Role.INK, Role.PAPER, 1.6),),
    "body": (
        Box(4.0, 6.0, 20.0, 16.0, 0.0, Role.INK, Role.PAPER, 1.6),
        *_quartered(_MIDDLE, _MIDDLE, 4.0),
    ),
    "disc": (
        Box(11.0, 4.0, 6.0, 20.0, 0.0, Role.INK, Role.PAPER, 1.6),
        Lines(np.array([[3.0, 14.0, 9.0, 14.0], [19.0, 14.0, 25.0, 14.0]]), Role.INK, 1.2),
    ),
    "junction": (Circles(np.array([[_MIDDLE, _MIDDLE]]), 4.0, Role.INK, Role.PAPER, 1.6),),
    "gear": (
        Circles(np.array([[9.0, 17.0]]), 7.0, Role.INK, Role.PAPER, 1.5),
        Circles(np.array([[19.4, 9.4]]), 5.0, Role.INK, Role.PAPER, 1.5),
    ),
    "support": (Lines(ground(np.array([[_MIDDLE, 11.0]]), np.array([[0.0, 1.0]]), 10.0), Role.INK, 1.3),),
    "force": (Lines(arrow(np.array([[_MIDDLE, 25.0]]), np.array([[0.0, -21.0]])), Role.WARN, 2.0),),
}
