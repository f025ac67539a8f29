"""Values as people read them, and back."""

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.units import quantities as q
from modalview.units.parse import read
from modalview.units.quantities import Quantity
from modalview.units.show import SYSTEMS, short, show, show_si, shown_digits, significant

QUANTITIES = tuple(value for value in vars(q).values() if isinstance(value, Quantity))


@pytest.mark.parametrize(
    ("si", "quantity", "system", "text"),
    [
        (1.75e8, q.STIFFNESS, "SI", "175 kN/mm"),
        (2.52e5, q.STIFFNESS, "SI", "252 N/mm"),
        (1.75e8, q.STIFFNESS, "mm-t", "175000 N/mm"),
        (1.75e8, q.STIFFNESS, "inch-pound", "999300 lbf/in"),
        (0.0, q.STIFFNESS, "SI", "0 N/m"),
        (999960.0, q.STIFFNESS, "SI", "1 kN/mm"),
        (620.0, q.MASS, "SI", "620 kg"),
        (620.0, q.MASS, "mm-t", "0.62 t"),
        (620.0, q.MASS, "inch-pound", "1367 lb"),
        (-0.75, q.LENGTH, "SI", "-750 mm"),
        (6.0e5, q.TORSIONAL_STIFFNESS, "SI", "600 kN m/rad"),
        (46.0, q.INERTIA, "SI", "46 kg m2"),
        (46.0, q.INERTIA, "inch-pound", "1092 lb ft2"),
        (2 * math.pi * 51.2603, q.FREQUENCY, "SI", "51.26 Hz"),
        (2950 * math.pi / 30, q.SPEED, "inch-pound", "2950 rpm"),
        (0.0063, q.BALANCE_GRADE, "SI", "G 6.3"),
        (0.15, q.RATIO, "SI", "15 %"),
        (math.inf, q.FREQUENCY, "SI", "infinite Hz"),
    ],
)
def test_shown(si, quantity, system, text):
    assert show(si, quantity, system) == text


def test_a_frequency_has_at_most_five_digits():
    assert show(2 * math.pi * 51.260312345, q.FREQUENCY, digits=12) == "51.26 Hz"
    assert show(2 * math.pi * 140.98765, q.FREQUENCY, digits=12) == "140.99 Hz"


def test_show_si_has_the_plain_unit():
    assert show_si(1.75e8, q.STIFFNESS) == "1.75e8 N/m"
    assert show_si(46.0, q.INERTIA) == "46 kg m2"
    assert show_si(2950 * math.pi / 30, q.SPEED) == "49.17 Hz"
    assert show_si(0.15, q.RATIO) == "0.15"


def test_an_unknown_system_is_refused():
    with pytest.raises(ValueError, match="'metric'; it is one of SI, mm-t, inch-pound"):
        show(1.0, q.MASS, "metric")


@pytest.mark.parametrize("system", SYSTEMS)
@pytest.mark.parametrize("quantity", QUANTITIES, ids=lambda quantity: quantity.name)
@pytest.mark.parametrize("si", [0.0, 1.0, -2.5, 1.23456789e-7, 6.54321e11])
def test_what_is_shown_reads_back(si, quantity, system):
    assert_reads_back(si, quantity, system, 4)


@settings(derandomize=True, max_examples=200, deadline=None)
@given(
    si=st.floats(min_value=1e-15, max_value=1e15),
    quantity=st.sampled_from(QUANTITIES),
    system=st.sampled_from(SYSTEMS),
    digits=st.integers(min_value=1, max_value=5),
)
def test_any_value_shown_reads_back_to_the_digits_shown(si, quantity, system, digits):
    assert_reads_back(si, quantity, system, digits)


def assert_reads_back(si, quantity, system, digits):
    # Half a unit of the last digit is at most this share of the value; 1e-12 is for rounding.
    half_digit = 0.5 * 10.0 ** (1 - digits) * (1 + 1e-9) + 1e-12
    if quantity == q.BALANCE_GRADE and si < 0:
        return  # a grade has no sign
    assert read(show(si, quantity, system, digits), quantity) == pytest.approx(si, rel=half_digit, abs=0)
    assert read(show_si(si, quantity, digits), quantity) == pytest.approx(si, rel=half_digit, abs=0)


@pytest.mark.parametrize(
    ("x", "digits", "text"),
    [
        (51.2603, 4, "51.26"),
        (106.9, 5, "106.90"),
        (9.9996, 4, "10.00"),
        (999.96, 4, "1000"),
        (123456.0, 4, "123500"),
        (999_999.0, 4, "1.000e6"),
        (0.001, 4, "0.001000"),
        (0.00099999, 4, "0.001000"),
        (0.0009, 2, "9.0e-4"),
        (-1.75e8, 3, "-1.75e8"),
        (0.0, 5, "0"),
        (-0.0, 5, "0"),
        (math.nan, 3, "not a number"),
        (-math.inf, 3, "-infinite"),
    ],
)
def test_significant(x, digits, text):
    assert significant(x, digits) == text


def test_significant_refuses_less_than_one_digit():
    with pytest.raises(ValueError, match="digits is 0"):
        significant(1.0, 0)


@pytest.mark.parametrize(
    ("value", "error", "digits"),
    [
        (51.2603, 0.0, 5),
        (51.2603, 0.0005, 5),
        (51.2603, 0.00051, 4),
        (51.2603, 0.06, 2),
        (51.2603, 40.0, 1),
        (51.2603, math.inf, 1),
        (51.2603, math.nan, 1),
        (99.9999, 0.004, 5),
        (0.0, 0.0, 1),
        (-51.2603, 0.004, 4),
    ],
)
def test_shown_digits(value, error, digits):
    assert shown_digits(value, error) == digits


@pytest.mark.parametrize(
    ("x", "digits", "text"),
    [
        (7.0, 6, "7"),
        (0.5, 6, "0.5"),
        (1 / 3, 6, "0.333333"),
        (2950.4, 5, "2950.4"),
        (29504.4, 5, "29504"),
        (1500.0, 2, "1500"),  # zeros before the point stay
        (123456.0, 4, "123500"),
        (999999.4, 6, "999999"),
        (999999.6, 6, "1e6"),
        (1e6, 6, "1e6"),
        (1234567.0, 5, "1.2346e6"),
        (1e12, 6, "1e12"),
        (-2.5e-7, 6, "-2.5e-7"),
        (0.001, 6, "0.001"),
        (0.0009999999, 6, "0.001"),
        (0.00099, 6, "9.9e-4"),
        (0.0, 6, "0"),
        (math.nan, 6, "not a number"),
        (-math.inf, 6, "-infinite"),
    ],
)
def test_short(x, digits, text):
    assert short(x, digits) == text


@given(st.floats(1e-30, 1e30))
def test_short_is_read_back_as_a_number(x):
    assert read(f"{short(x, 15)} kg", q.MASS) == pytest.approx(x, rel=1e-14)
