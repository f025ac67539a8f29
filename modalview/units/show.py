"""Numbers and values as a person reads them: few digits, units of the chosen system."""

import math
from typing import Final

from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.table import Unit, find_unit

SYSTEMS: Final = ("SI", "mm-t", "inch-pound")
# More digits of a frequency than five claim what no mass or stiffness is known to.
MOST_DIGITS: Final = 5

# Units from small to large; a value takes the largest in which it is at least 1.
_EVERYWHERE = {
    q.FREQUENCY: "Hz",
    q.SPEED: "rpm",
    q.SPEED_RATE: "rpm/s",
    q.RATIO: "%",
    q.ANGLE: "deg",
    q.DECAY_RATE: "1/s",
    q.TIME: "us|ms|s",
    q.BALANCE_GRADE: "mm/s",
}
_SHOWN: dict[str, dict[Quantity, str]] = {
    "SI": {
        **_EVERYWHERE,
        q.MASS: "kg",
        q.INERTIA: "kg m2",
        q.PRODUCT_OF_INERTIA: "kg m2",
        q.LENGTH: "um|mm|m",
        q.STIFFNESS: "N/m|N/mm|kN/mm",
        q.TORSIONAL_STIFFNESS: "N m/rad|kN m/rad|MN m/rad",
        q.DAMPING: "N s/m|kN s/m",
        q.TORSIONAL_DAMPING: "N m s/rad|kN m s/rad",
        q.FORCE: "N|kN|MN",
        q.TORQUE: "N m|kN m|MN m",
        q.UNBALANCE: "g mm|kg mm|kg m",
        q.MODULUS: "Pa|kPa|MPa|GPa",
        q.PRESSURE: "Pa|kPa|bar",
        q.AREA: "mm2|m2",
        q.VOLUME: "l|m3",
        q.DENSITY: "kg/m3",
        q.LINE_MASS: "kg/m",
        q.SECOND_MOMENT: "mm4|cm4|m4",
        q.VELOCITY: "mm/s|m/s",
        q.ACCELERATION: "m/s2",
    },
    "mm-t": {
        **_EVERYWHERE,
        q.MASS: "t",
        q.INERTIA: "t mm2",
        q.PRODUCT_OF_INERTIA: "t mm2",
        q.LENGTH: "mm",
        q.STIFFNESS: "N/mm",
        q.TORSIONAL_STIFFNESS: "N mm/rad",
        q.DAMPING: "N s/mm",
        q.TORSIONAL_DAMPING: "N mm s/rad",
        q.FORCE: "N",
        q.TORQUE: "N mm",
        q.UNBALANCE: "t mm",
        q.MODULUS: "MPa",
        q.PRESSURE: "MPa",
        q.AREA: "mm2",
        q.VOLUME: "mm3",
        q.DENSITY: "t/mm3",
        q.LINE_MASS: "t/mm",
        q.SECOND_MOMENT: "mm4",
        q.VELOCITY: "mm/s",
        q.ACCELERATION: "mm/s2",
    },
    "inch-pound": {
        **_EVERYWHERE,
        q.MASS: "lb",
        q.INERTIA: "lb ft2",
        q.PRODUCT_OF_INERTIA: "lb ft2",
        q.LENGTH: "mil|in",
        q.STIFFNESS: "lbf/in",
        q.TORSIONAL_STIFFNESS: "lbf in/rad",
        q.DAMPING: "lbf s/in",
        q.TORSIONAL_DAMPING: "lbf in s/rad",
        q.FORCE: "lbf",
        q.TORQUE: "lbf in|lbf ft",
        q.UNBALANCE: "oz in",
        q.MODULUS: "psi|ksi|Mpsi",
        q.PRESSURE: "psi",
        q.AREA: "in2",
        q.VOLUME: "in3|ft3",
        q.DENSITY: "lb/ft3",
        q.LINE_MASS: "lb/ft",
        q.SECOND_MOMENT: "in4",
        q.VELOCITY: "in/s",
        q.ACCELERATION: "in/s2",
    },
}


def _found(spelling: str, quantity: Quantity) -> Unit:
    unit = find_unit(spelling, quantity)
    if unit is None:
        raise KeyError(f"{spelling} is not in the table of {quantity.name}")
    return unit


_UNITS: dict[str, dict[Quantity, tuple[Unit, ...]]] = {
    system: {
        quantity: tuple(_found(spelling, quantity) for spelling in spellings.split("|"))
        for quantity, spellings in shown.items()
    }
    for system, shown in _SHOWN.items()
}


def show(si: float, quantity: Quantity, system: str = "SI", digits: int = 4) -> str:
    """Return a value for people, such as "175 kN/mm".

    Parameters
    ----------
    si : float
        In ``quantity.si_unit``.
    quantity : Quantity
        What the number means.
    system : str
        "SI", "mm-t" or "inch-pound". Frequencies are in Hz and speeds in rpm in all of them.
    digits : int
        Significant digits, at least 1; a frequency never gets more than ``MOST_DIGITS``. Zeros at the end of
        a decimal fraction are left out.

    Returns
    -------
    str
        A finite value is read back by ``parse.read`` to the digits shown.

    Raises
    ------
    ValueError
        For an unknown system or fewer than one digit.

    Examples
    --------
    >>> show(1.75e8, q.STIFFNESS), show(1.75e8, q.STIFFNESS, "inch-pound")
    ('175 kN/mm', '999300 lbf/in')
    >>> show(154.985237577, q.SPEED), show(0.0063, q.BALANCE_GRADE), show(0.15, q.RATIO)
    ('1480 rpm', 'G 6.3', '15 %')
    """
    if system not in _UNITS:
        raise ValueError(f"system is {system!r}; it is one of {', '.join(SYSTEMS)}")
    if quantity == q.FREQUENCY:
        digits = min(digits, MOST_DIGITS)
    unit = _fitting(si, _UNITS[system][quantity], digits)
    number = short(si / float(unit.factor), digits)
    return f"G {number}" if quantity == q.BALANCE_GRADE else f"{number} {unit.spelling}"


def show_si(si: float, quantity: Quantity, digits: int = 4) -> str:
    """Return a value in the plain unit of the core, to stand beside the value as typed: "1.75e8 N/m".

    Frequencies and speeds are in Hz, which compares them with the modes; a ratio has no unit.

    Examples
    --------
    >>> show_si(1.75e8, q.STIFFNESS), show_si(154.985237577, q.SPEED, 5), show_si(0.15, q.RATIO)
    ('1.75e8 N/m', '24.667 Hz', '0.15')
    """
    if quantity in {q.FREQUENCY, q.SPEED}:
        return show(si, q.FREQUENCY, digits=digits)
    number = short(si, digits)
    return number if quantity == q.RATIO else f"{number} {quantity.si_unit}"


def significant(x: float, digits: int) -> str:
    """Return ``x`` rounded to so many significant digits, zeros kept.

    Without an exponent where the rounded size lies from 0.001 to below 1e6; elsewhere as 1.235e-4.

    Raises
    ------
    ValueError
        For fewer than one digit.

    Examples
    --------
    >>> significant(106.9, 5), significant(123456, 4), significant(1.75e8, 3), significant(0.0, 4)
    ('106.90', '123500', '1.75e8', '0')
    """
    if digits < 1:
        raise ValueError(f"digits is {digits}; at least 1 is wanted")
    if not math.isfinite(x):
        return "not a number" if math.isnan(x) else ("infinite" if x > 0 else "-infinite")
    if x == 0:
        return "0"
    rounded = f"{x:.{digits - 1}e}"
    mantissa, _, power = rounded.partition("e")
    exponent = int(power)
    if -3 <= exponent < 6:
        return f"{float(rounded):.{max(digits - 1 - exponent, 0)}f}"
    return f"{mantissa}e{exponent}"


def short(x: float, digits: int = 6) -> str:
    """Return ``x`` to at most so many significant digits, zeros at the end left out: the style of all texts.

    Plain where the rounded size lies from 0.001 to below 1e6, elsewhere with an exponent as people type it.

    Examples
    --------
    >>> short(2950.0), short(1e6), short(0.5), short(1234567.0, 5), short(-2.5e-7)
    ('2950', '1e6', '0.5', '1.2346e6', '-2.5e-7')
    """
    return _without_end_zeros(significant(x, digits))


def shown_digits(value: float, error: float) -> int:
    """Return how many significant digits of ``value`` its absolute error leaves, from 1 to ``MOST_DIGITS``.

    The last digit shown is one of which the error is at most half a unit.

    Parameters
    ----------
    value, error : float
        In the same unit; the error is not negative.

    Examples
    --------
    >>> shown_digits(51.2603, 1e-9), shown_digits(51.2603, 0.004), shown_digits(51.2603, 0.3)
    (5, 4, 2)
    """
    if value == 0 or not math.isfinite(value):
        return 1
    exponent = int(f"{value:.{MOST_DIGITS - 1}e}".partition("e")[2])
    for digits in range(MOST_DIGITS, 1, -1):
        if error <= 0.5 * 10.0 ** (exponent - digits + 1):
            return digits
    return 1


def _fitting(si: float, units: tuple[Unit, ...], digits: int) -> Unit:
    """Return the largest unit in which the rounded value is at least 1, else the smallest."""
    if not math.isfinite(si):
        return units[-1]
    rounded = abs(float(f"{si:.{max(digits, 1) - 1}e}"))
    # The comparison is of the shown digits: 0.99996 kN/mm shows as 1 kN/mm, not as 1000 N/mm.
    return next((unit for unit in reversed(units) if rounded >= unit.factor), units[0])


def _without_end_zeros(number: str) -> str:
    mantissa, e, power = number.partition("e")
    return (mantissa.rstrip("0").rstrip(".") if "." in mantissa else mantissa) + e + power
