"""Directions and axes as people give them, as vectors."""

import math
from collections.abc import Sequence

from modalview.assembly.kinematics import AXES, Number, Places, Vector, cross, dot
from modalview.model.parts import Axes, Direction
from modalview.units.parse import read
from modalview.units.quantities import ANGLE

# The cosine of 90 degrees comes out as 6e-17: components this small are meant to be zero.
ROUNDING = 1e-15


def direction_vector(direction: Direction, places: Places) -> Vector:
    """Return a direction as a vector, not of unit length.

    "x", "-y" and components stay exact; "30 deg" (from +x towards +y) is rounded, multiples of 90 are not.
    "rx" of a torque is the axis it turns about.
    """
    if not isinstance(direction, str):
        return places.vector(direction)
    name = direction.strip().replace("−", "-")
    sign, axis = (-1, name[1:]) if name.startswith("-") else (1, name.removeprefix("+"))
    if axis.removeprefix("r") in AXES:
        x, y, z = AXES[axis.removeprefix("r")]
        return (sign * x, sign * y, sign * z)
    angle = read(name, ANGLE)
    x, y = (0.0 if abs(c) < ROUNDING else c for c in (math.cos(angle), math.sin(angle)))
    return places.vector((x, y))


def length(vector: Sequence[Number]) -> float:
    """Return the length as a double."""
    return math.sqrt(float(dot(vector, vector)))


def across(vector: Sequence[Number], along: Sequence[Number]) -> Vector:
    """Return ``vector`` made perpendicular to ``along``, times the square of its length (no division)."""
    squared, common = dot(along, along), dot(vector, along)
    return (
        squared * vector[0] - common * along[0],
        squared * vector[1] - common * along[1],
        squared * vector[2] - common * along[2],
    )


def level_side(x: Sequence[Number]) -> Vector:
    """Return a direction across ``x`` and level (across z); along y where ``x`` is upright."""
    side = cross(AXES["z"], x)
    return side if any(side) else AXES["y"]


def axes_vectors(axes: Axes | None, places: Places) -> tuple[Vector, Vector, Vector]:
    """Return three perpendicular directions of a part's own axes, not of unit length.

    Without axes they are the model's. With x alone y is taken level, and the other way round; with
    both y is turned square to x.
    """
    if axes is None or (axes.x is None and axes.y is None):
        return AXES["x"], AXES["y"], AXES["z"]
    if axes.x is not None:
        x = places.vector(axes.x)
        y = across(places.vector(axes.y), x) if axes.y is not None else level_side(x)
    else:
        y = places.vector(axes.y or ())
        side = level_side(y)
        x = (-side[0], -side[1], -side[2])
    return x, y, cross(x, y)
