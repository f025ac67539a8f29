"""Where an excitation pushes: its unit force over the independent coordinates."""

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.assemble import Assembly
from modalview.assembly.directions import direction_vector, length
from modalview.assembly.kinematics import AXES, TRANSLATIONS, Form, Number, Places, Vector, cross, places
from modalview.assembly.parameters import Case, values_at
from modalview.model.parts import FREEDOMS, Direction, End, Excitation, Motion

ComplexArray = npt.NDArray[np.complex128]

ROTATING = "rotating"


def unit_force(assembly: Assembly, excitation: Excitation) -> ComplexArray | None:
    """Return the force vector (n,) of an excitation of unit size, or None when no point is given.

    Parameters
    ----------
    assembly : Assembly
    excitation : Excitation
        ``at`` and ``direction`` say where; "rotating" is two perpendicular forces a quarter turn apart.

    Returns
    -------
    complex array (n,) or None
        1 per coordinate for a force, m per rotation; for base motion the force per unit motion of the
        support, -(sum k a g^T), N/m. None also where a direction is needed and not given.
    """
    if excitation.at is None:
        return None
    if excitation.at.support is not None:
        return _base_motion(assembly, excitation.at.support, excitation)
    here = places(assembly.model)
    pushes = _pushes(excitation, excitation.at, here)
    if pushes is None:
        return None
    names = FREEDOMS[assembly.model.motion]
    column = {
        (body.id, name): i
        for i, (body, name) in enumerate((b, f) for b in assembly.model.bodies for f in names)
    }
    force = np.zeros(len(column), dtype=complex)
    for weight, form in pushes:
        for key, entry in form.items():
            if key in column:
                force[column[key]] += weight * float(entry)
    return np.asarray(assembly.structure.coordinates.to_bodies.T @ force, dtype=complex)


def _pushes(excitation: Excitation, at: End, here: Places) -> list[tuple[complex, Form]] | None:
    part, point = here.part(at), here.point(at)
    torque = excitation.magnitude is not None and excitation.magnitude.torque is not None
    if here.motion is Motion.SHAFT_TRAIN:
        return [(1.0, here.turns(part, AXES["z"]))]
    if here.motion is Motion.SINGLE_AXIS:
        return [(1.0, here.moves(part, point, AXES["y"]))]
    if torque:
        axis = _torque_axis(excitation, here)
        return None if axis is None else [(1.0, here.turns(part, axis))]
    if excitation.direction is None:
        return None
    directions = _directions(excitation.direction, excitation.axis, here)
    return [(weight, here.moves(part, point, direction)) for weight, direction in directions]


def _torque_axis(excitation: Excitation, here: Places) -> Vector | None:
    if here.motion is Motion.PLANE:
        return AXES["z"]
    given = excitation.axis
    if given is not None:
        return _unit(here.vector(given))
    if excitation.direction is None or excitation.direction == ROTATING:
        return None
    return _unit(direction_vector(excitation.direction, here))


def _directions(
    direction: Direction, axis: tuple[float, ...] | None, here: Places
) -> list[tuple[complex, Vector]]:
    if direction != ROTATING:
        return [(1.0, _unit(direction_vector(direction, here)))]
    if here.motion is Motion.PLANE:
        return [(1.0, AXES["x"]), (-1j, AXES["y"])]
    about = _unit(here.vector(axis) if axis else AXES["x"])
    size = [abs(float(component)) for component in about]
    first = _unit(cross(about, tuple(AXES.values())[size.index(min(size))]))
    return [(1.0, first), (-1j, cross(about, first))]


def _unit(vector: Sequence[Number]) -> Vector:
    size = length(vector)
    return (float(vector[0]) / size, float(vector[1]) / size, float(vector[2]) / size)


def _base_motion(assembly: Assembly, support: str, excitation: Excitation) -> ComplexArray | None:
    """Return -(sum k a g^T y) for the motion of a support along the excitation's direction."""
    here = places(assembly.model)
    wanted = "y" if here.motion is Motion.SINGLE_AXIS else excitation.direction
    if wanted is None or here.motion is Motion.SHAFT_TRAIN:
        return None
    weights = _directions(wanted, excitation.axis, here)
    terms = assembly.structure.stiffness
    moved = np.zeros(len(terms.support_freedoms), dtype=complex)
    for weight, direction in weights:
        for name, component in zip(TRANSLATIONS, direction, strict=True):
            if (support, name) in terms.support_freedoms:
                moved[terms.support_freedoms.index((support, name))] += weight * float(component)
    forces = sp.diags_array(terms.values(values_at(assembly.parameters, Case.NOMINAL))) @ terms.support_rows
    return np.asarray(-(terms.rows.T @ (forces @ moved)), dtype=complex)
