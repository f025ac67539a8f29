"""The matrices that bounds are read from, with what rounding may have done to them."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil
from modalview.factor.rounding import SLACK, UNIT, gamma

Array = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Forms:
    """S and the scaled M^-1 K of the coordinates with inertia, massless ones condensed.

    Attributes
    ----------
    S : csr_array (modes, modes)
        W.T K W, 1/s**2.
    share : float
        |S - true S| <= share |W|.T formation |W|, entry by entry.
    spread : array (modes,)
        |W|.T formation |W| 1.
    absolute : csr_array (n, modes)
        |W|.
    formation : csc_array (n, n)
        What rounding in K is proportional to.
    """

    S: sp.csr_array
    share: float
    spread: Array
    absolute: sp.csr_array
    formation: sp.csc_array

    def rounding(self, vector: Array) -> Array:
        """Bound |S - true S| times a non-negative vector (modes,)."""
        spread = self.absolute.T @ (self.formation @ (self.absolute @ vector))
        return np.asarray(SLACK * self.share * spread, dtype=float)


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
    absolute = sp.csr_array(abs(basis))
    formation = pencil.formation
    terms = 0 if pencil.rows is None else int(np.bincount(pencil.rows.indices, minlength=1).max())
    entries = int(np.diff(basis.indptr).max(initial=1))
    share = gamma(terms + 2 * entries + 12) + 2 * _defect(pencil)
    if pencil.massless.any():
        share += (pencil.n * UNIT / max(pencil.shifted.extents.margin, UNIT)) ** 2
    ones = np.ones(pencil.modes)
    spread = absolute.T @ (formation @ (absolute @ ones))
    return Forms(
        S=sp.csr_array(pencil.standard),
        share=share,
        spread=np.asarray(SLACK * spread, dtype=float),
        absolute=absolute,
        formation=formation,
    )


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
