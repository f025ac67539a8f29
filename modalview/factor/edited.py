"""Counts after edits of single terms, from the factors of the model before: no new factorization."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.errors import NumericalError
from modalview.factor.inertia import Inertia
from modalview.factor.shifted import ShiftedPencil

Array = npt.NDArray[np.float64]

# Beyond so many edited directions a new factorization is cheaper and knows its rounding.
MOST_EDITS = 10

# What rounding did to the solves is measured by their residual, to first order; as much again for the rest.
DOUBT = 2.0
LEAST_DOUBT = 1e-12


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
    """

    found: Inertia
    answers: Array
    flexibility: Array
    error: Array

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
    Cost: two solves for each direction and a product; then next to nothing for each value of a drag.
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
    return EditedCount(found, answers, (flexibility + flexibility.T) / 2, np.maximum(error, error.T))
