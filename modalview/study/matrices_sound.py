"""Whether matrices of others can be a stiffness and a mass: signs of their eigenvalues, proven by counts."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.csgraph import connected_components

from modalview.assembly.pencil import Pencil
from modalview.errors import Fault, FileFaultsError
from modalview.factor.counts import count_zero
from modalview.factor.parts import PencilParts
from modalview.factor.shifted import ShiftedPencil, shifted_pencil

# A mass matrix is factored in dense blocks of coordinates it couples; one of this size takes 0.3 GB.
LARGEST_BLOCK = 6000
# The lowest eigenvalue is bracketed to this share of itself: a measure, for a message.
MEASURE = 1e-3
STEPS = 24


@dataclass(frozen=True, slots=True)
class Signs:
    """Signs of the eigenvalues of a symmetric matrix.

    Parameters
    ----------
    negative : int or None
        Proven below zero; None where rounding leaves it undecided.
    zero : int or None
        Not to be told from zero.
    lowest : float
        The lowest as a share of ``top``, to three digits; 0 where none is proven below zero.
    top : float
        Bound of the largest in size.
    """

    negative: int | None
    zero: int | None
    lowest: float
    top: float


def signs_of(shifted: ShiftedPencil) -> Signs:
    """Count negative and zero eigenvalues of a pencil, and measure the lowest by further counts.

    Notes
    -----
    Cost: two factorizations; about fifteen more where some are negative. Sylvester's law of inertia makes
    the numbers those of K itself, whatever the positive definite M.
    """
    top = shifted.extents.top
    found = count_zero(shifted)
    if not found.below:
        return Signs(found.below, found.number, 0.0, top)
    near, far = found.reach, max(top, 2 * found.reach)
    for _ in range(STEPS):
        if far <= near * (1 + MEASURE):
            break
        middle = float(np.sqrt(near * far))
        if shifted.factorize(-middle).negative:
            near = middle
        else:
            far = middle
    return Signs(found.below, found.number, -float(np.sqrt(near * far)) / top, top)


def require_mass(M: sp.csc_array, name: str) -> None:
    """Raise FileFaultsError unless M is positive definite beside rows that are wholly zero.

    Parameters
    ----------
    M : csc_array (n, n)
        Symmetric, kg.
    name : str
        Of its file, for the message.
    """
    diagonal = M.diagonal()
    massy = np.flatnonzero(np.asarray(abs(M).sum(axis=1)).ravel() > 0)
    part = sp.csc_array(M[massy][:, massy])
    coupled = int(np.bincount(connected_components(part, directed=False)[1]).max())
    if coupled > LARGEST_BLOCK:
        reason = (
            f"couples {coupled} coordinates with one another; up to {LARGEST_BLOCK} can be factored. "
            "Give a lumped (diagonal) mass matrix"
        )
        raise FileFaultsError((Fault(name, reason),))
    low = massy[diagonal[massy] <= 0]
    if low.size == 0:
        found = signs_of(_alone(_unit_diagonal(part)))
        if found.negative == 0 and found.zero == 0:
            return
    raise FileFaultsError((Fault(name, _why_no_mass(M, part, low)),))


def _why_no_mass(M: sp.csc_array, part: sp.csc_array, low: npt.NDArray[np.intp]) -> str:
    at = f"; its diagonal at {low[0] + 1} is {M.diagonal()[low[0]]:.4g}" if low.size else ""
    own = signs_of(_alone(part))
    if own.negative:
        return (
            f"is no mass matrix: {_negative(own.negative)} (proven by counts), the lowest "
            f"about {own.lowest:.2g} of a bound of the largest{at}. Kinetic energy is never below zero"
        )
    number = "some eigenvalues" if own.zero is None else f"{own.zero} eigenvalue(s)"
    return (
        f"is no mass matrix: beside its rows of zeros it is singular or as good as singular, {number} cannot "
        f"be told from zero{at}. A coordinate without mass has zeros only in its row"
    )


def require_stiffness(pencil: Pencil, name: str) -> tuple[str, ...]:
    """Raise FileFaultsError where K is proven to have a negative eigenvalue; return notes.

    Parameters
    ----------
    pencil : Pencil
        Of matrices of others; M is sound.
    name : str
        Of the file of K, for the message.
    """
    if pencil.massless.any():
        _require_held(pencil, name)
    found = signs_of(pencil.shifted)
    if found.negative:
        lowest = f"about {found.lowest * found.top:.2g} rad²/s², {found.lowest:.2g} of a bound of the largest"
        reason = (
            f"is indefinite: {_negative(found.negative)} (proven by counts), the lowest {lowest}. Such a "
            f"model is unstable: {_motions(found.negative)} without limit, and its frequencies do not tell. "
            "Mend the matrix, or check signs and units"
        )
        raise FileFaultsError((Fault(name, reason),))
    if found.negative is None:
        return ("rounding leaves undecided whether the stiffness has eigenvalues below zero",)
    return ()


def _require_held(pencil: Pencil, name: str) -> None:
    """Coordinates without mass follow the others statically: only where stiffness holds each."""
    where = np.flatnonzero(pencil.massless)
    inner = sp.csc_array(pencil.K[where][:, where])
    diagonal = inner.diagonal()
    low = where[diagonal <= 0]
    if low.size == 0:
        found = signs_of(_alone(_unit_diagonal(inner)))
        if found.negative == 0 and found.zero == 0:
            return
        what = f"{found.negative or found.zero or 'some'} eigenvalue(s) not above zero, proven by counts"
    else:
        what = f"the diagonal at {low[0] + 1} is {pencil.K.diagonal()[low[0]]:.4g}"
    reason = (
        f"does not hold the {where.size} coordinate(s) without mass: their part of it is not positive "
        f"definite ({what}); give them mass, or leave out what nothing holds"
    )
    raise FileFaultsError((Fault(name, reason),))


def _negative(number: int) -> str:
    return "1 eigenvalue is negative" if number == 1 else f"{number} eigenvalues are negative"


def _motions(number: int) -> str:
    return "1 motion grows" if number == 1 else f"{number} motions grow"


def _unit_diagonal(matrix: sp.csc_array) -> sp.csc_array:
    """Scale to a unit diagonal: the signs of the eigenvalues stay, and grading does not hide them."""
    scaling = sp.diags_array(1 / np.sqrt(matrix.diagonal()))
    scaled = sp.csc_array(scaling @ matrix @ scaling)
    return sp.csc_array((scaled + scaled.T) / 2)


def _alone(matrix: sp.csc_array) -> ShiftedPencil:
    """Prepare counts of the eigenvalues of a matrix itself."""
    n = matrix.shape[0]
    eye = sp.csc_array(sp.eye_array(n))
    size = sp.csc_array(abs(matrix))
    # One term: the scaling may have rounded each entry.
    return shifted_pencil(PencilParts(matrix, eye, eye, size, np.zeros(n, dtype=bool), terms=1))
