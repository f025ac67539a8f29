"""Counts of large models at an edge: by pivots where they decide, else between the modes around the edge."""

from collections.abc import Callable
from dataclasses import dataclass, field
from fractions import Fraction

import numpy as np

from modalview.assembly.pencil import Pencil
from modalview.eigen.near import find_near
from modalview.errors import NumericalError
from modalview.factor.counts import FIRST_SHARE, LARGEST_SHARE, STAND_OFF, Count

# Factorizations at an edge: one to see the rounding there, one at a distance that it proves.
TRIES = 2
# Above zero nothing lies below an edge of this square: the rigid-body modes alone.
NOTHING = 0.0


@dataclass(slots=True, eq=False)
class GapCounter:
    """Counts the modes of a large pencil on either side of an edge in rad/s.

    In a large model rounding may displace a count by more than a count's edge may move, though not by more
    than the gap between two modes. There the modes around the edge are found, the count is made in gaps
    beyond them, and each of them is told from the edge by its own interval.

    Parameters
    ----------
    pencil : Pencil
    cancelled : callable
        As for `find_near`.
    share : float
        An edge may move outward by this share of itself before the modes around it are looked for.
    """

    pencil: Pencil
    cancelled: Callable[[], bool]
    share: float = LARGEST_SHARE
    _rounding: float = field(default=0.0)

    def at_most(self, edge: float | Fraction) -> Count:
        """Count the modes at or below an edge: never fewer than there are."""
        return self._count(float(np.nextafter(float(edge) ** 2, np.inf)), 1.0)

    def below(self, edge: float | Fraction) -> Count:
        """Count the modes below an edge, rigid-body modes at least: never more than there are."""
        return self._count(max(NOTHING, float(np.nextafter(float(edge) ** 2, -np.inf))), -1.0)

    def _count(self, lam: float, side: float) -> Count:
        shifted = self.pencil.shifted
        rigid = shifted.rigid_modes
        if shifted.definite and lam <= 0:
            return Count(rigid, lam, 0.0, "a sum of positive stiffness terms has none below zero")
        for _ in range(TRIES):
            if self._rounding > self.share * lam:
                break
            found = shifted.factorize(lam * (1 + side * max(FIRST_SHARE, STAND_OFF * self._rounding / lam)))
            self._rounding = min(found.uncertainty, lam)
            clearance = side * (found.sigma - lam)
            if found.uncertainty < clearance and clearance + found.uncertainty <= self.share * lam:
                return Count(max(found.negative, rigid), found.sigma, found.uncertainty, found.method)
        return self._in_gaps(lam, side)

    def _in_gaps(self, lam: float, side: float) -> Count:
        try:
            near = find_near(self.pencil, lam, 1, cancelled=self.cancelled)
        except NumericalError as error:
            return Count(None, lam, np.inf, f"undecided: {error}")
        if near.numbers is None:
            return Count(None, lam, np.inf, "undecided: rounding reaches beyond the gaps between modes")
        modes = near.modes
        inside = modes.lower <= lam if side > 0 else modes.upper < lam
        before = near.numbers[0] - 1
        return Count(before + int(np.sum(inside)), lam, 0.0, "modes around the edge, counts in the gaps")
