"""The table: definitions, and that no spelling means two things."""

import math
from fractions import Fraction

import pytest

from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.spelling import glued_spellings, unit_key
from modalview.units.table import GD2_UNITS, PI, UNITS, WR2_UNITS, accepted_spellings, find_unit

QUANTITIES = tuple(value for value in vars(q).values() if isinstance(value, Quantity))


def factor(spelling, quantity):
    return find_unit(spelling, quantity).factor


def test_every_quantity_has_units():
    assert set(UNITS) == set(QUANTITIES)


@pytest.mark.parametrize("quantity", QUANTITIES, ids=lambda quantity: quantity.name)
def test_every_listed_unit_is_found_as_itself(quantity):
    for spelling in accepted_spellings(quantity):
        assert find_unit(spelling, quantity).spelling == spelling


@pytest.mark.parametrize("quantity", QUANTITIES, ids=lambda quantity: quantity.name)
def test_no_shortened_spelling_hides_another_unit(quantity):
    listed = {unit_key(spelling): spelling for spelling in accepted_spellings(quantity)}
    assert len(listed) == len(accepted_spellings(quantity))
    for spelling in accepted_spellings(quantity):
        for glued in glued_spellings(spelling):
            assert listed.get(unit_key(glued), spelling) == spelling


def test_exact_definitions():
    # International yard and pound agreement (1959); 3rd CGPM (1901).
    assert factor("in", q.LENGTH) == Fraction(254, 10000)
    assert factor("lb", q.MASS) == Fraction(45359237, 10**8)
    assert factor("lbf", q.FORCE) == Fraction(45359237, 10**8) * Fraction(980665, 10**5)
    assert factor("kgf", q.FORCE) == Fraction(980665, 10**5)
    assert factor("rpm", q.SPEED) == 2 * PI / 60


def test_units_made_of_others_agree_with_them():
    assert factor("lbf/in", q.STIFFNESS) == factor("lbf", q.FORCE) / factor("in", q.LENGTH)
    assert factor("slug", q.MASS) == factor("lbf s2/ft", q.MASS) == factor("lbf s2/in", q.MASS) / 12
    assert factor("slug ft2", q.INERTIA) == factor("slug", q.MASS) * factor("ft", q.LENGTH) ** 2
    assert factor("t mm2", q.INERTIA) == factor("t", q.MASS) * factor("mm", q.LENGTH) ** 2
    assert factor("oz in", q.UNBALANCE) == factor("oz", q.MASS) * factor("in", q.LENGTH)
    assert factor("psi", q.MODULUS) == factor("lbf", q.FORCE) / factor("in2", q.AREA)
    assert factor("in4", q.SECOND_MOMENT) == factor("in2", q.AREA) ** 2
    assert factor("N m/deg", q.TORSIONAL_STIFFNESS) * factor("deg", q.ANGLE) == 1


def test_pound_in_a_product_is_pound_force_except_where_it_is_a_mass():
    assert find_unit("lb/in", q.STIFFNESS).spelling == "lbf/in"
    assert find_unit("lb in", q.TORQUE).spelling == "lbf in"
    assert find_unit("lb in", q.UNBALANCE).spelling == "lb in"
    assert find_unit("lb", q.FORCE) is None


# Each symbol on its own, worked out in floating point apart from the table.
SYMBOLS = {
    "N": 1.0,
    "kN": 1e3,
    "MN": 1e6,
    "GN": 1e9,
    "daN": 10.0,
    "kgf": 9.80665,
    "lbf": 4.4482216152605,
    "kip": 4448.2216152605,
    "kg": 1.0,
    "g": 1e-3,
    "t": 1e3,
    "lb": 0.45359237,
    "oz": 0.028349523125,
    "slug": 14.593902937206365,
    "m": 1.0,
    "cm": 1e-2,
    "mm": 1e-3,
    "um": 1e-6,
    "in": 0.0254,
    "ft": 0.3048,
    "mil": 2.54e-5,
    "s": 1.0,
    "ms": 1e-3,
    "us": 1e-6,
    "min": 60.0,
    "rad": 1.0,
    "mrad": 1e-3,
    "deg": math.pi / 180,
    "Pa": 1.0,
    "kPa": 1e3,
    "MPa": 1e6,
    "GPa": 1e9,
    "psi": 6894.757293168361,
    "ksi": 6894757.293168361,
    "Mpsi": 6894757293.168361,
    "bar": 1e5,
    "mbar": 100.0,
    "atm": 101325.0,
    "l": 1e-3,
    "dm": 0.1,
    "%": 0.01,
    "1": 1.0,
    "Hz": 2 * math.pi,
    "kHz": 2e3 * math.pi,
    "r": 2 * math.pi,
    "rev": 2 * math.pi,
    "rpm": math.pi / 30,
    "cpm": math.pi / 30,
}


def worked_out(spelling):
    above, _, below = spelling.partition("/")
    size = math.prod(power_of(symbol) for symbol in above.split())
    return size / math.prod(power_of(symbol) for symbol in below.split())


def power_of(symbol):
    name, power = (symbol[:-1], int(symbol[-1])) if symbol[-1] in "234" else (symbol, 1)
    return SYMBOLS[name] ** power


@pytest.mark.parametrize("quantity", QUANTITIES, ids=lambda quantity: quantity.name)
def test_every_factor_is_what_its_symbols_make(quantity):
    for spelling in accepted_spellings(quantity):
        wanted = worked_out(spelling)
        if spelling == "1/min" and quantity in {q.FREQUENCY, q.SPEED}:
            wanted *= 2 * math.pi  # turns per minute
        if spelling == "g" and quantity == q.ACCELERATION:
            wanted = 9.80665
        assert float(factor(spelling, quantity)) == pytest.approx(wanted, rel=1e-13), spelling


def test_flywheel_units_are_a_quarter_of_weight_by_square_and_the_square_itself():
    # In GD2 and WR2 a force unit stands for the mass of that weight.
    for units, share in ((GD2_UNITS, 0.25), (WR2_UNITS, 1.0)):
        for unit in units.values():
            as_mass = unit.spelling.replace("lbf", "lb").replace("kgf", "kg")
            weight = 1 / 9.80665 if unit.spelling.startswith("N ") else 1.0
            wanted = share * weight * worked_out(as_mass)
            assert float(unit.factor) == pytest.approx(wanted, rel=1e-13), unit.spelling
