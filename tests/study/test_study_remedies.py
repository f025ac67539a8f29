"""Absorbers, moved mounts and barred speeds, proven by counts over all tolerances."""

from dataclasses import replace

import pytest

from modalview.advice.absorber import Absorber
from modalview.advice.changes.results import Kind
from modalview.errors import CancelledError, InputError
from modalview.model.parts import LoadCase, LoadChange
from modalview.places import demo_models
from modalview.resonance.results import Verdict
from modalview.store import read_model
from modalview.study import Request, look
from modalview.study.remedies import RemediesRequest, absorber_frequency, remedies

RETROFIT = demo_models() / "6-vacuum-pump-absorber" / "no-absorber.keepclear"
SPRINGS = demo_models() / "2-supply-fan" / "steel-springs.keepclear"
CLEAR = demo_models() / "1-cooling-water-pump" / "part-grout-and-anchors.keepclear"


def _asked(model, **more):
    return remedies(RemediesRequest(Request(model), geometry=False, **more))


def _absorber(ratio, *, damped=False):
    return (Absorber("beam", "y", 1180 / 60, ratio, damped),)


def test_absorber_of_105_kg_is_clear_at_nominal_only():
    (option,) = _asked(read_model(RETROFIT), absorbers=_absorber(0.05)).options
    assert not option.clears
    assert option.worst.verdict is Verdict.NOMINAL_ONLY
    assert "105 kg, 1.6 kN/mm" in option.text
    assert "17.69 Hz" in option.claim
    assert "22.09 Hz" in option.claim


def test_absorber_of_210_kg_clears_and_says_both_ranges():
    model = read_model(RETROFIT)
    (option,) = _asked(model, absorbers=_absorber(0.10)).options
    assert option.clears
    assert option.kind is Kind.ABSORBER
    assert "210 kg, 3.21 kN/mm" in option.text
    assert option.claim.endswith(
        "modes at 16.91 Hz (16.3 to 17.5 over tolerance) and 23.14 Hz (22.3 to 24.0 over tolerance)"
    )
    assert look(Request(option.edit.apply(model))).verdict is Verdict.CLEAR
    assert (option.costs[0].before, option.costs[0].after) == ("2100 kg", "2310 kg")


def test_one_is_offered_where_a_single_speed_excites_a_body():
    found = _asked(read_model(RETROFIT))
    assert [one.text for one in found.options] == [
        "Add an absorber to vacuum pump on floor beam along y: 210 kg, 3.21 kN/mm"
    ]


def test_damped_one_says_what_it_is_worth_at_any_speed():
    (option,) = _asked(read_model(RETROFIT), absorbers=_absorber(0.10, damped=True)).options
    assert "damping ratio 0.185, largest response 4.58 times" in option.claim
    assert any("response" in one for one in option.cautions)


def test_absorber_must_clear_every_load_case():
    model = read_model(RETROFIT)
    heavy = LoadCase(id="full", changes=(LoadChange(part="beam", key="mass", value="2900 kg"),))
    (option,) = _asked(replace(model, load_cases=(heavy,)), absorbers=_absorber(0.10)).options
    assert [(one.case, one.verdict is Verdict.CLEAR) for one in option.effects] == [
        ("", True),
        ("full", False),
    ]
    assert not option.clears


def test_speeds_of_a_range_are_barred_by_one_edit():
    model = read_model(SPRINGS)
    (speeds,) = _asked(model).speeds
    assert speeds.bar_rpm == ((676.0, 1376.0),)
    assert speeds.left_rpm == ((600.0, 676.0), (1376.0, 1800.0))
    after = speeds.edit.apply(model)
    assert [one.from_.text for one in after.machines[0].barred_ranges] == ["676 rpm"]
    assert speeds.edit.revert(after) == model


def test_clear_model_needs_nothing():
    found = _asked(read_model(CLEAR))
    assert (found.options, found.speeds) == ((), ())


def test_it_can_be_stopped():
    model = read_model(SPRINGS)
    with pytest.raises(CancelledError):
        remedies(RemediesRequest(Request(model, cancelled=lambda: True)))


def test_frequency_of_an_absorber_is_the_first_single_one_that_is_not_clear():
    checks = look(Request(read_model(RETROFIT))).checks
    assert absorber_frequency(checks) == pytest.approx(1180 / 60)
    ranged = look(Request(read_model(SPRINGS))).checks
    assert absorber_frequency(ranged) == pytest.approx(20.0)
    with pytest.raises(InputError, match="give a machine its speed"):
        absorber_frequency(())
