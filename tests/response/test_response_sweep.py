"""Peaks on their true places, half-power marks, and speeds that are dense where curves bend."""

import numpy as np
import pytest

from modalview.response.sweep import starting_speeds, swept


def oscillator(zeta):
    """Displacement, velocity and acceleration of one mode of unit natural frequency."""

    def rows(w):
        size = np.sqrt((1 - w**2) ** 2 + (2 * zeta * w) ** 2)
        return np.array([1 / size, w / size, w**2 / size])

    return rows


@pytest.mark.parametrize("zeta", [1e-7, 1e-5, 1e-3, 0.05, 0.3])
def test_peaks_lie_where_closed_forms_say(zeta):
    """sqrt(1 - 2 zeta^2), 1 and its inverse: W. T. Thomson, Theory of Vibration, 3.1 (from memory)."""
    found = swept(oscillator(zeta), starting_speeds((0.1, 4.0), [(1.0, zeta, False)]))
    true = [np.sqrt(1 - 2 * zeta**2), 1.0, 1 / np.sqrt(1 - 2 * zeta**2)]
    assert [top.row for top in found.tops] == [0, 1, 2]
    for top in found.tops:
        assert top.speed == pytest.approx(true[top.row], rel=1e-9)
        assert top.speed in found.speeds
    assert found.tops[0].value == pytest.approx(1 / (2 * zeta * np.sqrt(1 - zeta**2)), rel=1e-8)


def test_half_power_points_of_the_displacement():
    """R. W. Clough, J. Penzien, Dynamics of Structures (from memory); check bank F15."""
    zeta = 0.05
    found = swept(oscillator(zeta), starting_speeds((0.1, 4.0), [(1.0, zeta, False)]))
    low, high = (np.sqrt(1 - 2 * zeta**2 + s * 2 * zeta * np.sqrt(1 - zeta**2)) for s in (-1, 1))
    assert found.tops[0].half_power == pytest.approx((low, high), rel=1e-12)


def test_half_power_is_unknown_where_the_curve_rises_before():
    def close(w):
        return np.abs(1 / (1 - w**2 + 0.02j * w) + 1 / (1.02**2 - w**2 + 0.02j * w))[None]

    found = swept(close, starting_speeds((0.5, 1.5), [(1.0, 0.01, False), (1.02, 0.01, False)]))
    sides = [top.half_power for top in found.tops]
    assert len(sides) == 1 or sides[0][1] is None
    assert sides[0][0] is not None


def test_a_peak_is_found_without_being_told():
    found = swept(oscillator(0.05), starting_speeds((0.1, 4.0), []))
    assert found.tops[0].speed == pytest.approx(np.sqrt(1 - 2 * 0.05**2), rel=1e-8)


def test_neighbouring_values_differ_little_about_a_peak():
    found = swept(oscillator(0.01), starting_speeds((0.1, 4.0), [(1.0, 0.01, False)]))
    steps = np.abs(np.diff(np.log(found.values[0])))
    assert steps.max() < 0.13


def test_an_infinite_peak_is_told_as_such():
    def rows(w):
        with np.errstate(divide="ignore"):
            return np.abs(1 / (1 - w**2))[None]

    found = swept(rows, starting_speeds((0.1, 4.0), [(1.0, 0.0, True)]))
    (top,) = found.tops
    assert (top.speed, top.value, top.half_power) == (1.0, np.inf, (None, None))


def test_wanted_speeds_are_there_and_none_outside_the_span():
    speeds = starting_speeds((1.0, 2.0), [(1.9, 0.2, False)], [1.23456789, 5.0])
    assert 1.23456789 in speeds
    assert speeds.min() == 1.0
    assert speeds.max() == 2.0


def test_two_speeds_that_nearly_coincide_make_no_peak_and_hide_none():
    """Beside 1 the values differ by rounding only; the peak of the acceleration is above it."""
    rows = oscillator(0.0625)
    twice = np.sort(
        np.concatenate([np.linspace(0.2, 3.0, 40), [1.0, 1.0 + 3e-16, 1.0 + 9e-16, 2.0, 2.0 + 5e-16]])
    )
    found = swept(rows, twice)
    assert [top.row for top in found.tops] == [0, 1, 2]
    assert found.tops[2].speed == pytest.approx(1 / np.sqrt(1 - 2 * 0.0625**2), rel=1e-9)


def test_a_wanted_speed_stands_once():
    speeds = starting_speeds((0.1, 1.3), [], [1.0, 1.0 + 2e-16], points=13)
    assert np.sum(np.abs(speeds - 1.0) < 1e-6) <= 2
    assert np.sum(speeds == 1.0) == 1


def test_rows_that_are_not_sharp_get_no_peaks():
    found = swept(oscillator(0.05), starting_speeds((0.1, 4.0), []), np.array([False, True, False]))
    assert {top.row for top in found.tops} == {1}


def test_a_constant_row_and_one_of_zeros_have_no_peak():
    found = swept(lambda w: np.array([np.ones_like(w), np.zeros_like(w)]), starting_speeds((1.0, 2.0), []))
    assert found.tops == ()
