"""Lengths that nobody typed: what is pointed at on the sheet, as entries that read back to the same number.

A computed length carries rounding (0.1 + 0.2 is not 0.3). Lengths are therefore handled as decimals of
fifteen digits, which every typed length survives unharmed; sums of them are exact.
"""

import math
from collections.abc import Sequence
from decimal import Decimal
from fractions import Fraction

from modalview.errors import UnitError
from modalview.model.parts import Point
from modalview.model.values import SMALLEST, Entry
from modalview.units.parse import read, unit_of
from modalview.units.quantities import LENGTH
from modalview.units.show import short
from modalview.units.table import find_unit

# A double holds every decimal of so many digits.
DIGITS = 15
# More digits than this in inches say that the length was meant in metres.
SHORT = 8
_SYSTEM_UNIT = {"SI": "m", "mm-t": "mm", "inch-pound": "in"}


def decimal_of(number: float) -> Decimal:
    """Return the decimal of fifteen digits that a double stands for; UnitError when it is not finite.

    >>> decimal_of(0.1 + 0.2)
    Decimal('0.3')
    """
    if not math.isfinite(number):
        raise UnitError(f"a length must be a finite number; found {number}")
    return Decimal(f"{number:.{DIGITS}g}")


def length_entry(metres: float, system: str = "SI") -> Entry:
    """Return a length as a person would have typed it.

    Parameters
    ----------
    metres : float
        Taken to fifteen digits.
    system : str
        "SI", "mm-t" or "inch-pound". A length that is no short number of inches stays in metres.

    Returns
    -------
    Entry
        Its text reads back to its number.

    Raises
    ------
    UnitError
        When the length is not finite.

    Examples
    --------
    >>> length_entry(-0.5).text, length_entry(0.3175, "inch-pound").text, length_entry(0.1 + 0.2, "mm-t").text
    ('-0.5 m', '12.5 in', '300 mm')
    """
    unit = _SYSTEM_UNIT[system]
    exact = decimal_of(metres)
    return _in_unit(exact, unit, SHORT if unit == "in" else DIGITS) or _in_metres(exact)


def point_of(place: Sequence[float], system: str = "SI") -> Point:
    """Return a point given in metres as typed lengths."""
    return tuple(length_entry(metres, system) for metres in place)


def length_like(old: Entry, metres: float) -> Entry:
    """Return a length in the unit that another was typed in; that other itself where nothing changes.

    >>> length_like(Entry("850 mm", 0.85), 0.9).text
    '900 mm'
    """
    exact = decimal_of(metres)
    if exact == decimal_of(old.si):
        return old
    return _in_unit(exact, unit_of(old.text), DIGITS) or _in_metres(exact)


def _in_metres(exact: Decimal) -> Entry:
    number = float(exact) if abs(exact) >= Decimal(str(SMALLEST)) else 0.0
    return Entry(f"{_written(decimal_of(number))} m", number)


def _in_unit(exact: Decimal, spelling: str, most: int) -> Entry | None:
    """Return the length in a unit, or None when that takes more digits than ``most``."""
    unit = find_unit(spelling, LENGTH)
    if unit is None:
        return None
    if spelling == "m":
        return _in_metres(exact)
    amount = Fraction(exact) / unit.factor
    number = Decimal(f"{float(amount):.{most}g}")
    if Fraction(number) != amount:
        return None
    text = f"{_written(number)} {spelling}"
    return Entry(text, read(text, LENGTH))


def _written(number: Decimal) -> str:
    """Write a number without an exponent where that is short, and without zeros at the end."""
    plain = format(number.normalize(), "f") if number else "0"
    return plain if len(plain) <= DIGITS + 3 else short(float(number), DIGITS)
