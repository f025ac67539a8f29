"""Bands, separations, labels, and what was not checked."""

import math
from dataclasses import replace

import pytest
from oscillators import document, looked, machine, model_of, solved

from modalview.errors import ModelFaultsError
from modalview.resonance.bands import bands
from modalview.resonance.separation import nearest, separation
from modalview.resonance.unchecked import not_checked
from modalview.resonance.wording import margin_text, percent

HZ = 2 * math.pi


def hz(span):
    return pytest.approx(tuple(HZ * edge for edge in span), rel=1e-12)


def band(**told):
    return bands(model_of(document([(10, None)], machine(**told))))[0]


def test_symmetric_margin_about_a_fixed_speed():
    found = band(speed="1500 rpm", margin="20 %", excitations=[{"id": "v", "order": 6}])
    assert found.excitation == hz((150, 150))
    assert found.nominal == found.tolerance == hz((120, 180))


def test_each_side_its_own_margin_over_a_speed_range():
    found = band(speed={"from": "600 rpm", "to": "1800 rpm"}, margin={"below": "10 %", "above": "30 %"})
    assert found.excitation == hz((10, 30))
    assert found.nominal == hz((9, 39))


def test_an_excitation_has_a_margin_of_its_own():
    found = band(excitations=[{"id": "1x", "order": 1, "margin": "5 %"}])
    assert found.nominal == hz((23.75, 26.25))


def test_speed_tolerance_widens_the_tolerance_band_alone():
    found = band(speed_tolerance="10 %")
    assert found.nominal == hz((20, 30))
    assert found.tolerance == hz((25 * 0.9 * 0.8, 25 * 1.1 * 1.2))


def test_fixed_frequencies_are_not_widened_by_the_speed_tolerance():
    found = band(speed_tolerance="10 %", excitations=[{"id": "line", "frequency": "100 Hz"}])
    assert found.nominal == found.tolerance == hz((80, 120))
    assert found.order is None


def test_a_fixed_frequency_needs_no_speed():
    told = machine(excitations=[{"id": "line", "frequency": "100 Hz"}])
    del told["speed"]
    assert bands(model_of(document([(10, None)], told)))[0].nominal == hz((80, 120))


def test_a_range_from_standstill():
    found = solved(document([(5, None)], machine(speed={"from": "0 rpm", "to": "1500 rpm"}))).checks[0]
    assert found.band.nominal == hz((0, 30))
    assert (found.inside, found.separation, found.worst_separation) == (1, 0, 0)


@pytest.mark.parametrize(
    ("frequency", "label"),
    [
        ("100 Hz", "100 Hz"),
        ("50 Hz", "50 Hz"),
        ("1000 Hz", "1000 Hz"),
        ("12000 cpm", "200 Hz"),
        ("16.667 Hz", "16.67 Hz"),
        ("30 kHz", "30000 Hz"),
    ],
)
def test_label_of_a_fixed_frequency(frequency, label):
    assert band(excitations=[{"id": "line", "frequency": frequency}]).label == label


@pytest.mark.parametrize(
    ("order", "label"), [(1, "1×"), (0.5, "0.5×"), (7, "7×"), (1.25, "1.25×"), (2e6, "2e6×")]
)
def test_label_of_an_order(order, label):
    assert band(excitations=[{"id": "o", "order": order}]).label == label
    assert band(excitations=[{"id": "o", "order": order, "name": "vane pass"}]).label == f"{label} vane pass"


class TestSpeedOfAnotherBody:
    def train(self, **excitation):
        told = machine(speed="1485 rpm", on="motor", excitations=[{"id": "1x", "order": 1, **excitation}])
        given = document([(10, None)], told) | {"motion": "shaft train"}
        names = ("motor", "wheel", "pinion", "compressor")
        given["bodies"] = [{"id": name, "inertia": "1 kg m2"} for name in (*names, "alone", "other")]
        shaft = {"kind": "shaft", "stiffness": "1e5 N m/rad"}
        given["links"] = [
            {"id": "a", "from": {"body": "motor"}, "to": {"body": "wheel"}, **shaft},
            {
                "id": "b",
                "kind": "gear",
                "from": {"body": "wheel"},
                "to": {"body": "pinion"},
                "teeth": [84, 20],
            },
            {"id": "c", "from": {"body": "pinion"}, "to": {"body": "compressor"}, **shaft},
            {"id": "d", "from": {"body": "alone"}, "to": {"body": "other"}, **shaft},
        ]
        return bands(model_of(given))[0]

    @pytest.mark.parametrize(
        ("of", "ratio"), [("compressor", 4.2), ("pinion", 4.2), ("wheel", 1), ("motor", 1)]
    )
    def test_orders_follow_the_gears_without_their_sign(self, of, ratio):
        assert self.train(of=of).excitation == hz((24.75 * ratio, 24.75 * ratio))

    def test_a_body_of_another_train_is_refused_by_name(self):
        with pytest.raises(ModelFaultsError, match="fan/1x: alone is joined to motor by no shaft or gear"):
            self.train(of="alone")


@pytest.mark.parametrize(
    ("mode", "excitation", "expected"),
    [
        ((51.26, 51.26), (49.17, 49.17), 0.042506),
        ((40, 40), (50, 50), -0.2),
        ((8, 8), (10, 30), -0.2),
        ((36, 36), (10, 30), 0.2),
        ((20, 20), (10, 30), 0.0),
        ((44, 58), (50, 50), 0.0),
        ((40, 45), (50, 50), -0.1),
        ((55, 70), (50, 50), 0.1),
        ((0.5, 0.5), (0, 30), 0.0),
    ],
)
def test_separation(mode, excitation, expected):
    assert separation(mode, excitation) == pytest.approx(expected, abs=1e-5)


def test_nearest_is_by_share_of_the_excitation_frequency():
    assert nearest([(1, (40, 40)), (2, (61, 61))], (50, 50)) == (1, pytest.approx(-0.2))
    assert nearest([], (50, 50)) is None


def test_separations_of_a_check():
    # 34 Hz, soft 32.26 Hz, against 25 Hz; with 10 % of speed against 27.5 Hz.
    (found,) = solved(document([(34, "10 %")], machine(speed_tolerance="10 %"))).checks
    assert (found.nearest_mode, found.worst_mode) == (1, 1)
    assert found.separation == pytest.approx(34 / 25 - 1)
    assert found.worst_separation == pytest.approx(34 * math.sqrt(0.9) / 27.5 - 1)


def test_worst_separation_is_that_of_the_mode_that_can_lie_in_the_band():
    # Margins 40 % below, 5 % above: 15 to 26.25 Hz. 27.5 Hz is nearer, but 14.5 Hz reaches the band.
    told = machine(margin={"below": "40 %", "above": "5 %"})
    solution = solved(document([(14.5, "10 %"), (27.5, None)], told))
    (found,) = solution.checks
    assert (found.nearest_mode, found.worst_mode, found.deciding_case) == (2, 1, "stiff-light")
    assert "mode 1 at 14.5 Hz" in solution.sentence


def test_a_mode_in_the_band_is_named_though_another_is_nearer():
    # 15 to 26.25 Hz holds 16 Hz (36 % below); 27.5 Hz is nearer (10 % above) but outside.
    told = machine(margin={"below": "40 %", "above": "5 %"})
    solution = solved(document([(16, None), (27.5, None)], told))
    assert solution.checks[0].nearest_mode == 2
    assert "mode 1 at 16.0 Hz is 36.0 % below" in solution.sentence


class TestNotChecked:
    def test_orders_and_directions(self):
        found = not_checked(model_of(document([(10, None)], machine(name="supply fan"))))
        assert found == (
            "supply fan: orders and frequencies other than 1×",
            "motion across the one axis, and rotation",
            "local modes of the parts: each body is taken as rigid",
        )

    def test_a_machine_without_orders(self):
        given = model_of(document([(10, None)], machine()))
        bare = replace(given, machines=(replace(given.machines[0], excitations=()),))
        assert not_checked(bare)[0] == "fan: no order is listed"
        assert looked(document([(10, None)], machine())).not_checked == not_checked(given)

    def test_held_directions_are_named(self):
        given = document([(10, None)], machine()) | {"motion": "plane"}
        given["bodies"][0] |= {"position": ["0 m", "1 m"], "dof": ["y"], "name": "floor bay"}
        given["supports"][0]["position"] = ["0 m", "0 m"]
        found = not_checked(model_of(given))
        assert "floor bay: its motion x, rz is held still" in found
        assert "motion out of the plane of the drawing" in found


@pytest.mark.parametrize(
    ("margin", "text"), [((0.15, 0.15), "±15 %"), ((0.1, 0.2), "−10 % / +20 %"), ((0.125, 0.125), "±12.5 %")]
)
def test_margin_text(margin, text):
    assert margin_text(margin) == text


@pytest.mark.parametrize(
    ("share", "text"), [(0.0425, "+4.2 %"), (-0.2, "−20.0 %"), (0.0, "0 %"), (-0.0, "0 %")]
)
def test_percent(share, text):
    assert percent(share) == text
