"""Counts next to very stiff parts: K - sigma M in relative coordinates, its rounding judged relatively."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.factor.inertia import Inertia
from modalview.factor.pattern import Pattern, union_pattern
from modalview.factor.rounding import SLACK, gamma
from modalview.factor.stiffbasis import product, relative_basis
from modalview.factor.uncertainty import Rounding, factor_rounding

Array = npt.NDArray[np.float64]

METHOD = "sparse LDL^T in relative coordinates"

# Shares of K + sigma M that rounding is held against, in turn; the count then stands within 2.1 of the share.
USUAL_SHARE = 1e-8
SHARES = (1e-10, USUAL_SHARE, 2e-7)
WIDENED = 2.1

# Rounding of a share that was asked for.
PLAY = 1e-6

# The proof of definiteness keeps back this much of its own rounding.
KEPT_BACK = 0.9


@dataclass(frozen=True, eq=False)
class Relative:
    """K - sigma M over coordinates that are relative across stiff terms; made when first asked.

    Parameters
    ----------
    rows, stiffness : csr_array (t, n), array (t,)
        The terms of K.
    M : csc_array (n, n)
    scale : array (n,)
        Metres per unit of each coordinate.
    """

    rows: sp.csr_array
    stiffness: Array
    M: sp.csc_array
    scale: Array

    @cached_property
    def _formed(self) -> "_Formed":
        T = relative_basis(self.rows, self.stiffness, self.scale)
        rows, size = product(self.rows, T), sp.csr_array(abs(T))
        K = sp.csc_array(rows.T @ sp.diags_array(self.stiffness) @ rows)
        M = sp.csc_array(T.T @ sp.csr_array(self.M @ T))
        absolute = sp.csr_array(abs(rows))
        K_size = absolute.T @ sp.diags_array(np.abs(self.stiffness)) @ absolute
        M_size = size.T @ sp.csr_array(abs(self.M) @ size)
        pattern = union_pattern(K, M)
        # A row's entry is rounded once; K sums at most t products of five roundings, M two sums in turn.
        terms = int(np.bincount(rows.indices, minlength=1).max())
        sums = int(np.diff(self.M.indptr).max(initial=1)) + int(np.bincount(T.indices, minlength=1).max())
        order = np.argsort(pattern.place)
        return _Formed(
            pattern=pattern,
            stiffness=pattern.values(K),
            inertia=pattern.values(M),
            diagonal=(K_size.diagonal()[order], M_size.diagonal()[order]),
            spread=(
                sp.csr_array((gamma(terms + 4) + gamma(4)) * K_size)[order][:, order],
                sp.csr_array((gamma(sums + 2) + gamma(4)) * M_size)[order][:, order],
            ),
        )

    def factorize(self, sigma: float, enough: float = 0.0) -> Inertia:
        """Count by the signs of sparse pivots in relative coordinates; infinite where nothing is proven.

        Parameters
        ----------
        sigma : float
            rad**2/s**2.
        enough : float
            An uncertainty that need not be bettered, rad**2/s**2: every share tried is one factorization.

        Notes
        -----
        With x = T z the pivots count the negative eigenvalues of K - sigma M + E, |E| <= F entry by entry
        (as in ``ShiftedPencil.factorize``). For any d > 0, -G <= E <= G with the diagonal g_i =
        (F d)_i / d_i, as quadratic forms. If also G <= s (K + |sigma| M), then

            (1 - s) K - (sigma + s |sigma|) M  <=  K - sigma M + E  <=  (1 + s) K - (sigma - s |sigma|) M

        so that the count lies between N(sigma (1 - 2 s)) and N(sigma (1 + 2.1 s)). A stiff part may thus be
        rounded by a share of its own stiffness, which no soft mode feels. G <= s (K + |sigma| M) is proven
        by the positive pivots of s (K + |sigma| M) - 2 G, whose own rounding is held below G.
        """
        formed = self._formed
        factored = formed.factored(formed.stiffness - sigma * formed.inertia)
        if sigma == 0 or factored is None:
            return Inertia(sigma, 0, np.inf, METHOD)
        pivots, times = factored
        scaling = formed.scaling(abs(sigma))
        spread = formed.spread[0] + abs(sigma) * formed.spread[1]
        error = SLACK * (times(scaling) + spread @ scaling) / scaling
        widened = WIDENED * abs(sigma)
        plenty = sum(widened * share <= enough * (1 + PLAY) for share in SHARES)
        for share in SHARES[max(0, plenty - 1) :]:
            if _holds(formed, share, abs(sigma), error, scaling):
                negative = int(np.count_nonzero(pivots < 0))
                return Inertia(sigma, negative, widened * share, METHOD)
        return Inertia(sigma, 0, np.inf, METHOD)


@dataclass(frozen=True, slots=True, eq=False)
class _Formed:
    """K and M in relative coordinates; diagonals and rounding (``spread``) by rows of the factors."""

    pattern: Pattern
    stiffness: Array
    inertia: Array
    diagonal: tuple[Array, Array]
    spread: tuple[sp.csr_array, sp.csr_array]

    def scaling(self, sigma: float) -> Array:
        """Return d with d_i**2 (K + sigma M)_ii = 1."""
        return np.asarray(1 / np.sqrt(self.diagonal[0] + sigma * self.diagonal[1]), dtype=float)

    def factored(self, data: Array) -> tuple[Array, Rounding] | None:
        """Return pivots and rounding of a matrix of this pattern; None where pivoting broke the symmetry."""
        try:
            lu = self.pattern.factorize(data)
        except RuntimeError:  # an exactly zero pivot column
            return None
        turned = self.pattern.turned
        if not (np.array_equal(lu.perm_r, turned) and np.array_equal(lu.perm_c, turned)):
            return None
        return factor_rounding(self.pattern, lu)


def _holds(formed: _Formed, share: float, sigma: float, error: Array, scaling: Array) -> bool:
    """Whether diag(error) <= share (K + sigma M), proven."""
    data = share * (formed.stiffness + sigma * formed.inertia)
    stored_order = error[formed.pattern.turned]
    at = np.searchsorted(
        formed.pattern.keys, np.arange(formed.pattern.n, dtype=np.int64) * (formed.pattern.n + 1)
    )
    data[at] -= 2 * stored_order
    factored = formed.factored(data)
    if factored is None:
        return False
    pivots, times = factored
    spread = share * (formed.spread[0] + sigma * formed.spread[1])
    own = SLACK * (times(scaling) + spread @ scaling) / scaling + gamma(4) * error
    return bool(np.all(pivots > 0) and np.all(own <= KEPT_BACK * error))
