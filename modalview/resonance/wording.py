"""Words and numbers of bands as people read them."""

import math

from modalview.resonance.results import Band
from modalview.units.show import short, significant

# Below this share one decimal of a per cent would say nothing.
LEAST_PERCENT = 0.001


def hz(omega: float, digits: int = 3) -> str:
    """Return an angular frequency (rad/s) as Hz with its unit."""
    return f"{significant(omega / (2 * math.pi), digits)} Hz"


def hz_range(low: float, high: float, digits: int = 3) -> str:
    """Return "41.8 to 56.5 Hz"; one number where both are equal."""
    if low == high:
        return hz(low, digits)
    return f"{significant(low / (2 * math.pi), digits)} to {hz(high, digits)}"


def margin_text(margin: tuple[float, float]) -> str:
    """Return "±15 %" or "−10 % / +20 %"."""
    below, above = (short(100 * side, 4) for side in margin)
    return f"±{below} %" if below == above else f"−{below} % / +{above} %"


def band_text(band: Band) -> str:
    """Return the avoidance band at nominal speed: "41.8 to 56.5 Hz (±15 %)"."""
    return f"{hz_range(*band.nominal)} ({margin_text(band.margin)})"


def modes_text(number: int) -> str:
    """Return "1 mode lies" or "2 modes lie"."""
    return "1 mode lies" if number == 1 else f"{number} modes lie"


def percent(share: float) -> str:
    """Return a signed share as per cent: "+4.3 %", "−0.02 %", "0 %"."""
    if share == 0:
        return "0 %"
    digits = f"{100 * share:+.1f}" if abs(share) >= LEAST_PERCENT else f"{100 * share:+.1g}"
    return f"{digits} %".replace("-", "−")
