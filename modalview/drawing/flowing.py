"""A legend that flows: samples with their names in rows, as many as the width asks for."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from modalview.drawing.primitives import Box, Circles, Item, Lines, Polygons, Role, Size, Text
from modalview.drawing.textsize import line_height, text_width

SAMPLE = 24.0  # pixels of a sample across
_EDGE, _GAP = 8.0, 6.0


@dataclass(frozen=True, slots=True)
class Sample:
    """A name, and what it names drawn about the point (0, 0) at its left."""

    text: str
    items: tuple[Item, ...]


def flowing(samples: Sequence[Sample], width: float, y: float, text_scale: float) -> tuple[list[Item], float]:
    """Return samples and names from a height on, and the height of the last row; pixels."""
    x, step = _EDGE, line_height(Size.SMALL, text_scale=text_scale)
    items: list[Item] = []
    for one in samples:
        wide = SAMPLE + _GAP + text_width(one.text, Size.SMALL, text_scale=text_scale)
        if x > _EDGE and x + wide > width - _EDGE:
            x, y = _EDGE, y + step
        items += (_moved(item, x, y) for item in one.items)
        items.append(Text(x + SAMPLE + _GAP, y, one.text, Role.INK, Size.SMALL))
        x += wide + 2 * _EDGE
    return items, y


def _moved(item: Item, x: float, y: float) -> Item:
    match item:
        case Lines():
            return replace(item, segments=item.segments + np.array([x, y, x, y]))
        case Polygons():
            return replace(item, points=item.points + np.array([x, y]))
        case Circles():
            return replace(item, centres=item.centres + np.array([x, y]))
        case Box():
            return replace(item, x=item.x + x, y=item.y + y)
    raise TypeError(f"a sample holds no {type(item).__name__}")
