"""Numbers that are proposed: few digits, rounded to a side, in the unit the value was typed in."""

import math
from dataclasses import dataclass
from decimal import ROUND_CEILING, ROUND_FLOOR, ROUND_HALF_EVEN, Decimal

from modalview.model.values import Entry
from modalview.units.parse import read, unit_of
from modalview.units.quantities import Quantity
from modalview.units.show import short, show
from modalview.units.table import find_unit

DOWN, NEAREST, UP = -1, 0, 1
_WAYS = {DOWN: ROUND_FLOOR, NEAREST: ROUND_HALF_EVEN, UP: ROUND_CEILING}


def rounded(number: float, digits: int, side: int = NEAREST) -> float:
    """Return a number to so many significant digits, rounded to a side.

    Examples
    --------
    >>> rounded(270631.0, 3, DOWN), rounded(270631.0, 3, UP), rounded(0.012345, 2)
    (270000.0, 271000.0, 0.012)
    """
    if number == 0 or not math.isfinite(number):
        return number
    exact = Decimal(number)
    step = Decimal(1).scaleb(exact.adjusted() - digits + 1)
    return float((exact / step).to_integral_value(_WAYS[side]) * step)


@dataclass(frozen=True, slots=True)
class Written:
    """How a value is written: its quantity, the unit it was typed in, and the system for all others."""

    quantity: Quantity
    entry: Entry
    system: str = "SI"

    def entry_of(self, si: float, digits: int, side: int = NEAREST) -> Entry:
        """Return a number of so many digits as an entry; its number lies on that side of ``si``."""
        spelling = self._spelling(si, digits)
        unit = find_unit(spelling, self.quantity)
        per = float(unit.factor) if unit else 1.0
        amount = rounded(si / per, digits, side)
        text = f"{short(amount, max(digits, 1))} {spelling}"
        return Entry(text, read(text, self.quantity))

    def text_of(self, si: float, digits: int = 4) -> str:
        """Return a number for people."""
        return self.entry_of(si, digits).text

    def _spelling(self, si: float, digits: int) -> str:
        own = unit_of(self.entry.text)
        number = self.entry.text.removesuffix(own).strip() if own else ""
        if own and _plain(number) and find_unit(own, self.quantity):
            return own
        return unit_of(show(si, self.quantity, self.system, digits))


def _plain(number: str) -> bool:
    try:
        return math.isfinite(float(number))
    except ValueError:
        return False
