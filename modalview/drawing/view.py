"""From the drawing's world to pixels: one projection and one scale."""

from dataclasses import dataclass, replace
from enum import StrEnum

import numpy as np

from modalview.drawing.primitives import Floats
from modalview.model.parts import Motion

# Axonometric view of a space model: the camera stands in front of the machine (y away from it), turned to
# see the right-hand end, and above. Angles chosen by eye.
_TURN = np.radians(28.0)
_RISE = np.radians(24.0)


class Viewpoint(StrEnum):
    """From where a space model is seen; other models are drawn in their own plane."""

    TURNED = "turned"
    FRONT = "front"  # along y: x right, z up
    SIDE = "side"  # from the end that x points to, which the turned view shows too: y right, z up
    TOP = "top"  # from above: x right, y up


# Numbers of the axes that are seen straight on: to the right, and up.
STRAIGHT = {Viewpoint.FRONT: (0, 2), Viewpoint.SIDE: (1, 2), Viewpoint.TOP: (0, 1)}


def projection(motion: Motion, viewpoint: Viewpoint = Viewpoint.TURNED) -> Floats:
    """Return the (2, 3) matrix from world to the plane of the sheet, x right and y up."""
    if motion is not Motion.SPACE:
        return np.array([[1.0, 0.0, 0.0], [0.0, 1.0, 0.0]])
    if viewpoint in STRAIGHT:
        return np.eye(3)[list(STRAIGHT[viewpoint])]
    turn, rise = (np.cos(_TURN), np.sin(_TURN)), (np.cos(_RISE), np.sin(_RISE))
    return np.array([[turn[0], turn[1], 0.0], [-turn[1] * rise[1], turn[0] * rise[1], rise[0]]])


@dataclass(frozen=True, slots=True, eq=False)
class View:
    """Scale and place of the world on the sheet.

    Parameters
    ----------
    matrix : array (2, 3)
        Projection.
    scale_x, scale_y : float
        Pixels per metre; equal where distances carry meaning.
    left, top : float
        Pixels of the world's origin.
    viewpoint : Viewpoint
        TURNED also for models that are no space.
    """

    matrix: Floats
    scale_x: float
    scale_y: float
    left: float
    top: float
    viewpoint: Viewpoint = Viewpoint.TURNED

    @property
    def straight(self) -> bool:
        """Whether a space model is seen along one of its axes."""
        return self.viewpoint is not Viewpoint.TURNED

    def to_pixels(self, world: Floats) -> Floats:
        """Return (..., 2) pixels of (..., 3) world points."""
        return np.asarray(self.steps(world) + np.array([self.left, self.top]))

    def steps(self, world: Floats) -> Floats:
        """Return (..., 2) pixel steps of (..., 3) world steps."""
        return np.asarray((world @ self.matrix.T) * np.array([self.scale_x, -self.scale_y]))

    @property
    def towards(self) -> Floats:
        """Unit step of the world from the sheet towards the eye (3,)."""
        out = np.cross(self.matrix[0], self.matrix[1])
        return np.asarray(out / np.linalg.norm(out))

    def panned(self, dx: float, dy: float) -> "View":
        """Return the view moved by pixels."""
        return replace(self, left=self.left + dx, top=self.top + dy)

    def zoomed(self, factor: float, x: float, y: float) -> "View":
        """Return the view enlarged about the pixel (x, y)."""
        return replace(
            self,
            scale_x=self.scale_x * factor,
            scale_y=self.scale_y * factor,
            left=x + (self.left - x) * factor,
            top=y + (self.top - y) * factor,
        )


def fitted(
    flat: Floats,
    matrix: Floats,
    area: tuple[float, float, float, float],
    *,
    stretchable: bool,
    largest: tuple[float, float] = (np.inf, np.inf),
) -> View:
    """Return the view that fits projected points into an area.

    Parameters
    ----------
    flat : array (n, 2)
        Projected world points, y up.
    matrix : array (2, 3)
    area : x, y, width, height in pixels
    stretchable : bool
        Whether x and y may be scaled apart.
    largest : pair of float
        Pixels per metre not to be passed, x and y.
    """
    low, high = (flat.min(axis=0), flat.max(axis=0)) if len(flat) else (np.zeros(2), np.zeros(2))
    span = high - low
    x, y, width, height = area
    with np.errstate(divide="ignore"):
        scales = np.minimum(np.array([width, height]) / span, largest)
    if not stretchable:
        scales[:] = scales.min()
    scales[~np.isfinite(scales)] = min([s for s in scales if np.isfinite(s)], default=100.0)
    middle = (low + high) / 2
    left = x + width / 2 - middle[0] * scales[0]
    top = y + height / 2 + middle[1] * scales[1]
    return View(matrix, float(scales[0]), float(scales[1]), float(left), float(top))
