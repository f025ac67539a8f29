"""The model on the sheet as arrays of points, each fixed to a body, so that motion is one product."""

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from modalview.drawing.layout import GROUND, Layout, layout
from modalview.drawing.linkends import LinkEnds, link_ends
from modalview.drawing.marks import body_marks
from modalview.drawing.outline import Outlines, faces, outlines
from modalview.drawing.pauses import in_pieces
from modalview.drawing.primitives import Floats, Text
from modalview.drawing.symbols import Symbol
from modalview.drawing.view import View, Viewpoint, fitted, projection
from modalview.model.parts import Gear, Model, Motion

Indices = np.ndarray[tuple[int, ...], np.dtype[np.int_]]

# Pixels between neighbours of a model whose distances carry no meaning.
LARGEST_STEP = (270.0, 175.0)
LARGEST_ROW = 110.0  # the same between parallel shafts
TWIST = 24.0  # pixels of the largest rotation beside a shaft
JOINED_AT_ONCE = 2000  # arrays
ROUNDS = 2  # of fitting: sizes follow the scale, the scale follows the sizes


@dataclass(frozen=True, slots=True, eq=False)
class Points:
    """Points of the sheet and the bodies they move with.

    Parameters
    ----------
    rest : array (points, 2)
        Pixels.
    arms : array (points, 3)
        From the body's centre of gravity, world.
    bodies : array (points,) of int
        GROUND for points that stand still.
    """

    rest: Floats
    arms: Floats
    bodies: Indices


@dataclass(frozen=True, slots=True, eq=False)
class LinkGroup:
    """Links of one symbol.

    Parameters
    ----------
    symbol : Symbol
    ends : array (n, 2) of int
        Indices of points.
    on_top : bool
        Drawn over the bodies.
    joint : bool
        Between two touching bodies.
    end_on : bool
        Along the line of sight of a straight view.
    spans : array (n, 3) or None
        From end to end, world; of beams, whose shape follows the rotation of their ends.
    """

    symbol: Symbol
    ends: Indices
    on_top: bool
    joint: bool
    spans: Floats | None = None
    end_on: bool = False


@dataclass(frozen=True, slots=True, eq=False)
class Mark:
    """Lines on one body.

    Parameters
    ----------
    lines : array (n, 2) of int
        Indices of the points each line joins.
    width : float
        Pixels.
    """

    lines: Indices
    width: float


@dataclass(frozen=True, slots=True, eq=False)
class Train:
    """What shows rotation in a shaft train, where the discs are seen from the side.

    Parameters
    ----------
    axes : array (n, 4)
        Centre lines of the shafts, pixels.
    pairs : array (n, 2) of int
        Bodies joined by a shaft: their twist is joined by a line.
    dials : array (bodies, 2)
        Centres of the end views, pixels.
    dial_radius : float
    """

    axes: Floats
    pairs: Indices
    dials: Floats
    dial_radius: float


@dataclass(frozen=True, slots=True, eq=False)
class SheetGeometry:
    """Everything about a model's sheet that does not change while it moves.

    Parameters
    ----------
    model : Model
    width, height, text_scale : float
        Sheet in pixels, and times the size of texts.
    grow : float
        Times the sizes of symbols; below 1 in a small picture.
    view : View
    outline : Outlines
        Of the bodies, world.
    places : Layout
        Of bodies and ends of links, world.
    points : Points
    faces : tuple of array (n, corners) of int
        Indices of points, in the order of painting.
    links : tuple of LinkGroup
    centres : array (bodies,) of int
        Points of the centres of gravity.
    boxes : array (bodies, 4)
        x1, y1, x2, y2 of every body at rest, pixels.
    fronts : array (bodies, 4)
        The same of the face that carries the name.
    link_ends : array (links, 2, 2)
        Pixels, in the order of the model.
    link_bodies : array (links, 2) of int
        Bodies of the ends; GROUND for none.
    links_on_top, links_end_on : array (links,) of bool
        Links drawn over the bodies; those along the line of sight.
    train : Train or None
        In a shaft train.
    marks : tuple of Mark
        Lines drawn on bodies, which move and turn with them: pitch circles, radii of discs.
    reach : float
        Pixels of the largest motion at amplitude 1.
    labels, body_labels : tuple of Text, tuple of (body, Text)
        Laid out texts; those of bodies move with them.
    body_arrows : tuple of (body, array (n, 4))
        Excitations, pixels; they move with their bodies.
    leaders : array (n, 4)
        Lines from texts to the links they belong to, where they stand apart.
    unlabelled : tuple of str
        Ids of parts whose label found no room.
    """

    model: Model
    width: float
    height: float
    text_scale: float
    grow: float
    view: View
    outline: Outlines
    places: Layout
    points: Points
    faces: tuple[Indices, ...]
    links: tuple[LinkGroup, ...]
    centres: Indices
    boxes: Floats
    fronts: Floats
    link_ends: Floats
    link_bodies: Indices
    links_on_top: np.ndarray[tuple[int], np.dtype[np.bool_]]
    links_end_on: np.ndarray[tuple[int], np.dtype[np.bool_]]
    train: Train | None
    marks: tuple[Mark, ...]
    reach: float
    labels: tuple[Text, ...] = ()
    body_labels: tuple[tuple[int, Text], ...] = ()
    body_arrows: tuple[tuple[int, Floats], ...] = ()
    leaders: Floats | None = None
    unlabelled: tuple[str, ...] = ()


class _Collector:
    """Gathers points and hands out their indices."""

    def __init__(self) -> None:
        self.rest: list[Floats] = []
        self.arms: list[Floats] = []
        self.bodies: list[Indices] = []
        self.count = 0

    def add(self, rest: Floats, arms: Floats, bodies: Indices) -> Indices:
        first = self.count
        self.rest.append(rest.reshape(-1, 2))
        self.arms.append(arms.reshape(-1, 3))
        self.bodies.append(np.asarray(bodies, dtype=int).reshape(-1))
        self.count += len(self.bodies[-1])
        return np.arange(first, self.count)

    def points(self) -> Points:
        return Points(_joined(self.rest), _joined(self.arms), _joined(self.bodies))


def _joined(arrays: list[Any]) -> Any:
    """Put arrays one below the other, in steps; a long list is empty afterwards.

    One call over the corners of 100,000 bodies held the interpreter lock for a fifth of a second.
    """
    while len(arrays) > JOINED_AT_ONCE:
        starts = range(0, len(arrays), JOINED_AT_ONCE)
        blocks = [np.concatenate(arrays[start : start + JOINED_AT_ONCE]) for start in starts]
        _let_go(arrays)
        arrays = blocks
    return np.concatenate(arrays)


def _let_go(items: list[Any]) -> None:
    """Empty a list in steps: all at once held the interpreter lock as long."""
    while items:
        del items[-JOINED_AT_ONCE:]


def bare_geometry(
    model: Model,
    size: tuple[float, float],
    area: tuple[float, float, float, float],
    view: View | Viewpoint = Viewpoint.TURNED,
    grow: float = 1.0,
    text_scale: float = 1.0,
) -> SheetGeometry:
    """Return a model's points, faces and links, without texts.

    Parameters
    ----------
    model : Model
    size : width and height of the sheet, pixels
    area : x, y, width, height, pixels
        Where the model is fitted in.
    view : View or Viewpoint
        A viewpoint fits the model in.
    grow, text_scale : float
    """
    places = layout(model)
    view, outline = _fit(model, places, area, view, grow)
    collector = _Collector()
    faces_of = [
        faces(outline, number, model.motion, view.viewpoint) for number in in_pieces(range(len(model.bodies)))
    ]
    boxes, fronts = _boxes(places, view, faces_of)
    face_points = _collect_faces(collector, places, view, faces_of)
    centres = collector.add(
        view.to_pixels(places.centres), np.zeros_like(places.centres), np.arange(len(places.centres))
    )
    _let_go(faces_of)
    links = link_ends(model, places, view, boxes, grow, straight=view.straight)
    groups = _collect_links(collector, places, view, links, model.motion)
    marks = _collect_marks(collector, model, places, view, outline)
    train = _train(model, places, view, boxes, grow) if model.motion is Motion.SHAFT_TRAIN else None
    return SheetGeometry(
        model=model,
        width=size[0],
        height=size[1],
        text_scale=text_scale,
        grow=grow,
        view=view,
        outline=outline,
        places=places,
        points=collector.points(),
        faces=face_points,
        links=groups,
        centres=centres,
        boxes=boxes,
        fronts=fronts,
        link_ends=links.ends,
        link_bodies=places.end_bodies,
        links_on_top=links.on_top,
        links_end_on=links.end_on,
        train=train,
        marks=marks,
        reach=_reach(links, train, grow),
    )


def _fit(
    model: Model,
    places: Layout,
    area: tuple[float, float, float, float],
    view: View | Viewpoint,
    grow: float,
) -> tuple[View, Outlines]:
    if isinstance(view, View):
        return view, outlines(model, places, view, grow)
    viewpoint = view if model.motion is Motion.SPACE else Viewpoint.TURNED
    matrix = projection(model.motion, viewpoint)
    world = np.concatenate([places.centres, places.ends.reshape(-1, 3)])
    largest = _largest(places, model.motion, grow) if places.stretchable else (np.inf, np.inf)
    x, y, width, height = area
    inner = (x + width * 0.12, y + height * 0.1, width * 0.76, height * 0.8)
    found = fitted(world @ matrix.T, matrix, inner, stretchable=places.stretchable, largest=largest)
    outline = outlines(model, places, found, grow)
    for _ in range(ROUNDS):
        corners = [world]
        corners += [
            places.centres[number] + faces(outline, number, model.motion, viewpoint).reshape(-1, 3)
            for number in in_pieces(range(len(model.bodies)))
        ]
        flat = _joined(corners) @ matrix.T
        found = fitted(flat, matrix, area, stretchable=places.stretchable, largest=largest)
        outline = outlines(model, places, found, grow)
    return replace(found, viewpoint=viewpoint), outline


def _largest(places: Layout, motion: Motion, grow: float) -> tuple[float, float]:
    steps_allowed = (LARGEST_STEP[0], LARGEST_ROW if motion is Motion.SHAFT_TRAIN else LARGEST_STEP[1])
    largest = []
    for axis in (0, 1):
        levels = np.unique(np.concatenate([places.centres[:, axis], places.ends[..., axis].ravel()]))
        steps = np.diff(levels)
        largest.append(steps_allowed[axis] * grow / float(steps.min()) if len(steps) else np.inf)
    return largest[0], largest[1]


def _boxes(places: Layout, view: View, faces_of: list[Floats]) -> tuple[Floats, Floats]:
    boxes, fronts = np.zeros((2, len(faces_of), 4))
    for number, body_faces in enumerate(in_pieces(faces_of)):
        corners = view.to_pixels(places.centres[number] + body_faces)
        flat = corners.reshape(-1, 2)
        boxes[number] = (*flat.min(axis=0), *flat.max(axis=0))
        front = corners[-1]
        if len(body_faces) == 1:
            fronts[number] = boxes[number]
        else:  # the largest upright rectangle inside the slanted front face
            top, bottom = front[2:, 1].max(), front[:2, 1].min()
            fronts[number] = (front[:, 0].min(), top, front[:, 0].max(), bottom)
    return boxes, fronts


def _collect_faces(
    collector: _Collector, places: Layout, view: View, faces_of: list[Floats]
) -> tuple[Indices, ...]:
    """Add the faces' corners, the bodies furthest from the eye first."""
    towards = view.towards
    depth = places.centres @ towards
    if len(faces_of) and len(faces_of[0]) == 1:  # what is seen of a body is its nearest face
        depth = depth + np.array([face.reshape(-1, 3)[0] for face in faces_of]) @ towards
    order = np.argsort(depth, kind="stable").tolist()
    runs: list[list[Indices]] = []
    for number in in_pieces(order):
        arms = faces_of[number]
        rest = view.to_pixels(places.centres[number] + arms)
        indices = collector.add(rest, arms, np.full(arms.shape[:2], number)).reshape(arms.shape[:2])
        if runs and runs[-1][0].shape[1] == indices.shape[1]:
            runs[-1].append(indices)
        else:
            runs.append([indices])
    return tuple(_joined(run) for run in runs)


# On top, joint, end-on.
_KINDS_OF_GROUP = (
    (False, False, False),
    (True, False, False),
    (True, True, False),
    (True, False, True),
)


def _collect_links(
    collector: _Collector, places: Layout, view: View, links: LinkEnds, motion: Motion
) -> tuple[LinkGroup, ...]:
    if not len(links.ends) or not len(places.centres):
        return ()
    arms = places.ends - np.where(
        (places.end_bodies != GROUND)[..., None], places.centres[places.end_bodies], places.ends
    )
    if motion is not Motion.SPACE:  # the seen end, not the true one, stays on the edge of its body
        arms[..., :2] += (links.ends - view.to_pixels(places.ends)) / np.array([view.scale_x, -view.scale_y])
    indices = collector.add(links.ends, arms, places.end_bodies).reshape(-1, 2)
    groups = []
    for symbol in Symbol:
        same = np.array([found is symbol for found in links.symbols])
        for on_top, joint, end_on in _KINDS_OF_GROUP:
            alike = (links.on_top == on_top) & (links.joints == joint) & (links.end_on == end_on)
            chosen = np.flatnonzero(same & alike)
            if len(chosen):
                bends = symbol is Symbol.BEAM and not end_on
                spans = _spans(places, view, links, chosen, motion) if bends else None
                groups.append(LinkGroup(symbol, indices[chosen], on_top, joint, spans, end_on))
    return tuple(groups)


def _spans(places: Layout, view: View, links: LinkEnds, chosen: Indices, motion: Motion) -> Floats:
    """Return what beams span (n, 3), world: in a plane as it is seen, between the edges of the bodies."""
    if motion is Motion.SPACE:
        return np.asarray(places.ends[chosen, 1] - places.ends[chosen, 0])
    seen = links.ends[chosen, 1] - links.ends[chosen, 0]
    return np.hstack([seen / np.array([view.scale_x, -view.scale_y]), np.zeros((len(chosen), 1))])


def _collect_marks(
    collector: _Collector, model: Model, places: Layout, view: View, outline: Outlines
) -> tuple[Mark, ...]:
    if model.motion not in (Motion.PLANE, Motion.SPACE):
        return ()
    marks = []
    for body, arms, width in body_marks(model, places, outline):
        rest = view.to_pixels(places.centres[body] + arms.reshape(-1, 3))
        indices = collector.add(rest, arms, np.full(arms.shape[:2], body))
        marks.append(Mark(indices.reshape(-1, 2), width))
    return tuple(marks)


def _train(model: Model, places: Layout, view: View, boxes: Floats, grow: float) -> Train:
    centres = view.to_pixels(places.centres)
    axes = []
    for row in np.unique(centres[:, 1]) if len(centres) else []:
        on_row = centres[centres[:, 1] == row, 0]
        axes.append([on_row.min() - 34 * grow, row, on_row.max() + 34 * grow, row])
    pairs = [
        pair
        for link, pair in zip(model.links, places.end_bodies.tolist(), strict=True)
        if GROUND not in pair and not isinstance(link, Gear)
    ]
    radius = 17.0 * grow
    dials = np.stack([centres[:, 0], boxes[:, 1] - radius - 10 * grow], axis=1)
    below = _driven(model, places)  # the lower gear of a pair has no room above it
    dials[below, 1] = boxes[below, 3] + radius + 10 * grow
    return Train(np.array(axes).reshape(-1, 4), np.array(pairs, dtype=int).reshape(-1, 2), dials, radius)


def _driven(model: Model, places: Layout) -> list[int]:
    """Return the lower body of every gear pair."""
    lower = []
    for link, pair in zip(model.links, places.end_bodies.tolist(), strict=True):
        if isinstance(link, Gear) and GROUND not in pair:
            lower.append(min(pair, key=lambda body: places.centres[body, 1]))
    return lower


def _reach(links: LinkEnds, train: Train | None, grow: float) -> float:
    """Return pixels of the largest motion: readable, and short of turning springs inside out."""
    if train is not None:
        return TWIST * grow
    long = ~links.joints & ~links.end_on
    lengths = np.hypot(*(links.ends[long, 1] - links.ends[long, 0]).T)
    return float(np.clip(0.42 * lengths.min(initial=70.0 * grow), 9.0 * grow, 28.0 * grow))
