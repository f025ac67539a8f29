"""Starting points hold what was typed, keep every rule, and have the frequencies of closed forms."""

import math

import pytest

from modalview.errors import ModelFaultsError
from modalview.model.parts import Motion
from modalview.model.rules import faults
from modalview.model.templates import MACHINE_FIELDS, TEMPLATES, build
from modalview.model.values import STARTING
from modalview.store import dump_model, parse_model
from modalview.study import solve
from modalview.study.results import Request

BY_ID = {template.id: template for template in TEMPLATES}


def frequencies(name, **texts):
    return [mode.frequency_hz for mode in solve(Request(build(BY_ID[name], texts))).modes]


def hz(square):
    return math.sqrt(square) / (2 * math.pi)


@pytest.mark.parametrize("template", TEMPLATES, ids=lambda template: template.id)
def test_each_keeps_every_rule_and_reads_back_the_same(template):
    model = build(template, {"speed": "1480 rpm", "margin": "15 %"})
    assert faults(model) == ()
    assert model.motion is template.motion
    assert parse_model(dump_model(model)) == model


def test_what_is_typed_is_given_and_what_is_left_is_not():
    model = build(BY_ID["chain"], {"mass": "250 kg"})
    assert model.bodies[0].mass.text == "250 kg"
    assert model.bodies[0].mass.source is None
    assert model.links[0].stiffness.source == STARTING


def test_a_row_held_at_one_end_has_the_frequencies_of_its_closed_form():
    # omega_r = 2 sqrt(k/m) sin((2r - 1) pi / (2 (2n + 1))): W. Thomson (1988), Theory of Vibration with
    # Applications, difference equations of a chain; from memory.
    n, k, m = 5, 2e6, 80.0
    wanted = [
        hz(4 * k / m * math.sin((2 * r - 1) * math.pi / (2 * (2 * n + 1))) ** 2) for r in range(1, n + 1)
    ]
    typed = {"number": str(n), "mass": "80 kg", "stiffness": "2e6 N/m"}
    assert frequencies("chain", **typed) == pytest.approx(wanted, rel=1e-12)


def test_a_row_held_at_both_ends_has_the_frequencies_of_its_closed_form():
    # omega_r = 2 sqrt(k/m) sin(r pi / (2 (n + 1))); as above, from memory.
    wanted = [hz(4 * 1e6 / 100 * math.sin(r * math.pi / 8) ** 2) for r in (1, 2, 3)]
    assert frequencies("chain", held="2") == pytest.approx(wanted, rel=1e-12)


def test_storeys_are_a_row_lying_on_its_side():
    wanted = [hz(4 * 5e7 / 20e3 * math.sin((2 * r - 1) * math.pi / 14) ** 2) for r in (1, 2, 3)]
    assert frequencies("storeys") == pytest.approx(wanted, rel=1e-12)


def test_machine_and_floor_have_the_two_roots_of_their_quadratic():
    m1, k1, m2, k2 = 5000.0, 5e7, 1500.0, 4e6
    half = (k1 + k2) / (2 * m1) + k2 / (2 * m2)
    root = math.sqrt(half**2 - k1 * k2 / (m1 * m2))
    assert frequencies("floor and machine") == pytest.approx([hz(half - root), hz(half + root)], rel=1e-12)


def test_a_machine_on_mounts_bounces_and_turns_alone_about_its_upright_axis():
    # On mounts set symmetrically, bounce and turning about the upright axis are each a mode of their own.
    typed = {"number": "6", "mass": "3200 kg", "upright": "1.62e6 N/m", "sideways": "9.7e5 N/m"}
    found = frequencies("mounts", **typed)
    arms = [(x, y) for x in (-1.1, 0.0, 1.1) for y in (-0.5, 0.5)]
    bounce = hz(6 * 1.62e6 / 3200)
    yaw = hz(sum(9.7e5 * (x**2 + y**2) for x, y in arms) / 3500)
    for one in (bounce, yaw):
        assert min(abs(one / other - 1) for other in found) < 1e-12


def test_a_train_is_that_of_its_reflected_inertias():
    # Reflected to the driver: inertia and stiffness times the square of the ratio (4).
    ratio = 80 / 20
    j1, j2, j3 = 20.0, 5.0 + 0.2 * ratio**2, 1.0 * ratio**2
    k1, k2 = 1e6, 2e5 * ratio**2
    half = (k1 / j1 + (k1 + k2) / j2 + k2 / j3) / 2
    product = k1 * k2 * (j1 + j2 + j3) / (j1 * j2 * j3)
    root = math.sqrt(half**2 - product)
    wanted = [0.0, hz(half - root), hz(half + root)]
    assert frequencies("geared train") == pytest.approx(wanted, rel=1e-12)


def test_two_lines_of_mounts_bounce_at_the_square_root_of_stiffness_over_mass():
    found = frequencies("two mounts", left="0.7 m", right="0.7 m")
    assert min(abs(hz(2 * 2e6 / 1800) / one - 1) for one in found) < 1e-12


def test_every_field_that_cannot_be_read_is_named():
    with pytest.raises(ModelFaultsError) as told:
        build(BY_ID["chain"], {"number": "0", "mass": "three", "stiffness": "1e6 N/m"})
    assert [fault.path for fault in told.value.faults] == ["number", "mass"]


def test_a_speed_needs_a_margin():
    with pytest.raises(ModelFaultsError) as told:
        build(BY_ID["chain"], {"speed": "1480 rpm"})
    assert [fault.path for fault in told.value.faults] == ["margin"]


def test_an_odd_number_of_mounts_is_refused():
    with pytest.raises(ModelFaultsError) as told:
        build(BY_ID["mounts"], {"number": "5"})
    assert "pairs" in str(told.value)


def test_all_motions_have_a_starting_point_and_names_of_fields_are_unique():
    assert {template.motion for template in TEMPLATES} == set(Motion)
    for template in TEMPLATES:
        names = [field.name for field in (*template.fields, *MACHINE_FIELDS)]
        assert len(names) == len(set(names))
