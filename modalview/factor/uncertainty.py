"""How far rounding may displace the eigenvalues that pivots count."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.factor.parts import PencilParts
from modalview.factor.pattern import Factors, Pattern
from modalview.factor.rounding import SLACK, UNIT, gamma

if TYPE_CHECKING:
    from scipy.sparse.linalg import SuperLU

Array = npt.NDArray[np.float64]
Indices = npt.NDArray[np.intp]

# Bounds what rounding makes of a non-negative vector (n,).
Rounding = Callable[[Array], Array]

# Power steps that sharpen a norm: two to three times sharper on large plane models, no more after two.
REFINEMENTS = 2

# Asymmetry of the factors, relative, whose square over four is below the unit roundoff.
ASYMMETRY = 2e-8

# Entries of the factors looked at together: large arrays cost more to get from the system than to fill.
BLOCK = 2**17

# Entries of the scaling stay above this share of the largest.
LEAST_SCALING = 1e-3


@dataclass(frozen=True, slots=True, eq=False)
class Extents:
    """|X| and what is known of rounding at every shift, by rows of the factors.

    X = [W, sqrt(tau) Z] is the congruence that brings K - sigma M to standard form; tau follows the shift.

    Attributes
    ----------
    basis_t : csr_array (modes, n)
        |W|.T.
    reach : array (n,)
        |W| 1.
    held : array (n,)
        |Z| 1: 1 / sqrt(K_ii) on massless coordinates, zero elsewhere.
    formed, formed_held : arrays (n,)
        Rounding of K times ``reach`` and ``held``.
    inertial : array (n,)
        Rounding of sigma M times ``reach``, per unit of sigma.
    margin : float
        No eigenvalue of the massless block, scaled to a unit diagonal, lies below.
    pressed : pair of arrays (modes,)
        ``formed`` and ``inertial`` after ``press``, without massless coordinates.
    top : float
        max_i (|S| 1)_i bounded from above: no eigenvalue is larger in absolute value.
    """

    basis_t: sp.csr_array
    reach: Array
    held: Array
    formed: Array
    formed_held: Array
    inertial: Array
    margin: float
    pressed: tuple[Array, Array]
    top: float

    def tau(self, sigma: float) -> float:
        """Scale of the massless block at a shift: of the size of what is counted."""
        return max(abs(sigma), 1e-6 * self.top)

    def lift(self, scaling: Array, tau: float) -> Array:
        """Return |X| times a scaling of the columns of X (modes, or modes + n with massless coordinates)."""
        if self.margin == np.inf:
            return np.asarray(scaling @ self.basis_t, dtype=float)
        modes = self.basis_t.shape[0]
        return np.asarray(
            scaling[:modes] @ self.basis_t + np.sqrt(tau) * self.held * scaling[modes:], dtype=float
        )

    def press(self, rows: Array, tau: float) -> Array:
        """Return |X|.T times rows."""
        pressed: Array = self.basis_t @ rows
        return (
            pressed if self.margin == np.inf else np.concatenate([pressed, np.sqrt(tau) * self.held * rows])
        )

    def vector(self, tau: float) -> Array:
        """Return |X| 1, by rows of the factors."""
        return self.reach + np.sqrt(tau) * self.held if self.margin < np.inf else self.reach

    def uncertainty(self, sigma: float, factoring: Array) -> float:
        """Bound || |X|^T F |X| || by its largest row sum; infinite where the massless block might be lost.

        Parameters
        ----------
        sigma : float
        factoring : array (n,)
            Rounding of the factorization times ``vector(tau(sigma))``; zero gives the part that needs none.
        """
        if self.margin == np.inf:
            known = self.pressed[0] + abs(sigma) * self.pressed[1]
            return SLACK * float((known + self.basis_t @ factoring).max())
        tau = self.tau(sigma)
        rows = factoring + self.formed + abs(sigma) * self.inertial + np.sqrt(tau) * self.formed_held
        return self._trusted(SLACK * float(self.press(rows, tau).max()), tau)

    def least(self, sigma: float) -> float:
        """Return the part of the uncertainty that needs no factorization."""
        if self.margin == np.inf:
            return SLACK * float((self.pressed[0] + abs(sigma) * self.pressed[1]).max())
        return self.uncertainty(sigma, np.zeros(self.held.size))

    def refined(self, sigma: float, factoring: Array, again: Rounding) -> float:
        """Bound the same norm more sharply by max_i (F' d)_i / d_i with d after some power steps.

        F' = |X|^T F |X| is symmetric and not negative, so any positive d bounds its norm (L. Collatz (1942),
        Math. Z. 48, 221). The part of F that needs no factorization is bounded by itself.

        Parameters
        ----------
        sigma : float
        factoring : array (n,)
            As for ``uncertainty``.
        again : callable
            The rounding of the factorization times another non-negative vector (n,).
        """
        tau = self.tau(sigma)
        pressed = self.press(factoring, tau)
        for _ in range(REFINEMENTS):
            scaling = np.maximum(pressed / pressed.max(), LEAST_SCALING)
            pressed = self.press(again(self.lift(scaling, tau)), tau)
        sharper = SLACK * float((pressed / scaling).max())
        return self._trusted(sharper + self.least(sigma), tau)

    def _trusted(self, delta: float, tau: float) -> float:
        return delta if delta < 0.5 * tau * self.margin else np.inf


def extents_of(parts: PencilParts, pattern: Pattern, margin: float) -> Extents:
    """Gather what the uncertainty at every shift is made of; ``margin`` is infinite without massless ones."""
    massless, formation, basis = parts.massless, parts.formation, parts.basis
    size, place = np.abs(basis.data), pattern.place
    reach: Array = np.bincount(basis.indices, size, pattern.n).astype(float, copy=False)
    held = np.zeros(pattern.n)
    diagonal = parts.K.diagonal()[massless]
    held[massless] = 1 / np.sqrt(np.where(diagonal > 0, diagonal, np.inf))
    share = gamma(2) + (gamma(parts.terms + 2) if parts.terms else 0.0)
    order = np.argsort(place)
    stretched = (formation @ reach)[order]
    # the columns of W are the rows of its transpose: only their places are renamed
    basis_t = sp.csr_array((size, place[basis.indices], basis.indptr), shape=basis.shape[::-1])
    inertial = gamma(2) * (abs(parts.M) @ reach)[order]
    return Extents(
        basis_t=basis_t,
        reach=reach[order],
        held=held[order],
        formed=share * stretched,
        formed_held=share * (formation @ held)[order],
        inertial=inertial,
        margin=margin,
        pressed=(basis_t @ (share * stretched), basis_t @ inertial),
        top=SLACK * float((basis_t @ stretched).max()),
    )


def factor_rounding(pattern: Pattern, lu: "SuperLU[np.float64]") -> tuple[Array, Rounding]:
    """Return the pivots, and a function that bounds the factorization's rounding times a vector (n,) >= 0.

    The rounding is gamma_(s+3) |L||U| + |R||D||R|^T of ``ShiftedPencil.factorize``.
    """
    if pattern.factors is not None and pattern.factors.describe(lu):
        return _mirrored(pattern.factors, pattern.terms, lu)
    return _unmirrored(gamma(pattern.terms + 3), lu)


def _mirrored(shape: Factors, terms: Indices, lu: "SuperLU[np.float64]") -> tuple[Array, Rounding]:
    """Work on the entries alone, as U mirrors L entry by entry."""
    lower, upper = lu.L.data, lu.U.data
    pivots = upper[shape.mirror[shape.diagonal]]
    size, apart = np.empty(lower.size), np.empty(lower.size)
    # R is U to the asymmetry found: where that is small, |R||D||R|^T is below u |L||U|, one more rounding
    symmetric = True
    for start in range(0, lower.size, BLOCK):
        block = slice(start, start + BLOCK)
        above = upper[shape.mirror[block]]
        mirror = pivots[shape.columns[block]] * lower[block]
        # at least |U - D L^T| = 2 |D R^T|, its evaluation included, and at least |U| and |D L^T|
        off = np.abs(above - mirror) + 2 * UNIT * np.abs(mirror)
        apart[block] = off
        size[block] = np.abs(above) + off
        symmetric = symmetric and bool(np.all(off <= ASYMMETRY * size[block]))
    share, inverse = gamma(terms + (4 if symmetric else 3)), 1 / np.abs(pivots)
    sizes = shape.lower(size)
    skews = None if symmetric else shape.lower(apart)

    def times(vector: Array) -> Array:
        rounding = np.asarray(sizes @ (((share * vector) @ sizes) * inverse), dtype=float)
        if skews is not None:
            rounding += skews @ ((vector @ skews) * (0.25 * inverse))
        return rounding

    return pivots, times


def _unmirrored(share: Array, lu: "SuperLU[np.float64]") -> tuple[Array, Rounding]:
    """Do the same by sparse products, when some entry cancelled to an exact zero."""
    upper = sp.csr_array(lu.U)
    pivots: Array = np.asarray(upper.diagonal(), dtype=float)
    mirror = sp.csr_array(sp.diags_array(pivots) @ lu.L.T)
    apart = abs(upper - mirror) + 2 * UNIT * abs(mirror)
    size = abs(upper) + apart
    inverse = 1 / np.abs(pivots)

    def times(vector: Array) -> Array:
        grown = size.T @ (inverse * (size @ (share * vector)))
        skew = apart.T @ (0.25 * inverse * (apart @ vector))
        return np.asarray(grown + skew, dtype=float)

    return pivots, times
