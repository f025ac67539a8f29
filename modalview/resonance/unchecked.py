"""What a set of checks does not cover; stands near the verdict."""

from modalview.assembly.parameters import shown_name
from modalview.model.parts import FREEDOMS, Excitation, Model, Motion
from modalview.resonance.bands import excitation_label

_DIRECTIONS = {
    Motion.SINGLE_AXIS: "motion across the one axis, and rotation",
    Motion.SHAFT_TRAIN: "bending and axial motion: only rotation about the shafts is modelled",
    Motion.PLANE: "motion out of the plane of the drawing",
}


def not_checked(model: Model) -> tuple[str, ...]:
    """Return what was not checked: orders not listed, directions not modelled, bending of the parts."""
    found = [
        f"{machine.name or machine.id}: no order is listed"
        if not machine.excitations
        else f"{machine.name or machine.id}: orders and frequencies other than {_listed(machine.excitations)}"
        for machine in model.machines
    ]
    if model.motion in _DIRECTIONS:
        found.append(_DIRECTIONS[model.motion])
    names = FREEDOMS[model.motion]
    for body in model.bodies:
        held = [name for name in names if body.dof is not None and name not in body.dof]
        if held:
            found.append(f"{shown_name(body)}: its motion {', '.join(held)} is held still")
    found.append("local modes of the parts: each body is taken as rigid")
    return tuple(found)


def _listed(excitations: tuple[Excitation, ...]) -> str:
    return ", ".join(excitation_label(excitation) for excitation in excitations)
