"""The model as an engineering drawing."""

import numpy as np

from modalview.drawing.excitations import lines_above
from modalview.drawing.furniture import MARGIN, TitleLines, sheet_of, switch_room, title_lines, title_size
from modalview.drawing.geometry import SheetGeometry, bare_geometry
from modalview.drawing.layout import GROUND
from modalview.drawing.lettering import lettered
from modalview.drawing.model_items import (
    axis_items,
    ground_items,
    label_items,
    leader_items,
    paper_items,
    part_items,
    train_items,
)
from modalview.drawing.primitives import Drawing, Floats
from modalview.drawing.view import View, Viewpoint
from modalview.model.parts import Model, Motion

__all__ = [
    "SheetGeometry",
    "TitleLines",
    "part_at",
    "parts_at",
    "sheet_drawing",
    "sheet_geometry",
    "title_lines",
]

SIDE, BOTTOM = 110.0, 46.0  # pixels kept free for labels, and for ground
ARROWS, SPARE = (
    92.0,
    32.0,
)  # pixels above a body for excitation arrows and their motion; what they can do without
LEAST_ARROWS = 0.22  # of the height of a low sheet
# Of the sheet, what the model is fitted into at least: labels fall away before it shrinks.
LEAST_WIDE, LEAST_HIGH = 0.6, 0.5
MOST_ABOVE = 0.4  # of the height that the switch of the views may keep
NEAR_LINK = 9.0  # pixels: how close to a link's line a click may be


def sheet_geometry(
    model: Model,
    width: float,
    height: float,
    *,
    text_scale: float = 1.0,
    view: View | None = None,
    viewpoint: Viewpoint = Viewpoint.TURNED,
) -> SheetGeometry:
    """Lay a model out on a sheet: once per edit, window size, zoom or text size.

    Parameters
    ----------
    model : Model
    width, height : float
        Pixels.
    text_scale : float
    view : View or None
        None fits the model; else what ``geometry.view.panned`` or ``zoomed`` gave, of the same viewpoint.
    viewpoint : Viewpoint
        From where a space model is seen.
    """
    side = min(SIDE * text_scale, (1 - LEAST_WIDE) / 2 * width)
    wide, high = title_size(model.title, (width, height), text_scale)
    block = MARGIN + high
    arrows = (ARROWS if lines_above(model) else 8.0) + 17.0 * lines_above(model) * text_scale
    least = block + min(arrows - SPARE, LEAST_ARROWS * height) if lines_above(model) else block + 4.0
    top = min(block + arrows, max((1 - LEAST_HIGH) * height - BOTTOM, least))
    if model.motion is Motion.SPACE:  # below the switch of the views, too
        _, switch_top, _, switch_high = switch_room(text_scale, width - 2 * MARGIN - wide)
        top = max(top, min(switch_top + switch_high + 8.0, MOST_ABOVE * height))
    area = (side, top, max(width - 2 * side, 40.0), max(height - top - BOTTOM, 40.0))
    return lettered(bare_geometry(model, (width, height), area, view or viewpoint, 1.0, text_scale))


def sheet_drawing(geometry: SheetGeometry, title: TitleLines | None) -> Drawing:
    """Return the sheet at rest, without what a hand does over it."""
    items = paper_items(geometry, title) + ground_items(geometry) + axis_items(geometry)
    items += train_items(geometry)
    parts, leaders = part_items(geometry, geometry.points.rest), leader_items(geometry)
    # Seen straight, what is written belongs to links before or behind bodies: leaders end on top of them.
    items += parts + leaders if geometry.view.straight else leaders + parts
    items += (*geometry.labels, *label_items(geometry))
    return sheet_of(items, geometry.width, geometry.height, geometry.text_scale)


def part_at(geometry: SheetGeometry, x: float, y: float) -> str | None:
    """Return the id of the body, link or support at a point of the sheet; None where there is none."""
    if geometry.model.motion is Motion.SPACE:
        return next(iter(parts_at(geometry, x, y)), None)
    here = np.array([x, y])
    inside = ((geometry.boxes[:, :2] <= here) & (here <= geometry.boxes[:, 2:])).all(axis=1)
    if inside.any():
        sizes = np.prod(geometry.boxes[:, 2:] - geometry.boxes[:, :2], axis=1)
        return geometry.model.bodies[int(np.argmin(np.where(inside, sizes, np.inf)))].id
    if not len(geometry.link_ends):
        return None
    share, off = _from_links(geometry, here)
    return _link_or_support(geometry, int(np.argmin(off)), share, off)


def parts_at(geometry: SheetGeometry, x: float, y: float) -> tuple[str, ...]:
    """Return the ids of all that lies at a point of the sheet of a space model, one behind the other."""
    here = np.array([x, y])
    inside = ((geometry.boxes[:, :2] <= here) & (here <= geometry.boxes[:, 2:])).all(axis=1)
    sizes = np.prod(geometry.boxes[:, 2:] - geometry.boxes[:, :2], axis=1)
    bodies = sorted(np.flatnonzero(inside).tolist(), key=lambda body: float(sizes[body]))
    before: list[str | None] = []
    behind: list[str | None] = []
    if len(geometry.link_ends):
        share, off = _from_links(geometry, here)
        for number in np.argsort(off, kind="stable")[: (off <= 2 * NEAR_LINK).sum()].tolist():
            group = before if geometry.links_on_top[number] else behind
            group.append(_link_or_support(geometry, number, share, off))
            if geometry.links_end_on[number] and group[-1] is not None:
                link = geometry.model.links[number]
                behind += [link.from_.support, link.to.support]
    found = [*before, *(geometry.model.bodies[body].id for body in bodies), *behind]
    return tuple(dict.fromkeys(part for part in found if part is not None))


def _from_links(geometry: SheetGeometry, here: Floats) -> tuple[Floats, Floats]:
    """Return where along each link a point lies, 0 to 1 between its ends, and how far from it in pixels."""
    start, step = geometry.link_ends[:, 0], geometry.link_ends[:, 1] - geometry.link_ends[:, 0]
    lengths = np.maximum((step**2).sum(axis=1), 1e-12)
    share = ((here - start) * step).sum(axis=1) / lengths
    return share, np.hypot(*(here - start - np.clip(share, 0, 1)[:, None] * step).T)


def _link_or_support(geometry: SheetGeometry, number: int, share: Floats, off: Floats) -> str | None:
    """Return the link that a point is close to, the support beyond its end, or None."""
    if off[number] > 2 * NEAR_LINK:
        return None
    link = geometry.model.links[number]
    for side, end in enumerate((link.from_, link.to)):
        beyond = share[number] < 0 if side == 0 else share[number] > 1
        if beyond and geometry.link_bodies[number, side] == GROUND and end.support is not None:
            return end.support
    return link.id if off[number] <= NEAR_LINK else None
