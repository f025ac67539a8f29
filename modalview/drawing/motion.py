"""The sheet in motion: a mode's displacement of every point once, then one product per frame."""

from dataclasses import dataclass, field
from typing import Any

import numpy as np
import numpy.typing as npt

from modalview.drawing.endon import sight_segments
from modalview.drawing.furniture import TitleLines, sheet_of
from modalview.drawing.geometry import LinkGroup, SheetGeometry
from modalview.drawing.layout import GROUND
from modalview.drawing.model_items import (
    FULL,
    axis_items,
    ghost_items,
    ground_items,
    label_items,
    leader_items,
    paper_items,
    part_items,
    train_items,
)
from modalview.drawing.primitives import Circles, Drawing, Floats, Item, Lines, Role
from modalview.drawing.symbols import arrow, turning_arrow
from modalview.model.parts import Motion

Truths = npt.NDArray[np.bool_]
Phased = npt.NDArray[np.inexact[Any]]  # real, or complex where parts move out of step

NEARING = 0.1  # of the largest motion: more than this to or from the eye is marked
STILL = 0.02  # of the largest motion: below it a part counts as standing still
DIAL_SWING = np.radians(55.0)  # of the largest rotation at amplitude 1
ARROW = 40.0  # pixels of the largest motion's arrow
TURN = np.radians(250.0)  # sweep of the largest rotation's arrow


@dataclass(frozen=True, slots=True, eq=False)
class Pose:
    """One mode on one sheet.

    Parameters
    ----------
    steps : array (points, 2)
        Pixels that every point moves at amplitude 1; complex where parts move out of step.
    centre_steps : array (bodies, 2)
        The same of the centres of gravity.
    turns : array (bodies,)
        Rotation in the plane of the sheet (about the shaft in a train) over the largest one, -1..1.
    sizes : array (bodies,)
        Largest motion of any point of the body over the largest of all, 0..1.
    slopes : tuple of array (n, 2, 2) or None
        For each group of links: of beams, pixels that the rotation of each end alone would move the other.
    nearing : array (bodies,)
        Of a straight view: how far the centre of gravity moves towards the eye, over the largest motion of
        any point, -1..1.
    """

    steps: Phased
    centre_steps: Phased
    turns: Phased
    sizes: Floats
    slopes: tuple[Phased | None, ...] = ()
    nearing: Phased = field(default_factory=lambda: np.zeros(0))


def pose(geometry: SheetGeometry, motion: Phased) -> Pose:
    """Turn a mode into pixel steps.

    Parameters
    ----------
    geometry : SheetGeometry
    motion : array (bodies, 6)
        x, y, z, rx, ry, rz of every body, in the order of the model; any scale. Complex for a damped mode:
        its real part times exp(i phase) is seen.

    Notes
    -----
    Displacements are linear in the amplitude, as the mode itself is: a point at arm r moves by
    u + theta x r.
    """
    motion = _as_motion(motion)
    points, train = geometry.points, geometry.train
    count = len(geometry.centres)
    if not count:
        return Pose(np.zeros_like(points.rest), np.zeros((0, 2)), np.zeros(0), np.zeros(0))
    if train is not None:
        turns = _over_largest(motion[:, 5])
        still = np.zeros_like(points.rest)
        return Pose(still, np.stack([0 * turns, -turns * geometry.reach], axis=1), turns, np.abs(turns))
    world = motion[points.bodies, :3] + np.cross(motion[points.bodies, 3:], points.arms)
    world[points.bodies == GROUND] = 0.0
    steps = geometry.view.steps(world)
    lengths = np.hypot(*np.abs(steps).T)
    straight = geometry.view.straight
    if straight:  # what moves along the line of sight is not still
        lengths = geometry.view.scale_x * np.linalg.norm(np.abs(world), axis=1)
    largest = float(lengths.max(initial=0.0)) or 1.0
    sizes = np.zeros(count)
    moving = points.bodies != GROUND
    np.maximum.at(sizes, points.bodies[moving], lengths[moving] / largest)
    turns = np.zeros(count)
    if geometry.model.motion is not Motion.SPACE:
        turns = _over_largest(motion[:, 5])
    elif straight:
        turns = _seen_turns(geometry, motion, largest)
    nearing = geometry.view.scale_x * (world[geometry.centres] @ geometry.view.towards) / largest
    times = geometry.reach / largest
    steps = times * steps
    slopes = tuple(_slopes(geometry, group, motion, times) for group in geometry.links)
    return Pose(steps, steps[geometry.centres], turns, sizes, slopes, nearing if straight else 0 * nearing)


def _seen_turns(geometry: SheetGeometry, motion: Phased, largest: float) -> Phased:
    """Return rotation about the line of sight: what it moves at half a body's size, over the largest."""
    half = np.linalg.norm(geometry.outline.high - geometry.outline.low, axis=1) / 2
    about: Phased = geometry.view.scale_x * half * (motion[:, 3:] @ geometry.view.towards) / largest
    return np.where(np.abs(about) > 1.0, about / np.maximum(np.abs(about), 1.0), about)


def _as_motion(motion: Phased) -> Phased:
    if np.iscomplexobj(motion):
        return np.asarray(motion, dtype=np.complex128).reshape(-1, 6)
    return np.asarray(motion, dtype=np.float64).reshape(-1, 6)


def _slopes(geometry: SheetGeometry, group: LinkGroup, motion: Phased, times: float) -> Phased | None:
    if group.spans is None:
        return None
    bodies = geometry.points.bodies[group.ends]
    turns = np.where((bodies == GROUND)[..., None], 0.0, motion[bodies, 3:])
    slopes: Phased = times * geometry.view.steps(np.cross(turns, group.spans[:, None]))
    return slopes


def frame(geometry: SheetGeometry, posed: Pose, factor: complex) -> Drawing:
    """Return what moves, at ``factor`` (amplitude times exp(i phase); real: -1..1) times the mode.

    Only arrays are computed and no text is laid out; names inside bodies move with them.
    """
    points = geometry.points.rest + np.real(factor * posed.steps)
    slopes = tuple(None if one is None else np.real(factor * one) for one in posed.slopes)
    items = part_items(geometry, points, slopes)
    if geometry.train is not None:
        items += _twist(geometry, posed, factor)
    items += label_items(geometry, np.real(factor * posed.centre_steps) if geometry.train is None else None)
    return sheet_of(items, geometry.width, geometry.height, geometry.text_scale)


def frozen(geometry: SheetGeometry, posed: Pose, factor: complex = 1.0) -> Drawing:
    """Return a frame that tells the motion standing still: arrows, and parts that stand still marked."""
    drawing = frame(geometry, posed, factor)
    items = drawing.items + _arrows(geometry, posed, factor) + _still_marks(geometry, posed)
    return sheet_of(items, geometry.width, geometry.height, geometry.text_scale)


def still_drawing(geometry: SheetGeometry, title: TitleLines | None) -> Drawing:
    """Return what lies under the frames: paper, ground, labels, title block and the ghost at rest."""
    items = paper_items(geometry, title) + ground_items(geometry) + ghost_items(geometry)
    items += axis_items(geometry) + train_items(geometry)
    items += leader_items(geometry)
    return sheet_of((*items, *geometry.labels), geometry.width, geometry.height, geometry.text_scale)


def moved(
    geometry: SheetGeometry, motion: Phased, amplitude: float, phase: float, title: TitleLines | None = None
) -> Drawing:
    """Return the whole sheet with the model moved to one phase (radians) of a mode, arrows included."""
    under = still_drawing(geometry, title)
    posed = pose(geometry, motion)
    over = frozen(geometry, posed, amplitude * complex(np.exp(1j * phase)))
    return sheet_of(under.items + over.items, geometry.width, geometry.height, geometry.text_scale)


def _over_largest(values: Phased) -> Phased:
    shares: Phased = values / (float(np.abs(values).max(initial=0.0)) or 1.0)
    return shares


def _twist(geometry: SheetGeometry, posed: Pose, factor: complex) -> tuple[Item, ...]:
    """Draw rotation: a line of twist over the shafts, and the turning radius in every end view."""
    train = geometry.train
    if train is None:
        return ()
    marks = geometry.points.rest[geometry.centres] + np.real(factor * posed.centre_steps)
    stems = np.hstack([geometry.points.rest[geometry.centres], marks])
    line = np.hstack([marks[train.pairs[:, 0]], marks[train.pairs[:, 1]]])
    shown = (
        Lines(stems, Role.ACCENT, 1.0),
        Lines(line, Role.ACCENT, 2.2),
        Circles(marks, 3.2 * max(geometry.grow, 0.6), Role.ACCENT, Role.ACCENT),
    )
    if geometry.grow < FULL:
        return shown
    swing = np.real(factor * posed.turns) * DIAL_SWING
    rim = train.dials + train.dial_radius * np.stack([-np.sin(swing), -np.cos(swing)], axis=1)
    return (*shown, Lines(np.hstack([train.dials, rim]), Role.ACCENT, 2.2))


def _pointing(posed: Pose, factor: complex) -> complex:
    """Return the phase that arrows show: of a mode in step its way out or back, else that of the moment."""
    if np.iscomplexobj(posed.steps):
        return factor / abs(factor) if factor else 1.0
    return 1.0 if np.real(factor) >= 0 else -1.0


def _arrows(geometry: SheetGeometry, posed: Pose, factor: complex) -> tuple[Item, ...]:
    """Draw one arrow beside each body along its motion, and one round it where it turns."""
    way = _pointing(posed, factor)
    turns = np.real(way * posed.turns)
    if geometry.train is not None:
        return _turn_arrows(geometry.train.dials, geometry.train.dial_radius + 4, turns)
    moving = posed.sizes > STILL
    steps = np.real(way * posed.centre_steps) * (ARROW / geometry.reach)
    long = moving & (np.hypot(steps[:, 0], steps[:, 1]) > 3.0)
    boxes = geometry.boxes
    beside = np.stack([boxes[:, 0] - 13.0 - np.abs(steps[:, 0]) / 2, boxes[:, [1, 3]].mean(axis=1)], axis=1)
    start = beside - steps / 2
    items: tuple[Item, ...] = (Lines(arrow(start[long], steps[long]), Role.ACCENT, 2.0),)
    centres = geometry.points.rest[geometry.centres] + np.real(factor * posed.centre_steps)
    below = beside + np.where(long, 30.0, 0.0)[:, None] * [0.0, 1.0]  # an arrow has the middle
    items += _sight_arrows(below, np.real(way * posed.nearing), moving)
    return items + _turn_arrows(centres[moving], 12.0, turns[moving])


def _sight_arrows(beside: Floats, nearing: Floats, moving: Truths) -> tuple[Item, ...]:
    """Draw a point or a cross in a circle for each body that moves to or from the eye."""
    if not len(nearing):
        return ()
    chosen = np.flatnonzero(moving & (np.abs(nearing) > NEARING)).tolist()
    marks = [sight_segments(tuple(beside[body].tolist()), towards=bool(nearing[body] > 0)) for body in chosen]
    return (Lines(np.vstack(marks), Role.ACCENT, 1.8),) if marks else ()


def _turn_arrows(centres: Floats, radius: float, turns: Floats) -> tuple[Item, ...]:
    arcs = [
        turning_arrow((x, y), radius, np.pi / 2 - turn * TURN / 2, turn * TURN, head=5.0)
        for (x, y), turn in zip(centres.tolist(), turns.tolist(), strict=True)
        if abs(turn) > STILL
    ]
    return (Lines(np.vstack(arcs), Role.ACCENT, 1.8),) if arcs else ()


def _still_marks(geometry: SheetGeometry, posed: Pose) -> tuple[Item, ...]:
    """Mark parts that stand still: a circle crossed by a level line at the upper left corner."""
    still = geometry.boxes[posed.sizes <= STILL, :2]
    if not len(still):
        return ()
    half = np.array([9.0, 0.0])
    bars = np.hstack([still - half, still + half])
    return (Circles(still, 6.0, Role.INK, Role.PAPER, 1.4), Lines(bars, Role.INK, 1.8))
