"""Arrows of the excitations: round for what turns, straight for a force; one for every place on a body."""

from collections import defaultdict
from dataclasses import dataclass

import numpy as np

from modalview.drawing.captions import excitation_line
from modalview.drawing.endon import sight_segments
from modalview.drawing.geometry import SheetGeometry
from modalview.drawing.labels import Spot, round_about
from modalview.drawing.layout import point
from modalview.drawing.primitives import Floats
from modalview.drawing.symbols import arrow, turning_arrow
from modalview.model.parts import Excitation, Model, Motion

END_ON = 0.1  # of an arrow: where less than this is seen it points to or from the eye
LENGTH = 40.0  # pixels of a straight arrow
MOST_LINES = 4  # of text at one place


@dataclass(frozen=True, slots=True, eq=False)
class Push:
    """The excitations at one place.

    Parameters
    ----------
    body : int
    on_body : bool
        Whether the arrow is at a place on the body, not beside it.
    segments : array (n, 4)
        The arrow.
    box : array (1, 4)
        x1, y1, x2, y2 that it takes.
    texts : tuple of str
    spots : tuple of Spot
        Where the texts may stand, best first.
    near : int
        How many of the spots are by the arrow itself; the others are about the body.
    """

    body: int
    on_body: bool
    segments: Floats
    box: Floats
    texts: tuple[str, ...]
    spots: tuple[Spot, ...]
    near: int


def lines_above(model: Model) -> int:
    """Return the largest number of excitations at one body, as lines of text."""
    at = [e.at.body for machine in model.machines for e in machine.excitations if e.at is not None]
    return min(max((at.count(body) for body in at), default=0), MOST_LINES)


def pushes(geometry: SheetGeometry) -> tuple[Push, ...]:
    """Return the model's excitations that act at a body, gathered by place."""
    index = {body.id: number for number, body in enumerate(geometry.model.bodies)}
    groups: dict[tuple[int, tuple[float, ...]], list[tuple[Excitation, str]]] = defaultdict(list)
    for machine in geometry.model.machines:
        for excitation in machine.excitations:
            place = excitation.at
            if place is not None and place.body in index:
                key = index[place.body], tuple(point(place.offset).tolist())
                groups[key].append((excitation, excitation_line(excitation)))
    return tuple(
        _push(geometry, body, np.array(arm), _way([excitation for excitation, _ in group]), _texts(group))
        for (body, arm), group in groups.items()
    )


def _texts(group: list[tuple[Excitation, str]]) -> tuple[str, ...]:
    texts = [text for _, text in group]
    if len(texts) <= MOST_LINES:
        return tuple(texts)
    return (*texts[: MOST_LINES - 1], f"and {len(texts) - MOST_LINES + 1} more")


def _way(excitations: list[Excitation]) -> str | Floats:
    """Return "rotating" where any of them turns, else the first one's direction."""
    for excitation in excitations:
        size = excitation.magnitude
        if excitation.direction == "rotating" or (
            size is not None and any(entry is not None for entry in (size.grade, size.unbalance, size.torque))
        ):
            return "rotating"
    first = excitations[0].direction
    return first if isinstance(first, str) else np.array(first or (), dtype=float)


def _push(geometry: SheetGeometry, body: int, arm: Floats, way: str | Floats, texts: tuple[str, ...]) -> Push:
    x1, y1, x2, y2 = geometry.boxes[body].tolist()
    middle = (x1 + x2) / 2
    around = round_about((x1, y1, x2 - x1, y2 - y1), 8.0)
    turning = _turns(way)
    step = np.zeros(2) if turning else _step(geometry, way)
    sighted = not turning and not step.any()  # along the line of sight of a straight view
    on_body = bool(arm.any()) or sighted or (geometry.model.motion is Motion.SPACE and turning)
    if geometry.train is not None:
        segments = turning_arrow((middle, y2 - 8.0), 22.0, np.radians(205), np.radians(130))
        spots = [Spot(middle, y2 + step, 0, 1) for step in range(22, 160, 8)]
        spots += [Spot(middle, y1 - step, 0, -1) for step in range(8, 160, 8)] + around
    elif on_body:  # a place on the body: the arrow is there, the text beside the body
        here = geometry.points.rest[geometry.centres[body]] + geometry.view.steps(arm)
        if sighted:
            towards = float(_direction(geometry, way) @ geometry.view.towards) > 0
            x, y = here.tolist()
            segments = sight_segments((x, y if arm.any() else y - 18.0), towards=towards)
        else:
            segments = _at_place(here, None if turning else step)
            segments = segments if arm.any() else segments[2:]  # the centre of gravity has its own mark
        spots = [Spot(float(here[0]), y1 - 8, 0, -1), Spot(middle, y1 - 22, 0, -1), *around]
    elif turning:
        half = min(0.36 * (x2 - x1), 46.0)
        radius = half / np.sin(np.radians(60))
        segments = turning_arrow((middle, y1 - 12 + radius / 2), radius, np.radians(150), np.radians(-120))
        spots = [Spot(middle, y1 - 18 - radius / 2, 0, -1), *around]
    else:
        step = step * LENGTH
        start = np.array([middle - step[0] / 2, y1 - 8 + min(0.0, -LENGTH if step[1] > 0 else 0.0)])
        segments = arrow(start[None], step[None])
        spots = [Spot(middle + 10, y1 - 30, 1, 0), Spot(middle - 10, y1 - 30, -1, 0)]
        spots += [Spot(middle, y1 - 16 - LENGTH, 0, -1), *around]
    ends = segments.reshape(-1, 2)
    return Push(
        body,
        on_body and geometry.train is None,
        segments,
        np.array([[*ends.min(axis=0), *ends.max(axis=0)]]),
        texts,
        tuple(spots),
        len(spots) - len(around),
    )


def _turns(way: str | Floats) -> bool:
    return isinstance(way, str) and way == "rotating"


def _at_place(here: Floats, step: Floats | None) -> Floats:
    x, y = here.tolist()
    cross = np.array([[x - 4, y, x + 4, y], [x, y - 4, x, y + 4]])
    if step is None:
        return np.vstack([cross, turning_arrow((x, y), 18.0, np.radians(200), np.radians(-270))])
    return np.vstack([cross, arrow(here[None], step[None] * LENGTH)])


def _step(geometry: SheetGeometry, way: str | Floats) -> Floats:
    """Return the unit step on the sheet along a direction; zero where that is along the line of sight."""
    world = _direction(geometry, way)
    step = geometry.view.steps(world)
    length = float(np.hypot(*step))
    if geometry.view.straight and length < END_ON * geometry.view.scale_x * float(np.linalg.norm(world)):
        return np.zeros(2)
    unit: Floats = step / (length or 1.0)
    return unit


def _direction(geometry: SheetGeometry, way: str | Floats) -> Floats:
    """Return a step of the world along a direction; upwards where there is none."""
    upright = 2 if geometry.model.motion is Motion.SPACE else 1
    world = np.eye(3)[upright]
    if not isinstance(way, str):
        if way.any():
            world = np.zeros(3)
            world[: len(way)] = way
    elif way.endswith("deg"):
        angle = np.radians(float(way.removesuffix("deg")))
        world = np.array([np.cos(angle), np.sin(angle), 0.0])
    elif way.lstrip("+-") in ("x", "y", "z"):
        world = np.eye(3)["xyz".index(way.lstrip("+-"))] * (-1.0 if way.startswith("-") else 1.0)
    return np.asarray(world)
