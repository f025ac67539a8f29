"""The coordinate that a view of a space model does not show: kept, or that of the part drawn beside."""

from dataclasses import replace
from typing import Any

import numpy as np

from modalview.drawing.outline import DEPTH
from modalview.drawing.snap import hidden_axis, with_depth
from modalview.model.entries import decimal_of
from modalview.model.parts import Body, Motion

# Pixels of a link to the ground along the line of sight, where no ground is known yet.
STANDING = 60.0
# Two places closer than this are one, pixels.
ONE_PLACE = 8.0


def in_space(hand: Any) -> bool:
    """Whether there is a coordinate that is not seen."""
    return hand.model.motion is Motion.SPACE


def hidden(hand: Any) -> int:
    """Return the number of the axis that is not drawn in."""
    return hidden_axis(hand.geometry.view)


def deep(hand: Any, snapped: Any, depth: float) -> Any:
    """Return where a pointer was drawn to (drawing.snap.Snapped), at another depth in metres."""
    world = with_depth(hand.geometry.view, snapped.world, depth).round(9)
    return replace(snapped, world=world) if snapped.world[hidden(hand)] != depth else snapped


def on_body(hand: Any, body: str, snapped: Any, kept: float | None = None) -> Any:
    """Return a place on a body at the depth of a point it stands on, else a kept one, else of its middle."""
    if not in_space(hand) or snapped.on_point:
        return snapped
    return deep(hand, snapped, float(hand.middle_of(body)[hidden(hand)]) if kept is None else kept)


# Sizes as seen and as the file has them: width along x and height along z, never the depth along y.


def model_size(axes: tuple[int, int], seen: tuple[float, float]) -> tuple[float, float]:
    """Return width and height of a body that is seen so wide and high along two axes, in metres."""
    if axes == (1, 2):
        return seen[0] / DEPTH, seen[1]
    return (seen[0], DEPTH * seen[0]) if axes == (0, 1) else seen


def seen_size(axes: tuple[int, int], wide: float, high: float) -> tuple[float, float]:
    """Return what is seen of a body drawn with the pointer: from above it is as deep as the rule says."""
    return (wide, DEPTH * wide) if axes == (0, 1) else (wide, high)


# Links along the line of sight


def along_sight(hand: Any, body: str, snapped: Any) -> tuple[Any, str | None, Any]:
    """Return the ends of a link that goes from a body straight away from the eye.

    Returns
    -------
    place on the body, body it ends on or None for the ground, place there
        World points (3,), in whole millionths of a metre.
    """
    view = hand.geometry.view
    axis, away = hidden(hand), -float(np.sign(view.towards[hidden(hand)]))
    start = np.array(snapped.world)
    if not snapped.on_point:
        start[axis] = float(hand.middle_of(body)[axis]) + away * _half(hand, body, axis)
    behind = _behind(hand, body, snapped, away)
    stop = start.copy()
    if behind is not None:
        stop[axis] = float(hand.middle_of(behind)[axis]) - away * _half(hand, behind, axis)
    else:
        stop[axis] = start[axis] + away * hand.gridded(STANDING / view.scale_x, 0)
        if axis == 2:
            stop[axis] = max(_lower_grounds(hand, float(start[axis])), default=stop[axis])
    return start.round(6), behind, stop.round(6)


def _half(hand: Any, body: str, axis: int) -> float:
    """Return how far below its middle a body ends: as drawn, along z; else links meet its middle."""
    part: Body = hand.part(body)
    height = part.drawn.height if part.drawn is not None else None
    return float(decimal_of(height.si) / 2) if axis == 2 and height is not None else 0.0


def _behind(hand: Any, body: str, snapped: Any, away: float) -> str | None:
    """Return the nearest body behind another one at a pixel."""
    geometry, axis = hand.geometry, hidden(hand)
    here = np.array([snapped.x, snapped.y])
    own = float(hand.middle_of(body)[axis])
    found = []
    for number, one in enumerate(geometry.model.bodies):
        x1, y1, x2, y2 = geometry.boxes[number]
        further = away * (float(geometry.places.centres[number][axis]) - own)
        if one.id != body and further > 0 and (here >= (x1, y1)).all() and (here <= (x2, y2)).all():
            found.append((further, one.id))
    return min(found)[1] if found else None


def _lower_grounds(hand: Any, height: float) -> list[float]:
    supports = [one.position[2].si for one in hand.model.supports if one.position is not None]
    return [level for level in supports if level < height]


# What is there already


def drawn_size(geometry: Any, part: str) -> tuple[list[float], tuple[float, float]]:
    """Return width and height of a body in metres, and the pixel of its middle."""
    number = next(at for at, body in enumerate(geometry.model.bodies) if body.id == part)
    sides = geometry.outline.high[number] - geometry.outline.low[number]
    x, y = geometry.points.rest[geometry.centres[number]].tolist()
    return [float(sides[0]), float(sides[2])], (x, y)


def of_end(hand: Any, link: str, side: str) -> tuple[str | None, float] | None:
    """Return the body of a link's end, and the depth of the end; None where nothing is hidden."""
    if not in_space(hand):
        return None
    geometry = hand.geometry
    number = next(at for at, one in enumerate(geometry.model.links) if one.id == link)
    which = ("from", "to").index(side)
    part = geometry.model.links[number]
    place = geometry.places.ends[number, which]
    return (part.from_, part.to)[which].body, float(place[hidden(hand)])
