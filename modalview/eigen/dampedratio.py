"""Arithmetic of damping: ratio, decrement, decay, and what proportional damping gives each mode."""

import math

import numpy as np
import numpy.typing as npt

from modalview.errors import InputError

Array = npt.NDArray[np.float64]


def decrement_of_ratio(ratio: float) -> float:
    """Return the logarithmic decrement, ln of successive peaks, of a damping ratio from 0 to below 1.

    2 pi zeta / sqrt(1 - zeta^2): W. T. Thomson, Theory of Vibration with Applications, section 2.7.

    >>> round(decrement_of_ratio(0.0681), 3)
    0.429
    """
    if not 0 <= ratio < 1:
        raise InputError(f"A decrement needs a damping ratio from 0 to below 1; found {ratio:g}.")
    return 2 * math.pi * ratio / math.sqrt(1 - ratio * ratio)


def ratio_of_decrement(decrement: float) -> float:
    """Return the damping ratio of a logarithmic decrement; exact, without the shortcut decrement/(2 pi).

    >>> round(ratio_of_decrement(decrement_of_ratio(0.3)), 15)
    0.3
    """
    if not decrement >= 0:
        raise InputError(f"A logarithmic decrement is not negative; found {decrement:g}.")
    return decrement / math.hypot(2 * math.pi, decrement)


def decrement_of_peaks(first: float, last: float, cycles: int) -> float:
    """Return the logarithmic decrement of two peaks, positive, that lie some whole cycles apart.

    >>> decrement_of_peaks(math.e**2, 1.0, 2)
    1.0
    """
    if not (first > 0 and last > 0 and cycles >= 1):
        raise InputError(
            f"Peaks must be positive and at least one cycle apart; found {first:g}, {last:g}, {cycles}."
        )
    return math.log(first / last) / cycles


def proportional_ratios(alpha: float, beta: float, omega: Array) -> Array:
    """Return the modal damping ratios (alpha/omega + beta omega)/2 of C = alpha M + beta K.

    Parameters
    ----------
    alpha, beta : float
        1/s, s.
    omega : array (m,)
        Natural angular frequencies above zero, rad/s.

    References
    ----------
    Lord Rayleigh (1877), The Theory of Sound, section 97 (from memory).
    """
    ratios: Array = (alpha / omega + beta * omega) / 2
    return ratios


def proportional_coefficients(low: float, high: float, ratio: float) -> tuple[float, float]:
    """Return alpha (1/s) and beta (s) that give one damping ratio at two angular frequencies, rad/s.

    Between them the ratio is lower, outside higher.

    >>> proportional_coefficients(10.0, 30.0, 0.05)
    (0.75, 0.0025)
    """
    if not 0 < low < high:
        raise InputError(f"Two different frequencies above zero are needed; found {low:g} and {high:g}.")
    beta = 2 * ratio / (low + high)
    return beta * low * high, beta


def real_pair_ratio(slow: float, fast: float) -> float:
    """Return the damping ratio, 1 or more, of one mode with two real decay rates above zero, 1/s.

    (slow + fast)/(2 sqrt(slow fast)), from (lambda + slow)(lambda + fast) = lambda^2 + 2 zeta w lambda + w^2.

    >>> real_pair_ratio(1.0, 4.0)
    1.25
    """
    return (math.sqrt(slow / fast) + math.sqrt(fast / slow)) / 2
