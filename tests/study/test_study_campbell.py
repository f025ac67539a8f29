"""The speeds of a machine against its modes: bank case I16, and agreement with checks at single speeds."""

import json
from dataclasses import replace
from functools import cache
from pathlib import Path

import pytest

from modalview.errors import InputError
from modalview.model.parts import SpeedRange
from modalview.model.values import Entry
from modalview.places import demo_models
from modalview.resonance.results import Verdict
from modalview.resonance.speedruns import RPM, State
from modalview.store import parse_model, read_model
from modalview.study import Request, look, solve
from modalview.study.campbell import campbell, is_left

BANK = Path(__file__).resolve().parents[1] / "reference" / "checks.json"
I16 = next(case for case in json.loads(BANK.read_text(encoding="utf-8")) if case["id"] == "I16")
HZ = 6.283185307179586


def text(natural, machine, tolerance="0 %"):
    """Write one mass on its own spring for each natural frequency, Hz."""
    bodies = [{"id": f"m{n}", "mass": "1 kg"} for n in range(len(natural))]
    links = [
        {
            "id": f"k{n}",
            "kind": "spring",
            "from": {"body": f"m{n}"},
            "to": {"support": "ground"},
            "stiffness": {"value": f"{(HZ * f) ** 2!r} N/m", "tolerance": tolerance},
        }
        for n, f in enumerate(natural)
    ]
    tree = {"format": "keepclear", "version": 1, "motion": "single axis", "bodies": bodies, "links": links}
    return json.dumps({**tree, "supports": [{"id": "ground"}], "machines": [{"id": "fan", **machine}]})


def diagram(natural, machine, tolerance="0 %"):
    (found,) = campbell(solve(Request(parse_model(text(natural, machine, tolerance)))))
    return found


def runs(found):
    return [(one.run.low, one.run.high, str(one.run.state)) for one in found.runs]


def order(number, margin="20 %"):
    return {"id": f"{number}x", "order": number, "margin": margin}


# --- I16, "Interference diagram: crossings and clear bands"; common practice, no source -------------------


@cache
def of_the_bank():
    """Keep the excitation out of 0.8 to 1.2 of the mode: margins 1/0.8 - 1 above and 1 - 1/1.2 below it."""
    a, b = I16["inputs"]["keep_out"]
    margin = {"below": f"{100 * (1 - 1 / b)!r} %", "above": f"{100 * (1 / a - 1)!r} %"}
    low, high = I16["inputs"]["speed_range"]["value"]
    machine = {
        "speed": {"from": f"{low} rpm", "to": f"{high} rpm"},
        "excitations": [order(number, margin) for number in I16["inputs"]["orders"]],
    }
    return diagram(I16["inputs"]["natural"]["value"], machine)


def wanted(name):
    return next(one["value"] for one in I16["expected"] if one["name"] == name)


def test_i16_crossing_speeds():
    found = of_the_bank()
    low, high = found.speeds_rpm
    inside = [one.speed / RPM for one in found.meetings if low <= one.speed / RPM <= high]
    assert inside == pytest.approx(wanted("crossing_speeds"), rel=1e-9)


def test_i16_bands():
    """Exact ends of what is met: 1116 and 1128 rpm. What is told is rounded outward, by 1 rpm at most."""
    found = of_the_bank()
    ends = sorted(edge / RPM for one in found.meetings for edge in one.reach)
    for [low, high] in wanted("clear_bands"):
        assert min(abs(end - low) for end in ends) < 1e-9
        assert min(abs(end - high) for end in ends) < 1e-9
    assert runs(found) == [(600, 1117, "met"), (1117, 1127, "left"), (1127, 1800, "met")]
    assert [is_left(one) for one in found.runs] == [False, True, False]


def test_i16_trap_a_band_reaches_in_from_beyond_the_range():
    """Order 1 meets 31 Hz only at 1860 rpm, yet its band holds everything from 1488 rpm."""
    last = of_the_bank().runs[-1].run
    (beyond,) = [one for one in last.meetings if one.check == "fan/1x" and one.mode == 2]
    assert beyond.speed / RPM == pytest.approx(1860)
    assert beyond.reach[0] / RPM == pytest.approx(1488)


# --- agreement with the checks ----------------------------------------------------------------------------

DEMOS = sorted(demo_models().rglob("*.keepclear"))


def at_speed(model, machine, rpm):
    orders = tuple(one for one in machine.excitations if one.order is not None)
    running = replace(machine, speed=Entry(f"{rpm!r} rpm", rpm * RPM), excitations=orders)
    return look(Request(replace(model, machines=(running,)))).verdict


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: path.stem)
def test_a_check_at_a_speed_says_what_the_table_says(path):
    """Clear inside every run that is left; not clear where an order is said to meet a mode."""
    model = read_model(path)
    (found,) = campbell(solve(Request(model)))
    for one in found.runs:
        low, high = one.run.low, one.run.high
        if is_left(one):
            assert {at_speed(model, found.machine, rpm) for rpm in (low, (low + high) / 2, high)} == {
                Verdict.CLEAR
            }
        for meeting in one.run.meetings[:2]:
            middle = sum(meeting.reach) / 2 / RPM
            if low < middle < high:
                assert at_speed(model, found.machine, middle) is not Verdict.CLEAR


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: path.stem)
def test_a_machine_is_judged_as_its_checks_are(path):
    solution = solve(Request(read_model(path)))
    (found,) = campbell(solution)
    assert found.verdict is solution.outlook.verdict


def test_what_is_left_is_proven_by_counts():
    found = diagram(
        [20.0], {"speed": {"from": "600 rpm", "to": "1800 rpm"}, "excitations": [order(1)]}, "10 %"
    )
    assert [(is_left(one), len(one.checks)) for one in found.runs] == [(True, 1), (False, 0), (True, 1)]
    assert all(check.evidence for one in found.runs for check in one.checks)
    assert [one.wording for one in found.runs] == [
        "clear (1 value taken as exact)",
        "mode in band",
        "clear in this model (1 value taken as exact)",
    ]
    left = sum(one.run.high - one.run.low for one in found.runs if is_left(one))
    assert found.left_rpm == left
    assert (
        f"of the 1200 rpm from 600 to 1800 rpm are clear of every order: 600 to {found.runs[0].run.high:g}"
        in (found.sentence)
    )


def test_a_run_met_over_tolerance_alone():
    machine = {"speed": {"from": "1000 rpm", "to": "1010 rpm"}, "excitations": [order(1, "1 %")]}
    (one,) = diagram([17.5], machine, "10 %").runs
    assert one.verdict is Verdict.NOMINAL_ONLY


def test_barred_ranges_of_the_user_leave_the_rest():
    machine = {
        "speed": {"from": "600 rpm", "to": "1800 rpm"},
        "barred_ranges": [{"from": "900 rpm", "to": "1600 rpm"}],
        "excitations": [order(1)],
    }
    found = diagram([20.0], machine)
    assert runs(found) == [(600, 900, "left"), (900, 1600, "barred"), (1600, 1800, "left")]
    assert found.verdict is Verdict.CLEAR
    machine["barred_ranges"] = [{"from": "1100 rpm", "to": "1600 rpm"}]
    assert diagram([20.0], machine).verdict is Verdict.IN_BAND


def test_a_fixed_frequency_holds_at_every_speed():
    line = {"id": "line", "frequency": "20 Hz", "margin": "10 %"}
    machine = {"speed": {"from": "1600 rpm", "to": "1800 rpm"}, "excitations": [order(1), line]}
    found = diagram([20.0], machine)
    assert [str(one.run.state) for one in found.runs] == ["left"]
    assert found.verdict is Verdict.IN_BAND
    assert "20 Hz: mode in band, at every speed." in found.sentence


def test_the_surroundings_of_a_single_speed():
    found = diagram([20.0], {"speed": "1100 rpm", "excitations": [order(1)]})
    assert found.speeds_rpm == (1100, 1100)
    assert found.considered_rpm == (550, 1375)
    assert (
        found.sentence
        == "fan: 1100 rpm is not clear of every order; the nearest clear speeds are up to 999 rpm."
    )
    assert diagram([20.0], {"speed": "990 rpm", "excitations": [order(1)]}).sentence == (
        "fan: 990 rpm is clear of every order, as are the speeds from 495 to 999 rpm."
    )


def test_orders_of_another_body_count_through_the_gear():
    """At 4.2 to 1 the compressor's 1x passes mode 3 (87.73 Hz) at 1253 rpm of the motor."""
    path = demo_models() / "3-air-compressor-train" / "as-built.keepclear"
    (found,) = campbell(solve(Request(read_model(path))))
    (line,) = [one for one in found.lines if one.label == "1× compressor shaft"]
    assert (line.order, line.rate) == (1, pytest.approx(4.2, rel=1e-15))
    (met,) = [one for one in found.meetings if one.label == line.label and one.mode == 3]
    assert met.speed / RPM == pytest.approx(87.73 * 60 / 4.2, rel=1e-4)


def test_a_machine_without_speed_or_orders_has_no_diagram():
    solution = solve(Request(parse_model(text([20.0], {"speed": "900 rpm"}))))
    assert campbell(solution) == ()


def test_a_model_with_too_many_modes_is_refused(monkeypatch):
    monkeypatch.setattr("modalview.study.campbell.LARGEST", 0)
    with pytest.raises(InputError, match="1 modes; speeds are held against all of them, up to 0"):
        diagram([20.0], {"speed": "900 rpm", "excitations": [order(1)]})


def test_a_speed_range_that_is_one_speed():
    machine = {"speed": {"from": "900 rpm", "to": "900 rpm"}, "excitations": [order(1)]}
    found = diagram([20.0], machine)
    assert isinstance(found.machine.speed, SpeedRange)
    assert found.considered_rpm == (450, 1125)
    assert {one.run.state for one in found.runs} == {State.LEFT, State.MET}
