"""The table: definitions, and that no spelling means two things."""

from fractions import Fraction

import pytest

from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.spelling import glued_spellings, unit_key
from modalview.units.table import PI, UNITS, accepted_spellings, find_unit

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
