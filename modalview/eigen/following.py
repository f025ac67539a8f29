"""Which mode is which after values have changed: by shape, so that curves of frequency keep to a mode."""

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.optimize import linear_sum_assignment

from modalview.errors import InputError

Array = npt.NDArray[np.float64]
Integers = npt.NDArray[np.int64]


def likeness(before: Array, after: Array, mass: sp.csc_array) -> Array:
    """Return how alike the shapes of two states are (modes, modes): 1 for the same, 0 for nothing in common.

    Parameters
    ----------
    before, after : array (n, modes)
        Shapes, each M-orthonormal in its own state.
    mass : csc_array (n, n)
        M of the state after.

    Returns
    -------
    array (modes before, modes after)
        MAC with M as weight, (a^T M b)^2 / ((a^T M a)(b^T M b)). Rows sum to 1 over all modes.

    References
    ----------
    R. J. Allemang, D. L. Brown (1982), A correlation coefficient for modal vector analysis, Proc. 1st IMAC
    (from memory).
    """
    if before.shape[0] != after.shape[0]:
        raise InputError(
            f"before has {before.shape[0]} coordinates and after {after.shape[0]}; shapes are compared in "
            "the same ones."
        )
    weighted = mass @ after
    cross = np.asarray(before.T @ weighted) ** 2
    own = np.einsum("nk,nk->k", before, np.asarray(mass @ before))
    others = np.einsum("nk,nk->k", after, weighted)
    found: Array = cross / np.maximum(own[:, None] * others, np.finfo(float).tiny)
    return found


def followed(alike: Array) -> tuple[Integers, Array]:
    """Return which mode after each mode before has become, and how alike the two are.

    Parameters
    ----------
    alike : array (modes, modes)
        As of ``likeness``.

    Returns
    -------
    places : int array (modes,)
        The assignment with the largest sum of likeness: every mode is taken once.
    size : array (modes,)
        Likeness of each pair; below a half the step was too large to tell.

    Examples
    --------
    >>> followed(np.array([[0.1, 0.9], [0.9, 0.1]]))[0].tolist()
    [1, 0]
    """
    rows, places = linear_sum_assignment(-alike)
    found = np.empty(alike.shape[0], dtype=np.int64)
    found[rows] = places
    return found, alike[np.arange(alike.shape[0]), found]
