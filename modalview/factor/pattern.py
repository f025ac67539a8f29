"""One fixed pattern for K - sigma M at every shift, and what its factors look like."""

from copy import copy
from dataclasses import dataclass, field
from typing import Literal

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.linalg import SuperLU, splu

from modalview.factor.dissection import dissection
from modalview.factor.earlier import EarlierCounts

Array = npt.NDArray[np.float64]
Indices = npt.NDArray[np.intp]

# Columns SuperLU updates together, and the subtree it merges into one supernode; measured best from n = 10
# to 1e4 on chains and plane models (the library's own 20 and 10 cost a tenth to a half more). Subtrees larger
# than its own 10 are not to be tried: with 30 it wrote beside its arrays (n = 1e4, free(): invalid pointer).
PANEL, RELAX = 4, 10

# From this size on, where minimum degree leaves more entries a column in each factor than this, nested
# dissection is tried beside it.
LARGE, HEAVY = 8_000, 30


@dataclass(frozen=True, slots=True, eq=False)
class Factors:
    """Where the entries of L and U stand when nothing is pivoted and nothing cancels to an exact zero.

    Attributes
    ----------
    lower_indptr, lower_indices, upper_indptr, upper_indices : int arrays
        Compressed columns of L and U as SuperLU hands them out.
    mirror : int array
        ``U.data[mirror]`` runs beside ``L.data``: u_kj beside l_jk.
    columns : int array
        Column of each entry of L.
    diagonal : int array (n,)
        Position of each diagonal entry in ``L.data``.
    """

    lower_indptr: npt.NDArray[np.int32]
    lower_indices: npt.NDArray[np.int32]
    upper_indptr: npt.NDArray[np.int32]
    upper_indices: npt.NDArray[np.int32]
    mirror: npt.NDArray[np.int32]
    columns: npt.NDArray[np.int32]
    diagonal: Indices

    def lower(self, data: Array) -> sp.csc_array:
        """Return a matrix (n, n) of the pattern of L with these values."""
        n = self.lower_indptr.size - 1
        return sp.csc_array((data, self.lower_indices, self.lower_indptr), shape=(n, n))

    def describe(self, lu: "SuperLU[np.float64]") -> bool:
        """Return whether the factors have exactly this pattern."""
        return bool(
            np.array_equal(lu.L.indices, self.lower_indices)
            and np.array_equal(lu.U.indices, self.upper_indices)
        )


@dataclass(frozen=True, slots=True, eq=False)
class Pattern:
    """The union pattern of K and M, in an order that keeps the factors sparse.

    Attributes
    ----------
    stored : int array (n,)
        Row of each coordinate in the stored matrix.
    turned : int array (n,)
        Row of each stored row in the factors (a postordering of the elimination tree; mostly 0, 1, 2...).
    indptr, indices : int arrays
        Compressed columns of the stored matrix.
    keys : int array
        column * n + row of each stored entry, ascending.
    factors : Factors or None
        None when L and U of the reference do not mirror each other.
    terms : int array (n,)
        Entries in each row of L, by position in the factors.
    template : csc_array (n, n)
        A matrix of this pattern, to be copied and filled.
    earlier : EarlierCounts
        Counts of models of this pattern that an edit may start from.
    """

    stored: Indices
    turned: Indices
    indptr: npt.NDArray[np.int32]
    indices: npt.NDArray[np.int32]
    keys: npt.NDArray[np.int64]
    factors: Factors | None
    terms: Indices
    template: sp.csc_array
    earlier: EarlierCounts = field(default_factory=EarlierCounts)

    @property
    def n(self) -> int:
        """Number of coordinates."""
        return int(self.stored.size)

    @property
    def place(self) -> Indices:
        """Row of each coordinate in the factors."""
        return self.turned[self.stored]

    def matrix(self, data: Array) -> sp.csc_array:
        """Return the stored matrix with these values."""
        filled = copy(self.template)  # shallow: the constructor would cost as much as a small factorization
        filled.data = data
        return filled

    def values(self, matrix: sp.csc_array) -> Array:
        """Return the values of a matrix whose entries lie in this pattern, at the stored positions."""
        data = np.zeros(self.keys.size)
        np.add.at(data, np.searchsorted(self.keys, self._keys(matrix)), matrix.data)
        return data

    def _keys(self, matrix: sp.csc_array) -> npt.NDArray[np.int64]:
        rows, cols = _coordinates(matrix)
        return self.stored[cols].astype(np.int64) * self.n + self.stored[rows]

    def factorize(self, data: Array) -> "SuperLU[np.float64]":
        """Factor without pivoting unless a pivot is exactly zero; RuntimeError when singular."""
        return _splu(self.matrix(data), "NATURAL")


def union_pattern(K: sp.csc_array, M: sp.csc_array) -> Pattern:
    """Order the union of two symmetric patterns to keep its factors sparse and find what they look like.

    Parameters
    ----------
    K, M : csc_array (n, n)
        Symmetric, both triangles stored. Stored zeros count as entries; the diagonal always does.

    Notes
    -----
    The reference factored here is -1 beside a dominant diagonal: an M-matrix, whose fill is strictly
    negative (M. Fiedler, V. Ptak (1962), Czechoslovak Math. J. 12, 382), so no entry cancels and every
    later factor of this pattern has entries at most there. Cost: two sparse factorizations, once.
    """
    n = K.shape[0]
    pairs = [_coordinates(K), _coordinates(M), (np.arange(n), np.arange(n))]
    rows = np.concatenate([pair[0] for pair in pairs])
    cols = np.concatenate([pair[1] for pair in pairs])
    first = np.unique(cols.astype(np.int64) * n + rows)
    stored, keys, reference, lu = _ordered(first, n)
    return Pattern(
        stored=stored,
        turned=lu.perm_c.astype(np.intp),
        indptr=reference.indptr,
        indices=reference.indices,
        keys=keys,
        factors=_factors(lu),
        terms=np.bincount(lu.L.indices, minlength=n),
        template=reference,
    )


def _ordered(
    first: npt.NDArray[np.int64], n: int
) -> tuple[Indices, npt.NDArray[np.int64], sp.csc_array, "SuperLU[np.float64]"]:
    """Order by minimum degree, or by nested dissection where that fills less, and factor the reference."""
    unordered = _reference(first, n)
    lu = _splu(unordered, "MMD_AT_PLUS_A")
    stored = lu.perm_c.astype(np.intp)
    if n > LARGE and lu.nnz > 2 * HEAVY * n:
        dissected = np.argsort(dissection(unordered))
        keys, reference = _stored(first, n, dissected)
        other = _splu(reference, "NATURAL")
        if other.nnz < lu.nnz:
            return dissected, keys, reference, other
    keys, reference = _stored(first, n, stored)
    return stored, keys, reference, _splu(reference, "NATURAL")


def _stored(
    first: npt.NDArray[np.int64], n: int, stored: Indices
) -> tuple[npt.NDArray[np.int64], sp.csc_array]:
    keys = np.sort(stored[first // n].astype(np.int64) * n + stored[first % n])
    return keys, _reference(keys, n)


def _splu(matrix: sp.csc_array, ordering: Literal["NATURAL", "MMD_AT_PLUS_A"]) -> "SuperLU[np.float64]":
    return splu(
        matrix,
        permc_spec=ordering,
        diag_pivot_thresh=0.0,
        relax=RELAX,
        panel_size=PANEL,
        options={"SymmetricMode": True},
    )


def _coordinates(matrix: sp.csc_array) -> tuple[Indices, Indices]:
    cols = np.repeat(np.arange(matrix.shape[1]), np.diff(matrix.indptr))
    return np.asarray(matrix.indices, dtype=np.intp), cols


def _reference(keys: npt.NDArray[np.int64], n: int) -> sp.csc_array:
    rows, cols = keys % n, keys // n
    count = np.bincount(cols, minlength=n)
    indptr = np.concatenate([[0], np.cumsum(count)]).astype(np.int32)
    data = np.where(rows == cols, count[cols] + 1.0, -1.0)
    return sp.csc_array((data, rows.astype(np.int32), indptr), shape=(n, n))


def _factors(lu: "SuperLU[np.float64]") -> Factors | None:
    """Match the entries of L and U; on large models this is what needs most memory, hence 32 bits."""
    lower, upper = lu.L, lu.U
    first, second = _positions(lower), _positions(upper)
    across = sp.csr_array(second)  # by rows of U, as L goes by columns
    by_column = sp.csc_array(sp.csr_array(first))  # L with rows ascending in every column
    if not (
        np.array_equal(by_column.indptr, across.indptr) and np.array_equal(by_column.indices, across.indices)
    ):
        return None
    mirror = np.empty(lower.nnz, dtype=np.int32)
    mirror[by_column.data] = across.data
    columns = np.repeat(np.arange(lower.shape[1], dtype=np.int32), np.diff(lower.indptr))
    return Factors(
        lower_indptr=lower.indptr,
        lower_indices=lower.indices,
        upper_indptr=upper.indptr,
        upper_indices=upper.indices,
        mirror=mirror,
        columns=columns,
        diagonal=np.flatnonzero(lower.indices == columns),
    )


def _positions(matrix: sp.csc_array) -> sp.csc_array:
    """Return a matrix of this pattern whose entries are their own places among the stored ones."""
    places = np.arange(matrix.nnz, dtype=np.int32)
    return sp.csc_array((places, matrix.indices, matrix.indptr), shape=matrix.shape)
