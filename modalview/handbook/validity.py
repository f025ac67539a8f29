"""Where a formula holds: checks of sizes that say what is wrong, or nothing."""

import math
from collections.abc import Callable

from modalview.handbook.recipe import Check
from modalview.handbook.sizes import Sizes
from modalview.units.show import short

# Sizes that are equal but for the rounding of their units are equal.
ROUNDING = 1e-12


def within(measure: Callable[[Sizes], float], low: float, high: float, what: str) -> Check:
    """Tell when a pure number leaves the range in which the formula is good.

    >>> within(lambda s: s["D"] / s["d"], 4, 20, "coil index D/d")({"D": 0.3, "d": 0.1})
    'coil index D/d is 3; the formula is good from 4 to 20'
    """

    def check(sizes: Sizes) -> str:
        found = measure(sizes)
        if low * (1 - ROUNDING) <= found <= high * (1 + ROUNDING):
            return ""
        reach = f"from {short(low)} to {short(high)}" if math.isfinite(high) else f"from {short(low)} up"
        return f"{what} is {short(found, 3)}; the formula is good {reach}"

    return check


def at_least(measure: Callable[[Sizes], float], low: float, what: str) -> Check:
    """Tell when a pure number is too small for the formula."""
    return within(measure, low, math.inf, what)


def at_most(measure: Callable[[Sizes], float], high: float, what: str) -> Check:
    """Tell when a pure number, never negative, is too large for the formula.

    >>> at_most(lambda s: s["x"], 0.5, "x")({"x": 0.75})
    'x is 0.75; the formula is good up to 0.5'
    """

    def check(sizes: Sizes) -> str:
        found = measure(sizes)
        if found <= high * (1 + ROUNDING):
            return ""
        return f"{what} is {short(found, 3)}; the formula is good up to {short(high)}"

    return check


def less(small: str, large: str, told: str) -> Check:
    """Say ``told`` unless one size is below another.

    >>> less("d", "D", "the hole must be smaller than the shaft")({"d": 0.3, "D": 0.2})
    'the hole must be smaller than the shaft'
    """
    return lambda sizes: "" if sizes[small] < sizes[large] else told


def as_many(*names: str) -> Check:
    """Tell when lists that belong together are not of the same length.

    >>> as_many("a", "b")({"a": (1, 2), "b": (1,)})
    'a and b must hold as many values as each other; found 2 and 1'
    """

    def check(sizes: Sizes) -> str:
        counts = [len(sizes[name]) for name in names]
        if len(set(counts)) == 1:
            return ""
        found = " and ".join(map(str, counts))
        return f"{' and '.join(names)} must hold as many values as each other; found {found}"

    return check
