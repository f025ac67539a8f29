"""What found modes add to a check: the nearest one, how far it is, and what drives it."""

import math
from collections.abc import Callable, Sequence
from dataclasses import replace

from modalview.resonance.results import Check, ModeDrive
from modalview.resonance.separation import nearest
from modalview.study.results import FoundMode

RAD_PER_HZ = 2 * math.pi

RIGID, ELASTIC, UNSTABLE = "rigid-body", "elastic", "unstable"


def completed(
    check: Check,
    modes: Sequence[FoundMode],
    drives: Callable[[Sequence[int]], tuple[ModeDrive, ...]],
) -> Check:
    """Add the nearest mode, the separations, the deciding mode and the drives to a check.

    Parameters
    ----------
    check : Check
        Proven by counts.
    modes : sequence of FoundMode
        All of them, or at least those nearest to the excitation on either side.
    drives : callable
        Tells how strongly the excitation drives the modes of these numbers.
    """
    elastic = [mode for mode in modes if mode.kind == ELASTIC]
    band = check.band
    excitation = (band.excitation[0] / RAD_PER_HZ, band.excitation[1] / RAD_PER_HZ)
    now = nearest(((m.number, (m.frequency_hz, m.frequency_hz)) for m in elastic), excitation)
    if now is None:
        return check
    low, high = (edge / RAD_PER_HZ for edge in band.tolerance)
    widened = (low / (1 - band.margin[0]), high / (1 + band.margin[1]))
    reaching = [mode for mode in elastic if mode.range_hz[1] >= low and mode.range_hz[0] <= high]
    worst = nearest(((m.number, m.range_hz) for m in reaching or elastic), widened) or now
    deciding = check.deciding_case
    if deciding is not None and reaching:
        # Both cases may bring a mode in: name the one of the mode that comes nearest.
        mode = next(mode for mode in elastic if mode.number == worst[0])
        deciding = "stiff-light" if mode.frequency_hz < excitation[0] else "soft-heavy"
    return replace(
        check,
        nearest_mode=now[0],
        separation=now[1],
        worst_separation=worst[1],
        worst_mode=worst[0],
        deciding_case=deciding,
        drives=drives([mode.number for mode in reaching] or [now[0]]),
    )
