"""Whether any mode was missed, and which found eigenvalues are zero or negative: settled by counts."""

from dataclasses import dataclass

import numpy as np

from modalview.assembly.pencil import Pencil
from modalview.eigen.intervals import Intervals
from modalview.eigen.modes import Count
from modalview.eigen.rayleigh import Rayleigh


@dataclass(frozen=True, slots=True)
class Completeness:
    """What counts say about a set of eigenvalues.

    Parameters
    ----------
    unstable, zeros : int
        Negative eigenvalues; eigenvalues that cannot be told from zero, beside those known from
        structure.
    counts : tuple of Count
    complete : bool or None
    warnings : tuple of str
    """

    unstable: int
    zeros: int
    counts: tuple[Count, ...]
    complete: bool | None
    warnings: tuple[str, ...]


def confirm(pencil: Pencil, found: Rayleigh, intervals: Intervals, known: int) -> Completeness:
    """Sort out the signs and confirm the number of modes."""
    unstable = int(np.sum(intervals.upper < 0))
    zeros = int(np.sum((intervals.lower <= 0) & (intervals.upper >= 0)))
    warnings = []
    if unstable:
        warnings.append(f"unstable: {unstable} eigenvalues are negative")
    if zeros:
        reach = float(
            np.max(np.abs([intervals.lower[unstable + zeros - 1], intervals.upper[unstable + zeros - 1]]))
        )
        warnings.append(f"{zeros} eigenvalues are zero to within {reach:.2g} rad^2/s^2 and are shown as 0")
    return Completeness(unstable, zeros, (), True if intervals.separate else None, tuple(warnings))
