"""A logarithmic frequency axis on the sheet."""

from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from modalview.drawing.primitives import Floats

# Steps of a decade, from fine to coarse; the finest whose labels stay apart is taken.
_STEPS = (
    (1.0, 1.2, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0),
    (1.0, 1.5, 2.0, 3.0, 5.0, 7.0),
    (1.0, 2.0, 5.0),
    (1.0,),
)


@dataclass(frozen=True, slots=True)
class Axis:
    """Frequencies upwards, by their logarithm.

    Parameters
    ----------
    low_hz, high_hz : float
        Ends.
    top, bottom : float
        Their pixels: high at the top.
    """

    low_hz: float
    high_hz: float
    top: float
    bottom: float

    def y_of(self, hz: float) -> float:
        """Return the pixel of a frequency, kept on the axis.

        >>> Axis(10.0, 1000.0, 0.0, 200.0).y_of(100.0)
        100.0
        """
        kept = min(max(hz, self.low_hz), self.high_hz)
        share = np.log(kept / self.low_hz) / np.log(self.high_hz / self.low_hz)
        return float(self.bottom - share * (self.bottom - self.top))

    def ys_of(self, hz: Floats) -> Floats:
        """Return the pixels of many frequencies, kept on the axis."""
        kept = np.clip(hz, self.low_hz, self.high_hz)
        share = np.log(kept / self.low_hz) / np.log(self.high_hz / self.low_hz)
        return np.asarray(self.bottom - share * (self.bottom - self.top))

    def hz_at(self, y: float) -> float:
        """Return the frequency of a pixel."""
        share = (self.bottom - y) / (self.bottom - self.top)
        return float(self.low_hz * (self.high_hz / self.low_hz) ** share)

    def ticks(self, apart: float) -> tuple[float, ...]:
        """Return round frequencies at least ``apart`` pixels from each other, ascending."""
        found: list[float] = []
        for steps in _STEPS:
            found = self._round(steps)
            places = [self.y_of(hz) for hz in found]
            if all(one - other >= apart for one, other in pairwise(places)):
                return tuple(found)
        return tuple(found[:: max(1, len(found) // 4)])

    def _round(self, steps: tuple[float, ...]) -> list[float]:
        first, last = (int(np.floor(np.log10(hz))) for hz in (self.low_hz, self.high_hz))
        every = [float(f"{step}e{power}") for power in range(first, last + 1) for step in steps]
        return [hz for hz in every if self.low_hz * 0.9999 <= hz <= self.high_hz * 1.0001]


def merged(low: Floats, high: Floats) -> Floats:
    """Return intervals (n, 2) that overlap as one, ascending.

    >>> merged(np.array([1.0, 4.0, 2.0]), np.array([3.0, 5.0, 2.5])).tolist()
    [[1.0, 3.0], [4.0, 5.0]]
    """
    if not len(low):
        return np.zeros((0, 2))
    order = np.argsort(low, kind="stable")
    low, reached = low[order], np.maximum.accumulate(high[order])
    starts = np.flatnonzero(np.concatenate([[True], low[1:] > reached[:-1]]))
    ends = np.append(starts[1:], len(low)) - 1
    return np.column_stack([low[starts], reached[ends]])


def spread(wanted: list[float], apart: float, low: float, high: float) -> list[float]:
    """Move places that stand closer than ``apart`` just far enough, keeping their order.

    Parameters
    ----------
    wanted : list of float
        Ascending, pixels.
    apart, low, high : float
        Least distance, and the ends not to be passed (given way to only when there is no room).

    Notes
    -----
    Groups that touch are merged and centred on the mean of what they want: the least-squares solution
    (pool adjacent violators).

    >>> spread([10.0, 11.0], 10.0, 0.0, 100.0)
    [5.5, 15.5]
    """
    groups: list[tuple[float, int]] = []  # mean of (wanted - rank in group * apart), members
    for place in wanted:
        mean, members = place, 1
        while groups:
            before, count = groups[-1]
            if before + count * apart <= mean:
                break
            groups.pop()
            # Relative to its own first member, the later group starts count places further on.
            mean = (before * count + (mean - count * apart) * members) / (count + members)
            members += count
        groups.append((mean, members))
    placed = [mean + rank * apart for mean, members in groups for rank in range(members)]
    for rank, place in enumerate(placed):
        placed[rank] = max(place, low + rank * apart)
    for rank in range(len(placed) - 1, -1, -1):
        placed[rank] = min(placed[rank], high - (len(placed) - 1 - rank) * apart)
    return placed
