"""Damped modes as they are shown: kinds, names, what is ignored and said so."""

import json
import sys
from pathlib import Path

import numpy as np
import pytest

from modalview.errors import CancelledError
from modalview.store import parse_model
from modalview.study import Request, solve
from modalview.study import damped as study_damped
from modalview.study.damped import UNDAMPED_VERDICT, damped, damped_regions

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import damped_models as made

MASSES = [made.mass("motor", 2.0), made.mass("pump", 3.0)]
SPRINGS = [made.spring("k1", "motor", "g", 400.0), made.spring("k2", "motor", "pump", 300.0)]
LIGHT = [made.dashpot("c", "motor", "pump", 2.0)]


def found(bodies, links, **more):
    return damped(Request(parse_model(made.line(bodies, links, **more))))


def test_with_dashpots():
    result = found(MASSES, SPRINGS + LIGHT)
    assert result.source == "dashpots"
    assert [mode.kind for mode in result.modes] == ["oscillating", "oscillating"]
    assert [mode.name for mode in result.modes] == ["all in step", "motor against pump"]
    assert result.notes == (UNDAMPED_VERDICT,)
    assert result.evidence[0] == "4 roots, as many as the structure has"
    first = result.modes[0]
    assert first.root.real == pytest.approx(-first.decay_per_s)
    assert first.root.imag == pytest.approx(2 * np.pi * first.damped_hz)
    assert first.time_constant_s == pytest.approx(1 / first.decay_per_s)
    assert not first.overdamped
    assert first.motion.shape == (2, 6)
    assert np.abs(first.motion).max() == pytest.approx(1.0)
    assert not first.motion.flags.writeable


def test_the_motion_carries_its_phase():
    """x(t) = Re(motion exp(root t)) satisfies the equation of motion of each body."""
    result = found(MASSES, SPRINGS + LIGHT)
    for mode in result.modes:
        motor, pump = mode.motion[:, 1]
        s = mode.root
        assert abs(2 * s * s * motor + 400 * motor + (300 + 2 * s) * (motor - pump)) < 1e-10
        assert abs(3 * s * s * pump + (300 + 2 * s) * (pump - motor)) < 1e-10
        assert abs((pump / motor).imag) > 1e-4


def test_overdamped_and_single_decays_are_told_apart():
    bodies = [made.mass("a", 1.0), made.mass("j", 0.0), made.mass("b", 1.0)]
    links = [
        made.spring("k", "a", "g", 4.0),
        made.dashpot("c", "a", "g", 5.0),
        made.spring("l", "b", "g", 9.0),
        made.spring("m", "b", "j", 9.0),
        made.dashpot("d", "j", "g", 1.0),
    ]
    result = found(bodies, links)
    told = {mode.kind: mode for mode in result.modes}
    assert sorted(mode.kind for mode in result.modes) == ["decay", "oscillating", "overdamped", "overdamped"]
    slow = told["overdamped"]
    assert slow.damping_ratio == pytest.approx(1.25)
    assert result.modes[slow.partner - 1].partner == slow.number
    assert told["decay"].damping_ratio is None
    assert told["decay"].natural_hz is None
    assert told["decay"].overdamped
    assert told["decay"].name.startswith("decay: ")


def test_model_damping_is_ignored_beside_dashpots_and_that_is_said():
    result = found(MASSES, SPRINGS + LIGHT, damping={"ratio": "2 %"})
    assert "is ignored: the model has dashpots" in result.notes[0]


def test_loss_factors_are_said_to_be_elsewhere():
    links = [{**SPRINGS[0], "loss_factor": "10 %"}, SPRINGS[1]]
    result = found(MASSES, links, damping={"ratio": "2 %"})
    assert result.source == "none"
    assert result.modes == ()
    assert "is ignored: the model has loss factors" in result.notes[0]
    assert "Loss factors are not in these roots" in result.notes[1]


def test_one_ratio_for_all_modes():
    result = found(MASSES, SPRINGS, damping={"ratio": "2 %"})
    assert result.source == "model damping"
    assert [mode.damping_ratio for mode in result.modes] == [0.02, 0.02]
    assert [mode.number for mode in result.modes] == [1, 2]


def test_proportional_damping_equals_its_dashpots():
    alpha, beta = 0.4, 0.002
    given = found(MASSES, SPRINGS, damping={"alpha": f"{alpha} 1/s", "beta": f"{beta} s"})
    dashpots = [
        made.dashpot("a1", "motor", "g", alpha * 2),
        made.dashpot("a2", "pump", "g", alpha * 3),
        made.dashpot("b1", "motor", "g", beta * 400),
        made.dashpot("b2", "motor", "pump", beta * 300),
    ]
    built = found(MASSES, SPRINGS + dashpots)
    for one, other in zip(given.modes, built.modes, strict=True):
        assert one.root == pytest.approx(other.root, rel=1e-12)
        assert one.log_decrement == pytest.approx(other.log_decrement, rel=1e-12)
        assert one.name == other.name


def test_proportional_damping_beyond_critical_is_told_by_its_slow_rate():
    result = found(MASSES[:1], SPRINGS[:1], damping={"beta": "1 s"})
    (mode,) = result.modes
    omega = np.sqrt(200.0)
    assert mode.kind == "overdamped"
    assert mode.damping_ratio == pytest.approx(omega / 2)
    assert mode.root == pytest.approx(np.roots([1.0, omega**2, omega**2]).max())


def test_without_any_damping():
    result = found(MASSES, SPRINGS)
    assert (result.source, result.modes, result.notes, result.evidence) == ("none", (), (), ())
    assert damped_regions(result.outlook) is None


def test_a_free_model_tells_its_zero_roots():
    result = found(MASSES, SPRINGS[1:] + LIGHT)
    assert result.modes[0].kind == "rigid-body"
    assert result.modes[0].time_constant_s is None
    assert "2 of them at 0" in result.evidence[0]


def test_a_mode_that_no_dashpot_moves_is_told():
    bodies = [made.mass("a", 1.0), made.mass("b", 1.0), made.mass("c", 1.0)]
    links = [
        made.spring("k", "a", "b", 100.0),
        made.spring("l", "b", "c", 100.0),
        made.spring("m", "b", "g", 50.0),
        made.dashpot("d", "b", "g", 3.0),
    ]
    assert "1 oscillation is not damped by any dashpot" in found(bodies, links).evidence


def test_a_solution_at_hand_is_used():
    model = parse_model(made.line(MASSES, SPRINGS, damping={"ratio": "2 %"}))
    solution = solve(Request(model))
    assert damped(Request(model), solution).outlook is solution.outlook


def test_too_many_roots_do_not_take_the_modes_away(monkeypatch):
    monkeypatch.setattr(study_damped, "LARGEST", 3)
    result = found(MASSES, SPRINGS + LIGHT)
    assert result.modes == ()
    assert result.evidence == ("4 damped roots, none listed: they are found up to 3",)


def test_roots_that_cannot_be_computed_do_not_take_the_modes_away():
    beyond_all_measure = [
        {**link, **({"damping": "1e30 N s/m"} if "damping" in link else {})} for link in LIGHT
    ]
    result = found(MASSES, SPRINGS + beyond_all_measure)
    assert (result.raw, result.modes) == (None, ())
    assert result.evidence[0].startswith("4 damped roots, none listed: A root of exactly zero")


def test_cancel():
    model = parse_model(made.line(MASSES, SPRINGS + LIGHT))
    solution = solve(Request(model))
    with pytest.raises(CancelledError):
        damped(Request(model, cancelled=lambda: True), solution)


def test_turning_the_plane_changes_no_root():
    def model(a, b):
        bodies = [{"id": "m", "mass": "4 kg", "inertia": "2 kg m2", "position": ["0 m", "0 m"]}]
        ends = {"from": {"body": "m", "offset": [f"{a} m", f"{b} m"]}, "to": {"support": "g"}}
        axes = {"axes": {"x": [a, b], "y": [-b, a]}}
        mount = {
            "id": "k",
            "kind": "mount",
            **ends,
            **axes,
            "stiffness": {"x": "900 N/m", "y": "500 N/m", "rz": "300 N m/rad"},
            "damping": {"x": "3 N s/m", "rz": "2 N m s/rad"},
        }
        return json.dumps(
            {
                "format": "keepclear",
                "version": 1,
                "title": "turned",
                "motion": "plane",
                "bodies": bodies,
                "supports": [{"id": "g", "position": [f"{2 * a} m", f"{2 * b} m"]}],
                "links": [mount],
            }
        )

    here, there = (damped(Request(parse_model(model(a, b)))) for a, b in ((1.0, 0.0), (0.6, 0.8)))
    assert here.raw.roots == pytest.approx(there.raw.roots, rel=1e-12)
