"""Doubts that need the terms, or the bounds of the modes."""

import pytest

from modalview.advice.assembled import G as GRAVITY
from modalview.advice.assembled import doubts_of, sag_under_own_weight
from modalview.assembly.assemble import assemble
from modalview.bounds.before import before_solve

GROUND = {"id": "g", "position": ["0 m", "0 m"]}


def known(model):
    assembly = assemble(model)
    return assembly, before_solve(assembly.pencil())


def rules(model):
    return {one.rule: one for one in doubts_of(*known(model))}


def hung(mass, stiffness, motion="single axis", **spring):
    body = {"id": "a", "mass": mass, "position": ["0 m", "1 m"]}
    link = {
        "id": "k",
        "kind": "spring",
        "from": {"body": "a"},
        "to": {"support": "g"},
        "stiffness": stiffness,
    }
    return {"motion": motion, "bodies": [body], "supports": [GROUND], "links": [link | spring]}


def test_the_sag_is_weight_over_static_stiffness(model):
    # m g / k, by hand; a dynamic ratio does not stiffen a spring at rest
    given = hung("1000 kg", "2e6 N/m", dynamic_ratio="1.8")
    sag = sag_under_own_weight(*known(model(**given)))
    assert sag == pytest.approx([-1000 * GRAVITY / 2e6], rel=1e-12)


def test_the_sag_of_two_in_a_row_adds_up(model):
    given = hung("1000 kg", "2e6 N/m")
    given["bodies"].append({"id": "b", "mass": "500 kg", "position": ["0 m", "2 m"]})
    top = {"id": "k2", "kind": "spring", "from": {"body": "b"}, "to": {"body": "a"}, "stiffness": "1e5 N/m"}
    given["links"].append(top)
    sag = sag_under_own_weight(*known(model(**given)))
    low = -1500 * GRAVITY / 2e6
    assert sag == pytest.approx([low, low - 500 * GRAVITY / 1e5], rel=1e-12)


def test_what_may_slide_sideways_still_sags(model):
    given = hung("1000 kg", "2e6 N/m", "plane")
    given["bodies"][0]["dof"] = ["x", "y"]
    assembly, bounds = known(model(**given))
    assert bounds.rigid_body_modes == 1
    assert sag_under_own_weight(assembly, bounds) == pytest.approx([-1000 * GRAVITY / 2e6], rel=1e-5)


def test_what_falls_has_no_sag(model):
    given = hung("1000 kg", "2e6 N/m")
    given["bodies"].append({"id": "b", "mass": "500 kg", "position": ["0 m", "2 m"]})
    given["links"][0]["to"] = {"body": "b"}
    assert sag_under_own_weight(*known(model(**given))) is None


@pytest.mark.parametrize(
    ("stiffness", "fires"), [("9 kN/m", True), ("12 kN/m", False), ("1.1e10 N/m", True), ("8e9 N/m", False)]
)
def test_a_sag_outside_a_micrometre_to_a_metre_is_doubted(model, stiffness, fires):
    found = rules(model(**hung("1000 kg", stiffness)))
    assert ("static deflection" in found) == fires
    if stiffness == "9 kN/m":
        assert found["static deflection"].parts == ("a",)
        assert found["static deflection"].text == (
            "Body a sags 1.09 m under the model's own weight, at rest."
        )


def test_bodies_held_upright_do_not_sag_and_are_not_doubted(model):
    given = hung("1000 kg", "2e6 N/m", "plane", direction="x")
    given["bodies"][0]["dof"] = ["x"]
    assert "static deflection" not in rules(model(**given))


@pytest.mark.parametrize(
    ("mass", "stiffness", "fires"),
    [
        ("1e6 kg", "1e6 N/m", True),
        ("1 kg", "1e9 N/m", True),
        ("100 kg", "1e6 N/m", False),
        ("1 kg", "1e8 N/m", False),
    ],
)
def test_a_lowest_mode_outside_a_fifth_to_two_thousand_hertz_is_doubted(model, mass, stiffness, fires):
    # sqrt(k/m) / 2 pi: 0.159 Hz, 5030 Hz, 15.9 Hz, 1590 Hz
    assert ("lowest mode" in rules(model(**hung(mass, stiffness)))) == fires


def test_the_lowest_mode_is_told_in_hertz(model):
    text = rules(model(**hung("1e6 kg", "1e6 N/m")))["lowest mode"].text
    assert text == "The lowest elastic mode lies below 0.159 Hz; machines rarely have it below 0.2 Hz."


def test_a_spring_that_no_motion_stretches_is_doubted(model):
    given = hung("1000 kg", "2e6 N/m", "plane")
    given["bodies"][0]["dof"] = ["y"]
    side = {"support": "g"}
    level = {"id": "h", "kind": "spring", "from": {"body": "a"}, "to": side, "stiffness": "1e6 N/m"}
    given["links"].append(level | {"direction": "x"})
    found = rules(model(**given))
    assert found["idle link"].parts == ("h",)
    given["bodies"][0]["dof"] = ["x", "y"]
    assert "idle link" not in rules(model(**given))
