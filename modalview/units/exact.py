"""The number that a typed text means, before it is rounded to a double."""

from fractions import Fraction
from functools import lru_cache

from modalview.errors import UnitError
from modalview.units.parse import exact_amount, unit_of
from modalview.units.table import UNITS


@lru_cache(maxsize=4096)
def as_meant(text: str, si: float) -> tuple[Fraction, bool]:
    """Return a typed value as a fraction in SI, and whether it is that exactly.

    Parameters
    ----------
    text : str
        As typed: "4.2 kN/mm", "2950 rpm".
    si : float
        What it was read as; tells the quantity.

    Returns
    -------
    (amount, exact)
        Angles hold pi: a text with degrees is taken as the double ``si`` and is not exact, and so is one
        that gives ``si`` in no quantity. Turns ("rpm", "Hz") hold pi at fifty digits and count as exact.

    Examples
    --------
    >>> as_meant("0.1 kN/mm", 100000.0)
    (Fraction(100000, 1), True)
    """
    if "deg" not in unit_of(text):
        for quantity in UNITS:
            try:
                amount = exact_amount(text, quantity)
            except UnitError:
                continue
            if float(amount) == si:
                return amount, True
    return Fraction(si), False
