"""A sheet's geometry as items: bodies, links, ground, ghost, paper and texts."""

from dataclasses import replace

import numpy as np

from modalview.drawing.endon import end_on_items
from modalview.drawing.furniture import MARGIN, TitleLines, axes, grid, title_block, title_size
from modalview.drawing.geometry import LinkGroup, SheetGeometry
from modalview.drawing.layout import GROUND
from modalview.drawing.primitives import Circles, Floats, Item, Lines, Polygons, Role
from modalview.drawing.symbols import (
    BEAM_WIDTH,
    COARSE,
    JOINTS,
    MANY,
    STRAIGHT,
    TEMPLATES,
    Symbol,
    bent,
    between,
    dashed,
    ground,
    outline,
)
from modalview.model.parts import Motion

MARK = 5.5  # radius of the centre of gravity mark, pixels
DOT = 3.4  # radius of a rigid link's ends
SEVERAL = 20  # bodies: more are filled and outlined together
TINY = 1000  # bodies on a sheet: more are drawn without filling
CROWDED = 40  # bodies in a small picture: more are drawn without filling
FULL = 0.8  # below this size, symbols are simplified


def part_items(
    geometry: SheetGeometry, points: Floats, slopes: tuple[Floats | None, ...] | None = None
) -> tuple[Item, ...]:
    """Return links and bodies at the given points (points, 2).

    ``slopes`` has, for each group of links that are beams, how far the rotation of each end alone would move
    the other (n, 2, 2), pixels; None draws them straight.
    """
    slopes = slopes or (None,) * len(geometry.links)
    under: list[Item] = []
    over: list[Item] = []
    for group, slope in zip(geometry.links, slopes, strict=True):
        (over if group.on_top else under).extend(_link(geometry, group, points, slope))
    bodies = _bodies(geometry, points)
    over += [*_body_marks(geometry, points), *ground_items(geometry, on_top=True)]
    return (*under, *bodies, *over, *_marks(geometry, points), *_teeth(geometry))


def _bodies(geometry: SheetGeometry, points: Floats) -> list[Item]:
    # Parts behind a body in space shimmer through, as hidden edges are told by faint lines.
    fill = 0.86 if geometry.model.motion is Motion.SPACE else 1.0
    fill = 0.7 if geometry.view.straight else fill  # where more is hidden
    few_pixels = len(geometry.centres) > (CROWDED if geometry.grow < FULL else TINY)
    if few_pixels:  # nothing to be seen in them: outlines alone
        return [Lines(outline(points[indices]), Role.INK, 1.0) for indices in geometry.faces]
    apart = geometry.model.motion is not Motion.SPACE  # nothing hides behind anything
    if len(geometry.centres) > (SEVERAL if apart else MANY):
        fills = [Polygons(points[indices], None, Role.PAPER, 0.0, fill) for indices in geometry.faces]
        line = 1.0 if len(geometry.centres) > MANY else 1.5
        return [*fills, *(Lines(outline(points[indices]), Role.INK, line) for indices in geometry.faces)]
    width = 1.7 if geometry.grow >= FULL else 1.3
    return [Polygons(points[indices], Role.INK, Role.PAPER, width, fill) for indices in geometry.faces]


def ground_items(geometry: SheetGeometry, *, on_top: bool = False) -> tuple[Item, ...]:
    """Return the hatched ground under the feet behind, or before, the bodies; it looks away from the link."""
    chosen = geometry.links_on_top == on_top
    chosen &= ~geometry.links_end_on  # they hatch their own ground
    rows, sides = np.nonzero((geometry.link_bodies == GROUND) & chosen[:, None])
    feet = geometry.link_ends[rows, sides]
    step = feet - geometry.link_ends[rows, 1 - sides]
    level = np.abs(step[:, 0]) > np.abs(step[:, 1])
    signs = np.where(step < 0, -1.0, 1.0)
    outward = np.where(level[:, None], signs * [1.0, 0.0], signs * [0.0, 1.0])
    return (Lines(ground(feet, outward, 20.0 * geometry.grow + 2.0), Role.INK, 1.2),)


def ghost_items(geometry: SheetGeometry) -> tuple[Item, ...]:
    """Return the outlines at rest, dashed."""
    if geometry.train is not None:
        return ()
    sides = [outline(geometry.points.rest[indices]) for indices in geometry.faces]
    return (Lines(dashed(np.vstack(sides)), Role.GHOST, 1.2),) if sides else ()


def train_items(geometry: SheetGeometry) -> tuple[Item, ...]:
    """Return a shaft train's end views at rest; small pictures have none."""
    train = geometry.train
    if train is None or geometry.grow < FULL:
        return ()
    rest = np.hstack([train.dials, train.dials - [0.0, train.dial_radius]])
    return (
        Circles(train.dials, train.dial_radius, Role.INK, Role.PAPER),
        Lines(dashed(rest), Role.GHOST, 1.2),
    )


def axis_items(geometry: SheetGeometry) -> tuple[Item, ...]:
    """Return a shaft train's centre lines: long and short dashes by turns."""
    if geometry.train is None:
        return ()
    long, short = dashed(geometry.train.axes, 14.0, 11.0), geometry.train.axes.copy()
    short[:, 0] += 18.0
    return (Lines(np.vstack([long, dashed(short, 3.0, 22.0)]), Role.MUTED, 1.0),)


def paper_items(geometry: SheetGeometry, title: TitleLines | None) -> tuple[Item, ...]:
    """Return grid, axes, title block and excitation arrows."""
    sheet, text_scale = (geometry.width, geometry.height), geometry.text_scale
    room = geometry.width
    if title is not None:
        room -= MARGIN + title_size(title.title, sheet, text_scale)[0]
    shown = (grid(*sheet), *axes(geometry.model.motion, text_scale, room, geometry.view.viewpoint)[0])
    return shown if title is None else shown + title_block(title, sheet, text_scale)


def leader_items(geometry: SheetGeometry) -> tuple[Item, ...]:
    """Return the lines from texts to their links."""
    return () if geometry.leaders is None else (Lines(geometry.leaders, Role.GHOST, 0.9),)


def label_items(geometry: SheetGeometry, steps: Floats | None = None) -> tuple[Item, ...]:
    """Return what is written and drawn on bodies, moved by ``steps`` (bodies, 2) in pixels."""
    if steps is None:
        arrows = tuple(Lines(segments, Role.WARN, 2.0) for _, segments in geometry.body_arrows)
        return (*arrows, *(text for _, text in geometry.body_labels))
    shifts = steps.tolist()
    arrows = tuple(
        Lines(segments + np.tile(steps[body], 2), Role.WARN, 2.0) for body, segments in geometry.body_arrows
    )
    return arrows + tuple(
        replace(text, x=text.x + shifts[body][0], y=text.y + shifts[body][1])
        for body, text in geometry.body_labels
    )


def _body_marks(geometry: SheetGeometry, points: Floats) -> list[Item]:
    return [
        Lines(points[mark.lines].reshape(-1, 4), Role.INK, max(mark.width * geometry.grow, 0.8))
        for mark in geometry.marks
    ]


def _link(geometry: SheetGeometry, group: LinkGroup, points: Floats, slopes: Floats | None) -> list[Item]:
    grow, symbol, ends = geometry.grow, group.symbol, points[group.ends]
    if group.end_on:
        return [*end_on_items(symbol, ends, geometry.points.bodies[group.ends] == GROUND, grow)]
    if slopes is not None:
        rest = geometry.points.rest[group.ends]
        return [Lines(bent(rest, ends - rest, slopes), Role.INK, max(BEAM_WIDTH * grow, 1.0))]
    template, width = TEMPLATES[symbol]
    if group.joint:
        template = JOINTS.get(symbol, template)
    elif geometry.grow < FULL and len(ends) > MANY:
        template, width = STRAIGHT, 1.0
    elif len(ends) > MANY:
        template, width = COARSE.get(symbol, template), min(width, 1.0)
    items: list[Item] = [Lines(between(template, ends, grow), Role.INK, max(width * grow, 1.0))]
    if symbol is Symbol.RIGID:
        items.append(Circles(ends.reshape(-1, 2), DOT * grow, Role.INK, Role.INK))
    return items


def _marks(geometry: SheetGeometry, points: Floats) -> tuple[Item, ...]:
    """Return the quartered circles at the centres of gravity; in a corner where places carry no meaning."""
    count = len(geometry.centres)
    if geometry.grow < FULL or geometry.model.motion is Motion.SHAFT_TRAIN or not 0 < count <= MANY:
        return ()
    centres = points[geometry.centres]
    if geometry.model.motion is Motion.SINGLE_AXIS:
        rest = geometry.points.rest[geometry.centres]
        corner = np.stack([geometry.boxes[:, 2] - 11.0, geometry.boxes[:, 1] + 11.0], axis=1)
        centres = corner + centres - rest
    turns = np.linspace(0, np.pi / 2, 7)
    quarter = np.vstack([[[0.0, 0.0]], np.stack([np.cos(turns), -np.sin(turns)], axis=1)]) * MARK
    filled = np.concatenate([centres[:, None] + quarter, centres[:, None] - quarter])
    return (
        Circles(centres, MARK, Role.INK, Role.PAPER, 1.0),
        Polygons(filled, None, Role.INK),
    )


def _teeth(geometry: SheetGeometry) -> tuple[Item, ...]:
    """Return short strokes across the line where two gears meet, in a shaft train."""
    gears = [group for group in geometry.links if group.symbol is Symbol.GEAR]
    if geometry.train is None or not gears:
        return ()
    strokes = []
    for one, other in geometry.points.bodies[np.vstack([group.ends for group in gears])].tolist():
        upper, lower = sorted((one, other), key=lambda body: geometry.boxes[body, 1])
        x1, x2 = geometry.boxes[upper, 0], geometry.boxes[upper, 2]
        y = (geometry.boxes[upper, 3] + geometry.boxes[lower, 1]) / 2
        x = np.arange(x1 + 3, x2, 5.0)
        strokes.append(np.stack([x, 0 * x + y - 5, x, 0 * x + y + 5], axis=1))
    return (Lines(np.vstack(strokes), Role.INK, 1.2),)
