"""Motions that stretch nothing: their number is exact, and gear loops that cannot turn are refused."""

import json

import numpy as np
import pytest
from assembly_models import body, joined, model, mount, rotor, spring

from modalview.assembly.assemble import assemble
from modalview.assembly.locks import speed_ratios
from modalview.assembly.rigid import exact_rank
from modalview.errors import ModelFaultsError
from modalview.store import parse_model

PLACES = [(0.1, 0.3, 0.7), (1.3, 0.7, 0.2), (2.9, 0.1, 1.1), (0.4, 3.3, 0.6)]


def rigid(name, /, start, stop, **more):
    return joined("rigid link", name, start, stop, **more)


def number(given):
    """Rigid-body motions, after checking that they stretch nothing, are independent and match the rank."""
    assembly = assemble(given)
    pencil = assembly.pencil()
    basis = pencil.rigid_body
    np.testing.assert_allclose(pencil.rows @ basis, 0, atol=1e-12)
    assert np.linalg.matrix_rank(basis) == basis.shape[1]
    assert exact_rank(given, assembly.structure.coordinates) == pencil.n - basis.shape[1]
    return basis.shape[1]


def inertia(motion):
    return {"plane": 1.0, "space": (1.0, 1.5, 2.0)}.get(motion)


def bodies(motion, names):
    if motion == "shaft train":
        return [rotor(name, 2.0) for name in names]
    size = {"single axis": 0, "plane": 2, "space": 3}[motion]
    return [
        body(name, *place[:size], inertia=inertia(motion)) for name, place in zip(names, PLACES, strict=False)
    ]


def tie(motion, name, start, stop):
    """A link that resists every direction of the motion."""
    if motion == "shaft train":
        return joined("shaft", name, start, stop, stiffness="5 N m/rad")
    keys = {"single axis": ("y",), "plane": ("x", "y", "rz"), "space": ("x", "y", "z", "rx", "ry", "rz")}[
        motion
    ]
    return mount(name, start, stop, **dict.fromkeys(keys, 3.0))


FREE = [("single axis", 1), ("shaft train", 1), ("plane", 3), ("space", 6)]


@pytest.mark.parametrize(("motion", "each"), FREE)
def test_free_pieces_move_as_wholes(motion, each):
    one = model(motion, bodies(motion, "abc"), [tie(motion, "k", "a", "b"), tie(motion, "l", "b", "c")])
    two = model(motion, bodies(motion, "abcd"), [tie(motion, "k", "a", "b"), tie(motion, "l", "c", "d")])
    held = model(motion, bodies(motion, "ab"), [tie(motion, "k", "a", "b"), tie(motion, "l", "b", "g")])
    assert (number(one), number(two), number(held)) == (each, 2 * each, 0)


def test_five_free_pieces():
    names = "abcdefhijk"
    given = model(
        "single axis",
        [body(name) for name in names],
        [spring(f"s{i}", names[i], names[i + 1]) for i in range(0, 10, 2)],
    )
    assert number(given) == 5


def test_rigid_cluster_moves_freely_with_what_hangs_on_it():
    given = model("plane", bodies("plane", "abc"), [rigid("r", "a", "b"), tie("plane", "k", "b", "c")])
    assert number(given) == 3


class TestMechanisms:
    def test_body_on_one_spring_in_the_plane(self):
        assert number(model("plane", bodies("plane", "a"), [spring("k", "a", "g")])) == 2

    def test_body_on_two_springs_of_one_line_of_action(self):
        links = [
            spring("k", "a", "g", at=(0.2, 0.4), direction="x"),
            spring("l", "a", "g", at=(-0.7, 0.4), direction="x"),
        ]
        assert number(model("plane", bodies("plane", "a"), links)) == 2

    def test_cluster_on_two_springs_of_one_line_of_action(self):
        # 0.3 + 0.4 and 0.9 - 0.2: equal heights as typed, not as doubles about a rounded centre of gravity.
        given = model(
            "plane",
            [body("a", 0.1, 0.3, inertia=1.0), body("b", 0.7, 0.9, mass=7.0, inertia=1.0)],
            [
                rigid("r", "a", "b"),
                spring("k", "a", "g", at=(0.2, 0.4), direction="x"),
                spring("l", "b", "g", at=(-0.3, -0.2), direction="x"),
            ],
        )
        assert number(given) == 2

    def test_springs_that_meet_in_one_point_let_a_body_turn_about_it(self):
        # Three lines through the support (0, 0), attachments at (1, 1), (2, 1) and (1.5, 1).
        ends = [(0.0, 0.0), (1.0, 0.0), (0.5, 0.0)]
        given = model(
            "plane",
            [body("a", 1.0, 1.0, inertia=1.0)],
            [spring(f"k{i}", "a", "g", at=e if any(e) else None) for i, e in enumerate(ends)],
        )
        assert number(given) == 1

    def test_parallelogram_of_two_bars(self):
        # Two upright bars let a body sway; what hangs on it by one spring moves as well.
        supports = [{"id": "g1", "position": ["0 m", "0 m"]}, {"id": "g2", "position": ["1.1 m", "0 m"]}]
        links = [
            spring("k", "a", "g1", at=(-0.4, 0.0)),
            spring("l", "a", "g2", at=(0.7, 0.0)),
            spring("p", "b", "a", direction="y"),
        ]
        given = model(
            "plane",
            [body("a", 0.4, 0.7, inertia=1.0), body("b", 0.4, 1.7, inertia=1.0)],
            links,
            supports=supports,
        )
        assert number(given) == 1 + 2

    def test_free_cluster_beside_a_mechanism(self):
        given = model(
            "plane",
            [*bodies("plane", "abc"), body("d", 5.1, 0.3, inertia=1.0)],
            [
                rigid("r", "a", "b"),
                spring("k1", "a", "c", direction="x"),
                spring("k2", "b", "c", direction="y"),
                spring("k3", "a", "c", at=(0.1, 0.3), to=(0.1, 0.2)),
                spring("k4", "d", "g", direction="y"),
            ],
        )
        assert number(given) == 3 + 2

    def test_two_pieces_joined_by_a_dashpot_alone_move_apart(self):
        links = [
            tie("plane", "k", "a", "b"),
            joined("damper", "d1", "b", "c", damping="1 N s/m"),
            tie("plane", "l", "c", "d"),
        ]
        assert number(model("plane", bodies("plane", "abcd"), links)) == 6


class TestGears:
    def test_train_turns_as_one_at_the_speeds_of_its_gears(self):
        given = model(
            "shaft train",
            bodies("shaft train", "abcd"),
            [
                tie("shaft train", "s", "a", "b"),
                joined("gear", "m", "b", "c", teeth=[84, 20]),
                tie("shaft train", "t", "c", "d"),
            ],
        )
        assert number(given) == 1
        assembly = assemble(given)
        turned = assembly.structure.coordinates.to_bodies @ assembly.pencil().rigid_body
        np.testing.assert_allclose(turned[:, 0] / turned[0, 0], [1, 1, -4.2, -4.2], rtol=1e-14)

    def test_thirds_do_not_lose_the_free_rotation_in_the_plane(self):
        # Two free wheels in a ratio of -1/3, held at their centres: one turns the other, nothing stretches.
        given = model(
            "plane",
            bodies("plane", "ab"),
            [
                mount("m", "a", "g", x=1.0, y=1.0),
                mount("n", "b", "g", x=1.0, y=1.0),
                joined("gear", "w", "a", "b", teeth=[10, 30]),
                joined(
                    "gear",
                    "v",
                    "a",
                    "b",
                    teeth=[20, 60],
                    stiffness="1 N/m",
                    pitch_radius={"from": "0.1 m", "to": "0.3 m"},
                ),
            ],
        )
        assert number(given) == 1

    def test_consistent_loop_turns(self):
        given = model(
            "shaft train",
            bodies("shaft train", "abc"),
            [
                joined("gear", "m", "a", "b", ratio="-1/3"),
                joined("gear", "n", "b", "c", ratio=-2),
                joined("gear", "o", "a", "c", ratio="2/3"),
            ],
        )
        assert assemble(given).n == 1

    @pytest.mark.parametrize("last", [{"ratio": 2}, {"teeth": [20, 10]}])
    def test_loop_that_cannot_turn_is_refused_naming_its_gears(self, last):
        given = model(
            "shaft train",
            bodies("shaft train", "abc"),
            [
                joined("gear", "low", "a", "b", ratio="-1/3"),
                joined("gear", "high", "b", "c", ratio=-2),
                joined("gear", "back", "a", "c", **last),
            ],
        )
        with pytest.raises(ModelFaultsError, match="cannot turn") as caught:
            assemble(given)
        (fault,) = caught.value.faults
        assert all(name in fault.path for name in ("low", "high", "back"))

    @pytest.mark.parametrize("kind", ["shaft", "rigid link"])
    def test_loop_closed_by_a_shaft_or_a_rigid_link_is_refused(self, kind):
        more = {"stiffness": "5 N m/rad"} if kind == "shaft" else {}
        given = model(
            "shaft train",
            bodies("shaft train", "ab"),
            [joined("gear", "m", "a", "b", ratio=-2), joined(kind, "s", "a", "b", **more)],
        )
        with pytest.raises(ModelFaultsError, match="check the teeth or ratios of m"):
            assemble(given)

    def test_wheels_held_in_their_housing_by_torsion_springs_are_no_loop(self):
        given = model(
            "plane",
            bodies("plane", "hab"),
            [
                tie("plane", "k", "h", "g"),
                *(mount(f"m{i}", i, "h", x=3.0, y=3.0) for i in "ab"),
                *(joined("shaft", f"s{i}", i, "h", stiffness="7 N m/rad") for i in "ab"),
                joined("gear", "w", "a", "b", ratio=-2),
            ],
        )
        assert number(given) == 0
        assert speed_ratios(given)["b"] == ("h", -2)

    def test_gears_about_two_axes_of_space_are_no_loop(self):
        wheels = bodies("space", "ab")
        held = [mount(f"m{i}", i, "g", x=3.0, y=3.0, z=3.0) for i in "ab"]
        one, two = (
            joined("gear", f"w{i}", "a", "b", ratio=ratio, axis=axis)
            for i, (ratio, axis) in enumerate([(-2, [1, 0, 0]), (-3, [0, 0, 1])])
        )
        assert number(model("space", wheels, [*held, one, two])) == 4
        against = joined("gear", "v", "a", "b", ratio=-3, axis=[-2, 0, 0])
        with pytest.raises(ModelFaultsError, match="check the teeth or ratios of w0, v"):
            assemble(model("space", wheels, [*held, one, against]))


@pytest.mark.parametrize(("lone", "free"), [(False, 0), (True, 2)])
def test_a_mechanism_is_found_in_a_large_model_too(lone, free):
    """560 bodies in a row, and beside them one on a single spring: free across it and to turn."""
    bodies = [
        {"id": f"b{i}", "mass": "10 kg", "inertia": "1 kg m2", "position": [f"{i} m", "1 m"]}
        for i in range(560)
    ]
    stiffness = {"x": "1e6 N/m", "y": "1e6 N/m", "rz": "1e5 N m/rad"}
    links = [
        {
            "id": f"k{i}",
            "kind": "mount",
            "from": {"body": f"b{i}"},
            "to": {"body": f"b{i + 1}"} if i < 559 else {"support": "end"},
            "stiffness": stiffness,
        }
        for i in range(560)
    ]
    if lone:
        bodies.append({"id": "lone", "mass": "10 kg", "inertia": "1 kg m2", "position": ["0 m", "3 m"]})
        spring = {"from": {"body": "lone"}, "to": {"support": "foot"}, "stiffness": "1e5 N/m"}
        links.append({"id": "single", "kind": "spring", **spring})
    supports = [{"id": "end", "position": ["560 m", "1 m"]}, {"id": "foot", "position": ["0 m", "0 m"]}]
    document = {"format": "keepclear", "version": 1, "motion": "plane", "bodies": bodies, "links": links}
    structure = assemble(parse_model(json.dumps({**document, "supports": supports}))).structure
    assert structure.rigid_body.shape[1] == free
    assert np.abs(structure.stiffness.rows @ structure.rigid_body).max(initial=0.0) < 1e-7
