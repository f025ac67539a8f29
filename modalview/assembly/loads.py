"""Where an excitation pushes: its unit force over the independent coordinates."""

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.assemble import Assembly
from modalview.assembly.directions import direction_vector, length
from modalview.assembly.kinematics import AXES, TRANSLATIONS, Form, Number, Places, Vector, cross, places
from modalview.assembly.parameters import Case, values_at
from modalview.model.parts import FREEDOMS, Direction, End, Excitation, Model, Motion

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
        return _base_motion(assembly, excitation)
    force = body_force(assembly.model, excitation)
    if force is None:
        return None
    return np.asarray(assembly.structure.coordinates.to_bodies.T @ force, dtype=complex)


def body_force(model: Model, excitation: Excitation) -> ComplexArray | None:
    """Return a unit force on the freedoms of all bodies (bodies * freedoms,), before any constraint.

    None where no point on a body is given, or no direction where one is needed.
    """
    if excitation.at is None or excitation.at.support is not None:
        return None
    pushes = _pushes(excitation, excitation.at, places(model))
    return None if pushes is None else over_bodies(model, pushes)


def over_bodies(model: Model, forms: Sequence[tuple[complex, Form]]) -> ComplexArray:
    """Return a weighted sum of forms over the freedoms of all bodies, in their order; supports left out."""
    names = FREEDOMS[model.motion]
    column = {
        (body.id, name): i for i, (body, name) in enumerate((b, f) for b in model.bodies for f in names)
    }
    found = np.zeros(len(column), dtype=complex)
    for weight, form in forms:
        for key, entry in form.items():
            if key in column:
                found[column[key]] += weight * float(entry)
    return found


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


def support_motion(assembly: Assembly, excitation: Excitation) -> ComplexArray | None:
    """Return the unit motion of a support, over ``support_freedoms`` (s,), m.

    None where it acts at no support, no direction is given, or in a shaft train, which turns only.
    """
    here = places(assembly.model)
    wanted = "y" if here.motion is Motion.SINGLE_AXIS else excitation.direction
    support = excitation.at.support if excitation.at is not None else None
    if support is None or wanted is None or here.motion is Motion.SHAFT_TRAIN:
        return None
    names = assembly.structure.stiffness.support_freedoms
    moved = np.zeros(len(names), dtype=complex)
    for weight, direction in _directions(wanted, excitation.axis, here):
        for name, component in zip(TRANSLATIONS, direction, strict=True):
            if (support, name) in names:
                moved[names.index((support, name))] += weight * float(component)
    return moved


def _base_motion(assembly: Assembly, excitation: Excitation) -> ComplexArray | None:
    """Return -(sum k a g^T y) for the motion of a support along the excitation's direction."""
    moved = support_motion(assembly, excitation)
    if moved is None:
        return None
    terms = assembly.structure.stiffness
    forces = sp.diags_array(terms.values(values_at(assembly.parameters, Case.NOMINAL))) @ terms.support_rows
    return np.asarray(-(terms.rows.T @ (forces @ moved)), dtype=complex)
