"""Inertia of a dense symmetric matrix by Bunch-Kaufman pivoting, its error measured."""

import numpy as np
import numpy.typing as npt
import scipy.linalg as la

from modalview.factor.rounding import gamma

Array = npt.NDArray[np.float64]

# A 2x2 pivot chosen by Bunch and Kaufman has a c < 0.42 b^2, one eigenvalue of each sign; beyond this
# share the block is not such a pivot and its signs are not trusted.
SHARE_OF_PIVOT = 0.9


def dense_inertia(matrix: Array, vector: Array) -> tuple[int, Array] | None:
    """Count the negative eigenvalues of P^T L D L^T P and measure its distance from the matrix.

    Parameters
    ----------
    matrix : array (n, n)
        Symmetric.
    vector : array (n,)
        Non-negative.

    Returns
    -------
    (negative, rounding) or None
        ``rounding`` (n,) is at least F times ``vector`` with |matrix - P^T L D L^T P| <= F entry by entry:
        the evaluated difference plus gamma_(n+4) (|A| + |L||D||L^T|) for evaluating it (two products).
        None when a pivot block is zero or not of the kind Bunch and Kaufman choose.

    References
    ----------
    J. R. Bunch, L. Kaufman (1977), Math. Comp. 31, 163. N. J. Higham (2002), Accuracy and Stability of
    Numerical Algorithms, 2nd ed., sections 3.5 and 11.1.
    """
    lower, blocks, _ = la.ldl(matrix, lower=True)
    negative = _negative(np.asarray(blocks, dtype=float))
    if negative is None:
        return None
    n = len(matrix)
    apart = np.abs(matrix - lower @ blocks @ lower.T)
    grown = np.abs(lower) @ (np.abs(blocks) @ (np.abs(lower.T) @ vector))
    rounding: Array = apart @ vector + gamma(2 * n + 8) * (grown + np.abs(matrix) @ vector)
    return negative, rounding


def _negative(blocks: Array) -> int | None:
    diagonal = np.diag(blocks)
    beside = np.diag(blocks, -1)
    first = np.flatnonzero(beside)
    single = np.ones(len(diagonal), dtype=bool)
    single[first] = single[first + 1] = False
    if np.any(diagonal[single] == 0):
        return None
    if np.any(diagonal[first] * diagonal[first + 1] > SHARE_OF_PIVOT * beside[first] ** 2):
        return None
    return int(np.count_nonzero(diagonal[single] < 0)) + first.size
