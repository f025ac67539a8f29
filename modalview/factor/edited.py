"""Counts after edits of single terms, from the factors of the model before: no new factorization."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.errors import NumericalError
from modalview.factor.earlier import Earlier
from modalview.factor.inertia import Inertia
from modalview.factor.rounding import SLACK, gamma
from modalview.factor.shifted import ShiftedPencil

Array = npt.NDArray[np.float64]

# Beyond so many edited directions a new factorization is cheaper and knows its rounding.
MOST_EDITS = 10

# Below this size a new factorization is as quick (a third of a factorization at 1,000 coordinates).
WORTH_KEEPING = 1_500

# What rounding did to the solves is measured by their residual, to first order; as much again for the rest.
DOUBT = 2.0
LEAST_DOUBT = 1e-12


METHOD = "sparse LDL^T before the edit, bordered by it"


@dataclass(frozen=True, slots=True, eq=False)
class Bounds:
    """What proves a count after edits. Y = (K - sigma M)^-1 A as computed, R = A - (K - sigma M) Y.

    Parameters
    ----------
    flexibility, inertia, residual : array (q, q)
        Entry by entry at least what is lost of Y^T A by rounding and of its distance from Y^T A + Y^T R;
        |Y^T M Y|; |R^T M^-1 R|.
    """

    flexibility: Array
    inertia: Array
    residual: Array


@dataclass(frozen=True, slots=True, eq=False)
class EditedCount:
    """Negative eigenvalues of K - sigma M + sum v_i a_i a_i^T for any v, from one factorization.

    Parameters
    ----------
    found : Inertia
        Of K - sigma M before the edit; its uncertainty is finite.
    answers : array (n, q)
        (K - sigma M)^-1 A.
    flexibility : array (q, q)
        A^T (K - sigma M)^-1 A.
    error : array (q, q)
        What rounding may have done to it, by the residual.
    bounds : Bounds or None
        None where nothing is proven: there are massless coordinates.
    """

    found: Inertia
    answers: Array
    flexibility: Array
    error: Array
    bounds: Bounds | None

    def after(self, change: Array) -> int | None:
        """Count after the edit; None where rounding leaves it open, and a new factorization is due.

        Parameters
        ----------
        change : array (q,)
            v: what is added to the stiffness of each direction a_i, N/m; -sigma dm for a mass.

        Notes
        -----
        N(S + A V A^T) = N(S) + N(-V^-1 - A^T S^-1 A) - N(-V^-1), from the inertia of
        [[S, A], [A^T, -V^-1]] by either block (E. V. Haynsworth (1968), Linear Algebra Appl. 1, 73). Scaled
        by sqrt |V| the small matrix has entries near 1. An estimate, not a proof: the uncertainty of the
        factors themselves (``found.uncertainty``) stands as it did.
        """
        edited = np.flatnonzero(change)
        if edited.size == 0:
            return self.found.negative
        size = np.sqrt(np.abs(change[edited]))
        scaling = np.outer(size, size)
        inner = -np.diag(np.sign(change[edited])) - scaling * self.flexibility[np.ix_(edited, edited)]
        doubt = DOUBT * float(np.linalg.norm(scaling * self.error[np.ix_(edited, edited)]))
        doubt += LEAST_DOUBT * float(np.linalg.norm(inner))
        values = np.linalg.eigvalsh(inner)
        if np.abs(values).min() <= doubt:
            return None
        jump = int(np.count_nonzero(values < 0)) - int(np.count_nonzero(change[edited] > 0))
        return self.found.negative + jump

    def proven(self, change: Array) -> Inertia:
        """Count after the edit, with a proven uncertainty; infinite where nothing is proven.

        Parameters
        ----------
        change : array (q,)
            As for `after`, of stiffness terms: a mass that shrinks would shrink the unit of the uncertainty.

        Notes
        -----
        The factors count H exactly, |H - (K - sigma M)| <= delta M as quadratic forms, delta the uncertainty
        of ``found``. Scaled by sqrt |V|, the bordered matrix [[H + t M, A], [A^T, -sign V]] has N(H + t M +
        A V A^T) + (number of v > 0) negative eigenvalues (Haynsworth). Congruence by the computed Y, whatever
        its error, turns it into [[H + t M, R - t M Y], [., -G + t Y^T M Y]] with R = A - H Y and
        G = sign V + Y^T A + R^T Y, symmetric parts. For t = eta > 0 and any s, 2 y^T (R - eta M Y) s >=
        -eta y^T M y - s^T (R - eta M Y)^T M^-1 (R - eta M Y) s / eta, so that the bordered matrix is at least
        diag(H, -G - R^T M^-1 R / eta + R^T Y + Y^T R): terms in eta Y^T M Y cancel. With rho and xi the norms
        of M^(-1/2) R and M^(1/2) Y, its lower block has no more negative eigenvalues than -G while

            rho**2 / eta + 2 rho xi < least |eigenvalue of G|,

        whence N(H + eta M + A V A^T) <= c = N(H) + N(-G) - (number of v > 0). In the same way t = -eta gives
        c <= N(H - eta M + A V A^T). So c lies between the true counts at sigma - delta - eta and sigma +
        delta + eta. R is known for K - sigma M as stored: H Y differs from that by delta xi at most, and
        Y^T H Y by delta xi**2. No distance to the nearest mode is needed; near one, Y is large and nothing
        is proven.
        """
        edited = np.flatnonzero(change)
        if edited.size == 0:
            return self.found
        sigma, delta = self.found.sigma, self.found.uncertainty
        if self.bounds is None:
            return Inertia(sigma, 0, np.inf, METHOD)
        size, chosen = np.sqrt(np.abs(change[edited])), np.ix_(edited, edited)
        scaling = np.outer(size, size)

        def norm(square: Array) -> float:
            return SLACK * float(np.linalg.norm(scaling * square[chosen]))

        flexibility = scaling * self.flexibility[chosen]
        values = np.linalg.eigvalsh(np.diag(np.sign(change[edited])) + flexibility)
        xi = np.sqrt(norm(self.bounds.inertia))
        rho = np.sqrt(norm(self.bounds.residual)) + delta * xi
        # the change is a rounded difference; eigenvalues of the small matrix: gamma_(20 q) of its norm
        doubt = gamma(20 * edited.size + 8) * (edited.size + SLACK * float(np.linalg.norm(flexibility)))
        doubt += norm(self.bounds.flexibility) + delta * xi**2
        room = float(np.abs(values).min()) - SLACK * (doubt + 2 * rho * xi)
        if not room > 0:
            return Inertia(sigma, 0, np.inf, METHOD)
        jump = int(np.count_nonzero(values > 0)) - int(np.count_nonzero(change[edited] > 0))
        return Inertia(sigma, self.found.negative + jump, delta + SLACK * rho**2 / room, METHOD)


def edited_count(shifted: ShiftedPencil, found: Inertia, directions: sp.csr_array) -> EditedCount:
    """Prepare counts after edits along some directions at the shift of ``found``.

    Parameters
    ----------
    shifted : ShiftedPencil
        Before the edits.
    found : Inertia
        By ``shifted.factorize``.
    directions : csr_array (q, n)
        Rows a_i: of edited terms, or unit vectors for masses. At most ``MOST_EDITS``.

    Raises
    ------
    NumericalError
        Too many directions, or the factors prove nothing.

    Notes
    -----
    Cost: two solves for each direction and a few products; then next to nothing for each value of a drag.
    Below some 500 coordinates the calls themselves cost as much as the solves: a first count then takes half
    of a new factorization, which is a third of a millisecond.
    """
    if directions.shape[0] > MOST_EDITS or not found.uncertainty < np.inf:
        raise NumericalError(
            f"{directions.shape[0]} edited directions at {found.sigma:g} rad²/s²: factor anew "
            f"(at most {MOST_EDITS}, from factors that count)."
        )
    right = directions.toarray().T
    answers = shifted.solve(found, right)
    pattern = shifted.pattern
    matrix = pattern.matrix(shifted.stiffness - found.sigma * shifted.inertia)
    turned = np.empty_like(answers)
    turned[pattern.stored] = answers
    product = (matrix @ turned)[pattern.stored]
    residual = right - product
    flexibility = answers.T @ right
    error = np.abs(answers.T @ residual)
    return EditedCount(
        found=found,
        answers=answers,
        flexibility=(flexibility + flexibility.T) / 2,
        error=np.maximum(error, error.T),
        bounds=_bounds(shifted, matrix, turned, right, residual)
        if shifted.extents.margin == np.inf
        else None,
    )


def _bounds(
    shifted: ShiftedPencil, matrix: sp.csc_array, turned: Array, right: Array, residual: Array
) -> Bounds:
    """Bound what the proof needs; ``turned`` (n, q) is Y in the stored order, as is ``matrix``."""
    pattern, basis_t = shifted.pattern, shifted.extents.basis_t
    stored, order = pattern.stored, np.argsort(pattern.place)
    size = np.abs(turned)
    most = int(np.diff(matrix.indptr).max())
    lost = gamma(most + 2) * ((abs(matrix) @ size)[stored] + np.abs(right))
    left = np.abs(residual) + lost
    rounded = basis_t @ left[order]
    inertial = abs(pattern.matrix(shifted.inertia)) @ size
    own = size[stored]
    entries = int(np.count_nonzero(right, axis=0).max(initial=1))
    off = own.T @ left + gamma(entries + 4) * (own.T @ np.abs(right))
    return Bounds(np.maximum(off, off.T), size.T @ inertial, rounded.T @ rounded)


def count_at(shifted: ShiftedPencil, sigma: float) -> Inertia:
    """Count as ``shifted.factorize`` does, from the factors of an earlier count where a few springs differ.

    Every count made anew is kept with its factors for the next edit. It serves a model of the same masses,
    geometry and joints in which at most ten terms have another value.
    """
    if shifted.n < WORTH_KEEPING or shifted.relative is None or shifted.extents.margin < np.inf:
        return shifted.factorize(sigma)
    earlier = shifted.pattern.earlier
    for one in earlier.at(sigma):
        found = _after_edit(one, shifted)
        if found is not None:
            return found
    found = shifted.factorize(sigma)
    if found.uncertainty < np.inf:
        earlier.keep(Earlier(shifted, found), int(shifted.pattern.terms.sum()))
    return found


def _after_edit(one: Earlier, shifted: ShiftedPencil) -> Inertia | None:
    """Return what an earlier count proves for a model of the same pattern; None where it proves nothing."""
    old, new = one.shifted.relative, shifted.relative
    if old is None or new is None or old.rows is not new.rows:
        return None
    if not np.array_equal(one.shifted.inertia, shifted.inertia):
        return None
    terms = np.flatnonzero(new.stiffness != old.stiffness)
    if terms.size == 0:
        return one.found
    if terms.size > MOST_EDITS:
        return None
    if one.prepared is None or one.terms != tuple(terms.tolist()):
        one.prepared = edited_count(one.shifted, one.found, sp.csr_array(old.rows[terms]))
        one.terms = tuple(terms.tolist())
    found = one.prepared.proven((new.stiffness - old.stiffness)[terms])
    return found if found.uncertainty < np.inf else None
