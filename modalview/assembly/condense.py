"""Massless coordinates follow the others statically; exact, with the recovery map kept."""

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.csgraph import connected_components
from scipy.sparse.linalg import splu

from modalview.errors import NumericalError

# Up to this size a connected group of massless coordinates is solved densely.
DENSE_GROUP = 200


def massless_recovery(stiffness: sp.csc_array, massless: npt.NDArray[np.bool_]) -> sp.csc_array:
    """Return R (n, n): identity on coordinates with inertia, -K00^-1 K0m on the massless ones.

    Parameters
    ----------
    stiffness : csc_array (n, n)
        Symmetric K.
    massless : bool array (n,)
        Coordinates to be condensed; K restricted to them must be nonsingular.

    Returns
    -------
    csc_array (n, n)
        Columns of massless coordinates are zero: R z reads only coordinates with inertia.
        Static condensation: R. J. Guyan (1965), AIAA Journal 3, 380; exact here, as M of the condensed
        coordinates is zero.
    """
    n = stiffness.shape[0]
    zero, kept = np.flatnonzero(massless), np.flatnonzero(~massless)
    inner = sp.csc_array(stiffness[zero][:, zero])
    coupling = sp.csr_array(stiffness[zero][:, kept])
    groups, label = connected_components(inner, directed=False)
    rows, cols, entries = [kept], [kept], [np.ones(kept.size)]
    for group in range(groups):
        local = np.flatnonzero(label == group) if groups > 1 else np.arange(zero.size)
        part = coupling[local]
        touched = np.unique(part.indices)
        solution = -_solve(sp.csc_array(inner[local][:, local]), part[:, touched].toarray())
        i, j = np.nonzero(solution)
        rows.append(zero[local[i]])
        cols.append(kept[touched[j]])
        entries.append(solution[i, j])
    data = (np.concatenate(entries), (np.concatenate(rows), np.concatenate(cols)))
    return sp.csc_array(data, shape=(n, n))


def _solve(inner: sp.csc_array, right: npt.NDArray[np.float64]) -> npt.NDArray[np.float64]:
    try:
        if inner.shape[0] <= DENSE_GROUP:
            return np.linalg.solve(inner.toarray(), right)
        return np.asarray(splu(inner).solve(right))
    except (np.linalg.LinAlgError, RuntimeError) as error:
        raise NumericalError("A massless coordinate is held by nothing and cannot be condensed.") from error
