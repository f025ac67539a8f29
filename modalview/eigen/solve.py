"""All modes of a pencil: found, polished from the terms, enclosed, and confirmed by counts."""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import numpy.typing as npt

from modalview.assembly.pencil import Pencil
from modalview.eigen.completeness import confirm, signs, verdict
from modalview.eigen.deflation import Deflation, deflate
from modalview.eigen.gathered import ascending, gathered
from modalview.eigen.intervals import enclose
from modalview.eigen.jacobi import singular_pairs
from modalview.eigen.massless import dense_factor
from modalview.eigen.modes import Modes
from modalview.eigen.polish import ritz
from modalview.eigen.rayleigh import Energy
from modalview.eigen.standard import eigenpairs, eigenvalues
from modalview.eigen.threads import one_blas_thread
from modalview.errors import CancelledError, InputError

Array = npt.NDArray[np.float64]

# Dense matrices of this size take 0.3 GB each; several are held at once.
LARGEST = 6000
# One-sided Jacobi up to this size: it costs five times an eigenvalue solve here and grows faster.
LARGEST_JACOBI = 200
# Rounding of the largest eigenvalue against the lowest above which polishing alone does not reach 1e-14
# (measured: 1e-15 up to 1e-3 on 48 models of 24 and 120 modes; the estimate of the lowest is rough).
GRADED = 1e-6


def never() -> bool:
    """Never cancelled."""
    return False


def find_modes(
    pencil: Pencil,
    *,
    cancelled: Callable[[], bool] = never,
    progress: Callable[[str, float], None] | None = None,
) -> Modes:
    """Find all modes of a pencil, with an interval for every eigenvalue and evidence of completeness.

    Parameters
    ----------
    pencil : Pencil
        Up to 6000 modes.
    cancelled : callable
        Asked between steps.
    progress : callable or None
        Told (what is being done, share done 0..1).

    Returns
    -------
    Modes
        Relative error of each eigenvalue about 1e-15 for models with terms; u times highest over lowest
        eigenvalue for matrices of others. The intervals hold whatever the accuracy.

    Raises
    ------
    InputError
        Too many modes, or none.
    CancelledError
        ``cancelled`` said so.
    NumericalError
        An iteration did not converge, or massless coordinates are held by nothing.
    """
    _check_size(pencil)

    def step(what: str, share: float) -> None:
        if cancelled():
            raise CancelledError("Finding the modes was stopped.")
        if progress is not None:
            progress(what, share)

    with one_blas_thread():
        step("rigid-body modes", 0.0)
        deflation = deflate(pencil)
        step("all modes", 0.1)
        shapes, method = _shapes(pencil, deflation)
        step("error bounds", 0.6)
        energy = Energy.of(pencil)
        shapes, found = ascending(shapes, energy.rayleigh(shapes))
        intervals = enclose(energy, shapes, found, deflation.shapes.shape[1])
        step("counts", 0.8)
        modes = gathered(deflation.shapes, shapes, found, intervals, signs(pencil.shifted, intervals))
        counts = confirm(pencil.shifted, modes.lower, modes.upper)
    return replace(modes, method=method, counts=counts, complete=verdict(intervals, counts)).frozen()


def all_eigenvalues(pencil: Pencil) -> Array:
    """Return every eigenvalue (modes,) without shapes or bounds, ascending, rigid-body ones exactly 0.

    Absolute error about modes * u * the largest. Costs a third of an eigenvalue solve with vectors.
    """
    _check_size(pencil)
    with one_blas_thread():
        deflation = deflate(pencil)
        elastic = eigenvalues(deflation.both_sides(pencil.standard.toarray()))
    return np.sort(np.concatenate([np.zeros(deflation.shapes.shape[1]), elastic]))


def _check_size(pencil: Pencil) -> None:
    if pencil.modes == 0:
        raise InputError("The model has no mode: no coordinate has mass or inertia. Give a body a mass.")
    if pencil.modes > LARGEST:
        raise InputError(
            f"The model has {pencil.modes} modes; all modes at once are found up to {LARGEST}. "
            "Hold directions that do not matter, or join bodies that move as one with rigid links."
        )


def _shapes(pencil: Pencil, deflation: Deflation) -> tuple[Array, str]:
    """Return shapes of the modes that are not rigid-body ones, and the method in words."""
    values, vectors = eigenpairs(deflation.both_sides(pencil.standard.toarray()))
    if pencil.stiffness is None or bool(np.any(pencil.stiffness < 0)):
        return pencil.basis @ deflation.lift(vectors), "tridiagonalisation, divide and conquer"
    graded = bool(values.size) and np.finfo(float).eps / 2 * values[-1] > GRADED * values[0]
    if graded and values.size <= LARGEST_JACOBI:
        _, vectors = singular_pairs(deflation.columns(dense_factor(pencil)))
        return pencil.basis @ deflation.lift(vectors), "one-sided Jacobi on the terms"
    vectors = deflation.lift(vectors)
    for _ in range(1 + graded):
        values, vectors = ritz(pencil.factor, values, vectors)
    return pencil.basis @ vectors, "tridiagonalisation, divide and conquer, polished from the terms"
