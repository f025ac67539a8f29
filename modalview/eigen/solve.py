"""All modes of a pencil: found, polished from the terms, enclosed, and confirmed by counts."""

from collections.abc import Callable
from contextlib import AbstractContextManager, nullcontext
from functools import cache

import numpy as np
import numpy.typing as npt
from threadpoolctl import ThreadpoolController

from modalview.assembly.pencil import Pencil
from modalview.eigen.completeness import Completeness, confirm
from modalview.eigen.deflation import Deflation, deflate
from modalview.eigen.intervals import Groups, Intervals, enclose
from modalview.eigen.jacobi import singular_pairs
from modalview.eigen.massless import dense_factor
from modalview.eigen.modes import Modes
from modalview.eigen.polish import ritz
from modalview.eigen.rayleigh import Rayleigh, rayleigh
from modalview.eigen.standard import eigenpairs, eigenvalues
from modalview.errors import CancelledError, InputError

Array = npt.NDArray[np.float64]

# Dense matrices of this size take 0.3 GB each; several are held at once.
LARGEST = 6000
# One BLAS thread below this: a second one gains nothing and can cost tenfold on a busy machine.
SINGLE_THREAD = 500
# One-sided Jacobi: always up to the first size (it costs about as much as anything else there), up to
# the second where the model is graded.
ALWAYS_JACOBI = 20
LARGEST_JACOBI = 200
# Rounding of the largest eigenvalue against the lowest above which an eigenvalue solve needs more than
# polishing.
GRADED = 1e-10
# Spread of stiffness and of mass from which both count as graded.
SPREAD = 1e3
# Relative distance of eigenvalues up to which they are one repeated frequency.
REPEATED = 1e-9


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

    with _threads(pencil.modes):
        step("rigid-body modes", 0.0)
        deflation = deflate(pencil)
        step("all modes", 0.1)
        shapes, method = _shapes(pencil, deflation)
        step("error bounds", 0.6)
        found = rayleigh(pencil, shapes)
        shapes, found = _ascending(shapes, found)
        intervals = enclose(pencil, shapes, found, deflation.shapes.shape[1])
        step("counts", 0.9)
        checked = confirm(pencil, found, intervals, deflation.shapes.shape[1])
    return _assembled(deflation, shapes, found, intervals, checked, method)


def all_eigenvalues(pencil: Pencil) -> Array:
    """Return every eigenvalue (modes,) without shapes or bounds, ascending, rigid-body ones exactly 0.

    Absolute error about modes * u * the largest. Costs a third of an eigenvalue solve with vectors.
    """
    _check_size(pencil)
    with _threads(pencil.modes):
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


@cache
def _controller() -> ThreadpoolController:
    return ThreadpoolController()


def _threads(size: int) -> AbstractContextManager[object]:
    # Looking the libraries up takes milliseconds, once; holding them 20 us.
    if size >= SINGLE_THREAD:
        return nullcontext()
    return _controller().limit(limits=1, user_api="blas")


def _shapes(pencil: Pencil, deflation: Deflation) -> tuple[Array, str]:
    """Shapes of the modes that are not rigid-body ones, and the method in words."""
    size = pencil.modes - deflation.shapes.shape[1]
    factored = pencil.stiffness is not None and bool(np.all(pencil.stiffness >= 0))
    if factored and size <= ALWAYS_JACOBI:
        return _by_jacobi(pencil, deflation)
    reduced = deflation.both_sides(pencil.standard.toarray())
    if factored and size <= LARGEST_JACOBI and _graded(pencil, reduced):
        return _by_jacobi(pencil, deflation)
    values, vectors = eigenpairs(reduced)
    vectors = deflation.lift(vectors)
    method = "tridiagonalisation and divide and conquer"
    if factored:
        _, vectors = ritz(pencil.factor, values, vectors)
        method += ", polished from the terms"
    return pencil.basis @ vectors, method


def _by_jacobi(pencil: Pencil, deflation: Deflation) -> tuple[Array, str]:
    _, vectors = singular_pairs(deflation.columns(dense_factor(pencil)))
    return pencil.basis @ deflation.lift(vectors), "one-sided Jacobi on the terms"


def _graded(pencil: Pencil, reduced: Array) -> bool:
    values = eigenvalues(reduced)
    if values.size and np.finfo(float).eps / 2 * values[-1] > GRADED * values[0]:
        return True
    mass = pencil.M.diagonal()[~pencil.massless]
    return _spread(mass) > SPREAD and pencil.stiffness is not None and _spread(pencil.stiffness) > SPREAD


def _spread(values: Array) -> float:
    positive = values[values > 0]
    return float(positive.max() / positive.min()) if positive.size else 1.0


def _ascending(shapes: Array, found: Rayleigh) -> tuple[Array, Rayleigh]:
    order = np.argsort(found.quotient, kind="stable")
    sorted_ = Rayleigh(found.quotient[order], found.quotient_error[order], found.residual[order])
    return shapes[:, order], sorted_


def _assembled(
    deflation: Deflation,
    shapes: Array,
    found: Rayleigh,
    intervals: Intervals,
    checked: Completeness,
    method: str,
) -> Modes:
    known = deflation.shapes.shape[1]
    zeros = np.zeros(known)

    def place(elastic: Array, rigid: Array) -> Array:
        return np.concatenate([elastic[: checked.unstable], rigid, elastic[checked.unstable :]])

    values = place(found.quotient, zeros)
    lower, upper = place(intervals.lower, zeros), place(intervals.upper, zeros)
    rigid = known + checked.zeros
    still = slice(checked.unstable, checked.unstable + rigid)
    values[still] = 0.0
    stacked = [shapes[:, : checked.unstable], deflation.shapes, shapes[:, checked.unstable :]]
    frequency = np.sqrt(np.maximum(values, 0.0)) / (2 * np.pi)
    return Modes(
        eigenvalues=values,
        lower=lower,
        upper=upper,
        frequency_hz=frequency,
        numerical_error_hz=_frequency_error(frequency, lower, upper),
        growth_rate=np.sqrt(np.maximum(-values, 0.0)),
        shapes=np.concatenate(stacked, axis=1),
        rigid_body_modes=rigid,
        unstable=checked.unstable,
        groups=_groups(values, intervals, checked.unstable, rigid, known),
        residuals=place(found.residual, zeros),
        counts=checked.counts,
        complete=checked.complete,
        method=method,
        warnings=checked.warnings,
    ).frozen()


def _frequency_error(frequency: Array, lower: Array, upper: Array) -> Array:
    low, high = (np.sqrt(np.maximum(end, 0.0)) / (2 * np.pi) for end in (lower, upper))
    # The conversions above round too: a few units, outward.
    rounding = 4 * np.finfo(float).eps * np.maximum(frequency, high)
    error: Array = np.maximum(np.maximum(high - frequency, frequency - low), 0.0) + rounding
    return error


def _groups(values: Array, intervals: Intervals, unstable: int, rigid: int, known: int) -> Groups:
    """Runs of one frequency: rigid-body modes, clusters that overlap, values that agree to REPEATED."""
    joined = np.diff(values) <= REPEATED * np.abs(values[1:])
    for start, stop in intervals.clusters:
        shift = known if start >= unstable else 0
        joined[start + shift : stop + shift - 1] = True
    if rigid:
        joined[unstable : unstable + rigid - 1] = True
        joined[[edge for edge in (unstable - 1, unstable + rigid - 1) if 0 <= edge < joined.size]] = False
    edges = [0, *(np.flatnonzero(~joined) + 1).tolist(), values.size]
    return tuple((int(start), int(stop)) for start, stop in zip(edges[:-1], edges[1:], strict=True))
