"""What to say when a typed value cannot be read: the text, what was wanted, and how it is written."""

import re

from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.spelling import unit_key
from modalview.units.table import UNITS, accepted_spellings

_TIMES_TEN = re.compile(r"\s*[*x×·]?\s*10\s*(\^|\*\*|[⁰¹²³⁴⁵⁶⁷⁸⁹⁻])")
_ARITHMETIC = re.compile(r"\s*[*x×·^/+-]+\s*[0-9(]")
_LATER_ARITHMETIC = re.compile(r"[^*]*(?:(?<!\*)[*×+]\s*[0-9(]|\sx\s*[0-9(])|\s*[*×]\s*$")
_GROUPED = re.compile(r"\s+[0-9]")
_ONE_COUNT = 'only a count times one value is computed, as in "4*180 kg"; write anything else as its result'
_LONGEST_SHOWN = 60
_ONLY_GD2 = frozenset(unit_key(unit) for unit in ("kgf m2", "kgf cm2", "kgf mm2"))

# Wrong units that have a reason of their own.
_REASONS: dict[tuple[Quantity, str], str] = {
    (q.MASS, "kgf"): "kgf is a force (the weight of 1 kg); a mass of the same number is written in kg",
    (q.MASS, "lbf"): "lbf is a force (the weight of 1 lb); a mass of the same number is written in lb",
    (q.MASS, "ton"): "a ton can be 1000 kg (t), 2000 lb or 2240 lb; write t, kg or lb",
    (q.FORCE, "lb"): "lb is always a mass here; a force is written in lbf",
    (q.FORCE, "kg"): "kg is a mass; its weight as a force is written in kgf",
    (q.STIFFNESS, "kg/mm"): "kg is a mass; write kgf/mm if kilogram-force is meant",
    (q.STIFFNESS, "kg/cm"): "kg is a mass; write kgf/cm if kilogram-force is meant",
    (q.FREQUENCY, "1/s"): "1/s can mean Hz or rad/s; write the one you mean",
    (q.FREQUENCY, "s-1"): "1/s can mean Hz or rad/s; write the one you mean",
    (q.SPEED, "1/s"): "1/s can mean rev/s or rad/s; write the one you mean",
    (q.SPEED, "s-1"): "1/s can mean rev/s or rad/s; write the one you mean",
}


def refusal(text: str, quantity: Quantity, why: str) -> str:
    """Return the whole message: the text, the quantity wanted, why not, and an example."""
    return f'"{_cut(text)}" cannot be read as {quantity.name}: {why} (write it like "{quantity.example}")'


def no_number(text: str, quantity: Quantity) -> str:
    """Say why a text that does not start with a number is refused."""
    if quantity == q.BALANCE_GRADE and text[:1] == "g":
        return "a balance quality grade is written with a capital G"
    return _ONE_COUNT if "(" in text else "it does not start with a plain number"


def wrong_unit(number: str, unit_text: str, quantity: Quantity) -> str:
    """Say why what follows the number is not a unit of ``quantity``."""
    key = unit_key(unit_text)
    if not key:
        return f"the unit is missing; write one of {_listed(quantity)}"
    unit = _cut(unit_text.strip())
    return (
        _REASONS.get((quantity, key))
        or _computed(number, unit_text)
        or _gd2_meant(number, unit, key, quantity)
        or _case_mistaken(unit, key, quantity)
        or _elsewhere(unit, key, quantity)
        or f"{unit} is not a unit known here; {quantity.name} is written in {_listed(quantity)}"
    )


def _computed(number: str, unit_text: str) -> str:
    if _TIMES_TEN.match(unit_text):
        return f"powers are not computed; write {_cut(number)}e6 for {_cut(number)} million"
    if _ARITHMETIC.match(unit_text) or _LATER_ARITHMETIC.match(unit_text):
        return _ONE_COUNT
    if _GROUPED.match(unit_text):
        return "a number is written without gaps between its digits"
    return ""


def _gd2_meant(number: str, unit: str, key: str, quantity: Quantity) -> str:
    if quantity != q.INERTIA or key not in _ONLY_GD2:
        return ""
    return (
        f"{unit} is the unit of GD2; is GD2 meant? "
        f'Then write "GD2 {_cut(number)} {unit}", which is J = GD2/4; '
        "a moment of inertia itself is written in kg m2"
    )


def _case_mistaken(unit: str, key: str, quantity: Quantity) -> str:
    folded = key.casefold()
    found = (known.spelling for other, known in UNITS[quantity].items() if other.casefold() == folded)
    alike = tuple(dict.fromkeys(found))
    return f"{unit} is not a unit; is {' or '.join(alike)} meant? Capitals matter" if alike else ""


def _elsewhere(unit: str, key: str, quantity: Quantity) -> str:
    other = next((other for other, units in UNITS.items() if key in units), None)
    return f"{unit} is a unit of {other.name}, not of {quantity.name}" if other else ""


def _listed(quantity: Quantity) -> str:
    listed = ", ".join(accepted_spellings(quantity))
    return f"{listed} or as a plain number" if quantity == q.RATIO else listed


def _cut(text: str) -> str:
    """Return text fit for a message: short, on one line, without what cannot be printed."""
    spaced = "".join(" " if letter.isspace() else letter for letter in text)
    plain = "".join(letter if letter.isprintable() else "\N{REPLACEMENT CHARACTER}" for letter in spaced)
    return plain if len(plain) <= _LONGEST_SHOWN else plain[: _LONGEST_SHOWN - 3] + "..."
