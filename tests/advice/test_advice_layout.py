"""Where things are drawn: on top of each other, across their ends, beside their feet."""

import pytest

G = {"id": "g", "position": ["0 m", "0 m"]}


def body(part="a", place=("0 m", "1 m"), **more):
    return {"id": part, "mass": "100 kg", "inertia": "10 kg m2", "position": list(place), **more}


def spring(name, start, stop, **more):
    return {"id": name, "kind": "spring", "stiffness": "1e6 N/m", "from": start, "to": stop, **more}


def test_two_bodies_at_one_place_are_doubted_unless_a_link_joins_them(told):
    bodies = [body("rotor"), body("stator")]
    feet = [spring(f"k{one['id']}", {"body": one["id"]}, {"support": "g"}) for one in bodies]
    [doubt] = told("same place", bodies=bodies, supports=[G], links=feet)
    assert doubt.parts == ("stator", "rotor")
    assert doubt.text == "Body stator is drawn at the same place as rotor, (0 m, 1 m)."
    bearing = spring("b", {"body": "rotor"}, {"body": "stator"}, direction="y")
    assert not told("same place", bodies=bodies, supports=[G], links=[*feet, bearing])


def test_bodies_without_a_place_are_at_none(told):
    bodies = [{"id": "a", "mass": "1 kg"}, {"id": "b", "mass": "1 kg"}]
    links = [spring(f"k{one['id']}", {"body": one["id"]}, {"support": "g"}) for one in bodies]
    assert not told("same place", "single axis", bodies=bodies, supports=[G], links=links)


@pytest.mark.parametrize(
    ("direction", "fires"), [("x", True), ("5 deg", True), ("12 deg", False), ("y", False)]
)
def test_a_direction_nearly_square_to_the_ends_is_doubted(told, direction, fires):
    upright = spring("k", {"body": "a"}, {"support": "g"}, direction=direction)
    found = told("direction across", bodies=[body()], supports=[G], links=[upright])
    assert [one.parts for one in found] == ([("k",)] if fires else [])
    if direction == "5 deg":
        assert found[0].text == "Spring k acts along 5 deg, 85 deg off the line of its ends; is that meant?"


def test_the_lateral_spring_of_a_pair_is_meant(told):
    ends = {"body": "a"}, {"support": "g"}
    pair = [spring("v", *ends), spring("h", *ends, direction="x")]
    assert not told("direction across", bodies=[body()], supports=[G], links=pair)


def test_a_floor_that_only_sways_is_held_across_the_line_to_the_one_below(told):
    sideways = spring("k", {"body": "a"}, {"support": "g"}, direction="x")
    assert not told("direction across", bodies=[body(dof=["x"])], supports=[G], links=[sideways])
    assert told("direction across", bodies=[body(dof=["x", "y"])], supports=[G], links=[sideways])


def on_two(left, right, **more):
    feet = [{"id": name, "position": [x, "0 m"]} for name, x in (("l", left), ("r", right))]
    links = [
        spring(f"k{one['id']}", {"body": "a", "offset": [x, "-1 m"]}, {"support": one["id"]}, direction="y")
        for one, x in zip(feet, (left, right), strict=True)
    ]
    return {"bodies": [body(**more)], "supports": feet, "links": links}


def test_a_centre_of_gravity_beside_both_mounts_is_doubted_with_the_distance(told):
    [doubt] = told("outside the mounts", **on_two("0.2 m", "1.2 m"))
    assert doubt.parts == ("a",)
    assert doubt.text == (
        "Body a: the centre of gravity lies 200 mm outside the 2 mounts that carry it, seen from above."
    )


@pytest.mark.parametrize("case", ["between", "on the left one", "cannot tilt", "one foot"])
def test_a_centre_of_gravity_that_mounts_hold_is_not_doubted(told, case):
    left, right = {"between": ("-0.2 m", "1 m"), "on the left one": ("0 m", "1 m")}.get(
        case, ("0.2 m", "0.2 m")
    )
    given = on_two("0.2 m", "1.2 m", dof=["x", "y"]) if case == "cannot tilt" else on_two(left, right)
    assert not told("outside the mounts", **given)


def test_a_foot_that_holds_against_tilting_may_stand_beside(told):
    given = on_two("0.2 m", "1.2 m")
    stiffness = {"x": "1e6 N/m", "y": "1e6 N/m", "rz": "1e6 N m/rad"}
    end = {"body": "a", "offset": ["0.2 m", "-1 m"]}
    given["links"][0] = {
        "id": "m",
        "kind": "mount",
        "stiffness": stiffness,
        "from": end,
        "to": {"support": "l"},
    }
    assert not told("outside the mounts", **given)


def on_four(x, corners):
    supports = [{"id": f"s{i}", "position": [cx, cy, "0 m"]} for i, (cx, cy) in enumerate(corners)]
    links = [
        {
            "id": f"m{i}",
            "kind": "mount",
            "from": {
                "body": "a",
                "offset": [f"{float(one['position'][0][:-2]) - x} m", one["position"][1], "-1 m"],
            },
            "to": {"support": one["id"]},
            "stiffness": {"x": "1e6 N/m", "y": "1e6 N/m", "z": "1e6 N/m"},
        }
        for i, one in enumerate(supports)
    ]
    tensor = {"Ixx": "10 kg m2", "Iyy": "10 kg m2", "Izz": "10 kg m2"}
    bodies = [body(place=(f"{x} m", "0 m", "1 m"), inertia=tensor)]
    return {"bodies": bodies, "supports": supports, "links": links}


CORNERS = (("-1 m", "-0.5 m"), ("1 m", "-0.5 m"), ("1 m", "0.5 m"), ("-1 m", "0.5 m"))


@pytest.mark.parametrize(("x", "fires"), [(0.0, False), (0.99, False), (1.3, True)])
def test_in_space_the_base_is_what_the_feet_span(told, x, fires):
    found = told("outside the mounts", "space", **on_four(x, CORNERS))
    assert [one.parts for one in found] == ([("a",)] if fires else [])
    if fires:
        assert "lies 300 mm outside the 4 mounts" in found[0].text


def test_feet_in_one_line_span_no_base(told):
    assert not told("outside the mounts", "space", **on_four(1.3, CORNERS[:2]))


def test_a_motor_beside_the_feet_is_balanced_by_the_base_it_stands_on(told):
    given = on_two("-1 m", "1 m")
    given["bodies"].append(body("motor", ("1.4 m", "2 m")))
    stand = [
        spring(f"p{x}", {"body": "motor", "offset": [f"{x} m", "-0.5 m"]}, {"body": "a"}, direction="y")
        for x in (-0.6, -0.4)
    ]
    given["links"] += stand
    assert not told("outside the mounts", **given)
