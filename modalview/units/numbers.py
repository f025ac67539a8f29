"""The number at the start of a typed value: plain decimal digits, and what a comma may mean."""

import re
from fractions import Fraction

from modalview.errors import UnitError

# Plain digits only: no powers, no underscores, no hexadecimal, no digits of other scripts.
_NUMBER = re.compile(r"([+-]?)((?:[0-9]|[.,][0-9])[0-9.,]*)([eE][+-]?[0-9]+)?")
# "4*180 kg", "4 x 180 kg", "4 × 180 kg": what is counted must start with a number, or be a grade or GD2.
_PRODUCT = re.compile(r"([+-]?[0-9.,]*[0-9][0-9.,]*)\s*[*x×](?!\*)\s*(.+)")
_POWER_OF_TEN = re.compile(r"10\s*(\^|\*\*|[⁰¹²³⁴⁵⁶⁷⁸⁹⁻])")
# One comma between groups of three is how thousands are written: "1,200" has two readings.
_LIKE_THOUSANDS = re.compile(r"[1-9][0-9]{0,2},[0-9]{3}")


def split_number(text: str) -> tuple[str, str] | None:
    """Cut ``text`` into its leading number, as written, and the rest; None when it starts otherwise.

    >>> split_number("4.2kN/mm"), split_number("-3e-2 m"), split_number("nan kg")
    (('4.2', 'kN/mm'), ('-3e-2', ' m'), None)
    """
    match = _NUMBER.match(text)
    return (match.group(), text[match.end() :]) if match else None


def split_product(text: str) -> tuple[str, str] | None:
    """Cut "4*180 kg" into the count and the one value it multiplies; None when ``text`` is no product.

    A power of ten is none: "1.2*10^6 N/m" is left to be refused with the way to write it.

    >>> split_product("4*180 kg"), split_product("2.5 × 46 kg m2"), split_product("46 kg*m2")
    (('4', '180 kg'), ('2.5', '46 kg m2'), None)
    """
    match = _PRODUCT.fullmatch(text)
    if match is None or _POWER_OF_TEN.match(match[2]):
        return None
    return match[1], match[2]


def read_number(written: str, *, window: bool) -> tuple[Fraction, str]:
    """Return the exact value of a number that ``split_number`` cut off, and a note or "".

    Parameters
    ----------
    written : str
        The number as written.
    window : bool
        True lets one comma stand for the decimal point where nothing else can be meant.

    Raises
    ------
    UnitError
        For a comma in a file, a comma with two readings, two points, or a number that floating
        point cannot hold. The message says only what is wrong with the number.
    """
    plain = _without_comma(written, window=window)
    if plain.count(".") > 1:
        raise UnitError(f"{written} has more than one decimal point")
    size = float(plain)
    if size in (float("inf"), float("-inf")):
        raise UnitError(f"{written} is too large for a computer number (the limit is about 1.8e308)")
    if size == 0.0:  # also keeps "0e999999999" from being expanded
        if any(digit in plain.lower().partition("e")[0] for digit in "123456789"):
            raise UnitError(f"{written} is too small for a computer number (the limit is about 1e-308)")
        return Fraction(0), ""
    note = f"{written} read as {plain} (decimal comma)" if plain != written else ""
    return Fraction(plain), note


def _without_comma(written: str, *, window: bool) -> str:
    if "," not in written:
        return written
    digits = written.lstrip("+-")
    if not window:
        raise UnitError(f"a comma is not accepted in a file; write {_pointed(digits)}")
    mantissa = digits.lower().partition("e")[0]
    if _LIKE_THOUSANDS.fullmatch(mantissa):
        raise UnitError(
            f"{mantissa} can be read as {mantissa.replace(',', '.')} or as {mantissa.replace(',', '')}; "
            "write the one you mean, with a decimal point and without a thousands separator"
        )
    if mantissa.count(",") > 1 or "." in mantissa:
        raise UnitError(f"{mantissa} has more than one separator; write {_pointed(mantissa)}")
    return written.replace(",", ".")


def _pointed(digits: str) -> str:
    """Say how a number with commas is written here, naming both readings where there are two."""
    if "." in digits or digits.count(",") > 1:
        return "it with one decimal point and without a thousands separator"
    if _LIKE_THOUSANDS.fullmatch(digits.lower().partition("e")[0]):
        return f"{digits.replace(',', '.')} or {digits.replace(',', '')}, whichever is meant"
    return digits.replace(",", ".")
