"""Counts of modes along the frequency scale: in every band and between the bands."""

import math
from collections.abc import Sequence

from modalview.assembly.pencil import Pencil
from modalview.resonance.results import Check
from modalview.study.results import Interval

RAD_PER_HZ = 2 * math.pi


def scale_intervals(pencil: Pencil, checks: Sequence[Check]) -> tuple[Interval, ...]:
    """Return the number of modes in every band and in every gap, ascending by frequency.

    Rigid-body modes are left out. Bands that overlap keep a count each; gaps are what no band covers.
    Nothing is counted anew: the checks know the modes below and up to their bands.
    """
    ranked = sorted(checks, key=lambda check: check.band.nominal)
    found = [
        Interval(
            check.band.nominal[0] / RAD_PER_HZ,
            check.band.nominal[1] / RAD_PER_HZ,
            check.inside,
            check.band.check,
        )
        for check in ranked
    ]
    reached: float = 0.0
    seen: int | None = int(pencil.rigid_body.shape[1])
    for check in ranked:
        low, high = check.band.nominal
        if low > reached:
            number = _difference(check.below, seen)
            found.append(Interval(reached / RAD_PER_HZ, low / RAD_PER_HZ, number))
        if high > reached:
            reached, seen = high, check.upto
    found.append(Interval(reached / RAD_PER_HZ, math.inf, _difference(pencil.modes, seen)))
    return tuple(sorted(found, key=lambda interval: (interval.low_hz, interval.high_hz)))


def _difference(upper: int | None, lower: int | None) -> int | None:
    return None if upper is None or lower is None else max(0, upper - lower)
