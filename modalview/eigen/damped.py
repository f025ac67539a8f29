"""Damped modes: every root of the balanced state matrix, with its shape and an estimate of its error."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from threadpoolctl import threadpool_limits  # type: ignore[import-untyped]

from modalview.assembly.dampedterms import DampedTerms
from modalview.assembly.statematrix import StateMatrix, drifting_motions, state_matrix
from modalview.eigen.dampedmodes import DampedModes
from modalview.eigen.dampedratio import real_pair_ratio
from modalview.errors import CancelledError, NumericalError

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# Two real roots whose shapes differ by less than this (one minus the squared cosine) are one overdamped mode.
SAME_SHAPE = 1e-9
# A condition beyond this leaves less than nine digits; at critical damping it is 1e8, and eight are left.
NEARLY_CRITICAL = 1e7
# A two-sided quotient is taken where its denominator is above this share of ||x||^2: below, it is no better
# than the root it starts from.
SOUND = 1e-6
# The sum of the roots and the trace may differ by this many times their expected rounding.
SLACK = 100.0


def never() -> bool:
    """Never cancelled."""
    return False


@dataclass(frozen=True, slots=True, eq=False)
class _Found:
    """Roots of the state matrix, one of each pair, with vectors (states, m)."""

    roots: ComplexArray
    vectors: ComplexArray
    condition: Array
    residual: Array


def find_damped_modes(
    terms: DampedTerms,
    *,
    cancelled: Callable[[], bool] = never,
    progress: Callable[[str, float], None] | None = None,
) -> DampedModes:
    """Find all roots of a model with dashpots.

    Parameters
    ----------
    terms : DampedTerms
        Up to 3000 roots.
    cancelled, progress : callable
        As for find_modes.

    Returns
    -------
    DampedModes
        Absolute error of a root about u times the largest rate times its condition.

    Raises
    ------
    InputError
        Too many roots.
    CancelledError
    NumericalError
        The iteration did not converge, or a root is not where the structure allows it.

    Notes
    -----
    Householder reduction to Hessenberg form and shifted QR iteration (LAPACK dgeev). J A is symmetric for
    J = diag(1, -1) over forces and velocities, so that the left vector of x is J x, the condition of a root
    is ||x||^2/|x^T J x|, and the two-sided quotient x^T J A x / x^T J x doubles the digits of a root.
    Positive dashpots cannot feed a motion: the symmetric part of A is not positive, so a real part that
    rounding left above zero is set to zero.

    References
    ----------
    G. H. Golub, C. F. Van Loan (1996), Matrix Computations, 3rd ed., sections 7.2.2 (condition), 7.5 (QR).
    """

    def step(what: str, share: float) -> None:
        if cancelled():
            raise CancelledError("Finding the damped modes was stopped.")
        if progress is not None:
            progress(what, share)

    # A second thread gains little and can cost tenfold on a busy machine.
    with threadpool_limits(limits=1, user_api="blas"):
        step("state matrix", 0.0)
        state = state_matrix(terms)
        step("all roots", 0.1)
        found = _solved(state)
        step("shapes", 0.9)
        return _assembled(terms, state, found)


def _solved(state: StateMatrix) -> _Found:
    matrix = state.matrix
    if state.size == 0:
        none = np.zeros(0)
        return _Found(none.astype(complex), np.zeros((0, 0), dtype=complex), none, none)
    try:
        roots, vectors = np.linalg.eig(matrix)
    except np.linalg.LinAlgError as error:
        raise NumericalError("QR iteration on the state matrix did not converge.") from error
    kept = np.flatnonzero(roots.imag >= 0)
    vectors = vectors[:, kept].astype(complex)
    vectors = vectors / np.linalg.norm(vectors, axis=0)
    turned = vectors.copy()
    turned[state.forces :] *= -1  # J x
    moved = matrix @ vectors
    weight = np.einsum("ij,ij->j", turned, vectors)
    rough = roots[kept].astype(complex)
    sound = np.abs(weight) > SOUND
    better = np.einsum("ij,ij->j", turned, moved) / np.where(sound, weight, 1.0)
    values = np.where(sound, better, rough)
    values = np.where(rough.imag == 0, values.real, values)
    values = np.minimum(values.real, 0.0) + 1j * values.imag
    with np.errstate(divide="ignore"):
        condition = 1 / np.abs(weight)
    return _Found(values, vectors, condition, np.linalg.norm(moved - values * vectors, axis=0))


def _assembled(terms: DampedTerms, state: StateMatrix, found: _Found) -> DampedModes:
    real = found.roots.imag == 0
    order = np.lexsort((np.abs(found.roots), real))
    roots, vectors = found.roots[order], found.vectors[:, order]
    free, oscillating = terms.free.shape[1], int(np.sum(~real))
    _require_no_zero(roots, state)
    shapes = np.hstack([_free_shapes(terms), state.shapes(roots, vectors)])
    shapes = _normalised(shapes, terms.scale)
    error = _with_free(free, _estimate(found, state)[order])
    whole = np.concatenate([np.zeros(free, dtype=complex), roots])
    partner = _partners(shapes * terms.scale[:, None], free + oscillating)
    number = state.zero_roots + 2 * oscillating + int(real.sum())
    trace, total = _sums(state, roots)
    return DampedModes(
        roots=whole,
        free=free,
        oscillating=oscillating,
        **_rates(whole, free, oscillating, partner),
        partner=partner,
        error_per_s=error,
        condition=_with_free(free, found.condition[order]),
        residual_per_s=_with_free(free, found.residual[order]),
        shapes=shapes,
        zero_roots=state.zero_roots,
        number=number,
        rate_sum_found=total,
        rate_sum_expected=trace,
        undamped=int(np.sum(-roots.real[:oscillating] <= error[free : free + oscillating])),
        method="Hessenberg QR iteration on the balanced state matrix",
        warnings=_warnings(terms, state, number, (trace, total), found),
    ).frozen()


def _with_free(free: int, values: Array) -> Array:
    return np.concatenate([np.zeros(free), values])


def _require_no_zero(roots: ComplexArray, state: StateMatrix) -> None:
    """Refuse a zero root beside those known from structure: something was lost in rounding."""
    if np.any(roots == 0):
        raise NumericalError(
            f"A root of exactly zero was found beside the {state.zero_roots} known from structure; "
            "a stiffness is lost beside another many orders larger. Join very stiff parts by rigid links."
        )


def _free_shapes(terms: DampedTerms) -> ComplexArray:
    """Return the free motions, those that drift first."""
    drift = drifting_motions(terms)
    if terms.drifting in (0, terms.free.shape[1]):
        return terms.free.astype(complex)
    rest = terms.free - drift @ (drift.T @ terms.free)
    others = np.linalg.svd(rest, full_matrices=False)[0][:, : terms.free.shape[1] - terms.drifting]
    return np.hstack([drift, others]).astype(complex)


def _normalised(shapes: ComplexArray, scale: Array) -> ComplexArray:
    if shapes.size == 0:
        return shapes
    weighted = shapes * scale[:, None]
    largest = np.argmax(np.abs(weighted), axis=0)
    found: ComplexArray = shapes / weighted[largest, np.arange(shapes.shape[1])]
    return found


def _estimate(found: _Found, state: StateMatrix) -> Array:
    """Estimate the errors: first order where it is small, the square-root law beside a double root."""
    backward = found.residual + state.likely
    first: Array = found.condition * backward
    size = np.maximum(np.abs(found.roots), state.likely)
    double = np.sqrt(np.minimum(size, 1 / np.finfo(float).tiny) * backward)
    return np.where(first > double, double, first)


def _partners(shapes: ComplexArray, first: int) -> npt.NDArray[np.intp]:
    """Pair real roots of the same shape, from ``first`` on: each pair is one overdamped mode."""
    partner = np.full(shapes.shape[1], -1, dtype=np.intp)
    real = shapes[:, first:].real
    size = np.linalg.norm(real, axis=0)
    real = real / np.where(size > 0, size, 1.0)
    apart = 1 - (real.T @ real) ** 2
    np.fill_diagonal(apart, np.inf)
    for i in range(len(apart)):
        if partner[first + i] >= 0:
            continue
        near = [j for j in np.flatnonzero(apart[i] < SAME_SHAPE).tolist() if partner[first + j] < 0]
        if len(near) == 1:  # several: a repeated mode, whose shapes tell nothing
            partner[first + i], partner[first + near[0]] = first + near[0], first + i
    return partner


def _rates(
    roots: ComplexArray, free: int, oscillating: int, partner: npt.NDArray[np.intp]
) -> dict[str, Array]:
    size, decay = np.abs(roots), -roots.real + 0.0
    natural, ratio = size / (2 * np.pi), np.full(roots.size, np.nan)
    decrement = np.full(roots.size, np.nan)
    turning = slice(free, free + oscillating)
    ratio[turning] = decay[turning] / size[turning]
    decrement[turning] = 2 * np.pi * decay[turning] / roots.imag[turning]
    for i in range(free + oscillating, roots.size):
        other = int(partner[i])
        natural[i] = np.nan
        if other >= 0:
            natural[i] = np.sqrt(size[i]) * np.sqrt(size[other]) / (2 * np.pi)
            ratio[i] = real_pair_ratio(float(size[i]), float(size[other]))
    return {
        "damped_hz": roots.imag / (2 * np.pi),
        "natural_hz": natural,
        "damping_ratio": ratio,
        "decay_per_s": decay,
        "log_decrement": decrement,
    }


def _sums(state: StateMatrix, roots: ComplexArray) -> tuple[float, float]:
    """Return the trace of the state matrix and the sum of all roots; 1/s."""
    trace = -float(np.sum(state.relax**2) + np.sum(state.resist**2))
    real = roots.imag == 0
    return trace, float(2 * roots.real[~real].sum() + roots.real[real].sum())


def _warnings(
    terms: DampedTerms, state: StateMatrix, number: int, sums: tuple[float, float], found: _Found
) -> tuple[str, ...]:
    said = []
    if number != terms.roots:
        said.append(f"{number} roots found where the structure has {terms.roots}: do not rely on this.")
    allowed = SLACK * state.size * (state.likely + np.finfo(float).eps * abs(sums[0]))
    if abs(sums[0] - sums[1]) > allowed:
        said.append(f"The roots sum to {sums[1]:.6g} 1/s and must sum to {sums[0]:.6g} 1/s.")
    critical = int(np.sum(found.condition > NEARLY_CRITICAL))
    if critical:
        said.append(
            f"{critical} of the roots nearly coincide with another (critical damping): about half of their "
            "digits are lost, and whether they oscillate is not certain."
        )
    return tuple(said)
