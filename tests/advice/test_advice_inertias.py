"""Moments of inertia: missing, of another size than the body, GD2, reflected already."""

import pytest

G = {"id": "g", "position": ["0 m", "0 m"]}


def block(inertia, part="a", mass="1000 kg", width="1 m", height="1 m", **more):
    drawn = {"width": width, "height": height}
    given = {"id": part, "mass": mass, "position": ["0 m", "1 m"], "drawn": drawn, **more}
    return given | ({"inertia": inertia} if inertia else {})


def spring(name="k", **more):
    ends = {"from": {"body": "a", **more}, "to": {"support": "g"}}
    return {"id": name, "kind": "spring", "stiffness": "1e7 N/m", "direction": "y", **ends}


def held(*bodies):
    return {"bodies": bodies, "supports": [G], "links": [spring()]}


@pytest.mark.parametrize(
    ("inertia", "fires"),
    [("4100 kg m2", True), ("3900 kg m2", False), ("2.4 kg m2", True), ("2.6 kg m2", False)],
)
def test_a_radius_of_gyration_beyond_twice_or_below_a_twentieth_of_the_drawn_size_is_doubted(
    told, inertia, fires
):
    found = told("radius of gyration", **held(block(inertia)))
    assert [one.parts for one in found] == ([("a",)] if fires else [])


def test_the_radius_of_gyration_is_told_with_the_drawn_size(told):
    [doubt] = told("radius of gyration", **held(block("9000 kg m2")))
    assert "its radius of gyration is 3 m, it is drawn 1 m large" in doubt.text
    assert "too low" in doubt.effect


def test_the_slender_axis_of_a_long_body_in_space_is_not_doubted(told):
    inertia = {"Ixx": "2 kg m2", "Iyy": "800 kg m2", "Izz": "800 kg m2"}
    body = {"id": "a", "mass": "1000 kg", "inertia": inertia, "position": ["0 m", "0 m", "1 m"]}
    body["drawn"] = {"width": "3 m", "height": "0.1 m"}
    support = {"id": "g", "position": ["0 m", "0 m", "0 m"]}
    given = {"bodies": [body], "supports": [support], "links": [spring() | {"direction": "z"}]}
    assert not told("radius of gyration", "space", **given)


def test_a_mass_without_inertia_that_a_link_turns_is_doubted(told):
    arm = spring(offset=["0.4 m", "0 m"])
    body = block(None)
    [doubt] = told("no inertia", bodies=[body], supports=[G], links=[arm])
    assert doubt.text == "Body a has 1000 kg but no moment of inertia, although spring k turns it."
    assert "rocking" in doubt.effect


@pytest.mark.parametrize("case", ["inertia", "no arm", "held", "massless"])
def test_an_inertia_is_not_missed_where_nothing_turns_or_one_is_given(told, case):
    body = block("80 kg m2" if case == "inertia" else None, mass="0 kg" if case == "massless" else "1000 kg")
    if case == "held":
        body["dof"] = ["x", "y"]
    arm = spring() if case == "no arm" else spring(offset=["0.4 m", "0 m"])
    assert not told("no inertia", bodies=[body], supports=[G], links=[arm])


def test_an_inertia_four_times_that_of_the_solid_block_may_be_gd2(told):
    # 1000 kg (1 m^2 + 1 m^2) / 12 = 166.7 kg m2
    [doubt] = told("GD2", **held(block("660 kg m2")))
    assert doubt.parts == ("a",)
    assert "660 kg m2 is 4.0 times what a solid body of its mass and drawn size has, 167 kg m2" in doubt.text


@pytest.mark.parametrize("inertia", ["170 kg m2", "330 kg m2", "1200 kg m2", "GD2 2640 kgf m2"])
def test_other_inertias_and_those_typed_as_gd2_are_not_taken_for_it(told, inertia):
    assert not told("GD2", **held(block(inertia)))


def test_a_rotor_four_times_its_twin_may_be_gd2(told):
    twins = [block("90 kg m2"), block("360 kg m2", "b", position=["3 m", "1 m"])]
    [doubt] = told("GD2", **held(*twins))
    assert doubt.parts == ("b",)
    assert "that of a body of the same mass and drawn size, 90 kg m2" in doubt.text


def train(compressor, pinion="0.35 kg m2"):
    bodies = [
        {"id": name, "inertia": inertia}
        for name, inertia in (
            ("motor", "46 kg m2"),
            ("wheel", "14 kg m2"),
            ("pinion", pinion),
            ("comp", compressor),
        )
    ]

    def joined(name, a, b, **more):
        return {"id": name, "from": {"body": a}, "to": {"body": b}, **more}

    links = [
        joined("low", "motor", "wheel", kind="shaft", stiffness="6e5 N m/rad"),
        joined("mesh", "wheel", "pinion", kind="gear", teeth=[84, 20]),
        joined("high", "pinion", "comp", kind="shaft", stiffness="1.9e5 N m/rad"),
    ]
    return {"bodies": bodies, "links": links}


def test_a_faster_side_typed_as_seen_from_the_slower_one_is_doubted(told):
    # 1.6 kg m2 times 4.2 squared is 28.2 kg m2
    [doubt] = told("reflected inertia", "shaft train", **train("28.2 kg m2"))
    assert doubt.parts == ("mesh", "pinion", "comp")
    assert (
        "the faster side holds 28.6 kg m2, the slower one 60 kg m2; times the ratio squared, 17.6"
        in doubt.text
    )


def test_inertias_at_their_own_speed_are_not_doubted(told):
    assert not told("reflected inertia", "shaft train", **train("1.6 kg m2"))


def test_a_small_fast_motor_on_a_slow_load_is_not_doubted(told):
    # A gear motor: seen from the slow side its own rotor is the heavier one, and rightly so.
    bodies = [{"id": "motor", "inertia": "0.1 kg m2"}, {"id": "mill", "inertia": "20 kg m2"}]
    gear = {"id": "g", "kind": "gear", "from": {"body": "motor"}, "to": {"body": "mill"}, "ratio": "-1/50"}
    assert not told("reflected inertia", "shaft train", bodies=bodies, links=[gear])


def test_a_shaft_between_two_gears_is_not_judged(told):
    given = train("28.2 kg m2")
    given["bodies"].append({"id": "last", "inertia": "1 kg m2"})
    further = {
        "id": "second",
        "kind": "gear",
        "from": {"body": "comp"},
        "to": {"body": "last"},
        "ratio": "-2",
    }
    given["links"].append(further)
    assert not told("reflected inertia", "shaft train", **given)
