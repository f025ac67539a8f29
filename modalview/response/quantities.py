"""What is read off a steady motion: the motion of points, and the sizes that people measure."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.dampedterms import DampedTerms
from modalview.assembly.directions import direction_vector, length
from modalview.assembly.kinematics import AXES, TRANSLATIONS, Form, places
from modalview.assembly.loads import over_bodies
from modalview.errors import Fault, ModelFaultsError
from modalview.model.parts import FREEDOMS, Direction, End, Motion
from modalview.response.motion import TAKES_PART, SteadyMotion

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# A motion this small against the parts it is the sum of is their rounding.
CANCELLED = 1e-14
ROOT_HALF = np.sqrt(0.5)


@dataclass(frozen=True, slots=True, eq=False)
class Point:
    """Motion of one point along one direction, or along all (one to three rows).

    Parameters
    ----------
    rows : array (r, N)
        Over the coordinates of DampedTerms; 1, or m per rad.
    """

    rows: Array

    def amplitude(self, motion: SteadyMotion, size: Array) -> Array:
        """Return the peak displacement (w,) under a load of so much (w,); infinite where it has no bound.

        Along all directions it is the larger axis of the ellipse that the point moves on.
        """
        found = larger_axis(self.rows @ motion.coordinates)
        parts = np.abs(self.rows) @ np.abs(motion.coordinates)
        found = np.where(found > CANCELLED * parts.max(axis=0), found, 0.0) * size
        if motion.infinite is None:
            return found
        # Infinite only where this point takes part in the shape that grows.
        grown = larger_axis(self.rows @ motion.infinite)
        reach = np.linalg.norm(self.rows) * np.linalg.norm(motion.infinite, axis=0)
        return np.where(grown > TAKES_PART * np.maximum(reach, np.finfo(float).tiny), np.inf, found)


def larger_axis(components: ComplexArray) -> Array:
    """Return the larger half-axis (w,) of the ellipses u(t) = Re(u exp(i w t)) of components (r, w).

    max |u(t)|^2 = (|u|^2 + |u . u|)/2, with u . u not conjugated. Derived here.

    Examples
    --------
    A circle of radius 2, and a motion along one line at 45 degrees:

    >>> larger_axis(np.array([[2, 3], [-2j, 3]])).round(6).tolist()
    [2.0, 4.242641]
    """
    if len(components) == 1:
        single: Array = np.abs(components[0])
        return single
    # Scaled, so that squares of small motions do not vanish.
    scale = np.abs(components).max(axis=0, initial=0.0)
    scaled = components / np.where(scale > 0, scale, 1.0)
    squared = np.sum(np.abs(scaled) ** 2, axis=0) + np.abs(np.sum(scaled**2, axis=0))
    found: Array = scale * np.sqrt(squared / 2)
    return found


def velocity_rms(displacement: Array, omega: Array) -> Array:
    """Return the rms velocity w u / sqrt 2 of a peak displacement u; infinite stays infinite."""
    found: Array = ROOT_HALF * omega * displacement
    return found


def acceleration_rms(displacement: Array, omega: Array) -> Array:
    """Return the rms acceleration w^2 u / sqrt 2 of a peak displacement u."""
    found: Array = ROOT_HALF * omega**2 * displacement
    return found


def point_at(
    assembly: Assembly, terms: DampedTerms, at: End, direction: Direction | None, place: str
) -> Point:
    """Return the point of a body that is looked at.

    Parameters
    ----------
    direction : Direction or None
        None, or "rotating": all directions. In a single axis y, in a shaft train the rotation.
    place : str
        For messages.

    Raises
    ------
    ModelFaultsError
        It is not on a body of the model.
    """
    here = places(assembly.model)
    if at.body is None or at.body not in here.centre or at.body in here.supports:
        named = at.support if at.support is not None else at.body
        reason = f'motion is looked at on a body; "{named}" is none' if named else "no body is named"
        raise ModelFaultsError((Fault(place, reason),))
    point = here.point(at)
    if here.motion is Motion.SHAFT_TRAIN:
        forms: list[Form] = [here.turns(at.body, AXES["z"])]
    elif here.motion is Motion.SINGLE_AXIS:
        forms = [here.moves(at.body, point, AXES["y"])]
    elif direction is None or direction == "rotating":
        names = [name for name in FREEDOMS[here.motion] if name in TRANSLATIONS]
        forms = [here.moves(at.body, point, AXES[name]) for name in names]
    else:
        vector = direction_vector(direction, here)
        size = length(vector)
        if size == 0:
            raise ModelFaultsError((Fault(place, "a direction of length zero points nowhere"),))
        forms = [here.moves(at.body, point, (vector[0] / size, vector[1] / size, vector[2] / size))]
    rows = np.array([over_bodies(assembly.model, [(1.0, form)]).real for form in forms])
    return Point(np.asarray((terms.to_bodies.T @ rows.T).T, dtype=float))
