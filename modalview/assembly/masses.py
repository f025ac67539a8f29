"""Mass terms of a body: what inertia takes part in which freedom."""

from fractions import Fraction

import numpy as np
import numpy.typing as npt

from modalview.assembly.parameters import Parameter, inertia_scale, parameter
from modalview.model.parts import FREEDOMS, Body, DefaultTolerance, InertiaTensor, Motion

ROTATION_ENTRIES = ("Ixx", "Iyy", "Izz")
# A principal moment below this share of the largest is zero: a thin rod, its tensor typed with rounded
# numbers. The rules of the model let tensors through that miss being possible by as much.
NO_MOMENT = 1e-9

ONE = Fraction(1)


def has_inertia(body: Body, freedom: str) -> bool:
    """Return whether inertia takes part in a freedom of a body."""
    if not freedom.startswith("r"):
        return body.mass is not None and body.mass.si > 0
    if isinstance(body.inertia, InertiaTensor):
        entry = getattr(body.inertia, ROTATION_ENTRIES["xyz".index(freedom[1])])
        return bool(entry.si > 0)
    return body.inertia is not None and body.inertia.si > 0


def tensor_matrix(tensor: InertiaTensor) -> npt.NDArray[np.float64]:
    """Return the inertia tensor (3, 3), kg m**2; off-diagonal entries are minus the products P."""
    pxy, pxz, pyz = (p.si if p else 0.0 for p in (tensor.Pxy, tensor.Pxz, tensor.Pyz))
    return np.array(
        [
            [tensor.Ixx.si, -pxy, -pxz],
            [-pxy, tensor.Iyy.si, -pyz],
            [-pxz, -pyz, tensor.Izz.si],
        ]
    )


def principal_terms(tensor: InertiaTensor) -> list[tuple[float, tuple[float, float, float]]]:
    """Return the principal moments above zero with their axes: J = sum J_i q_i q_i^T."""
    matrix = tensor_matrix(tensor)
    if not np.any(matrix - np.diag(np.diag(matrix))):
        units = ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0))
        return [(float(matrix[i, i]), units[i]) for i in range(3) if matrix[i, i] > 0]
    moments, axes = np.linalg.eigh(matrix)
    return [
        (float(moment), (float(axis[0]), float(axis[1]), float(axis[2])))
        for moment, axis in zip(moments, axes.T, strict=True)
        if moment > NO_MOMENT * moments[-1]
    ]


def inertia_forms(body: Body, motion: Motion) -> list[dict[tuple[str, str], Fraction]]:
    """Return the directions of a body that inertia takes part in, as forms in its freedoms.

    Single freedoms, but for a tensor with a principal moment of zero (a thin rod askew): there the
    principal axes that have one.
    """
    names = [name for name in FREEDOMS[motion] if has_inertia(body, name)]
    if isinstance(body.inertia, InertiaTensor):
        turns = principal_terms(body.inertia)
        if len(turns) < sum(name.startswith("r") for name in names):
            shifts = [name for name in names if not name.startswith("r")]
            return [
                *({(body.id, name): Fraction(1)} for name in shifts),
                *(
                    {
                        (body.id, name): Fraction(a)
                        for name, a in zip(("rx", "ry", "rz"), axis, strict=True)
                        if a
                    }
                    for _, axis in turns
                ),
            ]
    return [{(body.id, name): ONE} for name in names]


def mass_parameters(body: Body, default: DefaultTolerance | None, motion: Motion) -> list[Parameter]:
    """Return the parameters of a body that the motion uses: its mass, its inertia."""
    fallback = (body.tolerance, default.mass if default else None)
    found = []
    if motion is not Motion.SHAFT_TRAIN and body.mass is not None and body.mass.si > 0:
        found.append(parameter(body, "mass", body.mass, "mass", fallback))
    if motion is Motion.SINGLE_AXIS or body.inertia is None:
        return found
    if isinstance(body.inertia, InertiaTensor):
        found.append(inertia_scale(body, body.inertia, default))
    elif body.inertia.si > 0:
        found.append(parameter(body, "inertia", body.inertia, "mass", fallback))
    return found
