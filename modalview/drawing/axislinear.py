"""Round ticks of a linear axis."""

import math

# A decade is divided by one of these steps.
_STEPS = (1.0, 2.0, 5.0)
_RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def round_ticks(low: float, high: float, apart: float) -> tuple[float, ...]:
    """Return multiples of a round step from ``low`` to ``high``, at least ``apart`` from each other.

    >>> round_ticks(-12.0, 31.0, 9.0)
    (-10.0, 0.0, 10.0, 20.0, 30.0)
    """
    if not (high > low and apart > 0):
        return ()
    power = 10.0 ** math.floor(math.log10(apart))
    step = next(one * power for one in (*_STEPS, 10.0) if one * power >= apart * (1 - 1e-9))
    first, last = math.ceil(low / step - 1e-9), math.floor(high / step + 1e-9)
    return tuple(float(f"{index * step:.12g}") + 0.0 for index in range(first, last + 1))


def tick_text(value: float) -> str:
    """Write a tick with a true minus sign and thousands apart.

    >>> tick_text(-24000.0), tick_text(0.5), tick_text(2e7)
    ('−24 000', '0.5', '2·10⁷')
    """
    size = abs(value)
    text = f"{size:,.0f}".replace(",", " ") if 1000 <= size < 1e7 else f"{size:.4g}"
    if "e" in text:
        figures, power = text.split("e")
        text = f"{figures}·10{str(int(power)).translate(_RAISED)}"
    return f"−{text}" if value < 0 else text
