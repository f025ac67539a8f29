"""K - sigma M factored on one fixed pattern, with a proven uncertainty of what its pivots count."""

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.errors import NumericalError
from modalview.factor.dense import dense_inertia
from modalview.factor.held import held_margin
from modalview.factor.pattern import Factors, Pattern, union_pattern
from modalview.factor.rounding import SLACK, UNIT, gamma

if TYPE_CHECKING:
    from scipy.sparse.linalg import SuperLU

Array = npt.NDArray[np.float64]
Indices = npt.NDArray[np.intp]


@dataclass(frozen=True, slots=True, eq=False)
class Inertia:
    """What one factorization proves.

    Parameters
    ----------
    sigma : float
        Shift, rad**2/s**2.
    negative : int
        Negative pivots.
    uncertainty : float
        delta, rad**2/s**2: ``negative`` is at least the number of eigenvalues below sigma - delta and at
        most the number below sigma + delta. Infinite where nothing is proven.
    method : str
        "sparse LDL^T" or "dense Bunch-Kaufman".
    lu : SuperLU or None
        The sparse factors, in the stored order; there also where pivoting made the count worthless.
    """

    sigma: float
    negative: int
    uncertainty: float
    method: str
    lu: "SuperLU[np.float64] | None" = None


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
    top: float


@dataclass(frozen=True, slots=True, eq=False)
class ShiftedPencil:
    """K - sigma M for any sigma, with massless coordinates left in (built by ``shifted_pencil``).

    Attributes
    ----------
    pattern : Pattern
        Order, map of values and shape of the factors; shared by pencils of equal structure.
    stiffness, inertia : arrays
        Values of K and M at the stored positions.
    extents : Extents
        What the uncertainty is made of.
    rigid_modes : int
        Known number of motions that stretch nothing.
    definite : bool
        Whether K is known to have no negative eigenvalue (a sum of positive terms).
    """

    pattern: Pattern
    stiffness: Array
    inertia: Array
    extents: Extents
    rigid_modes: int
    definite: bool

    @property
    def n(self) -> int:
        """Number of coordinates, massless ones included."""
        return self.pattern.n

    @property
    def modes(self) -> int:
        """Number of modes: coordinates with inertia."""
        return int(self.extents.basis_t.shape[0])

    def factorize(self, sigma: float) -> Inertia:
        """Count by the signs of sparse pivots; uncertainty infinite where pivoting broke the symmetry.

        Notes
        -----
        P (K - sigma M) P^T + E = L U was computed without interchanges, U = D V^T with D = diag(U) and unit
        triangular L, V. Rounding leaves V not quite L. Let H = (L + V)/2 and R = (V - L)/2: then L D V^T =
        H D H^T - R D R^T + (H D R^T - R D H^T), whose last part is antisymmetric, so that the symmetric
        matrix counted, H D H^T, lies from P (K - sigma M) P^T only by R D R^T and the symmetric part of E.
        The number of negative u_ii is exactly its number of negative eigenvalues (Sylvester). Entry by
        entry its distance from the true K - sigma M is at most F, the sum of

        - gamma_(s+3) |L||U|, from the factorization (Higham, theorem 9.3: gamma_k for inner products of k
          terms in any order; s, the entries in the row of L or column of U, makes k <= s, one more for
          the multiplication by the reciprocal of the pivot);
        - |R||D||R|^T, measured;
        - gamma_2 (|K| + |sigma M|): the product sigma m and its subtraction;
        - gamma_(t+2) |A|^T k |A|: the sum of at most t terms k_i a_i a_i^T in one entry of K.

        Congruence with X = [W, sqrt(tau) Z], W^T M W = 1, Z the massless coordinates scaled by
        1/sqrt(K_ii), turns K - sigma M into diag(S - sigma 1, tau Z^T K Z), exactly, because W lets the
        massless coordinates follow statically. The error becomes |X|^T F |X| at most, whose largest row
        sum delta bounds its norm. By Weyl's theorem the count is that of an S displaced by at most delta,
        and the massless block adds nothing while delta < tau times its margin. W itself is rounded; its
        relative error and that of summing non-negative numbers are covered by SLACK.

        References
        ----------
        N. J. Higham (2002), Accuracy and Stability of Numerical Algorithms, 2nd ed., sections 3.1, 9.3
        and 11.1. J. J. Sylvester (1852); H. Weyl (1912).
        """
        pattern = self.pattern
        try:
            lu = pattern.factorize(self.stiffness - sigma * self.inertia)
        except RuntimeError:  # an exactly zero pivot column
            return Inertia(sigma, 0, np.inf, "sparse LDL^T")
        turned = pattern.turned
        if not (np.array_equal(lu.perm_r, turned) and np.array_equal(lu.perm_c, turned)):
            return Inertia(sigma, 0, np.inf, "sparse LDL^T", lu)
        tau = self._tau(sigma)
        vector = self._vector(tau)
        if pattern.factors is not None and pattern.factors.describe(lu):
            pivots, rounding = _mirrored(pattern.factors, pattern.terms, lu, vector)
        else:
            pivots, rounding = _unmirrored(pattern.terms, lu, vector)
        delta = self._uncertainty(sigma, tau, rounding)
        return Inertia(sigma, int(np.count_nonzero(pivots < 0)), delta, "sparse LDL^T", lu)

    def solve(self, found: Inertia, right: Array) -> Array:
        """Return x with (K - sigma M) x = right, (n,) or (n, q), from the factors found at sigma.

        Raises NumericalError where K - sigma M was singular.
        """
        if found.lu is None:
            raise NumericalError(f"K - sigma M is singular at sigma = {found.sigma:g} rad²/s².")
        stored = self.pattern.stored
        turned = np.empty_like(right)
        turned[stored] = right
        solution: Array = found.lu.solve(turned)[stored]
        return solution

    def factorize_dense(self, sigma: float) -> Inertia:
        """Count by dense Bunch-Kaufman pivots: any shift, n**3 operations; the same reading of the result.

        The distance of P^T L D L^T P from K - sigma M is measured by forming it, so no growth is assumed.
        """
        pattern = self.pattern
        matrix = pattern.matrix(self.stiffness - sigma * self.inertia).toarray()
        order = np.argsort(pattern.turned)
        tau = self._tau(sigma)
        found = dense_inertia(matrix[np.ix_(order, order)], self._vector(tau))
        if found is None:
            return Inertia(sigma, 0, np.inf, "dense Bunch-Kaufman")
        negative, rounding = found
        return Inertia(sigma, negative, self._uncertainty(sigma, tau, rounding), "dense Bunch-Kaufman")

    def least_uncertainty(self, sigma: float) -> float:
        """Return the part of the uncertainty that needs no factorization: no count is sharper than this."""
        return self._uncertainty(sigma, self._tau(sigma), np.zeros(self.n))

    def _tau(self, sigma: float) -> float:
        return max(abs(sigma), 1e-6 * self.extents.top)

    def _vector(self, tau: float) -> Array:
        extents = self.extents
        return extents.reach + np.sqrt(tau) * extents.held if extents.margin < np.inf else extents.reach

    def _uncertainty(self, sigma: float, tau: float, factoring: Array) -> float:
        extents = self.extents
        rows = factoring + extents.formed + abs(sigma) * extents.inertial
        if extents.margin < np.inf:
            rows = rows + np.sqrt(tau) * extents.formed_held
        delta = float((extents.basis_t @ rows).max())
        if extents.margin < np.inf:
            delta = max(delta, float(np.sqrt(tau) * (extents.held * rows).max()))
        delta *= SLACK
        return delta if delta < 0.5 * tau * extents.margin else np.inf


@dataclass(frozen=True, slots=True, eq=False)
class PencilParts:
    """What a shifted pencil is made of.

    Parameters
    ----------
    K, M : csc_array (n, n)
        Symmetric, both triangles stored; N/m and kg or their rotational fellows. M is taken as stored.
    basis : csc_array (n, modes)
        W with W.T M W = 1 and K W zero on massless coordinates.
    formation : csc_array (n, n)
        Sum of |k_i| |a_i| |a_i|.T over the terms of K; |K| where K is given.
    massless : bool array (n,)
        Rows of M that are wholly zero.
    terms : int
        Most terms that meet in one entry of K; 0 where K is given and taken as exact.
    rigid_modes : int
        Known number of motions that stretch nothing.
    definite : bool
        K is a sum of positive terms, so no eigenvalue is negative.
    """

    K: sp.csc_array
    M: sp.csc_array
    basis: sp.csc_array
    formation: sp.csc_array
    massless: npt.NDArray[np.bool_]
    terms: int = 0
    rigid_modes: int = 0
    definite: bool = False


def shifted_pencil(parts: PencilParts, pattern: Pattern | None = None) -> ShiftedPencil:
    """Prepare K - sigma M for counts and solves at many shifts.

    Parameters
    ----------
    parts : PencilParts
    pattern : Pattern or None
        Of the union of K and M, where it is there from other values of the same model.

    Notes
    -----
    Cost: two sparse factorizations without a pattern.
    """
    K, M = parts.K, parts.M
    if pattern is None:
        pattern = union_pattern(K, M)
    return ShiftedPencil(
        pattern=pattern,
        stiffness=pattern.values(K),
        inertia=pattern.values(M),
        extents=_extents(parts, pattern),
        rigid_modes=parts.rigid_modes,
        definite=parts.definite,
    )


def _extents(parts: PencilParts, pattern: Pattern) -> Extents:
    massless, formation = parts.massless, parts.formation
    absolute = sp.csr_array(abs(parts.basis))
    reach: Array = np.asarray(absolute.sum(axis=1), dtype=float).ravel()
    held = np.zeros(pattern.n)
    diagonal = parts.K.diagonal()[massless]
    held[massless] = 1 / np.sqrt(np.where(diagonal > 0, diagonal, np.inf))
    share = gamma(2) + (gamma(parts.terms + 2) if parts.terms else 0.0)
    order = np.argsort(pattern.place)
    return Extents(
        basis_t=sp.csr_array(absolute[order].T),
        reach=reach[order],
        held=held[order],
        formed=share * (formation @ reach)[order],
        formed_held=share * (formation @ held)[order],
        inertial=gamma(2) * (abs(parts.M) @ reach)[order],
        margin=held_margin(parts.K, massless) if massless.any() else np.inf,
        top=SLACK * float((absolute.T @ (formation @ reach)).max()),
    )


def _mirrored(
    shape: Factors, terms: Indices, lu: "SuperLU[np.float64]", vector: Array
) -> tuple[Array, Array]:
    """Pivots and the rounding of the factorization times ``vector``, when U mirrors L entry by entry."""
    upper = lu.U.data[shape.mirror]
    pivots = upper[shape.diagonal]
    apart, size = _apart_and_size(upper, pivots[shape.columns] * lu.L.data)
    starts = shape.lower_indptr[:-1]
    grown = np.add.reduceat(size * (gamma(terms + 3) * vector)[shape.lower_indices], starts)
    skew = np.add.reduceat(apart * vector[shape.lower_indices], starts)
    inverse = 1 / np.abs(pivots)
    entries = size * (grown * inverse)[shape.columns] + apart * (0.25 * skew * inverse)[shape.columns]
    return pivots, np.bincount(shape.lower_indices, entries, vector.size).astype(float, copy=False)


def _unmirrored(terms: Indices, lu: "SuperLU[np.float64]", vector: Array) -> tuple[Array, Array]:
    """Do the same by sparse products, when some entry cancelled to an exact zero."""
    upper = sp.csr_array(lu.U)
    pivots: Array = np.asarray(upper.diagonal(), dtype=float)
    mirror = sp.csr_array(sp.diags_array(pivots) @ lu.L.T)
    apart = abs(upper - mirror) + 2 * UNIT * abs(mirror)
    size = abs(upper) + apart
    inverse = 1 / np.abs(pivots)
    rounding = size.T @ (inverse * (size @ (gamma(terms + 3) * vector)))
    rounding += apart.T @ (0.25 * inverse * (apart @ vector))
    return pivots, np.asarray(rounding, dtype=float)


def _apart_and_size(upper: Array, mirror: Array) -> tuple[Array, Array]:
    """At least |U - D L^T| = 2 |D R^T|, its evaluation included, and at least |U| and |D L^T|."""
    apart = np.abs(upper - mirror) + 2 * UNIT * np.abs(mirror)
    return apart, np.abs(upper) + apart
