"""Where orders meet modes, and how a range of speeds is divided."""

import math

import pytest

from modalview.eigen.span import ModeSpan
from modalview.resonance.meetings import OrderLine, meetings
from modalview.resonance.speedruns import RPM, State, runs

HZ = 2 * math.pi
MODE = ModeSpan(1, 20 * HZ, 18 * HZ, 22 * HZ)


def line(order=1.0, margin=(0.1, 0.25)):
    return OrderLine(f"m/{order}x", f"{order}×", order, order, 0.0, margin)


def rpm(pair):
    return [edge / RPM for edge in pair]


def test_speeds_of_a_meeting():
    """Closed form, at 2x: 20 Hz is 600 rpm; with 10 % below and 25 % above, f/(2 1.25) to f/(2 0.9)."""
    (found,) = meetings([line(2.0)], [MODE], 5000 * RPM)
    assert found.speed / RPM == pytest.approx(600, rel=1e-14)
    assert rpm(found.over_tolerance) == pytest.approx([540, 660], rel=1e-14)
    assert rpm(found.within_margin) == pytest.approx([480, 600 / 0.9], rel=1e-14)
    assert rpm(found.reach) == pytest.approx([432, 660 / 0.9], rel=1e-14)


def test_the_tolerance_of_the_speed_widens_what_holds_over_tolerances_alone():
    exact, loose = (meetings([line()], [MODE], 5000 * RPM, t)[0] for t in (0.0, 0.02))
    assert loose.within_margin == exact.within_margin
    assert loose.reach[0] == pytest.approx(exact.reach[0] / 1.02)
    assert loose.reach[1] == pytest.approx(exact.reach[1] / 0.98)


def test_fixed_frequencies_meet_at_no_speed_and_far_meetings_are_left_out():
    fixed = OrderLine("m/line", "100 Hz", None, 0.0, 100 * HZ, (0.1, 0.1))
    assert meetings([fixed, line()], [MODE], 800 * RPM) == ()
    assert [one.check for one in meetings([fixed, line()], [MODE], 900 * RPM)] == ["m/1.0x"]


def divided(considered, barred=(), orders=(1.0,)):
    found = meetings([line(order) for order in orders], [MODE], 10000 * RPM)
    return [(run.low, run.high, str(run.state), len(run.meetings)) for run in runs(found, considered, barred)]


def test_ends_of_a_meeting_are_rounded_outward():
    """18 Hz/1.25 is 864 rpm exactly, and 22 Hz/0.9 is 1466.67 rpm: one rpm farther where the end is exact."""
    assert divided((600, 1800)) == [
        (600, 863, "left", 0),
        (863, 1467, "met", 1),
        (1467, 1800, "left", 0),
    ]


def test_low_speeds_are_told_to_finer_steps():
    assert divided((30, 90), orders=(20.0,)) == [
        (30, 43.19, "left", 0),
        (43.19, 73.34, "met", 1),
        (73.34, 90, "left", 0),
    ]


def test_orders_that_meet_in_one_stretch_are_one_run():
    assert divided((300, 1300), orders=(1.0, 2.0)) == [
        (300, 431, "left", 0),
        (431, 734, "met", 1),
        (734, 863, "left", 0),
        (863, 1300, "met", 1),
    ]
    assert divided((300, 1300), orders=(1.0, 1.5)) == [(300, 575, "left", 0), (575, 1300, "met", 2)]


def test_the_users_barred_ranges_go_before_what_meets():
    assert divided((600, 1800), [(900, 1500)]) == [
        (600, 863, "left", 0),
        (863, 900, "met", 1),
        (900, 1500, "barred", 1),
        (1500, 1800, "left", 0),
    ]
    assert divided((600, 800), [(100, 650), (2000, 3000)]) == [(600, 650, "barred", 0), (650, 800, "left", 0)]


@pytest.mark.parametrize(("speed", "state"), [(800.0, State.LEFT), (1000.0, State.MET)])
def test_a_single_speed_is_one_run(speed, state):
    (found,) = runs(meetings([line()], [MODE], 10000 * RPM), (speed, speed))
    assert (found.low, found.high, found.state) == (speed, speed, state)
    assert len(found.meetings) == (state is State.MET)


def test_nothing_to_meet_leaves_all():
    (found,) = runs((), (600.0, 900.0))
    assert found.state is State.LEFT
