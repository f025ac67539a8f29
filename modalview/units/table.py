"""The units that each quantity may be typed in, with exact factors to the SI unit of the core.

Factors are rational, so that "15 %" and "0.15", or "4.2 kN/mm" and "4.2e6 N/m", are the same number to
the last bit. Only pi is rounded, at fifty digits.

Sources of the exact factors: International yard and pound agreement, 1959 (inch = 0.0254 m, foot = 12 in,
avoirdupois pound = 0.45359237 kg, ounce = 1/16 lb); standard gravity 9.80665 m/s2 (3rd CGPM, 1901, for
kgf and lbf); prefixes, radian and tonne (BIPM, The International System of Units, 9th edition, 2019).
A slug is 1 lbf s2/ft, a kip 1000 lbf, a mil 0.001 in (trade use, no single source).
"""

from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache

from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.spelling import glued_spellings, unit_key

STANDARD_GRAVITY = Fraction("9.80665")
PI = Fraction("3.14159265358979323846264338327950288419716939937511")

_ONE = Fraction(1)
_KILO, _MEGA, _GIGA = Fraction(10**3), Fraction(10**6), Fraction(10**9)
_CENTI, _MILLI, _MICRO = Fraction(1, 10**2), Fraction(1, 10**3), Fraction(1, 10**6)

_IN = Fraction("0.0254")
_FT = 12 * _IN
_LB = Fraction("0.45359237")
_OZ = _LB / 16
_LBF = _LB * STANDARD_GRAVITY
_KIP = 1000 * _LBF
_KGF = STANDARD_GRAVITY
_MIN = Fraction(60)
_TURN = 2 * PI
_DEG = PI / 180

_FORCES = {"N": _ONE, "kN": _KILO, "MN": _MEGA, "daN": Fraction(10), "lbf": _LBF, "kip": _KIP, "kgf": _KGF}
_LENGTHS = {
    "m": _ONE,
    "mm": _MILLI,
    "cm": _CENTI,
    "um": _MICRO,
    "in": _IN,
    "ft": _FT,
    "mil": _IN / 1000,
}
_TORQUES = {
    "N m": _ONE,
    "kN m": _KILO,
    "MN m": _MEGA,
    "N mm": _MILLI,
    "lbf in": _LBF * _IN,
    "lbf ft": _LBF * _FT,
    "kip in": _KIP * _IN,
    "kip ft": _KIP * _FT,
    "kgf m": _KGF,
    "kgf cm": _KGF * _CENTI,
}
_ANGULAR = {
    "Hz": _TURN,
    "kHz": _TURN * _KILO,
    "cpm": _TURN / _MIN,
    "rpm": _TURN / _MIN,
    "1/min": _TURN / _MIN,
    "r/min": _TURN / _MIN,
    "rev/min": _TURN / _MIN,
    "rev/s": _TURN,
    "rad/s": _ONE,
}
_INERTIAS = {
    "kg m2": _ONE,
    "kg cm2": _CENTI**2,
    "kg mm2": _MILLI**2,
    "t m2": _KILO,
    "t mm2": _KILO * _MILLI**2,
    "g m2": _MILLI,
    "g cm2": _MILLI * _CENTI**2,
    "g mm2": _MILLI**3,
    "lb ft2": _LB * _FT**2,
    "lb in2": _LB * _IN**2,
    "oz in2": _OZ * _IN**2,
    "slug ft2": _LBF * _FT,
    "lbf in s2": _LBF * _IN,
    "lbf ft s2": _LBF * _FT,
    "N m s2": _ONE,
    "kgf m s2": _KGF,
    "kgf cm s2": _KGF * _CENTI,
}

_PRESSURES = {
    "Pa": _ONE,
    "kPa": _KILO,
    "MPa": _MEGA,
    "GPa": _GIGA,
    "N/mm2": _MEGA,
    "N/m2": _ONE,
    "kN/mm2": _GIGA,
    "psi": _LBF / _IN**2,
    "ksi": _KIP / _IN**2,
    "Mpsi": _MEGA * _LBF / _IN**2,
    "lbf/in2": _LBF / _IN**2,
    "kgf/mm2": _KGF / _MILLI**2,
    "kgf/cm2": _KGF / _CENTI**2,
}

_FACTORS: dict[Quantity, dict[str, Fraction]] = {
    q.MASS: {
        "kg": _ONE,
        "g": _MILLI,
        "t": _KILO,
        "lb": _LB,
        "oz": _OZ,
        "slug": _LBF / _FT,
        "lbf s2/in": _LBF / _IN,
        "lbf s2/ft": _LBF / _FT,
        "kgf s2/m": _KGF,
    },
    q.INERTIA: _INERTIAS,
    q.PRODUCT_OF_INERTIA: _INERTIAS,
    q.LENGTH: _LENGTHS,
    q.STIFFNESS: {
        "N/m": _ONE,
        "N/mm": _KILO,
        "N/cm": Fraction(100),
        "N/um": _MEGA,
        "kN/m": _KILO,
        "kN/mm": _MEGA,
        "MN/m": _MEGA,
        "MN/mm": _GIGA,
        "GN/m": _GIGA,
        "daN/mm": Fraction(10**4),
        "lbf/in": _LBF / _IN,
        "lbf/ft": _LBF / _FT,
        "kip/in": _KIP / _IN,
        "kip/ft": _KIP / _FT,
        "kgf/mm": _KGF / _MILLI,
        "kgf/cm": _KGF / _CENTI,
        "kgf/m": _KGF,
    },
    q.TORSIONAL_STIFFNESS: {
        **{f"{torque}/rad": factor for torque, factor in _TORQUES.items()},
        **{f"{torque}/deg": factor / _DEG for torque, factor in _TORQUES.items()},
    },
    q.DAMPING: {
        "N s/m": _ONE,
        "N s/mm": _KILO,
        "kN s/m": _KILO,
        "kN s/mm": _MEGA,
        "MN s/m": _MEGA,
        "lbf s/in": _LBF / _IN,
        "lbf s/ft": _LBF / _FT,
        "kgf s/m": _KGF,
    },
    q.TORSIONAL_DAMPING: {
        "N m s/rad": _ONE,
        "kN m s/rad": _KILO,
        "N mm s/rad": _MILLI,
        "lbf in s/rad": _LBF * _IN,
        "lbf ft s/rad": _LBF * _FT,
        "kgf m s/rad": _KGF,
        "N m s/deg": 1 / _DEG,
    },
    q.FREQUENCY: _ANGULAR,
    q.SPEED: _ANGULAR,
    q.SPEED_RATE: {
        "rpm/s": _TURN / _MIN,
        "rpm/min": _TURN / _MIN**2,
        "Hz/s": _TURN,
        "Hz/min": _TURN / _MIN,
        "rad/s2": _ONE,
    },
    q.FORCE: _FORCES,
    q.TORQUE: _TORQUES,
    q.UNBALANCE: {
        "g mm": _MICRO,
        "kg m": _ONE,
        "kg mm": _MILLI,
        "g cm": _MILLI * _CENTI,
        "g m": _MILLI,
        "t mm": _ONE,
        "g in": _MILLI * _IN,
        "oz in": _OZ * _IN,
        "lb in": _LB * _IN,
    },
    q.BALANCE_GRADE: {"mm/s": _MILLI, "m/s": _ONE},
    q.MODULUS: _PRESSURES,
    q.PRESSURE: {**_PRESSURES, "bar": Fraction(10**5), "mbar": Fraction(100), "atm": Fraction(101325)},
    q.AREA: {f"{length}2": _LENGTHS[length] ** 2 for length in ("m", "mm", "cm", "in", "ft")},
    q.SECOND_MOMENT: {f"{length}4": _LENGTHS[length] ** 4 for length in ("m", "mm", "cm", "in", "ft")},
    q.VOLUME: {
        **{f"{length}3": _LENGTHS[length] ** 3 for length in ("m", "mm", "cm", "in", "ft")},
        "l": _MILLI,
        "dm3": _MILLI,
    },
    q.DENSITY: {
        "kg/m3": _ONE,
        "t/m3": _KILO,
        "g/cm3": _KILO,
        "kg/dm3": _KILO,
        "kg/l": _KILO,
        "t/mm3": _KILO / _MILLI**3,
        "lb/in3": _LB / _IN**3,
        "lb/ft3": _LB / _FT**3,
    },
    q.LINE_MASS: {"kg/m": _ONE, "t/m": _KILO, "t/mm": _KILO / _MILLI, "lb/ft": _LB / _FT, "lb/in": _LB / _IN},
    q.RATIO: {"%": _CENTI},
    q.ANGLE: {"deg": _DEG, "rad": _ONE, "mrad": _MILLI},
    q.DECAY_RATE: {"1/s": _ONE, "1/min": 1 / _MIN},
    q.TIME: {"s": _ONE, "ms": _MILLI, "us": _MICRO, "min": _MIN},
    q.VELOCITY: {
        "m/s": _ONE,
        "mm/s": _MILLI,
        "cm/s": _CENTI,
        "um/s": _MICRO,
        "in/s": _IN,
        "ft/s": _FT,
    },
    q.ACCELERATION: {
        "m/s2": _ONE,
        "mm/s2": _MILLI,
        "in/s2": _IN,
        "ft/s2": _FT,
        "g": STANDARD_GRAVITY,
    },
}

# Other spellings of the same unit. Only words that no other unit resembles are taken in any case; prefixes
# are never guessed, because mN and MN differ by a factor of 1e9.
_OTHER_SPELLINGS = {
    "rpm": ("RPM", "Rpm"),
    "cpm": ("CPM", "Cpm"),
    "Hz": ("hz", "HZ"),
    "1/min": ("min-1",),
    "1/s": ("s-1",),
    "in": ("inch",),
    "lb": ("lbm",),
    "%": ("percent",),
}
_NOTES = {
    (q.ACCELERATION, "g"): "g read as standard gravity, 9.80665 m/s2",
}


@dataclass(frozen=True, slots=True)
class Unit:
    """One unit of one quantity.

    Parameters
    ----------
    spelling : str
        As the table writes it: "kN/mm".
    factor : Fraction
        SI units of the core in one such unit.
    note : str
        What a person should be told when it is read; mostly empty.
    """

    spelling: str
    factor: Fraction
    note: str = ""


def _units_of(quantity: Quantity, factors: dict[str, Fraction]) -> dict[str, Unit]:
    found: dict[str, Unit] = {}
    for spelling, factor in factors.items():
        unit = Unit(spelling, factor, _NOTES.get((quantity, spelling), ""))
        for written in (spelling, *glued_spellings(spelling), *_OTHER_SPELLINGS.get(spelling, ())):
            found.setdefault(unit_key(written), unit)
    if quantity != q.FORCE:  # a lone lb is always a mass
        for spelling, factor in factors.items():
            if "lbf" in spelling:
                written = spelling.replace("lbf", "lb")
                found.setdefault(unit_key(written), Unit(spelling, factor, f"{written} read as {spelling}"))
    return found


# GD2 is weight times diameter squared, in weight units: J = GD2 / 4 with kgf read as kg, or GD2 / (4 g) in
# newtons. WR2 (also WK2) is weight times radius of gyration squared: J = WR2. Common practice of the trade.
_GD2 = {
    "kgf m2": _ONE,
    "kgf cm2": _CENTI**2,
    "kgf mm2": _MILLI**2,
    "kg m2": _ONE,
    "kg cm2": _CENTI**2,
    "kg mm2": _MILLI**2,
    "t m2": _KILO,
    "N m2": 1 / STANDARD_GRAVITY,
    "lb ft2": _LB * _FT**2,
    "lbf ft2": _LB * _FT**2,
}
_WR2 = {
    "lb ft2": _LB * _FT**2,
    "lb in2": _LB * _IN**2,
    "oz in2": _OZ * _IN**2,
    "lbf ft2": _LB * _FT**2,
    "lbf in2": _LB * _IN**2,
    "kg m2": _ONE,
    "kgf m2": _ONE,
}
GD2_UNITS = {unit_key(spelling): Unit(spelling, factor / 4) for spelling, factor in _GD2.items()}
WR2_UNITS = {unit_key(spelling): Unit(spelling, factor) for spelling, factor in _WR2.items()}

UNITS: dict[Quantity, dict[str, Unit]] = {
    quantity: _units_of(quantity, factors) for quantity, factors in _FACTORS.items()
}


@lru_cache(maxsize=1024)  # a file of many values has few unit texts
def find_unit(text: str, quantity: Quantity) -> Unit | None:
    """Return the unit of ``quantity`` that ``text`` spells, or None.

    >>> find_unit("kg·m²", q.INERTIA).spelling
    'kg m2'
    """
    return UNITS[quantity].get(unit_key(text))


def accepted_spellings(quantity: Quantity) -> tuple[str, ...]:
    """Return the units of ``quantity`` as the table writes them."""
    return tuple(_FACTORS[quantity])
