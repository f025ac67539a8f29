"""Every verdict with every wording; one oscillator of 1 kg for each mode, so that frequencies are known."""

import math

import pytest
from oscillators import document, looked, machine, nearly_parallel, solved

from modalview.resonance.results import Verdict
from modalview.resonance.verdict import Exactness, worst

EXACT = None
# Band at 1500 rpm = 25 Hz and 20 %: 20 to 30 Hz.


def check(modes, *, mass_tolerance=None, **told):
    return looked(document(modes, machine(**told), mass_tolerance=mass_tolerance)).checks[0]


class TestClear:
    @pytest.mark.parametrize(
        ("tolerances", "mass", "wording"),
        [
            ((None, None), None, "clear (values taken as exact)"),
            (("5 %", None), None, "clear (3 values taken as exact)"),
            (("5 %", None), "2 %", "clear (1 value taken as exact)"),
            (("5 %", "5 %"), "2 %", "clear"),
        ],
    )
    def test_wording_tells_what_was_taken_as_exact(self, tolerances, mass, wording):
        found = check(list(zip((10, 40), tolerances, strict=True)), mass_tolerance=mass)
        assert (found.verdict, found.wording) == (Verdict.CLEAR, wording)
        assert (found.inside, found.possible, found.certain, found.deciding_case) == (0, 0, 0, None)
        assert "proven by counts" in found.reason

    @pytest.mark.parametrize(("tolerance", "suffix"), [(None, " (values taken as exact)"), ("5 %", "")])
    def test_above_every_mode_it_is_clear_in_this_model(self, tolerance, suffix):
        found = check([(5, tolerance), (10, tolerance)], mass_tolerance=tolerance)
        assert found.wording == "clear in this model" + suffix
        assert found.reason == (
            "20.0 to 30.0 Hz (±20 %) lies above every mode of this model; local modes are not modelled"
        )

    def test_below_every_mode_it_is_plainly_clear(self):
        assert check([(40, None)]).wording == "clear (values taken as exact)"


class TestNominalOnly:
    def test_soft_heavy(self):
        # 40 Hz comes down to 40 sqrt(0.55) = 29.66 Hz.
        found = check([(10, None), (40, "45 %")])
        assert (found.verdict, found.deciding_case) == (Verdict.NOMINAL_ONLY, "soft-heavy")
        assert (found.inside, found.possible, found.certain) == (0, 1, 0)
        assert "but the soft-heavy case reaches 20.0 to 30.0 Hz" in found.reason

    def test_stiff_light(self):
        # 19 Hz rises to 19 sqrt(1.2) = 20.8 Hz.
        found = check([(19, "20 %"), (40, None)])
        assert (found.verdict, found.deciding_case) == (Verdict.NOMINAL_ONLY, "stiff-light")

    @pytest.mark.parametrize(("hz", "case"), [(32, "soft-heavy"), (19, "stiff-light")])
    def test_mass_alone(self, hz, case):
        assert check([(hz, None)], mass_tolerance="20 %").deciding_case == case

    def test_just_out_of_reach_stays_clear(self):
        assert check([(40, "43 %")]).verdict is Verdict.CLEAR  # 30.2 Hz

    def test_speed_tolerance_alone_names_no_case(self):
        # 10 %: 18 to 33 Hz holds 32 Hz.
        found = check([(32, None)], speed_tolerance="10 %")
        assert (found.verdict, found.deciding_case) == (Verdict.NOMINAL_ONLY, None)
        assert "but the tolerance of the speed alone reaches" in found.reason

    def test_every_count_that_tells_which_tolerance_reaches_the_band_is_kept_once(self):
        # Band 20 to 30 Hz, widened by the speed to 18 to 33 Hz; 34 Hz comes down to 34 sqrt(0.9) = 32.3 Hz.
        found = check([(34, "10 %")], speed_tolerance="10 %")
        made = [(e.case, e.side, round(e.edge / (2 * math.pi))) for e in found.evidence]
        assert len(set(made)) == len(made)
        assert set(made) == {
            ("soft-heavy", "at most", 33),
            ("stiff-light", "below", 18),
            ("nominal", "at most", 30),
            ("nominal", "below", 20),
            ("soft-heavy", "at most", 30),
            ("stiff-light", "below", 20),
            ("nominal", "at most", 33),
            ("nominal", "below", 18),
        }

    def test_a_case_that_reaches_the_band_is_named_though_the_speed_tolerance_reaches_it_too(self):
        # 32 Hz lies in 18 to 33 Hz already, and soft it is 29.6 Hz: in 20 to 30 Hz without any of it.
        found = check([(32, "15 %")], speed_tolerance="10 %")
        assert (found.verdict, found.deciding_case) == (Verdict.NOMINAL_ONLY, "soft-heavy")
        assert "the soft-heavy case reaches (and so does the tolerance of the speed alone)" in found.reason

    def test_speed_and_value_together_name_the_case(self):
        # 34 Hz is above 33 Hz, soft it is 32.3 Hz: above 30 Hz, below 33 Hz.
        found = check([(34, "10 %")], speed_tolerance="10 %")
        assert (found.verdict, found.deciding_case) == (Verdict.NOMINAL_ONLY, "soft-heavy")
        assert "the soft-heavy case together with the tolerance of the speed reaches" in found.reason
        assert check([(34, "10 %")]).verdict is Verdict.CLEAR
        assert check([(34, None)], speed_tolerance="10 %").verdict is Verdict.CLEAR


class TestInBand:
    @pytest.mark.parametrize(
        ("tolerance", "certain", "ending"), [("10 %", 1, ", at any value within tolerance"), ("60 %", 0, "")]
    )
    def test_certain_says_at_any_value(self, tolerance, certain, ending):
        found = check([(25, tolerance)])
        assert (found.verdict, found.inside, found.certain) == (Verdict.IN_BAND, 1, certain)
        assert found.reason == f"1 mode lies within 20.0 to 30.0 Hz (±20 %){ending}"

    def test_several_modes(self):
        found = check([(22, None), (25, None), (28, None), (40, None)])
        assert (found.inside, found.possible, found.certain) == (3, 3, 3)
        assert found.reason.startswith("3 modes lie within")

    @pytest.mark.parametrize("hz", [20, 30])
    def test_a_mode_on_the_edge_is_inside(self, hz):
        # Edges move outward by the uncertainty of the count.
        assert check([(hz, None)]).verdict is Verdict.IN_BAND

    @pytest.mark.parametrize("hz", [20 * (1 - 1e-5), 30 * (1 + 1e-5)])
    def test_a_mode_past_the_edge_is_not(self, hz):
        assert check([(hz, None)]).verdict is Verdict.CLEAR

    def test_a_speed_tolerance_does_not_put_a_mode_in_the_band(self):
        assert check([(32, None)], speed_tolerance="10 %").inside == 0


class TestUndecided:
    def ladder(self, stiff, machine_speed):
        """A light soft end on a chain of springs ``stiff`` times as stiff, in all of K."""
        given = document([(10, None)] * 4, machine(speed=machine_speed, margin="1 %"))
        soft = (2 * math.pi * 10) ** 2
        given["links"] = [
            given["links"][0],
            *(
                {
                    "id": f"s{i}",
                    "kind": "spring",
                    "from": {"body": f"b{i}"},
                    "to": {"body": f"b{i + 1}"},
                    "stiffness": f"{stiff * soft * (1 + 0.37 * i)!r} N/m",
                }
                for i in range(3)
            ),
        ]
        return given

    @pytest.mark.parametrize("ratio", [1e6, 1e12, 1e14, 1e18])
    def test_stiff_parts_beside_a_soft_one_are_decided(self, ratio):
        # Four kilograms on the soft spring: 5 Hz.
        found = looked(self.ladder(ratio, "300 rpm")).checks[0]
        assert (found.inside, found.undecided) == (1, ())

    def test_an_undecided_count_is_told_and_never_called_clear(self):
        for speed in ("9.55 rpm", "3 rpm"):
            found = looked(nearly_parallel(speed)).checks[0]
            assert found.inside is None
            assert found.verdict is Verdict.IN_BAND
            assert any("nominal" in name for name in found.undecided)
            assert "rounding leaves undecided" in found.reason


class TestExactness:
    @pytest.mark.parametrize(
        ("exact", "values", "words"),
        [
            (0, 4, ""),
            (4, 4, " (values taken as exact)"),
            (1, 4, " (1 value taken as exact)"),
            (2, 4, " (2 values taken as exact)"),
        ],
    )
    def test_words(self, exact, values, words):
        assert Exactness(exact, values).words == words


def test_the_worst_of_several_checks():
    excitations = [{"id": "a", "order": 0.1}, {"id": "b", "order": 1}, {"id": "c", "order": 2}]
    checks = looked(document([(25, None), (61, "5 %")], machine(excitations=excitations))).checks
    assert [c.verdict for c in checks] == [Verdict.CLEAR, Verdict.IN_BAND, Verdict.NOMINAL_ONLY]
    assert worst(checks) is Verdict.IN_BAND
    assert worst(checks[::2]) is Verdict.NOMINAL_ONLY
    assert worst(()) is None


def test_modal_force_never_changes_the_verdict():
    excitation = {"id": "1x", "order": 1, "at": {"body": "b1"}}
    given = document([(25, None), (80, None)], machine(excitations=[excitation]))
    (found,) = solved(given).checks
    assert found.verdict is Verdict.IN_BAND
    assert found.drives[0].drive == "hardly excited"
    assert found.drives[0].share == 0


def test_rigid_body_modes_lie_in_no_band():
    given = document([(25, None), (25, None)], machine(speed={"from": "0 rpm", "to": "60 rpm"}))
    given["links"] = [given["links"][0] | {"to": {"body": "b1"}}]
    (found,) = looked(given).checks
    assert (found.verdict, found.inside, found.below) == (Verdict.CLEAR, 0, 1)
