"""How large and in which shape each body is drawn."""

from dataclasses import dataclass

import numpy as np

from modalview.drawing.layout import Layout
from modalview.drawing.primitives import Floats
from modalview.drawing.view import View
from modalview.model.gears import gear_ratio
from modalview.model.parts import Body, Gear, InertiaTensor, Model, Motion

# Sizes in pixels of a body that nothing else gives a size.
WIDTH, HEIGHT = 148.0, 58.0
LEAST = 24.0  # never thinner than this
PAD = 22.0  # from the outermost attachment to the side of the body
POINT = 5.0  # half side of a massless junction
DISC_HALF_WIDTH = 13.0
DISC_CORNERS = 28
ROOM = 0.40  # share of the way to a neighbour's centre that a body may fill, along a row
ROOM_ABOVE = 0.27  # the same across rows, where springs stand between


@dataclass(frozen=True, slots=True, eq=False)
class Outlines:
    """Bodies' sizes and faces.

    Parameters
    ----------
    low, high : array (bodies, 3)
        Corners relative to the centre of gravity, world.
    shapes : tuple of str
        "box", "disc" or "point".
    """

    low: Floats
    high: Floats
    shapes: tuple[str, ...]


def outlines(model: Model, places: Layout, view: View, grow: float = 1.0) -> Outlines:
    """Size every body: as drawn, else round its attachments, else by the room between its neighbours.

    Parameters
    ----------
    grow : float
        Times the sizes in pixels; below 1 for small pictures.
    """
    shapes = tuple(_shape(body) for body in model.bodies)
    if model.motion is Motion.SHAFT_TRAIN:
        high = _discs(model, places, view, shapes, grow)
        return Outlines(-high, high, shapes)
    low, high = np.zeros((2, len(shapes), 3))
    for number, body in enumerate(model.bodies):
        low[number], high[number] = _extent(model, number, places, view, shapes[number], grow)
        _as_drawn(body, model.motion, low[number], high[number])
    return Outlines(low, high, shapes)


def faces(outline: Outlines, number: int, motion: Motion) -> Floats:
    """Return the visible faces (faces, corners, 3) of a body relative to its centre, world."""
    low, high = outline.low[number], outline.high[number]
    if motion is Motion.SPACE:
        return _box_faces(low, high)
    if outline.shapes[number] == "disc" and motion is Motion.PLANE:
        turns = np.linspace(0, 2 * np.pi, DISC_CORNERS, endpoint=False)
        radius = (high - low)[:2].mean() / 2
        return np.stack([radius * np.cos(turns), radius * np.sin(turns), 0 * turns], axis=1)[None]
    x0, y0, x1, y1 = low[0], low[1], high[0], high[1]
    return np.array([[[x0, y0, 0], [x1, y0, 0], [x1, y1, 0], [x0, y1, 0]]])


def _box_faces(low: Floats, high: Floats) -> Floats:
    """Return the faces seen from the camera: top, front (least y) and right-hand end (most x)."""
    (x0, y0, z0), (x1, y1, z1) = low, high
    return np.array(
        [
            [[x0, y0, z1], [x1, y0, z1], [x1, y1, z1], [x0, y1, z1]],
            [[x1, y0, z0], [x1, y1, z0], [x1, y1, z1], [x1, y0, z1]],
            [[x0, y0, z0], [x1, y0, z0], [x1, y0, z1], [x0, y0, z1]],
        ]
    )


def _shape(body: Body) -> str:
    if body.drawn is not None and body.drawn.shape in ("box", "disc", "point"):
        return body.drawn.shape
    massless = body.mass is None or body.mass.si == 0
    return "point" if massless and body.inertia is None else "box"


def _as_drawn(body: Body, motion: Motion, low: Floats, high: Floats) -> None:
    if body.drawn is None:
        return
    upright = 2 if motion is Motion.SPACE else 1
    for axis, length in ((0, body.drawn.width), (upright, body.drawn.height)):
        if length is not None:
            low[axis], high[axis] = -length.si / 2, length.si / 2


def _extent(
    model: Model, number: int, places: Layout, view: View, shape: str, grow: float
) -> tuple[Floats, Floats]:
    upright = 2 if model.motion is Motion.SPACE else 1
    scales = np.array([view.scale_x, view.scale_y, view.scale_y])
    if shape == "point":
        half = POINT * grow / scales
        return -half, half
    arms = places.ends[places.end_bodies == number] - places.centres[number]
    half = _preferred(number, places, upright, scales, grow)
    low, high = -half, half.copy()
    least = LEAST * grow / 2 / scales
    for axis in range(3):
        if not len(arms) or ((axis == 2) != (upright == 2) and axis == 2):
            continue
        reach = arms[:, axis]
        if axis == upright:
            low[axis], high[axis] = _upright(reach, half[axis], least[axis])
        else:
            pad = PAD * grow / scales[axis]
            low[axis] = min(low[axis], reach.min() - pad)
            high[axis] = max(high[axis], reach.max() + pad)
    return low, high


def _upright(reach: Floats, half: float, least: float) -> tuple[float, float]:
    """Let a body end at its lowest and highest attachment; where one is missing, mirror the other."""
    below, above = -float(reach.min()), float(reach.max())
    if below > least and above > least:
        return -below, above
    if below > least:
        return -below, below
    return (-above, above) if above > least else (-half, half)


def _preferred(number: int, places: Layout, upright: int, scales: Floats, grow: float) -> Floats:
    """Return half sizes that leave room for the neighbours and for the springs between rows."""
    half = np.array([WIDTH, HEIGHT, HEIGHT]) * grow / 2 / scales
    if upright == 2:
        half[1] = 0.6 * half[0]
    steps = np.abs(np.delete(places.centres, number, axis=0) - places.centres[number])
    row = steps[:, upright] < half[upright]
    for axis, near, share in ((0, row, ROOM), (upright, ~row, ROOM_ABOVE)):
        others = steps[near, axis]
        others = others[others > 0]
        if len(others):
            half[axis] = min(half[axis], share * others.min())
    links = places.ends[(places.end_bodies == number).any(axis=1)]
    spans = np.abs(links[:, 0, upright] - links[:, 1, upright])
    spans = spans[spans > 0]
    if len(spans):
        half[upright] = min(half[upright], max(ROOM_ABOVE * spans.min(), LEAST / 2 / scales[upright] * grow))
    return half


def _discs(model: Model, places: Layout, view: View, shapes: tuple[str, ...], grow: float) -> Floats:
    """Return half sizes of discs seen from the side: heavier ones taller, gears in touch."""
    inertia = np.array([_inertia(body) for body in model.bodies])
    top = inertia.max(initial=0.0)
    share = (inertia / top if top > 0 else np.ones(len(inertia))) ** 0.2  # a fifth power: J of similar discs
    rows = np.unique(places.centres[:, 1])
    room = float(np.min(np.diff(rows))) * view.scale_y if len(rows) > 1 else np.inf
    tall = min(64.0 * grow, 0.42 * room)
    half = np.zeros((len(shapes), 3))
    half[:, 0] = DISC_HALF_WIDTH * grow / view.scale_x
    half[:, 1] = np.maximum(tall * share, LEAST * grow / 2) / view.scale_y
    for number, body in enumerate(model.bodies):
        _as_drawn(body, model.motion, -half[number], half[number])
    for number, shape in enumerate(shapes):
        if shape == "point":
            half[number, :2] = POINT * grow / view.scale_x, POINT * grow / view.scale_y
    _mesh(model, places, half)
    return half


def _inertia(body: Body) -> float:
    if body.inertia is None or isinstance(body.inertia, InertiaTensor):
        return 0.0
    return body.inertia.si


def _mesh(model: Model, places: Layout, half: Floats) -> None:
    """Share the distance of two gears' axes between their radii by the ratio."""
    for number, link in enumerate(model.links):
        one, other = places.end_bodies[number]
        if not isinstance(link, Gear) or min(one, other) < 0:
            continue
        distance = abs(places.centres[one, 1] - places.centres[other, 1])
        share = abs(float(gear_ratio(link) or 1))
        half[one, 1] = distance * share / (1 + share)
        half[other, 1] = distance / (1 + share)
