"""Where a pointer means to be: on a part, level with one, or on the grid of the paper."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.drawing.geometry import SheetGeometry
from modalview.drawing.layout import GROUND
from modalview.drawing.primitives import Floats
from modalview.drawing.view import View
from modalview.model.parts import Motion

# Pixels within which a pointer is drawn to a point, or to the height or side of one.
NEAR, LEVEL = 9.0, 6.0
# In space, pixels from a body within which what is drawn gets its depth.
BESIDE = 40.0
# The finest grid whose lines are so many pixels apart; steps are 1, 2 or 5 times a power of ten.
FINEST = 9.0
_STEPS = (1.0, 2.0, 5.0)
_NO_LINES = np.zeros((0, 4))
_KINDS = ("centre of gravity", "top", "underside", "left side", "right side", *("corner",) * 4, "attachment")
_BOX_MARKS = 9  # of the kinds above, those of a body's box
_ATTACHMENT = _BOX_MARKS
Indices = npt.NDArray[np.int_]


@dataclass(frozen=True, slots=True, eq=False)
class Snapped:
    """Where a pointer was drawn to.

    Parameters
    ----------
    world : array (3,)
        Metres along the model's axes.
    x, y : float
        Pixels.
    what : str
        What it stands on: "centre of gravity of motor", "level with pump", "grid"; "" where it is free.
    lines : array (n, 4)
        Alignments to be shown, pixels.
    on_point : bool
        Whether it stands on an end of a link of a space model, whose depth it has.
    """

    world: Floats
    x: float
    y: float
    what: str
    lines: Floats
    on_point: bool = False


@dataclass(frozen=True, slots=True)
class Wish:
    """How a pointer wants to be drawn.

    Parameters
    ----------
    leave_out : frozenset of str
        Bodies that move with the pointer: not to be drawn to themselves.
    free : bool
        Not at all.
    start : pair of float or None
        Pixels from where it must go straight across or straight up, whichever is nearer.
    """

    leave_out: frozenset[str] = frozenset()
    free: bool = False
    start: tuple[float, float] | None = None


def grid_step(pixels_per_metre: float) -> float:
    """Return the step of the grid in metres.

    >>> grid_step(150.0), grid_step(2000.0), grid_step(3.0)
    (0.1, 0.005, 5.0)
    """
    least = FINEST / max(pixels_per_metre, 1e-12)
    power = 10.0 ** np.floor(np.log10(least))
    step = next((factor * power for factor in _STEPS if factor * power >= least * (1 - 1e-9)), 10.0 * power)
    return float(f"{step:.6g}")


def world_at(view: View, x: float, y: float, through: Floats | None = None) -> Floats:
    """Return the world point under a pixel, on the plane of drawing through a point.

    Drawn is in the two axes that the view shows best; the third coordinate is that of ``through``.
    """
    base = np.zeros(3) if through is None else np.asarray(through, dtype=float)
    flat = np.array([(x - view.left) / view.scale_x, (view.top - y) / view.scale_y])
    across, up = drawn_axes(view)
    world = base.copy()
    world[[across, up]] = 0.0
    world[[across, up]] = np.linalg.solve(view.matrix[:, [across, up]], flat - view.matrix @ world)
    return np.asarray(world)


def drawn_axes(view: View) -> tuple[int, int]:
    """Return the numbers of the two axes that a view shows best: 0 is x, 1 is y, 2 is z."""
    pairs = ((0, 1), (0, 2), (1, 2))
    areas = [abs(float(np.linalg.det(view.matrix[:, list(pair)]))) for pair in pairs]
    return pairs[int(np.argmax(areas))]


def hidden_axis(view: View) -> int:
    """Return the number of the axis that is not drawn in: its coordinate is kept, the depth of a point."""
    return 3 - sum(drawn_axes(view))


def with_depth(view: View, world: Floats, depth: float) -> Floats:
    """Return the point at the same pixel with another depth, in metres."""
    through = np.zeros(3)
    through[hidden_axis(view)] = depth
    x, y = view.to_pixels(world[None])[0].tolist()
    return world_at(view, x, y, through)


def snapped(
    geometry: SheetGeometry, x: float, y: float, wish: Wish | None = None, through: Floats | None = None
) -> Snapped:
    """Draw a pointer to what is near: points of parts first, then their height or side, then the grid.

    Parameters
    ----------
    geometry : SheetGeometry
    x, y : float
        Pixels.
    wish : Wish or None
    through : array (3,) or None
        World point whose depth is kept, in space. None takes that of the part that it is drawn to or stands
        beside, else 0.
    """
    wish = wish or Wish()
    level: str | None = None
    if wish.start is not None:
        level = "x" if abs(x - wish.start[0]) >= abs(y - wish.start[1]) else "y"
        x, y = (x, wish.start[1]) if level == "x" else (wish.start[0], y)
    if wish.free:
        beside = through if through is not None else _beside(geometry, x, y, wish)
        return Snapped(world_at(geometry.view, x, y, beside), x, y, "", _NO_LINES)
    marks = _marks(geometry, wish)
    if len(marks.places) and level is None:
        off = np.hypot(marks.places[:, 0] - x, marks.places[:, 1] - y)
        best = int(np.argmin(off))
        if off[best] <= NEAR:
            there = marks.places[best].tolist()
            world = marks.world(geometry, best, through)
            on_point = bool(marks.kinds[best] == _ATTACHMENT or marks.bodies[best] == GROUND)
            name = marks.name(geometry, best)
            return Snapped(world, there[0], there[1], name, _NO_LINES, on_point and _space(geometry))
    return _aligned(geometry, (x, y), marks, level, (wish, through))


def _space(geometry: SheetGeometry) -> bool:
    return geometry.model.motion is Motion.SPACE


def _beside(geometry: SheetGeometry, x: float, y: float, wish: Wish) -> Floats | None:
    """Return the centre of gravity of the body at or close to a pixel, in space; None where there is none."""
    stays = np.array([body.id not in wish.leave_out for body in geometry.model.bodies], dtype=bool)
    if not _space(geometry) or not stays.any():
        return None
    off = np.maximum(geometry.boxes[:, :2] - [x, y], [x, y] - geometry.boxes[:, 2:]).clip(0.0)
    lengths = np.where(stays, np.hypot(off[:, 0], off[:, 1]), np.inf)
    nearest = int(np.argmin(lengths))
    return geometry.places.centres[nearest] if lengths[nearest] <= BESIDE else None


@dataclass(frozen=True, slots=True, eq=False)
class _Marks:
    """Points to be drawn to (n, 2), the kind of each, and its body; GROUND for a foot.

    ``ends`` are link and side of those that are an end of a link, else -1.
    """

    places: Floats
    kinds: Indices
    bodies: Indices
    ends: Indices

    def world(self, geometry: SheetGeometry, number: int, through: Floats | None) -> Floats:
        """Return the world point of one, at the depth of ``through`` if that is given."""
        x, y = self.places[number].tolist()
        link, side = self.ends[number].tolist()
        if not _space(geometry):
            return world_at(geometry.view, x, y, through)
        body = int(self.bodies[number])
        if link >= 0:
            own = geometry.places.ends[link, side]
        elif self.kinds[number] == 0:
            own = geometry.places.centres[body]
        else:
            own = world_at(geometry.view, x, y, geometry.places.centres[body])
        if through is None:
            return np.array(own)
        return with_depth(geometry.view, own, float(through[hidden_axis(geometry.view)]))

    def owner(self, geometry: SheetGeometry, number: int) -> str:
        if self.bodies[number] == GROUND:
            return "the ground"
        if self.kinds[number] == _ATTACHMENT:
            link = geometry.model.links[int(self.ends[number, 0])]
            return link.name or link.id
        part = geometry.model.bodies[int(self.bodies[number])]
        return part.name or part.id

    def name(self, geometry: SheetGeometry, number: int) -> str:
        owner = self.owner(geometry, number)
        return owner if self.bodies[number] == GROUND else f"{_KINDS[self.kinds[number]]} of {owner}"


def _marks(geometry: SheetGeometry, wish: Wish) -> _Marks:
    bodies = geometry.model.bodies
    stays = np.array([body.id not in wish.leave_out for body in bodies], dtype=bool)
    x1, y1, x2, y2 = geometry.boxes.T
    cx, cy = geometry.points.rest[geometry.centres].T
    spots = ((cx, cy), (cx, y1), (cx, y2), (x1, cy), (x2, cy), (x1, y1), (x1, y2), (x2, y1), (x2, y2))
    of_bodies = np.stack([np.stack(spot, axis=1) for spot in spots], axis=1)[stays]
    numbers = np.flatnonzero(stays)
    places = [of_bodies.reshape(-1, 2)]
    kinds = [np.tile(np.arange(len(spots)), len(numbers))]
    owners = [np.repeat(numbers, len(spots))]
    ends = [np.full((len(owners[0]), 2), -1)]
    if len(geometry.link_ends):
        rows, sides = np.nonzero(geometry.link_bodies == GROUND)
        others = geometry.link_bodies[rows, 1 - sides]
        kept = np.where(others == GROUND, True, np.append(stays, True)[others])
        feet = geometry.link_ends[rows, sides][kept]
        places.append(feet)
        kinds.append(np.full(len(feet), 0))
        owners.append(np.full(len(feet), GROUND))
        ends.append(np.stack([rows, sides], axis=1)[kept])
    if len(geometry.link_ends) and _space(geometry):
        rows, sides = np.nonzero(np.append(stays, False)[geometry.link_bodies])
        places.append(geometry.view.to_pixels(geometry.places.ends[rows, sides]))
        kinds.append(np.full(len(rows), _ATTACHMENT))
        owners.append(geometry.link_bodies[rows, sides])
        ends.append(np.stack([rows, sides], axis=1))
    parts = (np.concatenate(one) for one in (places, kinds, owners, ends))
    return _Marks(*parts)


def _aligned(
    geometry: SheetGeometry,
    at: tuple[float, float],
    marks: _Marks,
    level: str | None,
    wanted: tuple[Wish, Floats | None],
) -> Snapped:
    """Draw to the side or the height of a part, each axis by itself; to the grid where there is none."""
    wish, through = wanted
    view = geometry.view
    here = list(at)
    starts: list[tuple[float, float]] = []
    words: list[str] = []
    depths: list[Floats] = []
    kept = [level == "y", level == "x"]  # what runs straight keeps its other coordinate
    for axis in (0, 1):
        if kept[axis] or not len(marks.places):
            continue
        off = np.abs(marks.places[:, axis] - here[axis])
        best = int(np.argmin(off + 1e-3 * np.abs(marks.places[:, 1 - axis] - here[1 - axis])))
        if off[best] <= LEVEL:
            here[axis] = float(marks.places[best, axis])
            kept[axis] = True
            depths.append(marks.world(geometry, best, None))
            starts.append((float(marks.places[best, 0]), float(marks.places[best, 1])))
            words.append(f"{'in line' if axis == 0 else 'level'} with {marks.owner(geometry, best)}")
    if through is None and _space(geometry):
        beside = _beside(geometry, *at, wish)
        through = beside if beside is not None else next(iter(depths), None)
    world = world_at(view, here[0], here[1], through)
    for axis, number in enumerate(drawn_axes(view)):
        if not kept[axis]:
            step = grid_step((view.scale_x, view.scale_y)[axis])
            world[number] = float(f"{step * round(float(world[number]) / step):.9g}")
    if not all(kept):
        words.append("grid")
    pixel = view.to_pixels(world[None])[0]
    x, y = float(pixel[0]), float(pixel[1])
    lines = np.array([(*start, x, y) for start in starts], dtype=float).reshape(-1, 4)
    return Snapped(world, x, y, ", ".join(words), lines)
