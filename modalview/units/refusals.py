"""What to say when a typed value cannot be read: the text, what was wanted, and how it is written."""

import re

from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.spelling import unit_key
from modalview.units.table import UNITS, accepted_spellings

_TIMES_TEN = re.compile(r"\s*[*x×·]?\s*10\s*(\^|\*\*|[⁰¹²³⁴⁵⁶⁷⁸⁹⁻])")
_ARITHMETIC = re.compile(r"\s*[*x×·^/+-]+\s*[0-9(]")
_GROUPED = re.compile(r"\s+[0-9]")
_LONGEST_SHOWN = 60

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
    shown = text if len(text) <= _LONGEST_SHOWN else text[: _LONGEST_SHOWN - 3] + "..."
    return f'"{shown}" cannot be read as {quantity.name}: {why} (write it like "{quantity.example}")'


def no_number(text: str, quantity: Quantity) -> str:
    """Say why a text that does not start with a number is refused."""
    if quantity == q.BALANCE_GRADE and text[:1] == "g":
        return "a balance quality grade is written with a capital G"
    return "it does not start with a plain number"


def wrong_unit(number: str, unit_text: str, quantity: Quantity) -> str:
    """Say why what follows the number is not a unit of ``quantity``."""
    key = unit_key(unit_text)
    written = unit_text.strip()
    if not key:
        return f"the unit is missing; write one of {_listed(quantity)}"
    if (quantity, key) in _REASONS:
        return _REASONS[quantity, key]
    if _TIMES_TEN.match(unit_text):
        return f"powers are not computed; write {number}e6 for {number} million"
    if _ARITHMETIC.match(unit_text):
        return "nothing is computed in a value; write the result as one plain number"
    if _GROUPED.match(unit_text):
        return "a number is written without gaps between its digits"
    if quantity == q.INERTIA and key in {"kgf m2", "kgf cm2"}:
        return (
            f'{written} is the unit of GD2; is GD2 meant? Then write "GD2 {number} {written}", which is J = GD2/4; '
            "a moment of inertia itself is written in kg m2"
        )
    if alike := _differing_in_case(key, quantity):
        return f"{written} is not a unit; is {' or '.join(alike)} meant? Capitals matter"
    if other := _other_quantity(key, quantity):
        return f"{written} is a unit of {other.name}; {quantity.name} is written in {_listed(quantity)}"
    return f"{written} is not a unit known here; {quantity.name} is written in {_listed(quantity)}"


def _listed(quantity: Quantity) -> str:
    return ", ".join(accepted_spellings(quantity))


def _differing_in_case(key: str, quantity: Quantity) -> tuple[str, ...]:
    folded = key.casefold()
    found = (unit.spelling for known, unit in UNITS[quantity].items() if known.casefold() == folded)
    return tuple(dict.fromkeys(found))


def _other_quantity(key: str, quantity: Quantity) -> Quantity | None:
    return next((other for other, units in UNITS.items() if other != quantity and key in units), None)
