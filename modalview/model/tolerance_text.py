"""Tolerances as a person types and reads them in the window."""

from modalview.errors import UnitError
from modalview.model.values import Entry, Tolerance
from modalview.units.parse import read_noted
from modalview.units.quantities import RATIO, Quantity


def typed_entry(text: str, quantity: Quantity) -> Entry:
    """Read a text by the window's rule and keep it as a file may hold it: "4,2 mm" becomes "4.2 mm".

    >>> from modalview.units.quantities import LENGTH
    >>> typed_entry("4,2 mm", LENGTH)
    Entry(text='4.2 mm', si=0.0042)
    """
    read_noted(text, quantity, window=True)  # refuses a comma with two readings, in the words as typed
    return Entry.typed(text.strip().replace(",", "."), quantity)


def tolerance_text(tolerance: Tolerance | None) -> str:
    """Return a tolerance as it is shown and typed; "" for none.

    >>> tolerance_text(Tolerance.symmetric("10 %"))
    '10 %'
    """
    if tolerance is None:
        return ""
    if tolerance.low is not None and tolerance.high is not None:
        return f"{tolerance.low.text} to {tolerance.high.text}"
    if tolerance.minus is not None and tolerance.plus is not None:
        return f"-{tolerance.minus.text} / +{tolerance.plus.text}"
    return tolerance.both.text if tolerance.both is not None else ""


def typed_tolerance(text: str, quantity: Quantity | None) -> Tolerance | None:
    """Read "10 %", "-10 % / +20 %" or "3 kN/mm to 5 kN/mm"; None for an empty text.

    Parameters
    ----------
    text : str
        A decimal comma is accepted.
    quantity : Quantity or None
        Of the value; None for the tolerance of a whole part, which is a percentage.

    Raises
    ------
    UnitError
        When it is none of the three.

    Examples
    --------
    >>> typed_tolerance("-10 % / +20 %", None).plus.si
    0.2
    """
    plain = text.replace("\u2212", "-").strip()
    if not plain:
        return None
    low, between, high = plain.partition(" to ")
    if between:
        if quantity is None:
            raise UnitError(
                f'"{text}": a whole part has a percentage, such as "10 %"; limits belong to one value'
            )
        return Tolerance(low=typed_entry(low, quantity), high=typed_entry(high, quantity))
    minus, between, plus = plain.partition("/")
    if between:
        if not minus.startswith("-") or not plus.strip().startswith("+"):
            raise UnitError(f'"{text}" cannot be read as a tolerance: write "-10 % / +20 %"')
        sides = (minus[1:].strip(), plus.strip()[1:].strip())
        return Tolerance(minus=typed_entry(sides[0], RATIO), plus=typed_entry(sides[1], RATIO))
    return Tolerance(both=typed_entry(plain.removeprefix("±").removeprefix("+-"), RATIO))
