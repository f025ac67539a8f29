"""The matrices that bounds are read from, with what rounding may have done to them."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil
from modalview.factor.rounding import SLACK, UNIT, gamma

Array = npt.NDArray[np.float64]


# Up to this many modes the forms are dense: each sparse operation costs as much overhead as a whole dense
# product of this size.
DENSE = 200

Matrix = Array | sp.csr_array | sp.csc_array


@dataclass(frozen=True, slots=True, eq=False)
class Forms:
    """S = W.T K W of the coordinates with inertia, massless ones condensed; dense where small.

    Attributes
    ----------
    S : array or csr_array (modes, modes)
        1/s**2.
    spread : array or csr_array (modes, modes)
        |W|.T formation |W|.
    share : float
        |S - true S| <= share spread, entry by entry.
    """

    S: Matrix
    spread: Matrix
    share: float

    @property
    def modes(self) -> int:
        """Number of modes."""
        return int(self.S.shape[0])

    def rounding(self, vector: Array) -> Array:
        """Bound |S - true S| times a non-negative vector (modes,)."""
        product: Array = self.spread @ vector
        return SLACK * self.share * product


def forms_of(pencil: Pencil) -> Forms:
    """Form S and bound its rounding.

    Notes
    -----
    An entry of W.T K W is a sum over at most c x c products (c entries in a column of W) of K, itself a sum
    of t terms, and of entries of W that are rounded roots: gamma_(t + 2 c + 12) in all (Higham (2002),
    section 3.5). Where M has blocks, ||W.T M W - 1|| displaces eigenvalues by the same relative amount
    (Ostrowski) and is measured. A wrong static recovery dR changes S by dR.T K00 dR only, of second order.
    """
    basis = pencil.basis
    terms = 0 if pencil.rows is None else int(np.bincount(pencil.rows.indices, minlength=1).max())
    entries = int(np.diff(basis.indptr).max(initial=1))
    share = gamma(terms + 2 * entries + 12) + 2 * _defect(pencil)
    if pencil.massless.any():
        share += (pencil.n * UNIT / max(pencil.shifted.extents.margin, UNIT)) ** 2
    return Forms(*_products(pencil), share)


def _products(pencil: Pencil) -> tuple[Matrix, Matrix]:
    """S and |W|.T formation |W|."""
    basis, dense = pencil.basis, pencil.modes <= DENSE
    if mass_is_diagonal(pencil) and not pencil.massless.any():
        root = 1 / np.sqrt(pencil.M.diagonal())
        K, formation = pencil.K, pencil.formation
        if dense:
            return scaled(K.toarray(), root, root), scaled(formation.toarray(), root, root)
        return scaled(K, root, root), scaled(formation, root, root)
    if not dense:
        absolute = abs(basis)
        spread = sp.csr_array(absolute.T @ (pencil.formation @ absolute))
        return sp.csr_array(pencil.standard), spread
    W = basis.toarray()
    half = W.T @ (pencil.K @ W)
    size = np.abs(W)
    return (half + half.T) / 2, size.T @ (pencil.formation @ size)


def scaled(matrix: Matrix, left: Array, right: Array) -> Matrix:
    """Return diag(left) matrix diag(right)."""
    if isinstance(matrix, np.ndarray):
        dense: Array = left[:, None] * matrix * right
        return dense
    return sp.csr_array(sp.diags_array(left) @ matrix @ sp.diags_array(right))


def magnitude(matrix: Matrix) -> Matrix:
    """Return |matrix|, entry by entry."""
    return np.abs(matrix) if isinstance(matrix, np.ndarray) else sp.csr_array(abs(matrix))


def row_sums(matrix: Matrix) -> Array:
    """Sum |entries| of every row."""
    sums: Array = magnitude(matrix) @ np.ones(matrix.shape[1])
    return sums


def mass_is_diagonal(pencil: Pencil) -> bool:
    """Whether no two coordinates share inertia."""
    return bool(np.count_nonzero(pencil.M.diagonal()) == np.count_nonzero(pencil.M.data))


def _defect(pencil: Pencil) -> float:
    """Largest row sum of |W.T M W - 1|: zero for single masses, whose roots are counted in gamma."""
    if mass_is_diagonal(pencil):
        return 0.0
    square = pencil.basis.T @ (pencil.M @ pencil.basis)
    apart = abs(sp.csr_array(square - sp.eye_array(pencil.modes)))
    return float(np.asarray(apart.sum(axis=1)).max(initial=0.0)) + 8 * UNIT
