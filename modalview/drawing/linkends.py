"""Where links are seen to begin and end: at the edges of bodies, and long enough to be read."""

from collections import defaultdict
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.drawing.layout import GROUND, Layout
from modalview.drawing.pauses import in_pieces
from modalview.drawing.primitives import Floats
from modalview.drawing.symbols import Symbol
from modalview.drawing.view import View
from modalview.model.parts import Link, Model, Motion, Mount, RigidLink, Spring

Indices = npt.NDArray[np.int_]
Truths = npt.NDArray[np.bool_]

SHORTEST = 46.0  # pixels of a link to the ground
JOINT = 15.0  # half length of a link whose ends coincide on two bodies
LANE = 26.0  # pixels between links that join the same two parts
BESIDE = 20.0  # the same between links that stand one behind the other in a straight view
COINCIDENT = 8.0  # pixels
OVERLAP = 6.0  # pixels of the net on which links of a straight view count as drawn over each other
ALONG = 0.9  # of a unit step: what has this share along the line of sight is seen end-on


@dataclass(frozen=True, slots=True, eq=False)
class LinkEnds:
    """Links on the sheet.

    Parameters
    ----------
    symbols : tuple of Symbol
    ends : array (links, 2, 2)
        Pixels.
    on_top : array (links,) of bool
        Links that touch the front of a body, drawn over it.
    joints : array (links,) of bool
        Links between touching bodies, drawn over both.
    end_on : array (links,) of bool
        Links of a straight view that lie along the line of sight: both ends are at one place.
    """

    symbols: tuple[Symbol, ...]
    ends: Floats
    on_top: np.ndarray[tuple[int], np.dtype[np.bool_]]
    joints: np.ndarray[tuple[int], np.dtype[np.bool_]]
    end_on: np.ndarray[tuple[int], np.dtype[np.bool_]]


def link_ends(
    model: Model, places: Layout, view: View, boxes: Floats, grow: float = 1.0, *, straight: bool = False
) -> LinkEnds:
    """Return the links' ends in pixels.

    Parameters
    ----------
    boxes : array (bodies, 4)
        x1, y1, x2, y2 of the bodies on the sheet, pixels.
    straight : bool
        Whether a space model is seen along one of its axes.
    """
    ends = view.to_pixels(places.ends)
    pulls = [_pull(link, model.motion, view) for link in in_pieces(model.links)]
    end_on = _end_on(places, ends, view, pulls, COINCIDENT * grow) if straight else np.zeros(len(ends), bool)
    lanes = _overlapping(ends, end_on) if straight else places.lanes
    sideways = lanes[:, None] * (BESIDE if straight else LANE) * grow * _across(ends)
    if model.motion is not Motion.SHAFT_TRAIN:
        ends += sideways[:, None]
    joints = np.zeros(len(ends), dtype=bool)
    on_top = end_on | _in_front(places, view, straight=straight) if _space(model) else joints.copy()
    for number, link in enumerate(in_pieces(model.links)):
        pair, pull = places.end_bodies[number], pulls[number]
        pull = pull if pull is not None and pull.any() else None
        if end_on[number]:
            ends[number] = ends[number].mean(axis=0)
        elif GROUND in pair:
            _lengthen(ends[number], pair, boxes, pull, SHORTEST * grow)
        elif np.hypot(*(ends[number, 1] - ends[number, 0])) < COINCIDENT * grow and not isinstance(
            link, RigidLink
        ):
            joints[number] = on_top[number] = True
            along = np.array([1.0, 0.0]) if pull is None else pull
            middle = ends[number].mean(axis=0)
            ends[number] = middle - JOINT * grow * along, middle + JOINT * grow * along
    if not _space(model):
        _clip(ends, places.end_bodies, boxes, ~joints)
    symbols = tuple(_symbol(link, model.motion) for link in model.links)
    return LinkEnds(symbols, ends, on_top, joints, end_on)


def _space(model: Model) -> bool:
    return model.motion is Motion.SPACE


def _end_on(
    places: Layout, ends: Floats, view: View, pulls: list[Floats | None], near: float
) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
    """Return which links lie along the line of sight.

    A direction of its own comes before the ends. A link to the ground without either stands upright.
    """
    steps = places.ends[:, 1] - places.ends[:, 0]
    seen = np.hypot(*(ends[:, 1] - ends[:, 0]).T)
    deep = np.abs(steps @ view.towards) > 0
    deep |= (places.end_bodies == GROUND).any(axis=1) & (abs(view.towards[2]) > ALONG) & ~steps.any(axis=1)
    own = np.array([pull is not None for pull in pulls], dtype=bool)
    along = np.array([pull is not None and not pull.any() for pull in pulls], dtype=bool)
    return np.asarray((seen < near) & np.where(own, along, deep))


def _overlapping(ends: Floats, end_on: Truths) -> Floats:
    """Return sideways places (n,), as of lanes, of links that would be drawn over each other."""
    groups: dict[tuple[int, ...], list[int]] = defaultdict(list)
    for number, (one, other) in enumerate(np.rint(ends / OVERLAP).astype(int).tolist()):
        first, last = sorted((one, other))
        groups[(*first,) if end_on[number] else (*first, *last)].append(number)
    lanes = np.zeros(len(ends))
    for members in groups.values():
        lanes[members] = np.arange(len(members)) - (len(members) - 1) / 2
    return lanes


def _in_front(places: Layout, view: View, *, straight: bool) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
    """Return which links to the ground hold their body on the side towards the eye (least y, if turned)."""
    if straight and len(places.centres):
        held = np.where(places.end_bodies[:, 0] != GROUND, 0, 1)
        rows = np.arange(len(held))
        bodies = places.end_bodies[rows, held]
        arms = places.ends[rows, held] - places.centres[bodies]
        grounded = (places.end_bodies == GROUND).any(axis=1)
        return np.asarray(grounded & (bodies >= 0) & (arms @ view.towards > 0))
    front = np.zeros(len(places.ends), dtype=bool)
    for number, pair in enumerate(places.end_bodies.tolist()):
        for side in (0, 1):
            if pair[side] != GROUND and pair[1 - side] == GROUND:
                front[number] = places.ends[number, side, 1] < places.centres[pair[side], 1]
    return front


def _symbol(link: Link, motion: Motion) -> Symbol:
    if isinstance(link, Mount) and link.stiffness is None:
        return Symbol.DAMPER
    if isinstance(link, Spring) and motion is Motion.SHAFT_TRAIN:
        return Symbol.SHAFT
    return Symbol(link.kind)


def _across(ends: Floats) -> Floats:
    step = ends[:, 1] - ends[:, 0]
    upright = np.abs(step[:, 1:]) >= np.abs(step[:, :1])
    across: Floats = np.where(upright, [[1.0, 0.0]], [[0.0, 1.0]])
    return across


def _pull(link: Link, motion: Motion, view: View) -> Floats | None:
    """Return the unit step on the sheet along which a link acts, if it says so; zero where seen end-on."""
    direction = getattr(link, "direction", None)
    if direction is None or motion not in (Motion.PLANE, Motion.SPACE):
        return None
    if isinstance(direction, str):
        bare = direction.lstrip("+-")
        if direction.endswith("deg"):
            angle = np.radians(float(direction.removesuffix("deg")))
            world = np.array([np.cos(angle), np.sin(angle), 0.0])
        else:
            world = np.eye(3)["xyz".index(bare)]
    else:
        world = np.zeros(3)
        world[: len(direction)] = direction
        world /= np.linalg.norm(world) or 1.0
    step = (view.matrix @ world) * np.array([1.0, -1.0])
    length = float(np.hypot(*step))
    if length <= 1 - ALONG:
        return np.zeros(2)
    downwards = isinstance(direction, str) and not direction.endswith("deg") and step[1] < -abs(step[0])
    return np.asarray((-step if downwards else step) / length)


def _lengthen(
    ends: Floats,
    pair: np.ndarray[tuple[int], np.dtype[np.int_]],
    boxes: Floats,
    pull: Floats | None,
    least: float,
) -> None:
    """Move a foot that stands too close to its body away from it: along the pull, else straight down."""
    foot = int(np.flatnonzero(pair == GROUND)[0])
    body = int(pair[1 - foot])
    step = ends[foot] - ends[1 - foot]
    length = float(np.hypot(*step))
    if length >= least or body == GROUND:
        return
    away = np.array([0.0, 1.0]) if pull is None else pull
    middle = (boxes[body, :2] + boxes[body, 2:]) / 2
    if (abs(away[0]) > abs(away[1]) and (ends[1 - foot] - middle) @ away < 0) or (
        abs(away[0]) <= abs(away[1]) and away[1] < 0
    ):
        away = -away
    if length > COINCIDENT and pull is None:
        away = step / length
    ends[foot] = ends[1 - foot] + least * away


def _clip(ends: Floats, pairs: Indices, boxes: Floats, chosen: Truths) -> None:
    """Let links begin at the edge of the body they are attached inside of."""
    for side in (0, 1):
        rows = np.flatnonzero(chosen & (pairs[:, side] != GROUND))
        here, step = ends[rows, side], ends[rows, 1 - side] - ends[rows, side]
        box = boxes[pairs[rows, side]]
        low, high = box[:, :2], box[:, 2:]
        with np.errstate(divide="ignore", invalid="ignore"):
            leaving = np.where(step > 0, (high - here) / step, (low - here) / step)
        share = np.where(step != 0, leaving, np.inf).min(axis=1, initial=np.inf)
        inside = ((here >= low - 0.5) & (here <= high + 0.5)).all(axis=1)
        moved = inside & (share > 0) & (share < 0.9)
        ends[rows[moved], side] += share[moved, None] * step[moved]
