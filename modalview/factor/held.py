"""How firmly massless coordinates are held."""

from collections.abc import Callable

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.csgraph import connected_components

from modalview.factor.rounding import gamma

# Below this margin the static recovery of massless coordinates, whose relative error is about the unit
# roundoff over the margin, is not known well enough to prove anything by it.
LEAST_MARGIN = 1e-9

# A connected group of massless coordinates up to this size is looked at densely (0.1 s).
DENSE_GROUP = 500


def held_margin(
    K: sp.csc_array, massless: npt.NDArray[np.bool_], prove: Callable[[sp.csc_array], float]
) -> float:
    """Bound the lowest eigenvalue of the massless block of K, scaled to a unit diagonal, from below.

    Parameters
    ----------
    K : csc_array (n, n)
        Symmetric stiffness.
    massless : bool array (n,)
        At least one is true.
    prove : callable
        Bounds the lowest eigenvalue of a matrix too large to be looked at densely.

    Returns
    -------
    float
        Between 0 (nothing proven) and 1. The rounding of a dense symmetric solve, n gamma_(20 n) for a unit
        diagonal, is taken off (Higham (2002), section 19.2, and Weyl's theorem).
    """
    inner = sp.csc_array(K[massless][:, massless])
    diagonal = inner.diagonal()
    if np.any(diagonal <= 0):
        return 0.0
    scaling = sp.diags_array(1 / np.sqrt(diagonal))
    scaled = sp.csc_array(scaling @ inner @ scaling)
    _, label = connected_components(scaled, directed=False)
    margin = 1.0
    for group in np.flatnonzero(np.bincount(label) > 1):
        where = np.flatnonzero(label == group)
        block = sp.csc_array(scaled[where][:, where])
        if where.size > DENSE_GROUP:
            margin = min(margin, prove(block))
            continue
        lowest = float(np.linalg.eigvalsh(block.toarray())[0])
        margin = min(margin, lowest - where.size * gamma(20 * where.size))
    return margin if margin > LEAST_MARGIN else 0.0
