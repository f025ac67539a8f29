"""K - sigma M factored on one fixed pattern, with a proven uncertainty of what its pivots count."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.errors import NumericalError
from modalview.factor.dense import dense_inertia
from modalview.factor.held import held_margin
from modalview.factor.inertia import Inertia
from modalview.factor.parts import PencilParts
from modalview.factor.pattern import Pattern, union_pattern
from modalview.factor.relative import Relative
from modalview.factor.uncertainty import Extents, extents_of, factor_rounding

Array = npt.NDArray[np.float64]

# An uncertainty beyond this share of the shift is bounded more sharply unless asked otherwise.
REFINED_SHARE = 1e-9

# Margins asked of a large massless block, in turn.
MARGINS = (1e-2, 1e-4, 1e-6, 1e-8)


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
    relative : Relative or None
        The same in coordinates relative over stiff terms, where there are terms.
    """

    pattern: Pattern
    stiffness: Array
    inertia: Array
    extents: Extents
    rigid_modes: int
    definite: bool
    relative: Relative | None = None

    @property
    def n(self) -> int:
        """Number of coordinates, massless ones included."""
        return self.pattern.n

    @property
    def modes(self) -> int:
        """Number of modes: coordinates with inertia."""
        return int(self.extents.basis_t.shape[0])

    def factorize(self, sigma: float, sharp: float = REFINED_SHARE) -> Inertia:
        """Count by the signs of sparse pivots; uncertainty infinite where pivoting broke the symmetry.

        Parameters
        ----------
        sigma : float
            rad**2/s**2.
        sharp : float
            An uncertainty beyond this share of sigma is worth the time to bound it more sharply.

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
        extents = self.extents
        pivots, times = factor_rounding(pattern, lu)
        rounding = times(extents.vector(extents.tau(sigma)))
        delta = extents.uncertainty(sigma, rounding)
        if sharp * abs(sigma) < delta < np.inf:
            delta = min(delta, extents.refined(sigma, rounding, times))
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
        extents = self.extents
        found = dense_inertia(matrix[np.ix_(order, order)], extents.vector(extents.tau(sigma)))
        if found is None:
            return Inertia(sigma, 0, np.inf, "dense Bunch-Kaufman")
        negative, rounding = found
        return Inertia(sigma, negative, extents.uncertainty(sigma, rounding), "dense Bunch-Kaufman")

    def least_uncertainty(self, sigma: float) -> float:
        """Return the part of the uncertainty that needs no factorization: no count is sharper than this."""
        return self.extents.least(sigma)


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
    K, M, massless = parts.K, parts.M, parts.massless
    if pattern is None:
        pattern = union_pattern(K, M)
    margin = held_margin(K, massless, _lowest) if massless.any() else np.inf
    return ShiftedPencil(
        pattern=pattern,
        stiffness=pattern.values(K),
        inertia=pattern.values(M),
        extents=extents_of(parts, pattern, margin),
        rigid_modes=parts.rigid_modes,
        definite=parts.definite,
        relative=_relative(parts),
    )


def _relative(parts: PencilParts) -> Relative | None:
    if parts.rows is None or parts.stiffness is None:
        return None
    scale = np.ones(parts.K.shape[0]) if parts.scale is None else parts.scale
    return Relative(parts.rows, parts.stiffness, parts.M, scale)


def _lowest(matrix: sp.csc_array) -> float:
    """Bound the lowest eigenvalue of a matrix of unit diagonal from below by counts; 0 proves nothing."""
    eye = sp.csc_array(sp.eye_array(matrix.shape[0]))
    none_massless = np.zeros(matrix.shape[0], dtype=bool)
    shifted = shifted_pencil(PencilParts(matrix, eye, eye, sp.csc_array(abs(matrix)), none_massless))
    for sigma in MARGINS:
        found = shifted.factorize(sigma)
        if found.negative == 0 and found.uncertainty < sigma:
            return sigma - found.uncertainty
    return 0.0
