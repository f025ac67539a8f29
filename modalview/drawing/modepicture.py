"""A small picture of a mode: the sheet's geometry without texts."""

from modalview.drawing.furniture import sheet_of
from modalview.drawing.geometry import SheetGeometry, bare_geometry
from modalview.drawing.model_items import axis_items, ghost_items, ground_items, train_items
from modalview.drawing.motion import Pose, frame
from modalview.drawing.primitives import Drawing
from modalview.drawing.view import Viewpoint
from modalview.model.parts import Model

# Symbols shrink with the picture; a sheet of this height has them at full size.
FULL_HEIGHT = 260.0
LEAST_GROW, MOST_GROW = 0.3, 0.7
MARGIN = 12.0
FOOT = 30.0


def mode_geometry(
    model: Model, width: float, height: float, viewpoint: Viewpoint = Viewpoint.TURNED
) -> SheetGeometry:
    """Lay a model out for small pictures of a size in pixels."""
    grow = min(max(height / FULL_HEIGHT, LEAST_GROW), MOST_GROW)
    foot = FOOT * grow  # feet that stand too close to their body are moved down
    area = (MARGIN, MARGIN, max(width - 2 * MARGIN, 20.0), max(height - 2 * MARGIN - foot, 20.0))
    return bare_geometry(model, (width, height), area, viewpoint, grow)


def still_picture(geometry: SheetGeometry) -> Drawing:
    """Return what lies under every frame: the ghost at rest, ground and axes; paint it once."""
    under = ground_items(geometry) + ghost_items(geometry) + axis_items(geometry) + train_items(geometry)
    return sheet_of(under, geometry.width, geometry.height, 1.0)


def mode_picture(geometry: SheetGeometry, posed: Pose, factor: complex) -> Drawing:
    """Return the model at ``factor`` (see ``motion.frame``) times the mode, over its ghost at rest."""
    items = still_picture(geometry).items + frame(geometry, posed, factor).items
    return sheet_of(items, geometry.width, geometry.height, 1.0)
