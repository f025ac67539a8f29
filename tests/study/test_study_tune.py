"""Values tuned to measured peaks: closed forms recovered, refusals with reasons, ambiguities told."""

import json
import math
from dataclasses import replace

import pytest
from measured_models import HZ, line, oscillators, peak, spring, two_in_line, two_in_line_hz

from modalview.errors import CancelledError, InputError
from modalview.places import demo_models
from modalview.resonance.results import Verdict
from modalview.store import dump_model, parse_model, read_model
from modalview.study.tune import tune
from modalview.study.tune_results import TuneRequest

PUMP = demo_models() / "5-raw-water-vertical-pump"
SOLE = "sole.stiffness.rz"
WIDE = f"{SOLE}=6e7 to 1e9 N m/rad"


@pytest.fixture(scope="module")
def pump():
    """The design of demonstration model 5 with the bump peak that was measured later."""
    measured = read_model(PUMP / "after-bump-test.keepclear").measured
    return replace(read_model(PUMP / "design.keepclear"), measured=measured[:1])


def tuned(model, *values, pairs=()):
    return tune(TuneRequest(model, values, pairs))


def test_bump_peak_of_the_pump_tunes_the_sole(pump):
    found = tuned(pump, WIDE)
    (value,), (hit,) = found.values, found.peaks
    assert value.after == pytest.approx(1.174e8, rel=0.01)
    assert hit.after_hz == pytest.approx(17.0, abs=0.01)
    assert (hit.mode, hit.tuned_mode, hit.others) == (2, 2, ())
    assert [round(mode.frequency_hz, 2) for mode in found.after.modes[:3]] == [6.13, 17.0, 65.08]
    assert found.before.outlook.verdict is Verdict.NOMINAL_ONLY
    assert found.after.outlook.verdict is Verdict.IN_BAND
    assert "Verdict: mode in band (was: clear at nominal only)" in found.sentence


def test_edit_is_one_that_can_be_saved_and_taken_back(pump):
    edit = tuned(pump, WIDE).edit
    after = edit.apply(pump)
    value = after.links[0].stiffness.rz
    assert (value.text, value.status) == ("1.174e8 N m/rad", "measured")
    assert value.source == "tuned to the measured peak bump 1 at 17.0 Hz"
    assert value.tolerance.low.si < value.si < value.tolerance.high.si
    assert parse_model(dump_model(after)) == after
    assert edit.revert(after) == pump
    assert after.links[1] is pump.links[1]


def test_peak_beyond_the_tolerance_is_not_forced(pump):
    found = tuned(pump, SOLE)
    assert found.edit is None
    assert found.values[0].at_end == "low"
    assert "runs into the low end of its range (3.6e8 to 8.4e8 N m/rad)" in found.refused
    assert "22.01 Hz against 17.00 Hz measured" in found.refused
    assert "would be met by soleplate stiffness rz 1.174e8 N m/rad" in found.refused


def test_without_values_each_is_tried_alone(pump):
    found = tuned(pump)
    assert found.edit is None
    first = found.alone[0]
    assert (first.label, first.met, first.at_end) == ("soleplate stiffness rz", False, True)
    assert first.needed == pytest.approx(1.174e8, rel=1e-3)
    assert next(one for one in found.alone if one.label == "wet column mass").needed is None
    assert found.sentence.startswith("No value alone meets the peaks within its range.")


def test_five_values_from_two_peaks_are_refused():
    measured = read_model(PUMP / "after-bump-test.keepclear").measured
    model = replace(read_model(PUMP / "design.keepclear"), measured=measured)
    found = tuned(model, SOLE, "sole.stiffness.x", "flange.stiffness.x", "motor.mass", "head.mass")
    assert found.edit is None
    assert found.refused.startswith("2 peaks determine at most 2 values, and 5 are chosen")
    assert "the peaks tell most of sole.stiffness.rz" in found.refused
    told = [one.told for one in found.combinations]
    assert told == ["determined", "hardly determined"] + 3 * ["not determined"]


def test_one_mass_on_one_spring():
    found = tuned(oscillators([10.0], [peak("p", 8.0, "a", "0.05 Hz")]), "ka")
    (value,) = found.values
    exact = (HZ * 8.0) ** 2
    assert value.after == pytest.approx(exact, rel=2e-4)
    # k = m (2 pi f)^2: the logarithm of k moves twice that of f.
    width = 1.959964 * 2 * 0.05 / 8.0
    ends = (exact * math.exp(-width), exact * math.exp(width))
    assert value.interval == pytest.approx(ends, rel=1e-6)
    assert value.with_others == pytest.approx(ends, rel=1e-6)


def test_other_tolerances_widen_the_interval():
    model = line({"a": 1.0}, [spring("k", "a", "g", 4000.0)], [peak("p", 9.0, "a", "0.01 Hz")], "5 %")
    (value,) = tuned(model, "k").values
    # The same frequency belongs to any k/m: k carries the whole range of m.
    widened = math.log(value.with_others[1] / value.interval[1])
    assert widened == pytest.approx(math.log(1.05 / 0.95) / 2, rel=1e-9)


@pytest.mark.parametrize(("k1", "k2"), [(900.0, 1500.0), (2500.0, 700.0), (1e3, 1e3)])
def test_two_springs_from_two_peaks(k1, k2):
    low, high = two_in_line_hz(k1, k2)
    peaks = [peak("p1", low, "b", "1e-6 Hz"), peak("p2", high, "b", "1e-6 Hz")]
    found = tuned(two_in_line(1.3 * k1, 0.8 * k2, peaks), "k1", "k2")
    assert [one.after for one in found.values] == pytest.approx([k1, k2], rel=1e-7)
    assert [one.told for one in found.combinations] == 2 * ["determined"]
    assert max(abs(one.missed_by) for one in found.peaks) < 1e-2


def test_second_answer_of_two_springs_is_told():
    """Closed form: k1 = 2 k2' and k2 = k1' / 2 have the same two frequencies."""
    k1, k2 = 900.0, 1500.0
    low, high = two_in_line_hz(k1, k2)
    peaks = [peak("p1", low, "b", "0.001 Hz"), peak("p2", high, "b", "0.001 Hz")]
    found = tuned(two_in_line(1.1 * k1, k2, peaks), "k1=500 to 5000 N/m", "k2=200 to 3000 N/m")
    assert [one.after for one in found.values] == pytest.approx([k1, k2], rel=1e-3)
    (other,) = found.otherwise
    assert other.label == "other values"
    assert [si for _, si in other.values] == pytest.approx([2 * k2, k1 / 2], rel=1e-3)
    assert "Other values, or another pairing, meet the peaks as well" in found.sentence


def test_two_springs_side_by_side_cannot_be_told_apart():
    springs = [spring("k1", "a", "g", 2000.0), spring("k2", "a", "g", 2000.0), spring("k3", "b", "a", 900.0)]
    peaks = [peak("p1", 3.4, "a"), peak("p2", 11.0, "a")]
    found = tuned(line({"a": 1.0, "b": 1.0}, springs, peaks), "k1", "k2")
    assert found.edit is None
    assert "cannot tell k1.stiffness up with k2.stiffness down" in found.refused
    assert [one.told for one in found.combinations] == ["determined", "not determined"]


def test_value_that_moves_no_peak_is_told():
    found = tuned(oscillators([10.0, 20.0], [peak("p", 9.0, "a")]), "kb")
    assert found.refused.startswith("no peak is moved by kb.stiffness")


def test_mode_is_followed_past_another():
    """Two oscillators that do not touch: the one measured comes down past the other and is mode 1 then."""
    found = tuned(oscillators([10.0, 12.0], [peak("p", 8.0, "b")]), "kb")
    (hit,) = found.peaks
    assert (hit.mode, hit.tuned_mode) == (2, 1)
    assert hit.after_hz == pytest.approx(8.0, abs=1e-3)
    assert found.values[0].after == pytest.approx((HZ * 8.0) ** 2, rel=2e-4)


def test_peak_without_point_between_two_modes_is_ambiguous():
    model = oscillators([10.0, 12.0], [peak("p", 10.9)])
    found = tuned(model)
    (hit,) = found.peaks
    assert (hit.mode, hit.others) == (1, (2,))
    assert "has no point and direction" in hit.reason
    chosen = tuned(model, "ka", pairs=(("p", 1),))
    assert (chosen.peaks[0].wanted, chosen.peaks[0].others) == (True, ())


def cantilever(hertz):
    """Return a body of 50 kg on a steel pole, with a peak that names no point."""
    tree = {
        "format": "keepclear",
        "version": 1,
        "motion": "plane",
        "bodies": [{"id": "top", "mass": "50 kg", "inertia": "4 kg m2", "position": ["0 m", "2 m"]}],
        "supports": [{"id": "g", "position": ["0 m", "0 m"]}],
        "links": [
            {
                "id": "pole",
                "kind": "beam",
                "from": {"support": "g"},
                "to": {"body": "top"},
                "E": {"value": "210 GPa", "tolerance": "5 %"},
                "I": "4e6 mm4",
                "A": "2000 mm2",
            }
        ],
        "measured": [peak("p", hertz)],
    }
    return parse_model(json.dumps(tree))


def test_other_pairing_that_fits_as_well_is_told():
    """Every frequency of a mass on a cantilever goes with the root of E: any mode can be brought anywhere."""
    modes = tuned(cantilever(1.0)).before.raw.frequency_hz
    found = tuned(cantilever(0.97 * math.sqrt(modes[0] * modes[1])), "pole.E=1 to 100000 GPa")
    other = found.otherwise[0]
    assert other.label == "p as mode 2"
    assert other.met
    assert "another pairing, meet the peaks as well" in found.sentence


def test_missed_peak_is_told_with_its_measure():
    """One spring cannot bring both modes where they were measured."""
    low, high = two_in_line_hz(1000.0, 1000.0)
    peaks = [peak("p1", low, "b", "0.01 Hz"), peak("p2", 1.1 * high, "b", "0.01 Hz")]
    found = tuned(two_in_line(1000.0, 1000.0, peaks), "k1")
    assert found.edit is not None
    assert "is missed" in found.sentence
    assert "another value is off" in found.sentence


def test_values_as_typed_may_meet_the_peaks_already():
    found = tuned(oscillators([10.0], [peak("p", 10.05, "a")]))
    assert found.sentence == "The peaks are met by the values as typed: nothing needs tuning."


def test_uncertainty_that_is_missing_is_assumed_and_told():
    found = tuned(oscillators([10.0], [peak("p", 9.0, "a", None)]), "ka")
    assert found.peaks[0].uncertainty_hz == pytest.approx(0.18)
    assert "No uncertainty is given for p: 2 % of the frequency is taken." in found.notes


@pytest.mark.parametrize(
    ("values", "told"),
    [
        (("kx",), 'There is no value "kx". There are a.mass, ka.stiffness.'),
        (("ka", "ka.stiffness"), "ka.stiffness is chosen twice"),
        (("a",), "a.mass has no tolerance: give the range"),
        (("ka=3",), '"3" is no range; write "ka.stiffness=LOW to HIGH"'),
        (("ka=5 to 2 kN/m",), "must rise from low to high"),
        (("ka=0 to 2 kN/m",), "starts above zero"),
    ],
)
def test_values_that_cannot_be_chosen(values, told):
    with pytest.raises(InputError, match=told.replace("(", r"\(").replace(")", r"\)")):
        tuned(oscillators([10.0], [peak("p", 9.0, "a")]), *values)


def test_model_without_peaks_and_pairs_that_do_not_exist():
    with pytest.raises(InputError, match="no measured peaks"):
        tuned(oscillators([10.0], []), "ka")
    model = oscillators([10.0], [peak("p", 9.0, "a")])
    with pytest.raises(InputError, match=r'no measured peak "q"'):
        tuned(model, "ka", pairs=(("q", 1),))
    with pytest.raises(InputError, match="mode 2 is none of the elastic modes 1 to 1"):
        tuned(model, "ka", pairs=(("p", 2),))


def test_cancel_stops_it():
    model = oscillators([10.0], [peak("p", 9.0, "a")])
    with pytest.raises(CancelledError):
        tune(TuneRequest(model, ("ka",), cancelled=lambda: True))
