"""Sums of rank-one terms, sum v_i r_i r_i^T, refilled through a stored map."""

from typing import Optional

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

Places = npt.NDArray[np.intp]

# Where so many products or fewer enter, their places are kept for rows of the same pattern: 16 MB.
MOST_KEPT = 2_000_000


class QuadraticForm:
    """Matrix of rank-one terms on one fixed pattern.

    Parameters
    ----------
    rows : csr_array (t, n)
        The vectors r_i.
    like : QuadraticForm or None
        Of rows that may have the same pattern, as where a body was moved: then its places serve again, and
        finding them is most of the work.

    Attributes
    ----------
    indices, indptr : int arrays
        Compressed columns of the matrix; the very arrays of ``like`` where its places served.

    Notes
    -----
    Filling is one sparse product over the stored entries, some fifty times cheaper than forming
    rows^T diag(v) rows anew. The diagonal is always stored.
    """

    indices: npt.NDArray[np.int32]
    indptr: npt.NDArray[np.int32]

    def __init__(self, rows: sp.csr_array, like: Optional["QuadraticForm"] = None) -> None:
        rows = sp.csr_array(rows)
        t, n = rows.shape
        term, first, second = _pairs(rows)
        if like is not None and like.where is not None and like.fits(rows):
            self.indices, self.indptr, where = like.indices, like.indptr, like.where
        else:
            diagonal = np.arange(n)
            i = np.concatenate([rows.indices[first], diagonal])
            j = np.concatenate([rows.indices[second], diagonal])
            key = j.astype(np.int64) * n + i
            places, where = np.unique(key, return_inverse=True)
            self.indices = (places % max(n, 1)).astype(np.int32)
            self.indptr = np.searchsorted(places, np.arange(n + 1, dtype=np.int64) * n).astype(np.int32)
        products = np.concatenate([rows.data[first] * rows.data[second], np.zeros(n)])
        term = np.concatenate([term, np.zeros(n, dtype=term.dtype)])
        self._map = sp.csr_array((products, (where, term)), shape=(self.indices.size, max(t, 1)))
        self._terms, self._shape = t, (n, n)
        self._rows = (rows.indptr, rows.indices)
        self.where: Places | None = where if where.size <= MOST_KEPT else None

    def fits(self, rows: sp.csr_array) -> bool:
        """Whether rows have the very pattern of those that this was made of."""
        indptr, indices = self._rows
        return (
            rows.shape == (self._terms, self._shape[0])
            and np.array_equal(rows.indptr, indptr)
            and np.array_equal(rows.indices, indices)
        )

    def shares_pattern(self, other: "QuadraticForm") -> bool:
        """Whether both have one pattern because one was made like the other."""
        return self.indices is other.indices

    def matrix(self, values: npt.NDArray[np.float64]) -> sp.csc_array:
        """Return sum v_i r_i r_i^T (n, n), both triangles, indices sorted."""
        if self._terms == 0:
            values = np.zeros(1)
        data = self._map @ values
        return sp.csc_array((data, self.indices.copy(), self.indptr.copy()), shape=self._shape)


def _pairs(rows: sp.csr_array) -> tuple[Places, Places, Places]:
    """Return the row, and both places among the stored entries, of every product of two entries of a row."""
    count = np.diff(rows.indptr)
    pairs = count**2
    term = np.repeat(np.arange(rows.shape[0]), pairs)
    within = np.arange(pairs.sum()) - np.repeat(np.cumsum(pairs) - pairs, pairs)
    start, width = rows.indptr[term], count[term]
    return term, start + within // np.maximum(width, 1), start + within % np.maximum(width, 1)
