"""Reading a typed value: a number and a unit of the fixed table, or one of the trade's own notations.

File and window use the same rules but for the comma: every comma is refused in a file, and the window takes
"4,2" for 4.2. A count may stand before one value, "4*180 kg", and a load under its deflection, "35 mm under
4*225 kg". Nothing else is computed: no sums, no powers, no longer products, no brackets.
"""

import re
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache

from modalview.errors import UnitError
from modalview.units import quantities as q
from modalview.units.numbers import read_number, split_number, split_product
from modalview.units.quantities import Quantity
from modalview.units.refusals import no_number, refusal, wrong_unit
from modalview.units.spelling import unit_key
from modalview.units.table import GD2_UNITS, STANDARD_GRAVITY, WR2_UNITS, find_unit

# The longest sensible value is some forty characters; more is a pasted paragraph.
LONGEST_TEXT = 200

_GRADE = re.compile(r"G\s*(?P<number>[0-9.,].*?)(?:\s*mm/s)?")
_FLYWHEEL = re.compile(
    r"(?P<first>(?:GD|WR|WK)\^?[2²])\s*=?\s*(?P<after>.+)|(?P<before>.+?)\s*(?P<last>(?:GD|WR|WK)\^?[2²])"
)
_UNDER = re.compile(r"(?P<deflection>.+?)\s+under\s+(?P<load>.+)")


@dataclass(frozen=True, slots=True)
class Reading:
    """What a typed value means.

    Parameters
    ----------
    si : float
        In the SI unit of its quantity, correctly rounded.
    notes : tuple of str
        What a person should be told about how it was read; mostly empty.
    """

    si: float
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class _Exact:
    """A reading before rounding."""

    amount: Fraction
    notes: tuple[str, ...] = ()


@lru_cache(maxsize=4096)  # the same few texts stand many times in a file
def read(text: str, quantity: Quantity) -> float:
    """Read a value as it stands in a file.

    Parameters
    ----------
    text : str
        A number and a unit: "4.2 kN/mm". Only a ratio may stand without a unit.
    quantity : Quantity
        What the field asks for.

    Returns
    -------
    float
        In ``quantity.si_unit``, correctly rounded.

    Raises
    ------
    UnitError
        Saying what is wrong with the text, what was wanted and an example.

    Examples
    --------
    >>> read("4.2 kN/mm", q.STIFFNESS)
    4200000.0
    >>> read("15 %", q.RATIO)
    0.15
    """
    return read_noted(text, quantity).si


def read_noted(text: str, quantity: Quantity, *, window: bool = False) -> Reading:
    """Read a value and say how it was understood.

    Parameters
    ----------
    text : str
        As for ``read``.
    quantity : Quantity
        What the field asks for.
    window : bool
        True accepts a decimal comma where it has one reading only.

    Returns
    -------
    Reading
        Value in SI, and notes such as "lb/in read as lbf/in".

    Raises
    ------
    UnitError
        As for ``read``.

    Examples
    --------
    >>> read_noted("1092 lb/in", q.STIFFNESS).notes
    ('lb/in read as lbf/in',)
    """
    try:
        exact = _exact(text, quantity, window=window)
        return Reading(_rounded(exact.amount), exact.notes)
    except UnitError as error:
        raise UnitError(refusal(text, quantity, str(error))) from None


def exact_amount(text: str, quantity: Quantity) -> Fraction:
    """Return a value as it stands in a file, in SI and unrounded; UnitError as for ``read``.

    >>> exact_amount("0.1 mm", q.LENGTH)
    Fraction(1, 10000)
    """
    return _exact(text, quantity, window=False).amount


def unit_of(text: str) -> str:
    """Return the unit of a typed value as it was typed, unchecked; "" when there is none.

    >>> unit_of("4.2 kN/mm"), unit_of("1480rpm"), unit_of("G 6.3")
    ('kN/mm', 'rpm', '')
    """
    plain = text.replace("\u2212", "-").strip()
    product = split_product(plain)
    parts = split_number(product[1] if product else plain)
    return parts[1].strip() if parts else ""


def _exact(text: str, quantity: Quantity, *, window: bool) -> _Exact:
    plain = text.replace("\u2212", "-").strip()
    if not plain:
        raise UnitError("it is empty; a number and a unit are wanted")
    if len(text) > LONGEST_TEXT:
        raise UnitError(f"it is {len(text)} characters long; at most {LONGEST_TEXT} are read")
    if any(not sign.isprintable() and not sign.isspace() for sign in plain) or len(text.splitlines()) > 1:
        raise UnitError("it holds a line break or an invisible character; write it plainly, on one line")
    return _counted(plain, quantity, window=window) or _single(plain, quantity, window=window)


def _counted(text: str, quantity: Quantity, *, window: bool) -> _Exact | None:
    """Read a count times one value; None when the text is no such product."""
    parts = split_product(text)
    if parts is None:
        return None
    count_text, value_text = parts
    if quantity == q.STIFFNESS and (match := _UNDER.fullmatch(value_text)):
        told = f"{match['deflection'].strip()} under {count_text}*{match['load'].strip()}"
        raise UnitError(
            f'a count before a deflection has two readings; equal springs side by side are "{told}"'
        )
    count, note = read_number(count_text, window=window)
    if count <= 0:
        raise UnitError(f"the count {count_text} must be above zero")
    value = _single(value_text, quantity, window=window)
    return _Exact(count * value.amount, ((note,) if note else ()) + value.notes)


def _single(text: str, quantity: Quantity, *, window: bool) -> _Exact:
    return _special(text, quantity, window=window) or _plain(text, quantity, window=window)


def _plain(text: str, quantity: Quantity, *, window: bool) -> _Exact:
    parts = split_number(text)
    if parts is None:
        raise UnitError(no_number(text, quantity))
    number, unit_text = parts
    if not unit_text.strip() and quantity == q.RATIO:
        amount, note = read_number(number, window=window)
        return _Exact(amount, (note,) if note else ())
    unit = find_unit(unit_text, quantity)
    if unit is None:
        raise UnitError(wrong_unit(number, unit_text, quantity))
    amount, note = read_number(number, window=window)
    return _Exact(amount * unit.factor, tuple(told for told in (note, unit.note) if told))


def _special(text: str, quantity: Quantity, *, window: bool) -> _Exact | None:
    if quantity == q.BALANCE_GRADE and (match := _GRADE.fullmatch(text)):
        return _plain(match["number"] + " mm/s", quantity, window=window)
    if quantity == q.INERTIA and (match := _FLYWHEEL.fullmatch(text)):
        kind = (match["first"] or match["last"])[:2]
        return _flywheel(kind, match["after"] or match["before"], window=window)
    if quantity == q.STIFFNESS and (match := _UNDER.fullmatch(text)):
        return _deflection(match["deflection"], match["load"], window=window)
    return None


def _flywheel(kind: str, value: str, *, window: bool) -> _Exact:
    if kind == "GD":
        units, told = GD2_UNITS, "GD2 divided by 4 to give the moment of inertia"
    else:
        units, told = WR2_UNITS, f"{kind}2 taken as the moment of inertia"
    parts = split_number(value)
    unit = units.get(unit_key(parts[1])) if parts else None
    if parts is None or unit is None:
        accepted = ", ".join(unit.spelling for unit in units.values())
        raise UnitError(f"{kind}2 wants a number and one of the units {accepted}")
    amount, note = read_number(parts[0], window=window)
    return _Exact(amount * unit.factor, (note, told) if note else (told,))


def _deflection(deflection: str, load: str, *, window: bool) -> _Exact:
    """Stiffness = load / static deflection, the load a force or the weight of a mass at 9.80665 m/s2."""
    sag = _plain(deflection, q.LENGTH, window=window)
    if find_unit(unit_of(load), q.FORCE):
        weight = _load(load, q.FORCE, window=window)
    else:
        mass = _load(load, q.MASS, window=window)
        weight = _Exact(mass.amount * STANDARD_GRAVITY, mass.notes)
    if sag.amount <= 0 or weight.amount <= 0:
        raise UnitError("deflection and load must both be above zero")
    told = "stiffness from static deflection holds only when dynamic and static stiffness are equal"
    return _Exact(weight.amount / sag.amount, (*sag.notes, *weight.notes, told))


def _load(text: str, quantity: Quantity, *, window: bool) -> _Exact:
    return _counted(text, quantity, window=window) or _plain(text, quantity, window=window)


def _rounded(amount: Fraction) -> float:
    try:
        size = float(amount)
    except OverflowError:
        raise UnitError("it is too large for a computer number (the limit is about 1.8e308)") from None
    if size == 0.0 and amount != 0:
        raise UnitError("it is too small for a computer number (the limit is about 1e-308)")
    return size
