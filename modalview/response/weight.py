"""How a model settles under its own weight, with static stiffness."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.linalg import splu

from modalview.assembly.assemble import Assembly
from modalview.assembly.parameters import Case, shown_name, values_at
from modalview.errors import Fault, InputError, ModelFaultsError, NumericalError
from modalview.model.parts import FREEDOMS, Model, Motion

Array = npt.NDArray[np.float64]

# Standard acceleration of free fall, m/s2 (3rd CGPM, 1901).
GRAVITY = 9.80665
# Which way is up.
UP: dict[Motion, str] = {Motion.SINGLE_AXIS: "y", Motion.PLANE: "y", Motion.SPACE: "z"}
# A motion that nothing resists is level where the weight's work on it is less than this share of its parts'.
LEVEL = 1e-9
# Forces are corrected until they balance the weight; each step gains many digits.
STEPS = 4


@dataclass(frozen=True, slots=True, eq=False)
class Settled:
    """A model at rest under its weight.

    Parameters
    ----------
    motion : array (bodies, 6)
        From the unloaded place: x, y, z (m), rx, ry, rz (rad) of every body.
    forces : array (t,)
        Of every stiffness term, positive where it is stretched; N or N m. They balance the weight more
        closely than the motion tells.
    weight : array (bodies,)
        N.
    unbalanced : float
        Largest force left over on any coordinate, as a share of the whole weight.
    """

    motion: Array
    forces: Array
    weight: Array
    unbalanced: float


def settled(assembly: Assembly) -> Settled:
    """Return how a model settles under its weight.

    Parameters
    ----------
    assembly : Assembly
        Static stiffness is taken: dynamic ratios are left out.

    Raises
    ------
    InputError
        A shaft train carries no weight.
    ModelFaultsError
        Nothing holds some part up; names it.
    NumericalError

    Notes
    -----
    Linear: small motion, springs that push as they pull. The weight's own moment about a tilted place is left
    out. One sparse factorization, then corrections of the forces themselves.
    """
    model, structure = assembly.model, assembly.structure
    if model.motion not in UP:
        raise InputError("A shaft train only turns: it has no mounts that carry weight.")
    weight, load = _weights(model)
    to_bodies = structure.coordinates.to_bodies
    pull = np.asarray(to_bodies.T @ load)
    _require_held(assembly, pull, load)
    rows, stiffness = structure.stiffness.rows, static_stiffness(assembly)
    solve = _solver(rows, stiffness, structure.rigid_body)
    q, forces = np.zeros(pull.size), np.zeros(stiffness.size)
    for _ in range(STEPS):
        step = solve(pull - np.asarray(rows.T @ forces))
        q = q + step
        forces = forces + stiffness * np.asarray(rows @ step)
    left = np.abs(pull - np.asarray(rows.T @ forces)) / assembly.pencil().scale
    unbalanced = float(left.max(initial=0.0)) / max(float(weight.sum()), np.finfo(float).tiny)
    motion = assembly.body_motion(q[:, None])[0]
    for array in (motion, forces, weight):
        array.setflags(write=False)
    return Settled(motion, forces, weight, unbalanced)


def static_stiffness(assembly: Assembly) -> Array:
    """Return the value of every stiffness term (t,) without dynamic ratios, N/m or N m/rad."""
    values = values_at(assembly.parameters, Case.NOMINAL)
    dynamic = [i for i, p in enumerate(assembly.parameters) if p.id.endswith(".dynamic_ratio")]
    values[dynamic] = 1.0
    return assembly.structure.stiffness.values(values)


def _weights(model: Model) -> tuple[Array, Array]:
    """Return the weight of every body (bodies,) and its force on every freedom (bodies * freedoms,), N."""
    names = FREEDOMS[model.motion]
    weight = np.array([GRAVITY * body.mass.si if body.mass is not None else 0.0 for body in model.bodies])
    load = np.zeros((weight.size, len(names)))
    load[:, names.index(UP[model.motion])] = -weight
    return weight, load.ravel()


def _require_held(assembly: Assembly, pull: Array, load: Array) -> None:
    """Refuse a model of which a part would fall."""
    free = assembly.structure.rigid_body
    work = free.T @ pull
    most = np.abs(free).T @ (np.asarray(abs(assembly.structure.coordinates.to_bodies).T @ np.abs(load)))
    falling = np.flatnonzero(np.abs(work) > LEVEL * most)
    if falling.size == 0:
        return
    moved = np.asarray(assembly.structure.coordinates.to_bodies @ free[:, falling[0]]) * load
    bodies = assembly.model.bodies
    worst = int(np.argmax(np.abs(moved.reshape(len(bodies), -1)).max(axis=1)))
    reason = (
        "nothing holds it up against its weight; join it to ground by a spring or a mount that is not level"
    )
    raise ModelFaultsError((Fault(f'body "{shown_name(bodies[worst])}"', reason),))


def _solver(rows: sp.csr_array, stiffness: Array, free: Array) -> Callable[[Array], Array]:
    """Return what solves K q = f, q without the motions that nothing resists."""
    K = sp.csc_array(rows.T @ sp.diags_array(stiffness) @ rows)
    n, r = K.shape[0], free.shape[1]
    if r:
        edge = sp.csc_array(free * float(np.abs(K.diagonal()).mean()))
        K = sp.csc_array(sp.vstack([sp.hstack([K, edge]), sp.hstack([edge.T, sp.csc_array((r, r))])]))
    try:
        lu = splu(K)
    except RuntimeError as error:
        raise NumericalError("The stiffness matrix cannot be factored: a part is held by nothing.") from error
    return lambda force: np.asarray(lu.solve(np.concatenate([force, np.zeros(r)])))[:n]
