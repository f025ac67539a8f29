"""How far a mode lies from an excitation: (fn - fe) / fe."""

from collections.abc import Iterable


def separation(mode: tuple[float, float], excitation: tuple[float, float]) -> float:
    """Return the signed distance of a mode from an excitation, as a share of the excitation frequency.

    Parameters
    ----------
    mode : pair of float
        Lowest and highest natural frequency (equal for a nominal value).
    excitation : pair of float
        Lowest and highest excitation frequency, in the same unit, above zero.

    Returns
    -------
    float
        (fn - fe) / fe to the nearest excitation frequency; 0 once the two overlap.

    Examples
    --------
    >>> round(separation((51.26, 51.26), (49.17, 49.17)), 4)
    0.0425
    >>> separation((20.0, 30.0), (10.0, 25.0))
    0.0
    """
    low, high = mode
    slowest, fastest = excitation
    if high < slowest:
        return (high - slowest) / slowest
    if low > fastest:
        return (low - fastest) / fastest
    return 0.0


def nearest(
    modes: Iterable[tuple[int, tuple[float, float]]], excitation: tuple[float, float]
) -> tuple[int, float] | None:
    """Return the number and the separation of the mode nearest to an excitation; None without modes."""
    return min(
        ((number, separation(mode, excitation)) for number, mode in modes),
        key=lambda found: abs(found[1]),
        default=None,
    )
