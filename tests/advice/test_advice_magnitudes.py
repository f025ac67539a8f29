"""Values far off those of their kind, and values that nobody has typed."""

from statistics import median

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.advice.drawn import doubts
from modalview.advice.magnitudes import FAR, SPRINGS, Typed, far_off
from modalview.model.adding import add_body, add_link, add_support
from modalview.model.parts import End, Model, Motion, Spring
from modalview.model.values import STARTING, Entry, Value

G = {"id": "g", "position": ["0 m", "0 m"]}


def chain(stiffnesses, masses=None):
    masses = masses or ["100 kg"] * len(stiffnesses)
    bodies = [{"id": f"m{i}", "mass": mass} for i, mass in enumerate(masses)]
    ends = [{"support": "g"}, *({"body": body["id"]} for body in bodies)]
    links = [
        {"id": f"k{i}", "kind": "spring", "from": ends[i], "to": ends[i + 1], "stiffness": stiffness}
        for i, stiffness in enumerate(stiffnesses)
    ]
    return {"bodies": bodies, "supports": [G], "links": links}


def test_a_spring_three_thousand_times_the_median_is_doubted_with_both_numbers(told):
    [doubt] = told(
        "value far off", "single axis", **chain(["4e8 N/m", "3.9e8 N/m", "1.2e12 N/m", "4.1e8 N/m"])
    )
    assert doubt.parts == ("k2",)
    assert doubt.text == (
        "Spring k2: stiffness 1.2e12 N/m is 3000 times the median of the other 3 springs, 400 kN/mm; "
        "a power of ten?"
    )
    assert "rigid" in doubt.effect


def test_a_mass_below_a_thousandth_of_the_median_is_doubted(told):
    masses = ["500 kg", "620 g", "700 kg", "800 kg"]
    [doubt] = told("value far off", "single axis", **chain(["1e8 N/m"] * 4, masses))
    assert doubt.parts == ("m1",)
    assert "mass 620 g is 1/970 of" not in doubt.text
    assert "mass 620 g is 1/1100 of the median of the other 3 masses, 700 kg" in doubt.text


@pytest.mark.parametrize("third", ["4.1e5 N/m", "3e11 N/m", "0.4 kN/mm"])
def test_within_a_thousand_times_nothing_is_said(told, third):
    assert not told("value far off", "single axis", **chain(["4e8 N/m", "3.9e8 N/m", third, "4.1e8 N/m"]))


def test_of_two_springs_both_are_named(told):
    [doubt] = told("value far off", "single axis", **chain(["4e8 N/m", "2e12 N/m"]))
    assert doubt.parts == ("k1", "k0")
    assert "5000 times that of k0, 4e8 N/m" in doubt.text


def test_mounts_are_compared_with_springs_and_their_turning_stiffness_is_not(told):
    mount = {
        "id": "mt",
        "kind": "mount",
        "from": {"body": "a"},
        "to": {"support": "g"},
        "stiffness": {"x": "1e6 N/m", "y": "1e10 N/m", "rz": "50 N m/rad"},
    }
    springs = [
        {"id": name, "kind": "spring", "from": {"body": "a"}, "to": {"support": "g"}, "stiffness": "1e6 N/m"}
        for name in ("k1", "k2")
    ]
    body = {"id": "a", "mass": "100 kg", "inertia": "10 kg m2", "position": ["0 m", "1 m"]}
    found = told("value far off", bodies=[body], supports=[G], links=[mount, *springs])
    assert [(one.parts, "stiffness y 1e10 N/m" in one.text) for one in found] == [(("mt",), True)]


@settings(max_examples=40)
@given(st.lists(st.integers(-6, 12).map(lambda power: 2.5 * 10.0**power), min_size=3, max_size=9))
def test_exactly_those_a_thousand_times_the_median_of_the_others_are_doubted(sizes):
    springs = [
        Spring(
            id=f"k{i}", from_=End(body="a"), to=End(body="b"), stiffness=Value(Entry(f"{size:g} N/m", size))
        )
        for i, size in enumerate(sizes)
    ]
    expected = []
    for i, size in enumerate(sizes):
        middle = median(sizes[:i] + sizes[i + 1 :])
        if size > FAR * middle or size < middle / FAR:
            expected.append((f"k{i}",))
    typed = [Typed(SPRINGS, spring, "stiffness", spring.stiffness) for spring in springs]
    assert [one.parts for one in far_off(typed)] == expected


def test_many_of_one_rule_are_folded_into_one_that_holds_all_their_parts(told):
    stiffnesses = ["1e6 N/m"] * 20 + ["1e10 N/m"] * 9
    found = told("value far off", "single axis", **chain(stiffnesses))
    assert len(found) == 4
    assert len(found[-1].parts) == 6
    assert found[-1].text.endswith("The same holds of 5 more.")


def test_a_value_that_nobody_has_typed_is_told_and_not_compared(told):
    def start(text):
        return {"value": text, "source": STARTING, "status": "assumed"}

    parts = chain(["4e8 N/m", "3.9e8 N/m", start("1e12 N/m"), "4.1e8 N/m"])
    [doubt] = told("starting value", "single axis", **parts)
    assert doubt.parts == ("k2",)
    assert doubt.text == "Spring k2: stiffness 1e12 N/m is a starting value; nobody has given it yet."
    assert not told("value far off", "single axis", **parts)


def test_parts_as_the_program_draws_them_raise_no_other_doubt_than_their_starting_values():
    model, support = add_support(Model(motion=Motion.PLANE), (0.0, 0.0))
    model, body = add_body(model, "body", (0.0, 1.0), (1.0, 0.5))
    model, link = add_link(model, "spring", End(body=body), End(support=support))
    found = doubts(model)
    assert [(one.rule, one.parts) for one in found] == [
        ("starting value", (body,)),
        ("starting value", (link,)),
    ]
    assert "mass 100 kg and inertia" in found[0].text
    assert "are starting values; nobody has given them yet" in found[0].text


@pytest.mark.parametrize(("inertia", "fires"), [("640 kg m2", False), ("0.02 kg m2", True)])
def test_inertias_of_bodies_with_mass_are_compared_for_their_mass(told, inertia, fires):
    # 2 kg and 0.01 kg m2, 20 kg and 0.4 kg m2: small bodies are no sign that a large one is mistyped.
    sizes = [("2 kg", "0.01 kg m2"), ("20 kg", "0.4 kg m2"), ("3200 kg", inertia)]
    bodies = [
        {"id": f"m{i}", "mass": mass, "inertia": own, "position": [f"{i} m", "1 m"]}
        for i, (mass, own) in enumerate(sizes)
    ]
    links = [
        {
            "id": f"k{i}",
            "kind": "spring",
            "from": {"body": f"m{i}"},
            "to": {"support": "g"},
            "stiffness": "1e6 N/m",
        }
        for i in range(3)
    ]
    found = [
        one
        for one in told("value far off", bodies=bodies, supports=[G], links=links)
        if "inertia" in one.text
    ]
    assert [one.parts for one in found] == ([("m2",)] if fires else [])
