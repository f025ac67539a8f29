"""Loads, deflections and tilt under weight: statics in closed form, balances, and what is refused.

Sources: equilibrium and Hooke's law; loads of equal springs in a rectangle after a beam's bending formula
(textbook statics, from memory).
"""

import json

import numpy as np
import pytest

from modalview.assembly.assemble import assemble
from modalview.errors import InputError, ModelFaultsError
from modalview.model.parts import Model
from modalview.places import demo_models
from modalview.response.isolators import AtRest, at_rest
from modalview.response.weight import GRAVITY, settled
from modalview.store import parse_model, read_model
from modalview.study import Request
from modalview.study.isolators import mounts_at_rest

K, M = 2.5e5, 1200.0
CORNERS = {"a": (-0.6, -0.4), "b": (0.6, -0.4), "c": (-0.6, 0.4), "d": (0.6, 0.4)}


def model_of(motion, bodies, links, supports) -> Model:
    tree = {"format": "keepclear", "version": 1, "motion": motion, "bodies": bodies, "links": links}
    return parse_model(json.dumps({**tree, "supports": supports}))


def mount(name, offset, stiffness, **more):
    ends = {"from": {"body": "set", "offset": [f"{v!r} m" for v in offset]}, "to": {"support": "g"}}
    return {"id": name, "kind": "mount", **ends, "stiffness": stiffness, **more}


def on_four(centre, stiffness=(K,) * 4, **more) -> Model:
    """Put a body on four mounts 0.3 m below its centre of gravity, which lies at ``centre`` between them."""
    body = {
        "id": "set",
        "mass": f"{M} kg",
        "inertia": {"Ixx": "200 kg m2", "Iyy": "300 kg m2", "Izz": "400 kg m2"},
        "position": [f"{centre[0]!r} m", f"{centre[1]!r} m", "0.5 m"],
    }
    links = [
        mount(
            name,
            (x - centre[0], y - centre[1], -0.3),
            {"x": "1e5 N/m", "y": "1e5 N/m", "z": f"{k!r} N/m"},
            **more,
        )
        for (name, (x, y)), k in zip(CORNERS.items(), stiffness, strict=True)
    ]
    return model_of("space", [body], links, [{"id": "g", "position": ["0 m", "0 m", "0 m"]}])


def rest(model) -> AtRest:
    return at_rest(assemble(model))


def balanced(found: AtRest) -> None:
    assert abs(found.on_ground - found.weight) <= 1e-12 * found.weight
    assert found.held == 0
    assert found.unbalanced < 1e-14


def test_four_equal_mounts_off_centre():
    """W/4 (1 + ex x/a^2 + ey y/b^2) at (x, y) = (+-a, +-b)."""
    ex, ey, (a, b) = 0.1, -0.05, (0.6, 0.4)
    found = rest(on_four((ex, ey)))
    weight = M * GRAVITY
    # Nothing pushes sideways: the body shifts until no mount is strained sideways.
    for foot, (x, y) in zip(found.feet, CORNERS.values(), strict=True):
        expected = weight / 4 * (1 + ex * x / a**2 + ey * y / b**2)
        assert foot.load == pytest.approx(expected, rel=1e-12)
        assert foot.deflection == pytest.approx(expected / K, rel=1e-12)
    balanced(found)
    (sag,) = found.sags
    # Tilts towards the heavy side: down at +x is a turn about +y, down at -y one about +x.
    assert dict(sag.tilt)["ry"] == pytest.approx(weight * ex / (4 * K * a**2), rel=1e-12)
    assert dict(sag.tilt)["rx"] == pytest.approx(-weight * ey / (4 * K * b**2), rel=1e-12)


def test_moments_of_the_loads_balance():
    found = rest(on_four((0.13, 0.07), (1e5, 3e5, 2.2e5, 4.1e5)))
    balanced(found)
    loads, points = np.array([f.load for f in found.feet]), np.array([f.point for f in found.feet])
    arms = points[:, :2] - np.array([0.13, 0.07])
    assert np.abs(loads @ arms).max() < 1e-12 * found.weight


def test_centre_of_gravity_against_the_centroid_of_the_mounts():
    stiffness = (1e5, 3e5, 2.2e5, 4.1e5)
    (group,) = rest(on_four((0.13, 0.07), stiffness)).carried
    centroid = np.array(stiffness) @ np.array(list(CORNERS.values())) / sum(stiffness)
    assert group.centroid == pytest.approx(centroid, rel=1e-14)
    assert group.offset == pytest.approx(np.array([0.13, 0.07]) - centroid, rel=1e-13)
    assert (group.mass, group.bodies, len(group.feet)) == (M, ("set",), 4)
    assert group.height == pytest.approx(0.3)


def test_over_its_centroid_a_body_does_not_tilt():
    stiffness = (1e5, 3e5, 2.2e5, 4.1e5)
    centroid = np.array(stiffness) @ np.array(list(CORNERS.values())) / sum(stiffness)
    found = rest(on_four(tuple(map(float, centroid)), stiffness))
    down = M * GRAVITY / sum(stiffness)
    assert [foot.deflection for foot in found.feet] == pytest.approx([down] * 4, rel=1e-12)
    assert all(abs(turn) < 1e-15 for _, turn in found.sags[0].tilt)


def test_a_mount_is_pulled_where_the_centre_lies_outside():
    model = on_four((0.75, 0.0))
    found = rest(model)
    assert [foot.link for foot in found.lifted] == ["a", "c"]
    balanced(found)
    told = mounts_at_rest(Request(model))
    assert not told.sound
    assert told.sentence == "a, c are pulled upward: a mount that cannot pull lifts off."


def test_rated_loads():
    """The heaviest load is W/4 (1 + 0.1/0.6 + 0.05/0.4) = 3800.1 N: 8.6 % over 3500 N."""
    model = on_four((0.1, -0.05), rated_load="3500 N")
    found = rest(model)
    assert [foot.link for foot in found.overloaded] == ["b"]
    assert found.feet[1].of_rated == pytest.approx(
        M * GRAVITY / 4 * (1 + 0.1 / 0.6 + 0.05 / 0.4) / 3500, rel=1e-12
    )
    told = mounts_at_rest(Request(model))
    assert told.sentence == "b carries 8.6 % more than its rated load."
    assert not told.sound
    light = mounts_at_rest(Request(on_four((0.1, -0.05), rated_load="5 kN")))
    assert light.sound
    assert light.sentence == "No mount carries more than its rated load; the most is 76.0 %, b."


def test_stiffness_is_static():
    plain, rubber = (rest(on_four((0.1, 0.0), **more)) for more in ({}, {"dynamic_ratio": "1.8"}))
    assert [f.deflection for f in rubber.feet] == [f.deflection for f in plain.feet]
    assert rubber.feet[0].stiffness == K
    notes = mounts_at_rest(Request(on_four((0.1, 0.0), dynamic_ratio="1.8"))).notes
    assert "Stiffness is static: dynamic ratios are left out here." in notes
    assert any("stability of a high centre of gravity" in note for note in notes)


def spring(name, start, end, stiffness, **more):
    return {"id": name, "kind": "spring", "from": start, "to": end, "stiffness": stiffness, **more}


def test_springs_in_line_carry_what_stands_on_them():
    bodies = [{"id": "top", "mass": "300 kg"}, {"id": "base", "mass": "500 kg"}]
    links = [
        spring("upper", {"body": "base"}, {"body": "top"}, "2e5 N/m"),
        spring("lower", {"support": "g"}, {"body": "base"}, "4e5 N/m"),
    ]
    found = rest(model_of("single axis", bodies, links, [{"id": "g"}]))
    upper, lower = found.feet
    assert (upper.carried, upper.on, upper.grounded) == ("top", "base", False)
    assert (lower.carried, lower.on, lower.grounded) == ("base", "g", True)
    assert (upper.load, lower.load) == pytest.approx((300 * GRAVITY, 800 * GRAVITY), rel=1e-14)
    assert upper.deflection == pytest.approx(300 * GRAVITY / 2e5, rel=1e-13)
    assert found.sags[0].down == pytest.approx(800 * GRAVITY / 4e5 + 300 * GRAVITY / 2e5, rel=1e-13)
    assert found.carried == ()


def test_leaning_springs_carry_along_themselves():
    """Two springs 45 degrees askew: W/2 upright each, W/(2 cos 45) along themselves."""
    body = {"id": "set", "mass": "100 kg", "position": ["0 m", "1 m"], "dof": ["x", "y"]}
    supports = [{"id": "gl", "position": ["-1 m", "0 m"]}, {"id": "gr", "position": ["1 m", "0 m"]}]
    links = [
        spring(s, {"body": "set"}, {"support": f"g{s}"}, "1e5 N/m", rated_load="690 N") for s in ("l", "r")
    ]
    found = rest(model_of("plane", [body], links, supports))
    weight = 100 * GRAVITY
    assert [foot.load for foot in found.feet] == pytest.approx([weight / 2] * 2, rel=1e-13)
    assert [foot.strain for foot in found.feet] == pytest.approx([weight / 2**0.5] * 2, rel=1e-13)
    assert [foot.overloaded for foot in found.feet] == [True, True]
    assert found.sags[0].down == pytest.approx(weight / 1e5, rel=1e-13)


def test_a_hanger_carries_from_above():
    body = {"id": "duct", "mass": "50 kg", "position": ["0 m", "0 m"], "dof": ["y"]}
    links = [spring("hanger", {"support": "beam"}, {"body": "duct"}, "1e4 N/m")]
    found = rest(model_of("plane", [body], links, [{"id": "beam", "position": ["0 m", "2 m"]}]))
    (foot,) = found.feet
    assert (foot.carried, foot.load) == ("duct", pytest.approx(50 * GRAVITY))
    assert foot.deflection == pytest.approx(50 * GRAVITY / 1e4)
    assert found.lifted == ()


def test_a_spring_a_thousand_million_times_stiffer_upsets_no_balance():
    bodies = [{"id": "top", "mass": "300 kg"}, {"id": "base", "mass": "500 kg"}]
    links = [
        spring("upper", {"body": "base"}, {"body": "top"}, "2e14 N/m"),
        spring("lower", {"support": "g"}, {"body": "base"}, "2e5 N/m"),
        spring("beside", {"support": "g"}, {"body": "top"}, "1e5 N/m"),
    ]
    found = rest(model_of("single axis", bodies, links, [{"id": "g"}]))
    balanced(found)
    # The upper one gives by its 330 N over 2e14 N/m, which moves 4e-11 of the load.
    assert [f.load for f in found.feet[1:]] == pytest.approx(
        [800 * GRAVITY * s / 3 for s in (2, 1)], rel=1e-10
    )


def test_a_level_stop_to_ground_does_not_make_a_machine_the_foot_of_its_floor():
    """The skid also has level stops to ground; it still stands on the floor, not the floor on it."""
    found = rest(read_model(demo_models() / "2-supply-fan" / "steel-springs.keepclear"))
    assert [(foot.carried, foot.on) for foot in found.feet] == [
        ("skid", "floor"),
        ("skid", "floor"),
        ("floor", "columns"),
    ]
    assert all(foot.seated for foot in found.feet)


def test_bodies_side_by_side_lift_nothing_off_each_other():
    bodies = [
        {"id": n, "mass": f"{m} kg", "position": [f"{x} m", "1 m"], "dof": ["y"]}
        for n, m, x in (("a", 100, 0), ("b", 10, 1))
    ]
    supports = [{"id": f"g{x}", "position": [f"{x} m", "0 m"]} for x in (0, 1)]
    links = [
        spring("ka", {"body": "a"}, {"support": "g0"}, "1e5 N/m"),
        spring("kb", {"body": "b"}, {"support": "g1"}, "1e5 N/m"),
        spring("side", {"body": "b"}, {"body": "a"}, "1e5 N/m", direction="y"),
    ]
    found = rest(model_of("plane", bodies, links, supports))
    balanced(found)
    side = found.feet[2]
    assert not side.seated
    assert abs(side.load) == pytest.approx(30 * GRAVITY)
    assert found.lifted == ()


def test_level_springs_are_no_feet_and_held_directions_are_told():
    path = demo_models() / "5-raw-water-vertical-pump" / "design.keepclear"
    found = rest(read_model(path))
    assert found.feet == ()
    assert found.held == found.weight
    with pytest.raises(InputError, match="upright motion is held still"):
        mounts_at_rest(Request(read_model(path)))


def test_turning_freely_about_the_upright_is_level():
    """A mount without sideways stiffness lets a body drift and turn: that carries no weight."""
    body = {"id": "set", "mass": "100 kg", "position": ["0 m", "1 m"], "dof": ["x", "y"]}
    links = [mount("m", (0.0, -1.0), {"y": "1e5 N/m"})]
    found = rest(model_of("plane", [body], links, [{"id": "g", "position": ["0 m", "0 m"]}]))
    balanced(found)
    assert found.feet[0].load == pytest.approx(100 * GRAVITY)


def test_a_part_that_would_fall_is_refused_by_name():
    bodies = [
        {"id": "set", "mass": "100 kg", "position": ["0 m", "1 m"], "dof": ["x", "y"]},
        {"id": "tank", "name": "tank", "mass": "10 kg", "position": ["2 m", "1 m"], "dof": ["x", "y"]},
    ]
    links = [
        mount("m", (0.0, -1.0), {"x": "1e5 N/m", "y": "1e5 N/m"}),
        spring("level", {"body": "set"}, {"body": "tank"}, "1e5 N/m"),
    ]
    model = model_of("plane", bodies, links, [{"id": "g", "position": ["0 m", "0 m"]}])
    with pytest.raises(ModelFaultsError, match='"tank": nothing holds it up against its weight'):
        rest(model)


def test_a_shaft_train_has_no_mounts():
    with pytest.raises(InputError, match="only turns"):
        settled(assemble(read_model(demo_models() / "3-air-compressor-train" / "as-built.keepclear")))


def test_generator_set_of_the_demonstration():
    """1050, 150 and 1200 mm from the centre: its own closed form, three pairs of equal stiffness."""
    found = rest(read_model(demo_models() / "4-standby-generator-set" / "dynamic-stiffness.keepclear"))
    balanced(found)
    x = np.array([-1.05, -1.05, 0.15, 0.15, 1.2, 1.2])
    arm = x - x.mean()
    expected = 3200 * GRAVITY / 6 * (1 - x.mean() * arm / np.mean(arm**2))
    assert [foot.load for foot in found.feet] == pytest.approx(expected, rel=1e-12)
    assert [foot.deflection for foot in found.feet] == pytest.approx(expected / 9.0e5, rel=1e-12)
