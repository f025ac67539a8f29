"""How far one thing alone can move the modes: its value gone, and without bound."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.advice.changes.edges import columns_of
from modalview.advice.changes.results import Ceiling
from modalview.advice.changes.states import State
from modalview.advice.changes.values import Variable
from modalview.assembly.parameters import Case
from modalview.eigen.threads import one_blas_thread

Array = npt.NDArray[np.float64]

RAD_PER_HZ = 2 * math.pi
# Dense matrices: beyond so many coordinates no ceiling is computed.
LARGEST = 1500
# A share of the largest: directions with less inertia have none, eigenvalues below it are zero.
NOTHING = 1e-12


@dataclass(frozen=True, slots=True, eq=False)
class Reach:
    """All frequencies of a model with a variable gone and without bound, ascending, Hz (modes,).

    Parameters
    ----------
    at_zero, at_infinity : array
        0 for motion that nothing resists; infinity for modes that leave upward.
    """

    at_zero: Array
    at_infinity: Array


def reach(state: State, variable: Variable) -> Reach | None:
    """Return where the modes go, at nominal values; None in models too large.

    Notes
    -----
    Without bound the terms of the value hold their stretch (or their inertia holds its motion) at zero: K and
    M on the null space of their rows. Between both ends every ordered frequency moves one way.
    """
    pencil = state.assembly.pencil()
    if pencil.n > LARGEST:
        return None
    unit = np.outer(pencil.scale, pencil.scale)
    K, M = pencil.K.toarray() / unit, pencil.M.toarray() / unit
    rows = columns_of(state, Case.NOMINAL, variable).T / pencil.scale
    with one_blas_thread():
        held = _null_space(rows)
        rank = pencil.n - held.shape[1]
        rest = _without(state, variable) / unit
        if variable.family == "mass":
            zero = _with_rigid(_finite(K, rest), pencil.rigid_body.shape[1])
            bound = np.concatenate([np.zeros(rank), _finite(held.T @ K @ held, held.T @ rest @ held)])
        else:
            zero, bound = _finite(rest, M), _finite(held.T @ rest @ held, held.T @ M @ held)
    return Reach(_filled(zero, pencil.modes), _filled(bound, pencil.modes))


def _without(state: State, variable: Variable) -> Array:
    """Return K, or M of a mass, without the terms of a variable: summed from the terms that stay."""
    rest = state.pencil_with(Case.NOMINAL, dict.fromkeys(variable.members, 0.0))
    found: Array = (rest.M if variable.family == "mass" else rest.K).toarray()
    return found


def _null_space(rows: Array) -> Array:
    """Return an orthonormal basis (n, n - rank) of what rows (r, n) hold to zero."""
    if not rows.size:
        return np.eye(rows.shape[1])
    _, size, right = np.linalg.svd(rows, full_matrices=True)
    rank = int((size > NOTHING * size.max()).sum())
    basis: Array = right[rank:].T
    return basis


def _finite(K: Array, M: Array) -> Array:
    """Return the finite eigenvalues of K z = lambda M z, both positive semidefinite, ascending."""
    if not K.size:
        return np.zeros(0)
    inertia, axes = np.linalg.eigh(M)
    light = inertia <= NOTHING * max(float(inertia[-1]), 0.0)
    heavy = axes[:, ~light] / np.sqrt(inertia[~light])
    none = axes[:, light]
    S = heavy.T @ K @ heavy
    if none.size:
        across = none.T @ K @ heavy
        S = S - across.T @ np.linalg.pinv(none.T @ K @ none, rcond=NOTHING, hermitian=True) @ across
    values = np.linalg.eigvalsh((S + S.T) / 2) if S.size else np.zeros(0)
    # What rounding of K, stiff massless parts included, leaves of motion that nothing resists.
    values[values < NOTHING * np.abs(K).max() * float((heavy**2).sum(axis=0).max(initial=0.0))] = 0.0
    found: Array = values
    return found


def _with_rigid(values: Array, number: int) -> Array:
    """Put zeros before the values until there are as many as rigid-body modes.

    What nothing resists stays at zero however little mass it moves; with none at all it would be no mode.
    """
    missing = max(0, number - int((values == 0).sum()))
    return np.concatenate([np.zeros(missing), values])


def _filled(values: Array, modes: int) -> Array:
    padded = np.full(modes, math.inf)
    padded[: min(values.size, modes)] = np.sqrt(values[:modes]) / RAD_PER_HZ
    padded.setflags(write=False)
    return padded


def ceilings(found: Reach | None, modes: Sequence[tuple[int, float]]) -> tuple[Ceiling, ...]:
    """Return the ceilings of some modes, given as (number, frequency now in Hz)."""
    if found is None:
        return ()
    return tuple(
        Ceiling(number, now, float(found.at_zero[number - 1]), float(found.at_infinity[number - 1]))
        for number, now in modes
    )
