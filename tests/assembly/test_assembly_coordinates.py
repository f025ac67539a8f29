"""Rigid clusters, held directions, massless parts: the exact change of variable and its notes."""

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from assembly_models import body, condensed, joined, matrices, model, mount, rotor, spring

from modalview.assembly.assemble import assemble
from modalview.errors import ModelFaultsError

THREE = {"x": 1e5, "y": 2e5, "rz": 3e4}


def rigid(name, /, start, stop, **more):
    return joined("rigid link", name, start, stop, **more)


def omegas(given):
    return np.sqrt(np.maximum(condensed(given), 0))


class TestClusters:
    def test_plane_cluster_is_one_body_about_the_joint_centre_of_gravity(self):
        # Two masses: m = 12, J = J1 + J2 + m1 m2 / m d^2 (parallel axes).
        given = model(
            "plane",
            [body("a", 0.1, 0.3, mass=9.0, inertia=2.0), body("b", 1.3, 1.9, mass=3.0, inertia=0.5)],
            [rigid("r", "a", "b"), mount("m", "a", "g", **THREE)],
        )
        pencil = assemble(given).pencil()
        M = pencil.M.toarray()
        inertia = 2.5 + 9 * 3 / 12 * 4.0
        np.testing.assert_allclose(M, np.diag([12, 12, inertia]), atol=1e-13)
        centre = np.array([0.1 + 1.2 * 3 / 12, 0.3 + 1.6 * 3 / 12])
        arm = np.array([0.1, 0.3]) - centre
        row = {"x": [1, 0, -arm[1]], "y": [0, 1, arm[0]], "rz": [0, 0, 1]}
        K = sum(THREE[key] * np.outer(row[key], row[key]) for key in THREE)
        np.testing.assert_allclose(pencil.K.toarray(), K, rtol=1e-13, atol=1e-9)

    def test_mass_matrix_is_block_diagonal_by_cluster(self):
        given = model(
            "space",
            [body(name, i, 0.3 * i, 0.0, inertia=(1.0, 1.5, 2.0)) for i, name in enumerate("abcd")],
            [
                rigid("r", "a", "c"),
                rigid("s", "b", "d"),
                *(mount(f"m{b}", b, "g", x=1.0, y=1.0, z=1.0) for b in "abcd"),
            ],
        )
        assembly = assemble(given)
        first = np.array([part for part, _ in assembly.structure.coordinates.free])
        M = assembly.pencil().M.toarray()
        assert assembly.n == 12
        assert np.all(M[first[:, None] != first[None, :]] == 0)

    def test_two_point_masses_in_space_have_no_inertia_about_their_line(self):
        # Against a body of its own: the dumb-bell with J = m1 m2/m d^2 across, a point in between.
        place = {"a": (0.1, 0.2, 0.3), "b": (0.4, 0.9, 0.2)}
        mounts = [
            mount("m1", "a", "g", at=(0.1, 0.0, -0.2), x=1e5, y=1e5, z=1e5),
            mount("m2", "b", "g", at=(0.3, 0.4, -0.2), x=2e5, y=1e5, z=3e5),
            mount("m3", "b", "g", at=(0.0, -0.9, 0.0), z=1e5),
        ]
        given = model(
            "space",
            [body(i, *place[i], mass=3.0 + 2 * (i == "b")) for i in "ab"],
            [rigid("r", "a", "b"), *mounts],
        )
        pencil = assemble(given).pencil()
        assert (pencil.n, pencil.modes) == (6, 5)
        assert np.count_nonzero(pencil.M.toarray()[pencil.massless]) == 0
        expected = dumb_bell(place, mounts)
        np.testing.assert_allclose(condensed(given), expected, rtol=1e-11)

    def test_three_masses_on_one_line_still_spin_freely(self):
        places = [(0.1, 0.2, 0.3), (0.4, 0.9, 0.2), (0.7, 1.6, 0.1)]
        given = model(
            "space",
            [
                body(name, *place, mass=m)
                for name, place, m in zip("abc", places, (3.0, 0.7, 1.9), strict=True)
            ],
            [
                rigid("r", "a", "b"),
                rigid("s", "b", "c"),
                mount("m", "a", "g", x=1e5, y=1e5, z=1e5),
                mount("n", "c", "g", x=1e5, y=1e5, z=1e5),
            ],
        )
        assembly = assemble(given)
        # Turning about the line moves no mass and stretches nothing: left out and said so.
        assert (assembly.n, assembly.pencil().modes) == (5, 5)
        assert any("no inertia and no resistance" in note for note in assembly.notes)

    def test_thin_rod_askew_has_five_modes(self):
        # The same rod as two half masses at (0.5, 0.5) and (-0.5, -0.5), rigidly linked.
        corners = [(1.0, 1.0), (-1.0, 1.0), (1.0, -1.0)]
        stiffness = {"x": 1e5, "y": 1e5, "z": 2e5}
        tensor = {"Ixx": 3.0, "Iyy": 3.0, "Izz": 6.0, "Pxy": 3.0}
        rod = model(
            "space",
            [body("rod", 0.0, 0.0, 0.0, mass=12.0, inertia=tensor)],
            [mount(f"m{i}", "rod", "g", at=(x, y, -0.3), **stiffness) for i, (x, y) in enumerate(corners)],
        )
        pair = model(
            "space",
            [body("a", 0.5, 0.5, 0.0, mass=6.0), body("b", -0.5, -0.5, 0.0, mass=6.0)],
            [
                rigid("r", "a", "b"),
                *(
                    mount(f"m{i}", "a", "g", at=(x - 0.5, y - 0.5, -0.3), **stiffness)
                    for i, (x, y) in enumerate(corners)
                ),
            ],
        )
        pencil = assemble(rod).pencil()
        assert (pencil.n, pencil.modes) == (6, 5)
        assert np.count_nonzero(pencil.M.toarray()[pencil.massless]) == 0
        np.testing.assert_allclose(condensed(rod), condensed(pair), rtol=1e-10)

    def test_partly_listed_rigid_link_joins_at_the_acting_point(self):
        # Joined in y midway between the two: y_a + 1.5 rz_a = y_b - 1.5 rz_b; x and rz stay free.
        given = model(
            "plane",
            [body("a", 0.0, 0.0, inertia=1.0), body("b", 3.0, 0.0, inertia=1.0)],
            [
                rigid("r", "a", "b", directions=["y"]),
                mount("m", "a", "g", **THREE),
                mount("n", "b", "g", **THREE),
            ],
        )
        assembly = assemble(given)
        moved = assembly.structure.coordinates.to_bodies.toarray()
        assert assembly.n == 5
        np.testing.assert_allclose(moved[1] + 1.5 * moved[2], moved[4] - 1.5 * moved[5], atol=1e-15)
        assert np.linalg.matrix_rank(moved) == 5

    def test_partly_listed_rigid_link_with_offset(self):
        given = model(
            "plane",
            [body("a", 0.0, 0.0, inertia=1.0), body("b", 3.0, 0.0, inertia=1.0)],
            [
                rigid("r", "a", "b", at=(0.5, 0.25), to=(-0.5, 0.75), directions=["x", "rz"]),
                mount("m", "a", "g", **THREE),
            ],
        )
        moved = assemble(given).structure.coordinates.to_bodies.toarray()
        np.testing.assert_allclose(moved[0] - 0.5 * moved[2], moved[3] - 0.5 * moved[5], atol=1e-15)
        np.testing.assert_allclose(moved[2], moved[5], atol=1e-15)

    def test_redundant_rigid_loop_counts_its_exact_rank(self):
        # Three bodies in a ring of rigid links by direction: nine forms of rank six.
        places = {"a": (0.1, 0.2), "b": (1.3, 0.7), "c": (0.4, 1.9)}
        ring = [
            rigid(f"r{i}{j}{d}", i, j, directions=[d])
            for i, j in ("ab", "bc", "ca")
            for d in ("x", "y", "rz")
        ]
        given = model(
            "plane",
            [body(i, *p, inertia=1.0) for i, p in places.items()],
            [*ring, mount("m", "a", "g", **THREE)],
        )
        assert assemble(given).n == 3
        whole = model(
            "plane",
            [body(i, *p, inertia=1.0) for i, p in places.items()],
            [rigid("r", "a", "b"), rigid("s", "b", "c"), mount("m", "a", "g", **THREE)],
        )
        np.testing.assert_allclose(omegas(given), omegas(whole), rtol=1e-12)

    def test_a_beam_inside_a_cluster_stretches_by_exactly_nothing(self):
        # A rest of rounding in its rows once passed for directions, and turned the rigid-body modes askew.
        beam = joined("beam", "v", "b", "a", E="200 GPa", A="330 mm2", I="330 cm4", name="old strut")
        given = model(
            "plane",
            [
                body("a", -0.6, 2.9, inertia=1.0),
                body("b", -0.3, 1.3, inertia=2.5),
                body("c", 2.3, 0.8, inertia=1.0),
            ],
            [rigid("r", "a", "b"), beam, spring("k", "a", "c"), spring("l", "c", "g", direction=[1, -1])],
        )
        without = replace(given, links=tuple(link for link in given.links if link.id != "v"))
        terms = assemble(given).structure.stiffness
        assert set(terms.part) - terms.at_work == {"v"}
        assert (
            "old strut: no motion stretches it; its ends are held or joined rigidly" in assemble(given).notes
        )
        one, other = assemble(given).pencil(), assemble(without).pencil()
        assert one.rigid_body.shape[1] == other.rigid_body.shape[1] == 4
        np.testing.assert_array_equal(one.K.toarray(), other.K.toarray())
        np.testing.assert_allclose(one.rows @ one.rigid_body, 0, atol=1e-14)


def dumb_bell(place, mounts):
    """Squares of the natural angular frequencies, from the whole K and the five motions that move a mass."""
    a, b = np.array(place["a"]), np.array(place["b"])
    centre = (3 * a + 5 * b) / 8
    K = np.zeros((6, 6))
    for link in mounts:
        base = place[link["from"]["body"]]
        arm = base + np.array([float(o.split()[0]) for o in link["from"]["offset"]]) - centre
        for key, text in link["stiffness"].items():
            direction = np.eye(3)["xyz".index(key)]
            row = np.concatenate([direction, np.cross(arm, direction)])
            K += float(text.split()[0]) * np.outer(row, row)
    line = (b - a) / np.linalg.norm(b - a)
    frame = np.linalg.qr(np.column_stack([line, np.eye(3)]))[0]  # first along the line, then across
    turn = np.block([[np.eye(3), np.zeros((3, 3))], [np.zeros((3, 3)), frame]])
    K = turn.T @ K @ turn
    kept, light = [0, 1, 2, 4, 5], [3]
    K = K[np.ix_(kept, kept)] - K[np.ix_(kept, light)] @ K[np.ix_(light, kept)] / K[3, 3]
    J = 3 * 5 / 8 * np.sum((b - a) ** 2)
    root = np.sqrt([8, 8, 8, J, J])
    return np.linalg.eigvalsh(K / root / root[:, None])


class TestHeld:
    def test_directions_not_listed_stand_still(self):
        given = model("plane", [body("a", 0.0, 1.0, inertia=1.0, dof=["y"])], [mount("m", "a", "g", **THREE)])
        assembly = assemble(given)
        assert assembly.structure.coordinates.free == (("a", "y"),)
        assert assembly.notes == ()

    def test_a_body_held_whole_is_a_support(self):
        given = model("single axis", [body("a"), body("floor", dof=[])], [spring("k", "a", "floor", "4 N/m")])
        np.testing.assert_allclose(omegas(given), [np.sqrt(4 / 10)])

    def test_directions_locked_by_links_are_noted_by_name(self):
        given = model(
            "plane",
            [body("a", 0.0, 1.0, inertia=1.0, name="pump"), body("b", 1.0, 1.0, inertia=1.0, dof=["x"])],
            [
                rigid("r", "a", "b", directions=["y"]),
                mount("m", "a", "g", **THREE),
                mount("n", "b", "g", x=1.0),
            ],
        )
        assert assemble(given).n == 3
        assert (
            any("is locked" in note for note in assemble(given).notes) is False
        )  # y of the pump still turns with it
        locked = model(
            "plane",
            [body("a", 0.0, 1.0, inertia=1.0, name="pump"), body("b", 1.0, 1.0, inertia=1.0, dof=["x"])],
            [
                rigid("r", "a", "b", directions=["rz"]),
                mount("m", "a", "g", **THREE),
                mount("n", "b", "g", x=1.0),
            ],
        )
        assert assemble(locked).notes == (
            "pump: motion rz is locked by rigid links, gears or held directions",
        )

    def test_no_motion_left_is_an_error(self):
        given = model("single axis", [body("a", dof=[])], [spring("k", "a", "g")])
        with pytest.raises(ModelFaultsError, match="no motion is left"):
            assemble(given)


class TestMassless:
    def test_springs_in_series_through_a_junction(self):
        given = model(
            "single axis",
            [body("a"), body("j", mass=0.0)],
            [spring("k", "a", "j", "6 N/m"), spring("l", "j", "g", "3 N/m")],
        )
        pencil = assemble(given).pencil()
        assert (pencil.n, pencil.modes) == (2, 1)
        np.testing.assert_allclose(pencil.standard.toarray(), [[2 / 10]], rtol=1e-15)

    def test_star_of_springs_about_a_junction(self):
        # Star to mesh: k_i k_j / sum k between each pair (star-mesh transform, from memory).
        k = np.array([2.0, 3.0, 5.0])
        given = model(
            "single axis",
            [body("a"), body("b"), body("c"), body("j", mass=0.0)],
            [
                *(spring(f"k{i}", i, "j", f"{s} N/m") for i, s in zip("abc", k, strict=True)),
                spring("g1", "a", "g", "1 N/m"),
            ],
        )
        mesh = np.diag(k) - np.outer(k, k) / k.sum()
        mesh[0, 0] += 1.0
        np.testing.assert_allclose(condensed(given), np.linalg.eigvalsh(mesh) / 10, rtol=1e-12)

    def test_chain_of_junctions(self):
        names = [f"j{i}" for i in range(6)]
        parts = ["a", *names, "g"]
        given = model(
            "single axis",
            [body("a"), *(body(n, mass=0.0) for n in names)],
            [spring(f"k{i}", one, two, "7 N/m") for i, (one, two) in enumerate(pairwise(parts))],
        )
        np.testing.assert_allclose(condensed(given), [1 / 10], rtol=1e-12)

    @pytest.mark.parametrize("j", [(0.2, 0.9), (0.25, 1.3), (0.35, 2.1)])
    def test_junction_in_line_of_its_springs_moves_along_them_alone(self, j):
        # (0.3, 1.7), (0.2, 0.9), (0.1, 0.1) lie on one line as typed, not as stored doubles.
        given = in_line(j)
        pencil = assemble(given).pencil()
        assert pencil.modes == 3
        assert pencil.n == 4
        assert [note for note in assemble(given).notes if note.startswith("j:")] == [
            "j: its motion in a direction between x and y, rz has no inertia and no resistance; left out"
        ]
        line = np.array([0.2, 1.6]) / np.hypot(0.2, 1.6)
        K = np.diag([1.0, 0, 1.0])
        K[:2, :2] += 2.0 * np.outer(line, line)  # 3 and 6 in series
        np.testing.assert_allclose(
            condensed(given),
            np.linalg.eigvalsh(K / np.sqrt([10, 10, 1]) / np.sqrt([[10], [10], [1]])),
            rtol=1e-11,
        )

    def test_directions_without_inertia_but_with_resistance_stay(self):
        given = model(
            "plane",
            [body("a", 0.0, 0.0)],
            [
                mount("m", "a", "g", at=(1.0, 0.0), x=3.0, y=4.0),
                mount("n", "a", "g", at=(-1.0, 0.0), x=3.0, y=4.0),
            ],
        )
        pencil = assemble(given).pencil()
        assert (pencil.n, pencil.modes) == (3, 2)
        assert assemble(given).notes == ("a: no inertia is given; taken as a point mass",)
        np.testing.assert_allclose(condensed(given), [0.6, 0.8], rtol=1e-14)

    def test_rotation_that_nothing_resists_is_left_out_with_a_note(self):
        given = model("plane", [body("a", 0.0, 1.0, name="weight")], [mount("m", "a", "g", x=3.0, y=4.0)])
        assert assemble(given).n == 2
        assert "weight: its motion rz has no inertia and no resistance; left out" in assemble(given).notes

    def test_junction_on_a_geared_shaft(self):
        # A massless flange between two shafts is 1/k1 + 1/k2, also when the far shaft is geared.
        given = model(
            "shaft train",
            [rotor("a", 2.0), rotor("f", 0.0), rotor("w", 0.0), rotor("b", 3.0)],
            [
                joined("shaft", "s", "a", "f", stiffness="6 N m/rad"),
                joined("gear", "m", "f", "w", ratio=-2),
                joined("shaft", "t", "w", "b", stiffness="0.75 N m/rad"),
            ],
        )
        k = 1 / (1 / 6 + 1 / (0.75 * 4))  # referred to a
        expected = k * (1 / 2 + 1 / (3 * 4))
        np.testing.assert_allclose(condensed(given), [0, expected], atol=1e-14)


def in_line(j):
    return model(
        "plane",
        [body("a", 0.3, 1.7, inertia=1.0), body("j", *j, mass=0.0)],
        [spring("k", "a", "j", "3 N/m"), spring("l", "j", "g", "6 N/m"), mount("m", "a", "g", x=1.0, rz=1.0)],
        supports=[{"id": "g", "position": ["0.1 m", "0.1 m"]}],
    )


class TestRefused:
    def test_floating_body_is_named(self):
        given = model("single axis", [body("a"), body("b", name="motor")], [spring("k", "a", "g")])
        with pytest.raises(
            ModelFaultsError, match='body "b": the body motor floats: no link joins it'
        ) as caught:
            assemble(given)
        assert len(caught.value.faults) == 1

    def test_lone_massless_junction_is_named(self):
        given = model("single axis", [body("a"), body("j", mass=0.0)], [spring("k", "a", "g")])
        with pytest.raises(ModelFaultsError, match="the massless junction j floats"):
            assemble(given)

    def test_all_floating_parts_at_once(self):
        given = model("single axis", [body("a"), body("b"), body("c")], [])
        with pytest.raises(ModelFaultsError) as caught:
            assemble(given)
        assert [fault.path for fault in caught.value.faults] == ['body "a"', 'body "b"', 'body "c"']

    def test_model_without_mass(self):
        links = [spring("k", "a", "g"), spring("l", "a", "b")]
        given = model("single axis", [body("a", mass=0.0), body("b", mass=0.0)], links)
        with pytest.raises(ModelFaultsError, match="no mass moves: every part that can move is massless"):
            assemble(given)

    def test_model_without_bodies(self):
        with pytest.raises(ModelFaultsError, match="has no bodies"):
            assemble(model("single axis", [], []))


def test_matrices_of_a_model_without_constraints_are_in_the_order_of_the_file():
    given = model(
        "plane",
        [body("b", 0.0, 0.0, mass=2.0, inertia=3.0), body("a", 1.0, 0.0, mass=4.0, inertia=5.0)],
        [mount("m", "a", "b", x=1.0)],
    )
    np.testing.assert_array_equal(np.diag(matrices(given)[1]), [2, 2, 3, 4, 4, 5])
