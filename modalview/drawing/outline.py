"""How large and in which shape each body is drawn."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.drawing.layout import Layout
from modalview.drawing.primitives import Floats
from modalview.drawing.view import View, Viewpoint
from modalview.model.gears import gear_ratio
from modalview.model.parts import Body, Gear, InertiaTensor, Model, Motion

Truths = npt.NDArray[np.bool_]

# Sizes in pixels of a body that nothing else gives a size.
WIDTH, HEIGHT = 148.0, 58.0
LEAST = 24.0  # never thinner than this
PAD = 22.0  # from the outermost attachment to the side of the body
POINT = 5.0  # half side of a massless junction
DISC_HALF_WIDTH = 13.0
DISC_CORNERS = 28
# How deep a body of a space model is drawn, which no file tells: to where links hold it on both sides and a
# quarter more, else by the share of its width; the same in all views.
DEPTH, BEYOND = 0.6, 1.25
THIN = 0.15  # of its width: links closer to the middle than this do not tell how deep it is
# Bodies up to here are compared each with each; of more, only a few pixels of each are to be seen anyway.
COMPARED = 2000
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
    low, high = _extents(model, places, view, shapes, grow)
    for number, body in enumerate(model.bodies):
        _as_drawn(body, model.motion, low[number], high[number])
    if model.motion is Motion.SPACE:
        _deepen(places, shapes, low, high)
    return Outlines(low, high, shapes)


def faces(outline: Outlines, number: int, motion: Motion, viewpoint: Viewpoint = Viewpoint.TURNED) -> Floats:
    """Return the visible faces (faces, corners, 3) of a body relative to its centre, world."""
    low, high = outline.low[number], outline.high[number]
    if motion is Motion.SPACE:
        seen = _box_faces(low, high)
        return seen if viewpoint is Viewpoint.TURNED else seen[_SEEN[viewpoint]][None]
    if outline.shapes[number] == "disc" and motion is Motion.PLANE:
        turns = np.linspace(0, 2 * np.pi, DISC_CORNERS, endpoint=False)
        radius = (high - low)[:2].mean() / 2
        return np.stack([radius * np.cos(turns), radius * np.sin(turns), 0 * turns], axis=1)[None]
    x0, y0, x1, y1 = low[0], low[1], high[0], high[1]
    return np.array([[[x0, y0, 0], [x1, y0, 0], [x1, y1, 0], [x0, y1, 0]]])


def _deepen(places: Layout, shapes: tuple[str, ...], low: Floats, high: Floats) -> None:
    """Give bodies of a space model their extent along y."""
    least, most, _ = _arms(places)
    wide = high[:, 0] - low[:, 0]
    told = np.minimum(-least[:, 1], most[:, 1]) > THIN * wide
    boxes = np.array([shape != "point" for shape in shapes], dtype=bool)
    usual = np.where(told, 0.0, DEPTH / 2 * wide)
    low[boxes, 1] = np.minimum(-usual, BEYOND * least[:, 1])[boxes]
    high[boxes, 1] = np.maximum(usual, BEYOND * most[:, 1])[boxes]


# Which of the faces below a straight view shows.
_SEEN = {Viewpoint.TOP: 0, Viewpoint.SIDE: 1, Viewpoint.FRONT: 2}


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


def _extents(
    model: Model, places: Layout, view: View, shapes: tuple[str, ...], grow: float
) -> tuple[Floats, Floats]:
    """Return the corners of all bodies: as preferred, widened to what is attached to them."""
    upright = 2 if model.motion is Motion.SPACE else 1
    scales = np.array([view.scale_x, view.scale_y, view.scale_y])
    half = _preferred(places, upright, scales, grow)
    low, high = -half, half.copy()
    least_reach, most_reach, attached = _arms(places)
    for axis in range(3):
        if axis == 2 and upright != 2:
            continue
        if axis == upright:
            limits = _upright(
                least_reach[:, axis], most_reach[:, axis], half[:, axis], LEAST * grow / 2 / scales[axis]
            )
        else:
            pad = PAD * grow / scales[axis]
            limits = (
                np.minimum(low[:, axis], least_reach[:, axis] - pad),
                np.maximum(high[:, axis], most_reach[:, axis] + pad),
            )
        low[attached, axis], high[attached, axis] = limits[0][attached], limits[1][attached]
    points = np.array([shape == "point" for shape in shapes], dtype=bool)
    low[points], high[points] = -POINT * grow / scales, POINT * grow / scales
    return low, high


def _arms(places: Layout) -> tuple[Floats, Floats, Truths]:
    """Return least and greatest arm of what is attached to each body (bodies, 3), and which hold anything."""
    count = len(places.centres)
    bodies = places.end_bodies.ravel()
    held = bodies >= 0
    bodies = bodies[held]
    arms = places.ends.reshape(-1, 3)[held] - places.centres[bodies]
    least, most = np.full((count, 3), np.inf), np.full((count, 3), -np.inf)
    np.minimum.at(least, bodies, arms)
    np.maximum.at(most, bodies, arms)
    attached = np.isfinite(least[:, 0])
    least[~attached], most[~attached] = 0.0, 0.0
    return least, most, attached


def _upright(least_reach: Floats, most_reach: Floats, half: Floats, least: float) -> tuple[Floats, Floats]:
    """Let a body end at its lowest and highest attachment; where one is missing, mirror the other."""
    below, above = -least_reach, most_reach
    low = np.where(below > least, below, np.where(above > least, above, half))
    high = np.where(above > least, above, np.where(below > least, below, half))
    return -low, high


def _preferred(places: Layout, upright: int, scales: Floats, grow: float) -> Floats:
    """Return half sizes (bodies, 3) that leave room for the neighbours and for the springs between rows."""
    count = len(places.centres)
    half = np.tile(np.array([WIDTH, HEIGHT, HEIGHT]) * grow / 2 / scales, (count, 1))
    if not count:
        return half
    if count > COMPARED:
        for axis, share in ((0, ROOM), (upright, ROOM_ABOVE)):
            half[:, axis] = np.minimum(half[:, axis], share * _nearest_levels(places.centres[:, axis]))
        return _short_of_springs(places, half, upright, LEAST / 2 / scales[upright] * grow)
    steps = np.abs(places.centres[:, None] - places.centres[None])
    abreast = steps[:, :, upright] < half[:, None, upright]
    for axis, near, share in ((0, abreast, ROOM), (upright, ~abreast, ROOM_ABOVE)):
        others = np.where(near & (steps[:, :, axis] > 0), steps[:, :, axis], np.inf).min(axis=1)
        half[:, axis] = np.minimum(half[:, axis], share * others)
    return _short_of_springs(places, half, upright, LEAST / 2 / scales[upright] * grow)


def _nearest_levels(places: Floats) -> Floats:
    """Return how far each place is from the nearest other level: what a row of a lattice leaves as room."""
    levels, which = np.unique(places, return_inverse=True)
    steps = np.concatenate([[np.inf], np.diff(levels), [np.inf]])
    return np.asarray(np.minimum(steps[:-1], steps[1:])[which])


def _short_of_springs(places: Layout, half: Floats, upright: int, least: float) -> Floats:
    """Return half sizes that leave room for the shortest spring at each body."""
    count = len(half)
    spans = np.abs(places.ends[:, 0, upright] - places.ends[:, 1, upright])
    shortest = np.full(count, np.inf)
    for side in (0, 1):
        counted = (spans > 0) & (places.end_bodies[:, side] >= 0)
        np.minimum.at(shortest, places.end_bodies[counted, side], spans[counted])
    half[:, upright] = np.minimum(half[:, upright], np.maximum(ROOM_ABOVE * shortest, least))
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
