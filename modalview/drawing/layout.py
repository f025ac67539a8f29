"""Where bodies and the ends of links are in the drawing's world, before any scale.

World coordinates are metres along the model's axes where the model gives positions. Models that move
along or about one axis may leave them out; then whole numbers stand for them and only the order counts.
"""

from collections import defaultdict, deque
from dataclasses import dataclass

import numpy as np

from modalview.drawing.pauses import in_pieces
from modalview.drawing.primitives import Floats
from modalview.model.parts import End, Gear, Link, Model, Motion, Point

GROUND = -1


@dataclass(frozen=True, slots=True, eq=False)
class Layout:
    """Places of a model's parts.

    Parameters
    ----------
    centres : array (bodies, 3)
        Centres of gravity.
    ends : array (links, 2, 3)
        From and to of every link.
    end_bodies : array (links, 2) of int
        Index of the body that the end moves with; GROUND for none.
    lanes : array (links,)
        Sideways place among links between the same two parts: 0 alone, else ..., -0.5, 0.5, ...
    stretchable : bool
        Whether both directions may be scaled apart, because distances carry no meaning.
    """

    centres: Floats
    ends: Floats
    end_bodies: np.ndarray[tuple[int, int], np.dtype[np.int_]]
    lanes: Floats
    stretchable: bool


def layout(model: Model) -> Layout:
    """Place bodies and link ends; parts without a position are placed by what they are linked to."""
    index = {body.id: number for number, body in enumerate(model.bodies)}
    end_bodies = np.array(
        [[index.get(end.body or "", GROUND) for end in (link.from_, link.to)] for link in model.links],
        dtype=int,
    ).reshape(-1, 2)
    centres, given = _centres(model, end_bodies)
    lanes = _lanes(model.links)
    place = {Motion.SINGLE_AXIS: _upright_ends, Motion.SHAFT_TRAIN: _axial_ends}.get(model.motion, _true_ends)
    ends = place(model, centres, end_bodies)
    no_sizes = all(body.drawn is None for body in model.bodies)
    upright = model.motion is Motion.SINGLE_AXIS and (no_sizes or not given)
    return Layout(centres, ends, end_bodies, lanes, upright or model.motion is Motion.SHAFT_TRAIN)


def point(place: Point | None) -> Floats:
    """Return three coordinates; missing ones are 0."""
    found = np.zeros(3)
    for axis, entry in enumerate(place or ()):
        found[axis] = entry.si
    return found


def _centres(model: Model, end_bodies: np.ndarray[tuple[int, int], np.dtype[np.int_]]) -> tuple[Floats, bool]:
    centres = np.array([point(body.position) for body in model.bodies]).reshape(-1, 3)
    missing = any(body.position is None for body in model.bodies)
    if model.motion is Motion.SINGLE_AXIS and (missing or not _apart(centres)):
        return _stacked(len(model.bodies), end_bodies), False
    if model.motion is Motion.SHAFT_TRAIN and (
        missing or not _apart(centres) or not _gears_abreast(model, centres)
    ):
        return _along(model, end_bodies), False
    return centres, True


def _apart(centres: Floats) -> bool:
    # Sorted as plain numbers: unique rows are found by sorting records, which holds the interpreter.
    ordered = centres[np.lexsort(centres.T)]
    return bool((ordered[1:] != ordered[:-1]).any(axis=1).all())


def _gears_abreast(model: Model, centres: Floats) -> bool:
    """Whether the two bodies of every gear stand side by side on parallel shafts."""
    index = {body.id: number for number, body in enumerate(model.bodies)}
    for link in model.links:
        if isinstance(link, Gear) and link.from_.body in index and link.to.body in index:
            step = centres[index[link.from_.body]] - centres[index[link.to.body]]
            if abs(step[0]) > 0.1 * abs(step[1]):
                return False
    return True


def _stacked(count: int, end_bodies: np.ndarray[tuple[int, int], np.dtype[np.int_]]) -> Floats:
    """Put bodies in rows by their number of links from the ground, each row in the order of its carriers."""
    neighbours = _neighbours(end_bodies)
    level = _levels(count, neighbours)
    centres = np.zeros((count, 3))
    for row in range(1, max(level.values(), default=0) + 1):
        members = [body for body in range(count) if level[body] == row]
        carriers = {
            body: [centres[other, 0] for other in neighbours[body] if other >= 0 and level[other] < row]
            for body in members
        }
        members.sort(key=lambda body: float(np.mean(carriers[body] or [0.0])))
        middle = float(np.mean([x for body in members for x in carriers[body]] or [0.0]))
        for place, body in enumerate(members):
            centres[body] = (middle + place - (len(members) - 1) / 2, row, 0)
    return centres


def _neighbours(end_bodies: np.ndarray[tuple[int, int], np.dtype[np.int_]]) -> dict[int, list[int]]:
    neighbours: dict[int, list[int]] = defaultdict(list)
    for one, other in end_bodies.tolist():
        neighbours[one].append(other)
        neighbours[other].append(one)
    return neighbours


def _levels(count: int, neighbours: dict[int, list[int]]) -> dict[int, int]:
    level = {GROUND: 0}
    starts = [GROUND, *range(count)]
    for start in starts:
        if start != GROUND and start in level:
            continue
        level.setdefault(start, 1)
        queue = deque([start])
        while queue:
            here = queue.popleft()
            for other in neighbours[here]:
                if other not in level:
                    level[other] = level[here] + 1
                    queue.append(other)
    return level


def _along(model: Model, end_bodies: np.ndarray[tuple[int, int], np.dtype[np.int_]]) -> Floats:
    """Put bodies along their shafts; a gear leads to a parallel shaft below at the same place."""
    steps: dict[int, list[tuple[int, tuple[float, float]]]] = defaultdict(list)
    for link, (one, other) in zip(model.links, end_bodies.tolist(), strict=True):
        if GROUND in (one, other) or one == other:
            continue
        dx, dy = (0.0, -1.0) if isinstance(link, Gear) else (1.0, 0.0)
        steps[one].append((other, (dx, dy)))
        steps[other].append((one, (-dx, -dy)))
    centres = np.full((len(model.bodies), 3), np.nan)
    taken: set[tuple[float, float]] = set()
    for start in range(len(model.bodies)):
        if np.isnan(centres[start, 0]):
            lowest = min((y for _, y in taken), default=1.0)
            _walk(start, (0.0, lowest - 1.0), steps, centres, taken)
    return centres


def _walk(
    start: int,
    origin: tuple[float, float],
    steps: dict[int, list[tuple[int, tuple[float, float]]]],
    centres: Floats,
    taken: set[tuple[float, float]],
) -> None:
    queue = deque([start])
    centres[start] = (*origin, 0)
    taken.add(origin)
    while queue:
        here = queue.popleft()
        for other, (dx, dy) in steps[here]:
            if not np.isnan(centres[other, 0]):
                continue
            x, y = float(centres[here, 0]) + dx, float(centres[here, 1]) + dy
            while (x, y) in taken:  # a branch: one row further from the first
                y += dy or -1.0
            centres[other] = (x, y, 0)
            taken.add((x, y))
            queue.append(other)


def _lanes(links: tuple[Link, ...]) -> Floats:
    """Spread links between the same ends sideways about the middle."""
    groups: dict[object, list[int]] = defaultdict(list)
    for number, link in enumerate(in_pieces(links)):
        ends = sorted((_end_key(link.from_), _end_key(link.to)))
        groups[tuple(ends)].append(number)
    lanes = np.zeros(len(links))
    for members in groups.values():
        lanes[members] = np.arange(len(members)) - (len(members) - 1) / 2
    return lanes


def _end_key(end: End) -> tuple[str, ...]:
    offset = tuple(f"{entry.si:.6g}" for entry in end.offset or ())
    return ("body", end.body, *offset) if end.body else ("ground",)


def _true_ends(
    model: Model, centres: Floats, end_bodies: np.ndarray[tuple[int, int], np.dtype[np.int_]]
) -> Floats:
    supports = {support.id: support for support in model.supports}
    ends = np.zeros((len(model.links), 2, 3))
    for number, link in enumerate(in_pieces(model.links)):
        for side, end in enumerate((link.from_, link.to)):
            body = end_bodies[number, side]
            support = supports.get(end.support or "")
            if body != GROUND:
                ends[number, side] = centres[body] + point(end.offset)
            elif support is not None and support.position is not None:
                ends[number, side] = point(support.position)
        for side in (0, 1):
            end = (link.from_, link.to)[side]
            support = supports.get(end.support or "")
            if end_bodies[number, side] == GROUND and (support is None or support.position is None):
                ends[number, side] = ends[number, 1 - side]
    return ends


def _upright_ends(
    model: Model, centres: Floats, end_bodies: np.ndarray[tuple[int, int], np.dtype[np.int_]]
) -> Floats:
    """Stand every link upright under the body with fewer links; its foot at the support's height."""
    counts = np.bincount(end_bodies[end_bodies >= 0], minlength=len(centres))
    heights = {s.id: point(s.position)[1] for s in model.supports if s.position is not None}
    below = _height_of_ground(centres)
    ends = np.zeros((len(model.links), 2, 3))
    for number, link in enumerate(in_pieces(model.links)):
        pair = end_bodies[number]
        bodies = [int(body) for body in pair if body != GROUND]
        lead = min(bodies, key=lambda body: counts[body], default=None)
        offsets = [
            point(end.offset)[0] for end in (link.from_, link.to) if end.body and _is(model, end, lead)
        ]
        x = 0.0 if lead is None else float(centres[lead, 0]) + (offsets[0] if offsets else 0.0)
        abreast = len(bodies) == 2 and centres[bodies[0], 1] == centres[bodies[1], 1]
        for side, end in enumerate((link.from_, link.to)):
            body = int(pair[side])
            if body != GROUND:
                ends[number, side] = centres[body] if abreast else (x, centres[body, 1], 0)
            else:
                height = heights.get(end.support or "", below)
                ends[number, side] = (x, min(height, below) if lead is None else height, 0)
    return _feet_below(ends, end_bodies, below)


def _is(model: Model, end: End, lead: int | None) -> bool:
    return lead is not None and model.bodies[lead].id == end.body


def _height_of_ground(centres: Floats) -> float:
    if not len(centres):
        return 0.0
    heights = np.unique(centres[:, 1])
    step = float(np.min(np.diff(heights))) if len(heights) > 1 else 1.0
    return float(heights[0]) - step


def _feet_below(
    ends: Floats, end_bodies: np.ndarray[tuple[int, int], np.dtype[np.int_]], below: float
) -> Floats:
    """Move feet that stand at the height of their body down to the ground."""
    for number, pair in enumerate(end_bodies.tolist()):
        for side in (0, 1):
            if pair[side] == GROUND and ends[number, side, 1] == ends[number, 1 - side, 1]:
                ends[number, side, 1] = below
    return ends


def _axial_ends(
    model: Model, centres: Floats, end_bodies: np.ndarray[tuple[int, int], np.dtype[np.int_]]
) -> Floats:
    """Lead every link to the axis of its bodies; the ground is beyond the nearer end of the train."""
    ends = np.zeros((len(model.links), 2, 3))
    middle = float(np.mean(centres[:, 0])) if len(centres) else 0.0
    for number, pair in enumerate(end_bodies.tolist()):
        for side in (0, 1):
            body, other = pair[side], pair[1 - side]
            if body != GROUND:
                ends[number, side] = centres[body]
            elif other != GROUND:
                outward = 1.0 if centres[other, 0] > middle else -1.0
                ends[number, side] = centres[other] + (0.8 * outward, 0, 0)
    return ends
