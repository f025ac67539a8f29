"""The changes that the demonstration models tell of are found, and do what they say."""

import json
import math
from dataclasses import replace
from functools import cache

import pytest

from modalview.advice.changes.ceilings import reach
from modalview.advice.changes.edges import gates_of
from modalview.advice.changes.least import Search
from modalview.advice.changes.options import base_of
from modalview.advice.changes.results import Found, Kind
from modalview.advice.changes.several import least_of
from modalview.advice.changes.single import value_windows
from modalview.advice.changes.values import variable_named, variables_named
from modalview.model.parts import VaryLimits
from modalview.places import demo_models
from modalview.resonance.results import Verdict
from modalview.store import parse_model, read_model
from modalview.study import Request, look, solve
from modalview.study.changes import Changes, ChangesRequest, Place, changes

PUMP, TRAIN, VERTICAL = (
    "1-cooling-water-pump/as-built",
    "3-air-compressor-train/as-built",
    "5-raw-water-vertical-pump/design",
)
SAID = 1e-3  # what an option says is true within 0.1 %


def model_of(file):
    return read_model(demo_models() / f"{file}.keepclear")


def pump_without_limits(tolerance):
    tree = json.loads((demo_models() / f"{PUMP}.keepclear").read_text(encoding="utf-8"))
    base_support = tree["links"][2]
    base_support.pop("vary_limits", None)
    base_support["stiffness"]["tolerance"] = tolerance
    return parse_model(json.dumps(tree))


def windows_of(model, value):
    base = base_of(model)
    return value_windows(
        base, gates_of(base.states), variable_named(base.states[0].assembly, value), None
    ).windows


@cache
def found(file) -> Changes:
    return changes(ChangesRequest(Request(model_of(file))))


def test_the_base_support_within_15_percent_has_three_windows():
    below, middle, above = windows_of(pump_without_limits("15 %"), "k3.stiffness")
    assert (below.low, below.high) == (0.0, pytest.approx(9.36e7, rel=2e-3))
    assert (middle.low, middle.high) == pytest.approx((2.71e8, 4.72e8), rel=2e-3)
    assert (above.low, above.high) == (pytest.approx(4.57e9, rel=2e-3), math.inf)
    assert all(one.proven for one in (below, middle, above))
    assert middle.bound_by == ("pump set/1x, soft-heavy", "pump set/2x, stiff-light")
    assert [one.text for one in (below, middle, above)] == [
        "up to 93.71 kN/mm",
        "from 270.7 kN/mm to 472.5 kN/mm",
        "from 4573 kN/mm upward",
    ]


def test_the_base_support_within_25_percent_has_a_narrower_middle_window():
    middle = windows_of(pump_without_limits("25 %"), "k3.stiffness")[1]
    assert (middle.low, middle.high) == pytest.approx((3.07e8, 4.35e8), rel=2e-3)


def test_the_limits_of_the_user_cut_the_windows():
    below, _ = windows_of(model_of(PUMP), "k3.stiffness")
    assert (below.low, below.bound_by[0]) == (5e7, "your limit")


def test_rigid_pedestals_lift_mode_1_to_54_hz_only():
    base = base_of(model_of(PUMP))
    both = variable_named(base.states[0].assembly, "k1.stiffness+k2.stiffness")
    assert reach(base.states[0], both).at_infinity[0] == pytest.approx(54.0, abs=0.01)
    assert reach(base.states[0], both).at_infinity[1:].tolist() == [math.inf, math.inf]


def two_couplings(**limits):
    """Return the least change of the two couplings, some of which may only move within limits."""
    model = model_of(TRAIN)
    links = tuple(
        replace(one, vary_limits=VaryLimits(**limits[one.id])) if one.id in limits else one
        for one in model.links
    )
    base = base_of(replace(model, links=links))
    chosen = variables_named(base.states[0].assembly, ("low.stiffness", "high.stiffness"))
    return least_of(base, gates_of(base.states), chosen, Search((1.0, 1.0)))


def test_no_coupling_change_is_smaller_than_the_least_one():
    """The pair the story tells of costs ln 2 + ln (1.9 / 1.4)."""
    least = two_couplings()
    assert least.status is Found.FOUND
    assert least.option.clears
    assert least.amount <= math.log(1.2e6 / 6.0e5) + math.log(1.9e5 / 1.4e5)


def test_a_stiffer_low_speed_coupling_needs_the_softer_high_speed_one_of_the_story():
    least = two_couplings(low={"low": "1.2e6 N m/rad"})
    assert least.status is Found.FOUND
    after = {one.value: one.after_si for one in least.option.changes}
    assert after["low.stiffness"] == 1.2e6
    # 1.4e5 lies in the window; the least change stops at its edge.
    assert 1.4e5 < after["high.stiffness"] < 1.9e5
    assert look(Request(least.option.edit.apply(model_of(TRAIN)))).verdict is Verdict.CLEAR


def test_the_story_s_coupling_lies_in_the_window_that_the_stiffer_one_opens():
    model = model_of("3-air-compressor-train/stiffer-low-speed-coupling")
    assert any(one.low <= 1.4e5 <= one.high for one in windows_of(model, "high.stiffness"))


def test_the_sole_that_explains_the_bump_peak_is_placed():
    asked = ChangesRequest(
        Request(model_of(VERTICAL)),
        values=("sole.stiffness.rz",),
        places=(Place(2, 17.0, "sole.stiffness.rz"),),
        tolerances=False,
    )
    (placed,) = changes(asked).placements
    (change,) = placed.option.changes
    assert change.after_si == pytest.approx(1.174e8, rel=0.01)
    assert placed.option.kind is Kind.PLACED
    after = solve(Request(placed.option.edit.apply(model_of(VERTICAL))))
    assert [one.frequency_hz for one in after.modes[:3]] == pytest.approx([6.13, 17.0, 65.08], abs=0.01)


@pytest.fixture(params=[PUMP, TRAIN, VERTICAL, "6-vacuum-pump-absorber/absorber-105kg"])
def file(request):
    found(request.param)
    return request.param


def test_every_option_solved_again_does_what_it_said(file):
    model = model_of(file)
    options = found(file).options
    assert options
    for option in (*options[:3], options[-1]):
        changed = option.edit.apply(model)
        assert option.edit.revert(changed) == model
        again = solve(Request(changed))
        assert (again.outlook.verdict is Verdict.CLEAR) == option.clears
        for effect, check in zip(option.effects, again.checks, strict=True):
            assert (effect.check, effect.verdict) == (check.band.check, check.verdict)
            assert effect.worst_separation == pytest.approx(check.worst_separation, rel=SAID, abs=SAID)
            mode = next(one for one in again.modes if one.number == effect.nearest_mode)
            assert effect.nearest_hz == pytest.approx(mode.range_hz, rel=SAID)


def test_options_that_clear_come_least_first_and_leave_no_check_behind():
    result = found(TRAIN)
    clearing = [one for one in result.options if one.clears]
    assert [one.amount for one in clearing] == sorted(one.amount for one in clearing)
    assert all(effect.room >= 0 for one in clearing for effect in one.effects)
    assert {one.check for one in clearing[0].effects} == {
        "train/1x low",
        "train/2x low",
        "train/1x high",
        "train/line",
    }


def test_what_is_clear_at_nominal_only_is_proven_by_the_fewest_tolerances():
    narrow = found(VERTICAL).narrowing
    assert narrow.checks == ("pump/1x",)
    assert narrow.possible
    assert narrow.smallest
    (option, *_) = narrow.options
    assert option.clears
    assert {one.value for one in option.changes} == {
        "motor.mass.tolerance",
        "sole.stiffness.rz.tolerance",
        "flange.stiffness.rz.tolerance",
    }
    assert look(Request(option.edit.apply(model_of(VERTICAL)))).verdict is Verdict.CLEAR


def test_a_hundredth_of_a_hertz_is_no_matter_of_tolerances():
    narrow = found("6-vacuum-pump-absorber/absorber-105kg").narrowing
    assert not narrow.possible
    assert not narrow.options
    assert "Change a value" in narrow.sentence


def test_what_is_clear_says_so_and_still_tells_how_far_values_may_move():
    result = found("1-cooling-water-pump/part-grout-and-anchors")
    assert result.clear_now
    assert not result.options
    base_support = next(one for one in result.windows if one.value == "k3.stiffness")
    assert base_support.clear_now
    assert len(base_support.windows) == 3
