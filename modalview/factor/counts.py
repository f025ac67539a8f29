"""Numbers of eigenvalues below a value: one-sided, or undecided, never wrong."""

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial

import numpy as np

from modalview.factor.edited import count_at
from modalview.factor.inertia import Inertia
from modalview.factor.relative import USUAL_SHARE, WIDENED, Relative
from modalview.factor.shifted import ShiftedPencil

# An edge may move outward by this share of itself, its uncertainty included; beyond, the count is undecided.
LARGEST_SHARE = 1e-6

# The first edge stands off by this share of the value: nobody means a frequency to 5e-10 of itself, and it
# is more than the uncertainty of all but badly graded models, so that one factorization decides.
FIRST_SHARE = 1e-9

# Where a pivot vanishes, the edge moves outward by this share of itself, a few times.
NUDGE = 1e-7
NUDGES = 3

# Sparse factorizations tried in all: the first, the nudges and as many moves to a proven distance.
TRIES = 1 + 2 * NUDGES

# An edge that is too near for its uncertainty moves to this multiple of it.
STAND_OFF = 1.25

# Dense pivoting is tried up to this size. It rescues only shifts where sparse pivots still vanish after the
# nudges; a model too stiff for the sparse count is too stiff for it too, so a larger limit buys seconds of
# waiting for the same answer.
DENSE_LIMIT = 1000

# Around zero there is no frequency to compare with: the edges may stand off by this share of the largest
# eigenvalue. Rounding reaches about 1e-13 of it.
LARGEST_SHARE_OF_TOP = 1e-9


@dataclass(frozen=True, slots=True)
class Count:
    """A number of eigenvalues on one side of an edge.

    Parameters
    ----------
    number : int or None
        None when undecided.
    edge : float
        Where it was counted, rad**2/s**2: the value asked for, moved outward.
    uncertainty : float
        Proven uncertainty of the edge, rad**2/s**2; 0 where structure alone decides.
    method : str
        How it was decided, or why it was not.
    """

    number: int | None
    edge: float
    uncertainty: float
    method: str


@dataclass(frozen=True, slots=True)
class ZeroModes:
    """Eigenvalues that are zero within ``reach``.

    Parameters
    ----------
    number : int or None
        N(+reach) - N(-reach); None when undecided.
    reach : float
        rad**2/s**2; what lies nearer to zero cannot be told from zero.
    below : int or None
        Eigenvalues proven below zero.
    """

    number: int | None
    reach: float
    below: int | None


def count_at_most(shifted: ShiftedPencil, lam: float, share: float = LARGEST_SHARE) -> Count:
    """Count the eigenvalues <= lam: never fewer than there are.

    Parameters
    ----------
    shifted : ShiftedPencil
    lam : float
        rad**2/s**2.
    share : float
        The edge may move outward by this share of itself, its uncertainty included.

    Returns
    -------
    Count
        Counted at an edge sigma > lam with sigma - delta > lam, so that everything up to lam is inside and
        what is counted too much lies within ``edge + uncertainty``. Undecided beyond that.
    """
    if shifted.definite and lam <= 0:
        number = shifted.rigid_modes if lam == 0 else 0
        return Count(number, lam, 0.0, "a sum of positive stiffness terms has none below zero")
    found = _outward(shifted, lam, 1.0, share)
    if isinstance(found, str):
        return Count(None, lam, np.inf, found)
    return Count(max(found.negative, shifted.rigid_modes), found.sigma, found.uncertainty, found.method)


def count_below(shifted: ShiftedPencil, lam: float, share: float = LARGEST_SHARE) -> Count:
    """Count the eigenvalues < lam: never more than there are, never fewer than the rigid-body modes.

    Parameters
    ----------
    shifted : ShiftedPencil
    lam : float
        rad**2/s**2.
    share : float
        The edge may move outward by this share of itself, its uncertainty included.

    Returns
    -------
    Count
        Counted at an edge sigma < lam with sigma + delta < lam. Undecided beyond that. At lam <= 0
        the rigid-body modes, which lie in no band, are still counted.
    """
    rigid = shifted.rigid_modes
    if shifted.definite and lam <= 0:
        return Count(rigid, lam, 0.0, "a sum of positive stiffness terms has none below zero")
    found = _outward(shifted, lam, -1.0, share)
    if isinstance(found, str):
        return Count(None, lam, np.inf, found)
    return Count(max(found.negative, rigid), found.sigma, found.uncertainty, found.method)


def count_negative(shifted: ShiftedPencil) -> Count:
    """Count the eigenvalues proven below zero, a little left of it; more than 0 is an unstable model.

    Never more than there are. Zero by structure where K is a sum of positive terms.
    """
    if shifted.definite:
        return Count(0, 0.0, 0.0, "a sum of positive stiffness terms has none below zero")
    found = _outward(shifted, 0.0, -1.0)
    if isinstance(found, str):
        return Count(None, 0.0, np.inf, found)
    return Count(found.negative, found.sigma, found.uncertainty, found.method)


def count_zero(shifted: ShiftedPencil) -> ZeroModes:
    """Count the eigenvalues that cannot be told from zero, from N(+delta) and N(-delta).

    For matrices of others. Where a model's structure gives their number, use that: ``rigid_modes``.
    """
    above, below = _outward(shifted, 0.0, 1.0), _outward(shifted, 0.0, -1.0)
    if isinstance(above, str) or isinstance(below, str):
        return ZeroModes(None, np.inf, None)
    reach = max(above.sigma + above.uncertainty, below.uncertainty - below.sigma)
    return ZeroModes(above.negative - below.negative, reach, below.negative)


def _outward(shifted: ShiftedPencil, lam: float, side: float, share: float = LARGEST_SHARE) -> Inertia | str:
    """Factor at an edge beyond lam on one side that proves its count, or say why none does.

    First in the coordinates as they are, then, where there are terms, in those relative over stiff ones,
    then by dense pivots.
    """
    allowed = share * abs(lam) if lam else LARGEST_SHARE_OF_TOP * shifted.extents.top
    least = shifted.least_uncertainty(lam)
    sought = _Sought(lam, side, allowed)
    nudges = NUDGES if shifted.relative is None else 0
    found = sought.sparse(partial(count_at, shifted), nudges) if least < allowed else None
    if found is not None and sought.proven_by(found):
        return found
    if shifted.relative is not None:
        relative = sought.relative(shifted.relative)
        if sought.proven_by(relative):
            return relative
    if found is None:
        return _too_stiff(least, lam)
    if shifted.n <= DENSE_LIMIT:
        dense = shifted.factorize_dense(found.sigma)
        if sought.proven_by(dense):
            return dense
    return _too_stiff(found.uncertainty, lam)


@dataclass(frozen=True, slots=True)
class _Sought:
    """A count on one side of lam, at an edge moved outward by no more than what is allowed."""

    lam: float
    side: float
    allowed: float

    def sparse(
        self, factorize: Callable[[float], Inertia], nudges: int = NUDGES, first: float = FIRST_SHARE
    ) -> Inertia:
        """Factor at edges ever farther out until one proves its count; the last one where none does.

        The first edge is a guess, the second follows from the uncertainty seen there, then come the nudges:
        always where pivots vanish, else at most so many, as an uncertainty is much the same all around.
        """
        unit = NUDGE / LARGEST_SHARE * self.allowed
        distance = first / LARGEST_SHARE * self.allowed
        nudged = 0
        for _ in range(TRIES):
            found = factorize(_displaced(self.lam, self.side, distance))
            if self.proven_by(found):
                break
            least = STAND_OFF * found.uncertainty
            room = self.allowed - found.uncertainty
            if distance < least < room:
                distance = _stepped(least) if _stepped(least) < room else least
            elif nudged < (NUDGES if found.uncertainty == np.inf else nudges):
                nudged += 1
                distance = nudged * unit
            else:
                break
        return found

    def relative(self, relative: Relative) -> Inertia:
        """Do the same in relative coordinates, first where their usual share of rounding is proof enough."""

        def factorize(sigma: float) -> Inertia:
            return relative.factorize(sigma, abs(sigma - self.lam) / STAND_OFF)

        return self.sparse(factorize, first=STAND_OFF * WIDENED * USUAL_SHARE)

    def proven_by(self, found: Inertia) -> bool:
        """Whether everything on this side of lam is counted, and nothing beyond what is allowed."""
        clearance = self.side * (found.sigma - self.lam)
        return found.uncertainty < clearance and clearance + found.uncertainty <= self.allowed


def _displaced(lam: float, side: float, distance: float) -> float:
    """Lam moved outward by at least one unit in the last place."""
    moved = lam + side * distance
    return float(moved if moved != lam else np.nextafter(lam, side * np.inf))


def _stepped(distance: float) -> float:
    """Round up by at most a fifth, so that after an edit the edge is where it was and counts there serve."""
    return float(2 ** (np.ceil(4 * np.log2(distance)) / 4)) if 0 < distance < np.inf else distance


def _too_stiff(uncertainty: float, lam: float) -> str:
    return f"undecided: rounding reaches {uncertainty:.1e} rad²/s² beside {lam:.1e} rad²/s²"
