"""The ratio of a gear pair, exactly as typed."""

from fractions import Fraction
from re import fullmatch

from modalview.model.parts import Gear

MOST_TEETH = 1_000_000


def gear_ratio(given: Gear) -> Fraction | None:
    """Return the rotation of ``to`` over that of ``from``, or None when it is not told rightly.

    >>> from modalview.model.parts import End
    >>> gear_ratio(Gear(id="g", from_=End(body="a"), to=End(body="b"), teeth=(84, 20)))
    Fraction(-21, 5)
    """
    if given.teeth is not None:
        start, stop = given.teeth
        usable = 0 < abs(start) <= MOST_TEETH and 0 < abs(stop) <= MOST_TEETH and (start > 0 or stop > 0)
        return -Fraction(start, stop) if usable else None
    if isinstance(given.ratio, str):
        plain = fullmatch(
            r"([+-]?\d{1,9})(?:/(\d{1,9}))?", given.ratio.replace("\u2212", "-").replace(" ", "")
        )
        below = int(plain[2] or 1) if plain else 0
        return Fraction(int(plain[1]), below) or None if plain and below else None
    if given.ratio is None or not 1e-9 < abs(given.ratio) < 1e9:
        return None
    return Fraction(str(given.ratio))  # as typed: 4.2 is 21/5, not the nearest binary number
