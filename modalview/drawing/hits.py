"""What lies under a pointer on the sheet: parts, and the handles of what is chosen."""

from dataclasses import dataclass

import numpy as np

from modalview.drawing.geometry import SheetGeometry
from modalview.drawing.layout import GROUND
from modalview.drawing.primitives import Floats
from modalview.model.parts import Motion

APART = 13.0  # pixels from a link seen end-on to the handles of its ends
HANDLE = 7.0  # pixels from a handle's middle within which it is hit
# Handles of a body by compass point: across (-1, 0, 1) and up.
CORNERS = {
    "nw": (-1, -1),
    "n": (0, -1),
    "ne": (1, -1),
    "e": (1, 0),
    "se": (1, 1),
    "s": (0, 1),
    "sw": (-1, 1),
    "w": (-1, 0),
}


@dataclass(frozen=True, slots=True)
class Handle:
    """A handle of the one part that is chosen.

    Parameters
    ----------
    part : str
    name : str
        A compass point of a body, or "from" or "to" of a link.
    x, y : float
        Pixels.
    """

    part: str
    name: str
    x: float
    y: float


def handles(geometry: SheetGeometry, chosen: tuple[str, ...]) -> tuple[Handle, ...]:
    """Return the handles of what is chosen: only a single body or link has any."""
    if len(chosen) != 1:
        return ()
    for number, body in enumerate(geometry.model.bodies):
        if body.id == chosen[0]:
            x1, y1, x2, y2 = geometry.boxes[number].tolist()
            cx, cy, hx, hy = (x1 + x2) / 2, (y1 + y2) / 2, (x2 - x1) / 2, (y2 - y1) / 2
            fixed = _fixed_ways(geometry)
            return tuple(
                Handle(body.id, name, cx + ways[0] * (hx + 5), cy + ways[1] * (hy + 5))
                for name, ways in CORNERS.items()
                if not any(ways[axis] for axis in fixed)
            )
    for number, link in enumerate(geometry.model.links):
        if link.id == chosen[0]:
            ends = geometry.link_ends[number]
            if geometry.links_end_on[number]:  # both are at one place: beside each other
                ends = ends + np.array([[-APART, 0.0], [APART, 0.0]])
            ends = ends.tolist()
            return tuple(Handle(link.id, name, *end) for name, end in zip(("from", "to"), ends, strict=True))
    return ()


def _fixed_ways(geometry: SheetGeometry) -> tuple[int, ...]:
    """Return which ways (0 across, 1 up) a body has no size of its own to be drawn: no file has its depth."""
    if geometry.model.motion is not Motion.SPACE or not geometry.view.straight:
        return ()
    return tuple(np.flatnonzero(geometry.view.matrix[:, 1]).tolist())


def handle_at(geometry: SheetGeometry, chosen: tuple[str, ...], x: float, y: float) -> Handle | None:
    """Return the handle under a pointer, or None."""
    near = [one for one in handles(geometry, chosen) if abs(one.x - x) <= HANDLE and abs(one.y - y) <= HANDLE]
    return min(near, key=lambda one: abs(one.x - x) + abs(one.y - y), default=None)


def body_at(geometry: SheetGeometry, x: float, y: float, around: float = 6.0) -> int | None:
    """Return the number of the smallest body under a pointer, or within some pixels of it."""
    here = np.array([x, y])
    inside = ((geometry.boxes[:, :2] - around <= here) & (here <= geometry.boxes[:, 2:] + around)).all(axis=1)
    if not inside.any():
        return None
    sizes = np.prod(geometry.boxes[:, 2:] - geometry.boxes[:, :2], axis=1)
    return int(np.argmin(np.where(inside, sizes, np.inf)))


def foot_at(geometry: SheetGeometry, x: float, y: float, around: float = 12.0) -> str | None:
    """Return the id of the support whose ground is under a pointer, or None."""
    if not len(geometry.link_ends):
        return None
    rows, sides = np.nonzero(geometry.link_bodies == GROUND)
    if not len(rows):
        return None
    off = np.hypot(*(geometry.link_ends[rows, sides] - np.array([x, y])).T)
    best = int(np.argmin(off))
    if off[best] > around:
        return None
    link = geometry.model.links[int(rows[best])]
    return (link.from_, link.to)[int(sides[best])].support


def within(geometry: SheetGeometry, band: tuple[float, float, float, float]) -> tuple[str, ...]:
    """Return the ids of bodies and links that lie wholly inside x1, y1, x2, y2, and of their supports."""
    x1, x2 = sorted((band[0], band[2]))
    y1, y2 = sorted((band[1], band[3]))
    low, high = np.array([x1, y1]), np.array([x2, y2])
    boxes = geometry.boxes
    found = np.flatnonzero(np.all((boxes[:, :2] >= low) & (boxes[:, 2:] <= high), axis=1))
    ids = [geometry.model.bodies[number].id for number in found.tolist()]
    if len(geometry.link_ends):
        inside = np.all((geometry.link_ends >= low) & (geometry.link_ends <= high), axis=(1, 2))
        for number in np.flatnonzero(inside).tolist():
            link = geometry.model.links[number]
            ids.append(link.id)
            ids += [end.support for end in (link.from_, link.to) if end.support is not None]
    return tuple(dict.fromkeys(ids))


def frames_of(geometry: SheetGeometry, parts: frozenset[str]) -> Floats:
    """Return x1, y1, x2, y2 about those bodies among some parts (n, 4)."""
    chosen = [number for number, body in enumerate(geometry.model.bodies) if body.id in parts]
    return np.asarray(geometry.boxes[np.array(chosen, dtype=int)])


def frame_of(geometry: SheetGeometry, part: str) -> Floats | None:
    """Return x1, y1, x2, y2 about a body, link or support on the sheet; None where it is not drawn."""
    for number, body in enumerate(geometry.model.bodies):
        if body.id == part:
            return np.asarray(geometry.boxes[number])
    found = []
    for number, link in enumerate(geometry.model.links):
        ends = geometry.link_ends[number]
        if link.id == part:
            return np.concatenate([ends.min(axis=0) - 8.0, ends.max(axis=0) + 8.0])
        for side, end in enumerate((link.from_, link.to)):
            if end.support == part:
                found.append(ends[side])
    if not found:
        return None
    feet = np.array(found)
    return np.asarray(np.hstack([feet.min(axis=0), feet.max(axis=0)]) + np.array([-22.0, -4.0, 22.0, 14.0]))
