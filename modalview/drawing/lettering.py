"""Texts and excitation arrows of a sheet, laid out once."""

from collections import defaultdict
from dataclasses import dataclass, replace

import numpy as np

from modalview.drawing.captions import body_lines, excitation_line, link_lines
from modalview.drawing.furniture import MARGIN, axes, title_size
from modalview.drawing.geometry import SheetGeometry
from modalview.drawing.labels import Board, Line, Rectangle, Spot, along, round_about
from modalview.drawing.layout import GROUND, point
from modalview.drawing.primitives import Floats, Role, Size, Text
from modalview.drawing.symbols import arrow, turning_arrow
from modalview.model.parts import Excitation, Motion

# Beyond this many links their texts would only cover each other.
MOST_LABELS = 120
MOST_ALIKE = 2  # more links of one text than this name it once
LINK_HALF = 9.0  # half the width that a symbol takes, pixels
SAMPLES = 8
ARROW = 44.0


@dataclass(slots=True)
class _Letters:
    labels: list[Text]
    body_labels: list[tuple[int, Text]]
    arrows: list[Floats]
    unlabelled: list[str]


def lettered(geometry: SheetGeometry) -> SheetGeometry:
    """Return the geometry with its labels and excitation arrows placed."""
    board = Board(geometry.width, geometry.height, geometry.text_scale)
    board.take(_taken(geometry))
    letters = _Letters([], [], [], [])
    _name_bodies(geometry, board, letters)
    _draw_excitations(geometry, board, letters)
    _name_links(geometry, board, letters)
    return replace(
        geometry,
        labels=tuple(letters.labels),
        body_labels=tuple(letters.body_labels),
        arrows=np.vstack(letters.arrows) if letters.arrows else np.zeros((0, 4)),
        unlabelled=tuple(letters.unlabelled),
    )


def _taken(geometry: SheetGeometry) -> Floats:
    width, height = title_size(geometry.text_scale)
    corner = [geometry.width - MARGIN - width - 4, 0.0, geometry.width, MARGIN + height + 4]
    taken = [np.array([corner]), axes(geometry.model.motion, geometry.text_scale)[1], geometry.boxes]
    taken += [_link_boxes(geometry), _foot_boxes(geometry)]
    if geometry.train is not None:
        dials, room = geometry.train.dials, geometry.train.dial_radius + 2
        taken.append(np.hstack([dials - room, dials + room]))
        x1, y1, x2, y2 = geometry.train.axes.T
        taken.append(np.stack([x1, y1 - 2, x2, y2 + 2], axis=1))
    return np.vstack(taken)


def _link_boxes(geometry: SheetGeometry) -> Floats:
    """Return small rectangles along every link, so that slanted ones take no more than their line."""
    ends = geometry.link_ends
    shares = np.linspace(0, 1, SAMPLES + 1)
    marks = ends[:, :1] + shares[None, :, None] * (ends[:, 1:] - ends[:, :1])
    low = np.minimum(marks[:, :-1], marks[:, 1:]) - LINK_HALF * geometry.grow
    high = np.maximum(marks[:, :-1], marks[:, 1:]) + LINK_HALF * geometry.grow
    boxes: Floats = np.concatenate([low, high], axis=2).reshape(-1, 4)
    return boxes


def _foot_boxes(geometry: SheetGeometry) -> Floats:
    feet = geometry.link_ends[geometry.link_bodies == GROUND]
    half = np.array([24.0, 12.0]) * geometry.grow
    return np.hstack([feet - half, feet + half])


def _name_bodies(geometry: SheetGeometry, board: Board, letters: _Letters) -> None:
    inner = Board(geometry.width, geometry.height, geometry.text_scale)
    marks = geometry.points.rest[geometry.centres]
    if geometry.model.motion in (Motion.PLANE, Motion.SPACE):
        inner.take(np.hstack([marks - 9.0, marks + 9.0]))
    inner.take(_link_boxes(geometry))
    for number, body in enumerate(geometry.model.bodies):
        name, *values = body_lines(geometry.model, body)
        lines = (Line(name, bold=True), *(Line(text, Role.MUTED) for text in values))
        x1, y1, x2, y2 = geometry.fronts[number].tolist()
        within = (x1 + 3, y1 + 1, x2 - x1 - 6, y2 - y1 - 2)
        placed = inner.place(lines, _inside(within, board.size(lines)), within=within)
        if not placed and geometry.train is not None:
            placed = board.place(lines, _under_disc(geometry, number))
        if not placed:
            box = geometry.boxes[number]
            around = (box[0], box[1], box[2] - box[0], box[3] - box[1])
            placed = board.place(lines, round_about(around))
        letters.body_labels += [(number, text) for text in placed]
        if not placed:
            letters.unlabelled.append(body.id)


def _inside(box: Rectangle, size: tuple[float, float]) -> list[Spot]:
    x, y, width, height = box
    middle = x + width / 2
    spots = []
    for share in (0.5, 0.3, 0.7, 0.15, 0.85):
        down = y + size[1] / 2 + share * max(height - size[1], 0.0)
        spots += [Spot(middle, down, 0, 0), Spot(x + 6, down, 1, 0), Spot(x + width - 6, down, -1, 0)]
    return spots


def _under_disc(geometry: SheetGeometry, number: int) -> list[Spot]:
    x1, y1, x2, y2 = geometry.boxes[number].tolist()
    middle = (x1 + x2) / 2
    room = 2 * geometry.train.dial_radius + 16 if geometry.train is not None else 0.0
    return [
        Spot(middle, y2 + 6, 0, 1),
        Spot(middle, y1 - room, 0, -1),
        Spot(middle, y2 + room, 0, 1),
        Spot(x2 + 6, y1 - 4, 1, -1),
    ]


def _name_links(geometry: SheetGeometry, board: Board, letters: _Letters) -> None:
    links = geometry.model.links
    if len(links) > MOST_LABELS:
        letters.unlabelled += [link.id for link in links]
        return
    texts = [link_lines(geometry.model, link) for link in links]
    alike: dict[tuple[str, ...], list[int]] = defaultdict(list)
    for number, text in enumerate(texts):
        alike[text[1:]].append(number)
    for number, (name, *values) in enumerate(texts):
        group = alike[tuple(values)]
        if len(group) > MOST_ALIKE:
            values = [] if number != group[0] else [*values, f"({len(group)} alike)"]
        lines = (
            Line(name, Role.MUTED, Size.SMALL if values else Size.NORMAL),
            *(Line(text, Role.INK, Size.SMALL) for text in values),
        )
        start, stop = geometry.link_ends[number]
        placed = board.place(lines, _beside(geometry, number, start, stop))
        letters.labels += placed
        if not placed:
            letters.unlabelled.append(links[number].id)


def _beside(geometry: SheetGeometry, number: int, start: Floats, stop: Floats) -> list[Spot]:
    spots = along(start, stop)
    if geometry.grow and np.hypot(*(stop - start)) < 2.5 * ARROW:  # a short one: out past the body beside it
        low, high = np.minimum(start, stop), np.maximum(start, stop)
        spots += round_about((low[0], low[1], high[0] - low[0], high[1] - low[1]), 14.0)
    for body in geometry.link_bodies[number]:
        if body == GROUND:
            continue
        x1, _, x2, _ = geometry.boxes[body].tolist()
        for share in (0.5, 0.2, 0.8):
            y = float(start[1] + share * (stop[1] - start[1]))
            spots += [
                Spot(x2 + 8, y, 1, 0),
                Spot(x1 - 8, y, -1, 0),
                Spot(x2 + 34, y, 1, 0),
                Spot(x1 - 34, y, -1, 0),
            ]
    return spots


def _draw_excitations(geometry: SheetGeometry, board: Board, letters: _Letters) -> None:
    """Draw one arrow per place and direction, with a line of text for every excitation there."""
    index = {body.id: number for number, body in enumerate(geometry.model.bodies)}
    groups: dict[tuple[int, tuple[float, ...], str], list[str]] = defaultdict(list)
    for machine in geometry.model.machines:
        for excitation in machine.excitations:
            place = excitation.at
            if place is not None and place.body in index:
                arm = tuple(point(place.offset).tolist())
                groups[index[place.body], arm, _turning(excitation)].append(
                    excitation_line(machine, excitation)
                )
    for (body, arm, direction), texts in groups.items():
        _draw_excitation(geometry, board, letters, (body, arm, direction), texts)


def _turning(excitation: Excitation) -> str:
    """Return "rotating" or "torque" for what turns, else the direction as text."""
    magnitude = excitation.magnitude
    if magnitude is not None and magnitude.torque is not None:
        return "torque"
    if magnitude is not None and (magnitude.grade is not None or magnitude.unbalance is not None):
        return "rotating"
    return excitation.direction if isinstance(excitation.direction, str) else "force"


def _draw_excitation(
    geometry: SheetGeometry,
    board: Board,
    letters: _Letters,
    place: tuple[int, tuple[float, ...], str],
    texts: list[str],
) -> None:
    body, arm, direction = place
    x1, y1, x2, y2 = geometry.boxes[body].tolist()
    centre = geometry.points.rest[geometry.centres[body]] + geometry.view.steps(np.array(arm))
    middle = (x1 + x2) / 2
    lines = tuple(Line(text, Role.WARN) for text in texts[:3])
    if any(arm):  # a point of the body: the arrow is at the point, the text beside the body
        segments = _at_point(geometry, centre, direction)
        spots = [Spot(float(centre[0]), y1 - 8, 0, -1), *round_about((x1, y1, x2 - x1, y2 - y1), 8.0)]
    elif geometry.train is not None:
        segments = turning_arrow((middle, y2 - 8.0), 22.0, np.radians(205), np.radians(130))
        spots = [Spot(middle, y2 + 34 + step, 0, 1) for step in range(0, 90, 8)]
        board.take(np.array([[middle - 24, y2, middle + 24, y2 + 16]]))
    elif direction == "rotating":
        half = min(0.36 * (x2 - x1), 60.0) * geometry.grow
        radius = half / np.sin(np.radians(60))
        segments = turning_arrow((middle, y1 - 12 + radius * 0.5), radius, np.radians(150), np.radians(-120))
        spots = [
            Spot(middle, y1 - 18 - radius * 0.5, 0, -1),
            *round_about((x1, y1 - 40, x2 - x1, y2 - y1 + 40), 8.0),
        ]
    else:
        step = _step(geometry, direction) * ARROW
        start = np.array([[middle, y1 - 6 - max(step[1], 0.0)]]) - np.array([[0.0, min(step[1], 0.0)]]) * 0
        segments = arrow(start, step[None])
        spots = [Spot(middle + 8, y1 - 6 - ARROW / 2, 1, 0), Spot(middle, y1 - 14 - ARROW, 0, -1)]
        spots += round_about((x1, y1, x2 - x1, y2 - y1), 8.0)
    letters.arrows.append(segments)
    letters.labels += board.place(lines, spots)
    low = segments.reshape(-1, 2).min(axis=0)
    high = segments.reshape(-1, 2).max(axis=0)
    board.take(np.array([[*low, *high]]))


def _at_point(geometry: SheetGeometry, centre: Floats, direction: str) -> Floats:
    x, y = centre.tolist()
    cross = np.array([[x - 4, y, x + 4, y], [x, y - 4, x, y + 4]])
    if direction in ("rotating", "torque"):
        return np.vstack([cross, turning_arrow((x, y), 16.0, np.radians(200), np.radians(-270))])
    return np.vstack([cross, arrow(centre[None], _step(geometry, direction)[None] * ARROW)])


def _step(geometry: SheetGeometry, direction: str) -> Floats:
    """Return the unit step on the sheet of a named direction; up where it has no name."""
    sign = -1.0 if direction.startswith("-") else 1.0
    name = direction.lstrip("+-")
    upright = "z" if geometry.model.motion is Motion.SPACE else "y"
    world = np.eye(3)["xyz".index(name if name in ("x", "y", "z") else upright)]
    step = geometry.view.steps(world) * sign
    unit: Floats = step / (np.hypot(*step) or 1.0)
    return unit
