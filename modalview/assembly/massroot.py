"""The inverse root of a block-diagonal mass matrix, block by block."""

import numpy as np
import numpy.typing as npt
import scipy.linalg as la
import scipy.sparse as sp
from scipy.sparse.csgraph import connected_components

from modalview.errors import NumericalError
from modalview.units.show import short


def mass_root_inverse(mass: sp.csc_array, massy: npt.NDArray[np.bool_]) -> sp.csc_array:
    """Return L^-T (n, modes) of M = L L.T restricted to the coordinates with inertia.

    Parameters
    ----------
    mass : csc_array (n, n)
        Symmetric; kg, kg m, kg m**2.
    massy : bool array (n,)
        Coordinates with inertia; they become the columns, in order.

    Returns
    -------
    csc_array (n, modes)
        Rows of massless coordinates are zero. Blocks of M (connected entries) are factored one by one
        by Cholesky, so the cost is linear for single bodies and clusters; a full M is one block.

    Raises
    ------
    NumericalError
        A block is not positive definite.
    """
    n = mass.shape[0]
    if mass.nnz == n and massy.all():
        return _diagonal_root_inverse(mass.diagonal())
    column = np.cumsum(massy) - 1
    _, label = connected_components(mass, directed=False)
    order = np.argsort(label, kind="stable")
    starts = np.searchsorted(label[order], np.arange(label.max() + 2 if n else 1))
    size = np.diff(starts)
    single = massy & (size[label] == 1)
    diagonal = mass.diagonal()
    _require_positive(diagonal, single)
    rows, cols = [np.flatnonzero(single)], [column[single]]
    entries = [1 / np.sqrt(diagonal[single])]
    for block in np.flatnonzero(size > 1):
        where = order[starts[block] : starts[block + 1]]
        where = where[massy[where]]
        if where.size == 0:
            continue
        inverse_root = _root_inverse(mass[where][:, where].toarray())
        i, j = np.nonzero(inverse_root)
        rows.append(where[i])
        cols.append(column[where[j]])
        entries.append(inverse_root[i, j])
    data = (np.concatenate(entries), (np.concatenate(rows), np.concatenate(cols)))
    return sp.csc_array(data, shape=(n, int(massy.sum())))


def _diagonal_root_inverse(diagonal: npt.NDArray[np.float64]) -> sp.csc_array:
    n = diagonal.size
    _require_positive(diagonal, np.ones(n, dtype=bool))
    places = np.arange(n + 1, dtype=np.int32)
    return sp.csc_array((1 / np.sqrt(diagonal), places[:n], places), shape=(n, n))


def _require_positive(diagonal: npt.NDArray[np.float64], where: npt.NDArray[np.bool_]) -> None:
    if np.any(diagonal[where] <= 0):
        bad = int(np.flatnonzero(where & (diagonal <= 0))[0])
        raise NumericalError(f"Mass {short(diagonal[bad])} of coordinate {bad} is not positive.")


def _root_inverse(block: npt.NDArray[np.float64]) -> npt.NDArray[np.float64]:
    try:
        lower = np.linalg.cholesky(block)
    except np.linalg.LinAlgError:
        least = float(np.linalg.eigvalsh(block)[0])
        message = f"The mass matrix is not positive definite: it has an eigenvalue {short(least, 3)}."
        raise NumericalError(message) from None
    inverse: npt.NDArray[np.float64] = la.solve_triangular(lower.T, np.eye(len(block)), lower=False)
    return inverse
