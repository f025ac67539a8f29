"""How firmly massless coordinates are held."""

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


def held_margin(K: sp.csc_array, massless: npt.NDArray[np.bool_]) -> float:
    """Bound the lowest eigenvalue of the massless block of K, scaled to a unit diagonal, from below.

    Parameters
    ----------
    K : csc_array (n, n)
        Symmetric stiffness.
    massless : bool array (n,)
        At least one is true.

    Returns
    -------
    float
        Between 0 (nothing proven) and 1. Rounding n gamma_(2n) of a dense symmetric solve is taken off
        (Higham (2002), theorem 19.4 and Weyl's theorem); groups beyond DENSE_GROUP give 0.
    """
    inner = sp.csc_array(K[massless][:, massless])
    diagonal = inner.diagonal()
    if np.any(diagonal <= 0):
        return 0.0
    scaling = sp.diags_array(1 / np.sqrt(diagonal))
    scaled = sp.csc_array(scaling @ inner @ scaling)
    groups, label = connected_components(scaled, directed=False)
    order = np.argsort(label, kind="stable")
    ends = np.cumsum(np.bincount(label, minlength=groups))
    margin = 1.0
    for where in np.split(order, ends[:-1]):
        if where.size > DENSE_GROUP:
            return 0.0
        if where.size > 1:
            block = scaled[where][:, where].toarray()
            lowest = float(np.linalg.eigvalsh(block)[0])
            margin = min(margin, lowest - where.size * gamma(20 * where.size))
    return margin if margin > LEAST_MARGIN else 0.0
