"""Where links are seen to begin and end: at the edges of bodies, and long enough to be read."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.drawing.layout import GROUND, Layout
from modalview.drawing.primitives import Floats
from modalview.drawing.symbols import Symbol
from modalview.drawing.view import View
from modalview.model.parts import Link, Model, Motion, Mount, RigidLink, Spring

Indices = npt.NDArray[np.int_]
Truths = npt.NDArray[np.bool_]

SHORTEST = 46.0  # pixels of a link to the ground
JOINT = 15.0  # half length of a link whose ends coincide on two bodies
LANE = 26.0  # pixels between links that join the same two parts
COINCIDENT = 8.0  # pixels


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
    """

    symbols: tuple[Symbol, ...]
    ends: Floats
    on_top: np.ndarray[tuple[int], np.dtype[np.bool_]]
    joints: np.ndarray[tuple[int], np.dtype[np.bool_]]


def link_ends(model: Model, places: Layout, view: View, boxes: Floats, grow: float = 1.0) -> LinkEnds:
    """Return the links' ends in pixels.

    Parameters
    ----------
    boxes : array (bodies, 4)
        x1, y1, x2, y2 of the bodies on the sheet, pixels.
    """
    ends = view.to_pixels(places.ends)
    sideways = places.lanes[:, None] * LANE * grow * _across(ends)
    if model.motion is not Motion.SHAFT_TRAIN:
        ends += sideways[:, None]
    joints = np.zeros(len(ends), dtype=bool)
    on_top = _in_front(places) if model.motion is Motion.SPACE else joints.copy()
    for number, link in enumerate(model.links):
        pair = places.end_bodies[number]
        if GROUND in pair:
            _lengthen(ends[number], pair, boxes, _pull(link, model.motion), SHORTEST * grow)
        elif np.hypot(*(ends[number, 1] - ends[number, 0])) < COINCIDENT * grow and not isinstance(
            link, RigidLink
        ):
            joints[number] = on_top[number] = True
            pull = _pull(link, model.motion)
            along = np.array([1.0, 0.0]) if pull is None else pull
            middle = ends[number].mean(axis=0)
            ends[number] = middle - JOINT * grow * along, middle + JOINT * grow * along
    if model.motion is not Motion.SPACE:
        _clip(ends, places.end_bodies, boxes, ~joints)
    return LinkEnds(tuple(_symbol(link, model.motion) for link in model.links), ends, on_top, joints)


def _in_front(places: Layout) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
    """Return which links to the ground hold their body on the side towards the eye (least y)."""
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


def _pull(link: Link, motion: Motion) -> Floats | None:
    """Return the unit step on the sheet along which a link acts, if it says so."""
    direction = getattr(link, "direction", None)
    if direction is None or motion not in (Motion.PLANE, Motion.SPACE):
        return None
    upright = "z" if motion is Motion.SPACE else "y"
    if isinstance(direction, str):
        if direction.lstrip("+-") == "x":
            return np.array([1.0, 0.0])
        if direction.lstrip("+-") == upright:
            return np.array([0.0, 1.0])
        if direction.endswith("deg"):
            angle = np.radians(float(direction.removesuffix("deg")))
            return np.array([np.cos(angle), -np.sin(angle)])
        return np.array([0.7, -0.7])
    step = np.array([direction[0], -direction[-1]])
    length = float(np.hypot(*step))
    return step / length if length else None


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
