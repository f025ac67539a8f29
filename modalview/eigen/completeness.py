"""Whether any mode was missed, and which eigenvalues are zero or negative: settled by counts."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.eigen.intervals import Intervals
from modalview.eigen.modes import Count
from modalview.factor.counts import count_at_most, count_zero
from modalview.factor.shifted import ShiftedPencil

Array = npt.NDArray[np.float64]

# Counts spent on confirming the number of modes; each is one sparse factorization.
COUNTS = 8
# A gap must be this wide, relative to its upper end, for a count to fit in (a count moves its edge by
# at most 1e-6).
WIDE = 1e-5
# The last count is made this far above the highest mode, relative to the largest eigenvalue.
BEYOND = 1e-2


@dataclass(frozen=True, slots=True)
class Signs:
    """Which of the eigenvalues beside the known zeros are negative or zero.

    Parameters
    ----------
    unstable : int
        Negative ones.
    zeros : int
        Those that follow and cannot be told from zero.
    warnings : tuple of str
    """

    unstable: int
    zeros: int
    warnings: tuple[str, ...]


def signs(shifted: ShiftedPencil, intervals: Intervals) -> Signs:
    """Tell negative, zero and positive eigenvalues apart.

    By their intervals where these leave out zero; the others by N(+delta) - N(-delta), where delta is the
    uncertainty of the count itself and not a tolerance. A sum of positive terms has no other zeros than
    those known from structure, and nothing below.
    """
    if shifted.definite:
        return Signs(0, 0, ())
    unstable = int(np.sum(intervals.upper < 0))
    stop = int(np.sum(intervals.lower <= 0))
    warnings = []
    if stop > unstable:
        near = count_zero(shifted)
        if near.number is None or near.below is None:
            reach = float(np.abs([intervals.lower[unstable:stop], intervals.upper[unstable:stop]]).max())
            warnings.append(f"Counts around zero are undecided; error bounds reach {reach:.2g} rad²/s².")
        else:
            reach = near.reach
            unstable = max(unstable, near.below)
            stop = max(unstable, min(stop, near.below + near.number - shifted.rigid_modes))
        if stop > unstable:
            warnings.append(
                f"{stop - unstable} eigenvalues cannot be told from zero: they lie within "
                f"{reach:.2g} rad²/s² of it and are shown as 0 Hz."
            )
    if unstable:
        warnings.insert(
            0, f"Unstable: {unstable} eigenvalues are negative; these motions grow without limit."
        )
    return Signs(unstable, stop - unstable, tuple(warnings))


def confirm(shifted: ShiftedPencil, lower: Array, upper: Array) -> tuple[Count, ...]:
    """Count in the widest gaps between the intervals (modes,) and beyond the last.

    Gaps are taken from equal parts of the spectrum, so that the counts are spread over it.
    """
    last = len(upper) - 1
    chosen = {last}
    gap = lower[1:] - upper[:-1]
    relative = gap / np.maximum(np.maximum(np.abs(lower[1:]), np.abs(upper[:-1])), np.finfo(float).tiny)
    relative[(upper[:-1] <= 0) & (lower[1:] >= 0)] = 0.0  # around zero other counts decide
    for part in np.array_split(np.arange(last), COUNTS - 1):
        if part.size and relative[best := part[np.argmax(relative[part])]] > WIDE:
            chosen.add(int(best))
    above = upper[last] + BEYOND * max(abs(upper[last]), abs(lower[0]))
    counts = []
    for index in sorted(chosen):
        edge = above if index == last else upper[index] + gap[index] / 2
        counted = count_at_most(shifted, float(edge))
        counts.append(Count(counted.edge, index + 1, counted.number))
    return tuple(counts)


def verdict(intervals: Intervals, counts: tuple[Count, ...]) -> bool | None:
    """Judge completeness: see `Modes.complete`."""
    decided = [count for count in counts if count.counted is not None]
    if any(count.counted != count.found for count in decided):
        return False
    return True if intervals.separate and decided else None
