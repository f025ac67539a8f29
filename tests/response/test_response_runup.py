"""Modes passed on run-up: where, for how long, and whether the steady amplitude holds there."""

import math

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from modalview.eigen.span import ModeSpan
from modalview.response.runup import SWEPT_CYCLES_PER_Q, Swept, half_power_seconds, passages

RPM = 2 * math.pi / 60
ORDERS = (Swept("m/1x", "1×", 1.0), Swept("m/2x", "2×", 2.0))
# 10, 30 and 70 Hz; 10 % to either side.
MODES = tuple(
    ModeSpan(i + 1, *(2 * math.pi * f * s for s in (1.0, 0.9, 1.1))) for i, f in enumerate((10, 30, 70))
)


def test_what_lies_below_the_lowest_speed_is_passed():
    found = passages(ORDERS, MODES, 1500 * RPM)
    told = [(one.check, one.mode, round(one.speed / RPM, 9)) for one in found]
    assert told == [("m/1x", 1, 600), ("m/2x", 1, 300), ("m/2x", 2, 900)]
    assert all(one.at_nominal for one in found)
    assert [edge / RPM for edge in found[0].speeds] == pytest.approx([540, 660])
    assert {(one.seconds, one.cycles, one.quasi_steady) for one in found} == {(None, None, None)}


def test_a_mode_passed_only_at_some_values_is_listed():
    (found,) = passages(ORDERS[:1], MODES[1:2], 1700 * RPM)
    assert found.speeds[0] < 1700 * RPM < found.speed
    assert not found.at_nominal
    assert passages(ORDERS[:1], MODES[1:2], 1619 * RPM) == ()


def test_time_and_cycles_in_the_half_power_band():
    """Closed form: the order rises by 2 x 60 rpm/s = 2 Hz/s through a band 2 zeta f = 1.2 Hz wide."""
    found = passages(ORDERS[1:], MODES[1:2], 1500 * RPM, [0.02], 60 * RPM)[0]
    assert found.damping_ratio == 0.02
    assert found.seconds == pytest.approx(0.6, rel=1e-12)
    assert found.cycles == pytest.approx(18, rel=1e-12)
    assert found.quasi_steady is False


def test_without_damping_no_time_is_told():
    (found,) = passages(ORDERS[:1], MODES[:1], 1500 * RPM, [0.0], 60 * RPM)
    assert (found.damping_ratio, found.seconds, found.cycles, found.quasi_steady) == (None,) * 4


def swept_peak(ratio: float, cycles_per_q: float) -> float:
    """Return the greatest amplitude of one oscillator under a linear sweep, as a share of its steady peak.

    x = A exp(i phase) with phase' rising steadily leaves an equation for the envelope A alone.
    """
    q = 1 / (2 * ratio)
    sweep = 2 * ratio / (2 * math.pi * cycles_per_q * q)
    start = 1 - 6 * ratio

    def envelope(t, state):
        at = start + sweep * t
        a, rate = state
        return [rate, 1 - (2 * ratio + 2j * at) * rate - (1 - at**2 + 2j * ratio * at + 1j * sweep) * a]

    end = 10 * ratio / sweep
    first = 1 / (1 - start**2 + 2j * ratio * start)
    found = solve_ivp(
        envelope, (0, end), np.array([first, 0j]), "DOP853", np.linspace(0, end, 3001), rtol=1e-6, atol=1e-6
    )
    return float(np.abs(found.y[0]).max()) * 2 * ratio * math.sqrt(1 - ratio**2)


@pytest.mark.parametrize(("ratio", "least"), [(0.1, 0.948), (0.05, 0.95)])
def test_the_steady_amplitude_holds_within_five_per_cent_where_said(ratio, least):
    assert least < swept_peak(ratio, SWEPT_CYCLES_PER_Q) < 1


def test_a_fast_passage_stays_below():
    assert swept_peak(0.05, 0.2) < 0.8


def test_cycles_at_the_limit_are_quasi_steady():
    omega, ratio = MODES[0].nominal, 0.05
    q = 1 / (2 * ratio)
    cycles = SWEPT_CYCLES_PER_Q * q
    sweep = 2 * ratio * omega / (cycles * 2 * math.pi / omega)
    assert half_power_seconds(omega, ratio, sweep) == pytest.approx(cycles * 2 * math.pi / omega)
    for haste, steady in ((0.99, True), (1.01, False)):
        (found,) = passages(ORDERS[:1], MODES[:1], 1500 * RPM, [ratio], haste * sweep)
        assert found.quasi_steady is steady
