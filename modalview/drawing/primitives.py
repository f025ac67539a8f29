"""What a picture consists of: lines, shapes and texts in pixels, coloured by role."""

from dataclasses import dataclass
from enum import StrEnum

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]


class Role(StrEnum):
    """What a line or a text stands for; a palette gives it a colour."""

    INK = "ink"
    MUTED = "muted"
    GHOST = "ghost"
    ACCENT = "accent"
    BAD = "bad"
    GOOD = "good"
    WARN = "warn"
    PAPER = "paper"
    GRID = "grid"


class Size(StrEnum):
    """Size of a text by its part in the picture."""

    SMALL = "small"
    NORMAL = "normal"


class Anchor(StrEnum):
    """Which point of a text's line its position is; always the middle of its height."""

    LEFT = "left"
    MIDDLE = "middle"
    RIGHT = "right"


@dataclass(frozen=True, slots=True, eq=False)
class Lines:
    """Straight segments.

    Parameters
    ----------
    segments : array (n, 4)
        x1, y1, x2, y2 in pixels.
    role : Role
    width : float
        Pixels.
    opacity : float
        0..1.
    """

    segments: Floats
    role: Role = Role.INK
    width: float = 1.3
    opacity: float = 1.0


@dataclass(frozen=True, slots=True, eq=False)
class Polygons:
    """Closed outlines with the same number of corners, filled, stroked or both.

    Parameters
    ----------
    points : array (n, corners, 2)
        Pixels.
    stroke, fill : Role or None
    width : float
        Of the stroke, pixels.
    opacity : float
        Of the fill, 0..1.
    """

    points: Floats
    stroke: Role | None = Role.INK
    fill: Role | None = Role.PAPER
    width: float = 1.6
    opacity: float = 1.0


@dataclass(frozen=True, slots=True, eq=False)
class Box:
    """A rectangle along the axes with rounded corners; pixels."""

    x: float
    y: float
    width: float
    height: float
    radius: float = 0.0
    stroke: Role | None = Role.INK
    fill: Role | None = Role.PAPER
    line: float = 1.3
    opacity: float = 1.0


@dataclass(frozen=True, slots=True, eq=False)
class Circles:
    """Circles of one radius.

    Parameters
    ----------
    centres : array (n, 2)
        Pixels.
    radius : float
        Pixels.
    """

    centres: Floats
    radius: float
    stroke: Role | None = Role.INK
    fill: Role | None = Role.PAPER
    width: float = 1.3
    opacity: float = 1.0


@dataclass(frozen=True, slots=True)
class Text:
    """One line of text; (x, y) is its anchor at the middle of its height, pixels."""

    x: float
    y: float
    text: str
    role: Role = Role.INK
    size: Size = Size.NORMAL
    anchor: Anchor = Anchor.LEFT
    bold: bool = False


Item = Lines | Polygons | Box | Circles | Text


@dataclass(frozen=True, slots=True, eq=False)
class Drawing:
    """A picture.

    Parameters
    ----------
    items : tuple of Item
        Painted in this order.
    bounds : tuple of four float
        x, y, width, height of the picture, pixels.
    text_scale : float
        All texts were laid out for, and are painted at, this multiple of their size.
    """

    items: tuple[Item, ...]
    bounds: tuple[float, float, float, float]
    text_scale: float = 1.0
