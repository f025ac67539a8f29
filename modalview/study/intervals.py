"""Counts of modes along the frequency scale: in every band and between the bands."""

import math
from collections.abc import Sequence

from modalview.assembly.pencil import Pencil
from modalview.factor.counts import count_at_most, count_below
from modalview.resonance.results import Check
from modalview.study.results import Interval

RAD_PER_HZ = 2 * math.pi


def scale_intervals(pencil: Pencil, checks: Sequence[Check]) -> tuple[Interval, ...]:
    """Return the number of modes in every band and in every gap, ascending by frequency.

    Rigid-body modes are left out. Bands that overlap keep a count each; gaps are what no band covers.
    """
    shifted = pencil.shifted
    spans = sorted((check.band.nominal, check.band.check, check.inside) for check in checks)
    found = [
        Interval(low / RAD_PER_HZ, high / RAD_PER_HZ, number, name) for (low, high), name, number in spans
    ]
    reached, below = 0.0, int(pencil.rigid_body.shape[1])
    seen: int | None = below
    for (low, high), _, _ in spans:
        if low > reached:
            count = count_below(shifted, low**2).number
            found.append(Interval(reached / RAD_PER_HZ, low / RAD_PER_HZ, _difference(count, seen)))
        if high > reached:
            reached, seen = high, count_at_most(shifted, high**2).number
    found.append(Interval(reached / RAD_PER_HZ, math.inf, _difference(pencil.modes, seen)))
    return tuple(sorted(found, key=lambda interval: (interval.low_hz, interval.high_hz)))


def _difference(upper: int | None, lower: int | None) -> int | None:
    return None if upper is None or lower is None else max(0, upper - lower)
