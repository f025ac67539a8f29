"""Each kind of link in each motion against matrices formed by hand from textbook formulas."""

import numpy as np
import pytest
from assembly_models import body, joined, matrices, model, mount, rotor, spring

from modalview.assembly.assemble import assemble


def close(found, expected):
    scale = np.abs(expected).max()
    np.testing.assert_allclose(found, expected, rtol=1e-13, atol=1e-13 * scale)


def rank_one(value, *rows):
    return sum(value * np.outer(row, row) for row in np.atleast_2d(rows))


def moves(at, direction, arm):
    """Stretch of a unit direction in the plane for a body (x, y, rz) whose point lies at ``arm``."""
    (dx, dy), (x, y) = direction, arm
    return at * np.array([dx, dy, x * dy - y * dx])


class TestSingleAxis:
    def test_chain_of_springs_however_drawn(self):
        # S. S. Rao, Mechanical Vibrations, chapter 6 (from memory): K of a chain.
        given = model(
            "single axis",
            [body("a", 0.3, 5.0), body("b", -2.0, 5.0, mass=4.0)],
            [
                spring("k1", "a", "g", "3 N/m"),
                spring("k2", "a", "b", "5 N/m"),
                spring("k3", "g", "b", "7 N/m"),
            ],
        )
        K, M, _ = matrices(given)
        close(K, np.array([[8.0, -5.0], [-5.0, 12.0]]))
        close(M, np.diag([10.0, 4.0]))

    def test_mount_counts_along_y_alone(self):
        given = model("single axis", [body("a")], [mount("m", "a", "g", y=5.0)])
        close(matrices(given)[0], np.array([[5.0]]))

    def test_damper(self):
        given = model(
            "single axis",
            [body("a"), body("b")],
            [
                spring("k", "a", "g", "1 N/m"),
                spring("l", "b", "g", "1 N/m"),
                joined("damper", "c", "a", "b", damping="6 N s/m"),
            ],
        )
        close(matrices(given)[2], 6 * np.array([[1.0, -1.0], [-1.0, 1.0]]))

    def test_dynamic_ratio_scales_the_stiffness_of_the_modes(self):
        given = model("single axis", [body("a")], [spring("k", "a", "g", "4 N/m", dynamic_ratio="1.8")])
        close(matrices(given)[0], np.array([[7.2]]))


class TestShaftTrain:
    def test_shafts_between_rotors_and_to_ground(self):
        # W. Ker Wilson, Practical Solution of Torsional Vibration Problems, volume 1 (from memory).
        given = model(
            "shaft train",
            [rotor("a", 2.0), rotor("b", 3.0)],
            [
                joined("shaft", "s", "a", "b", stiffness="40 N m/rad"),
                joined("shaft", "t", "b", "g", stiffness="9 N m/rad"),
                joined("damper", "c", "a", "b", damping="0.5 N m s/rad"),
            ],
        )
        K, M, C = matrices(given)
        close(K, np.array([[40.0, -40.0], [-40.0, 49.0]]))
        close(M, np.diag([2.0, 3.0]))
        close(C, np.array([[0.5, -0.5], [-0.5, 0.5]]))

    @pytest.mark.parametrize("told", [{"ratio": -4.2}, {"ratio": "-21/5"}, {"teeth": [84, 20]}])
    def test_exact_gears_reflect_inertia_and_stiffness_by_the_square_of_the_ratio(self, told):
        # The referred system of a geared train: J n^2, k n^2 (Den Hartog, Mechanical Vibrations, chapter 5,
        # from memory).
        n = 4.2
        given = model(
            "shaft train",
            [rotor("m", 46.0), rotor("w", 14.0), rotor("p", 0.35), rotor("c", 1.6)],
            [
                joined("shaft", "low", "m", "w", stiffness="6e5 N m/rad"),
                joined("gear", "mesh", "w", "p", **told),
                joined("shaft", "high", "p", "c", stiffness="1.9e5 N m/rad"),
            ],
        )
        pencil = assemble(given).pencil()
        K = np.array(
            [
                [6e5, -6e5, 0.0],
                [-6e5, 6e5 + 1.9e5 * n**2, 1.9e5 * n**2],
                [0.0, 1.9e5 * n**2, 1.9e5 * n**2],
            ]
        )
        M = np.diag([46.0, 14.0 + 0.35 * n**2, 1.6 * n**2])
        there = np.sort(np.linalg.eigvals(np.linalg.solve(M, K)).real)
        here = np.sort(np.linalg.eigvals(np.linalg.solve(pencil.M.toarray(), pencil.K.toarray())).real)
        np.testing.assert_allclose(here[1:], there[1:], rtol=1e-12)
        assert pencil.n == 3
        assert pencil.rigid_body.shape[1] == 1
        np.testing.assert_allclose(pencil.rows @ pencil.rigid_body, 0, atol=1e-15)

    def test_elastic_mesh_stretches_by_the_difference_of_the_pitch_line_motions(self):
        # Stretch r1 th1 - (r1/ratio) th2 with ratio -r1/r2: r1 th1 + r2 th2 for external gears.
        given = model(
            "shaft train",
            [rotor("w", 14.0), rotor("p", 0.35)],
            [
                joined(
                    "gear",
                    "mesh",
                    "w",
                    "p",
                    ratio=-4,
                    stiffness="2e8 N/m",
                    pitch_radius={"from": "0.4 m", "to": "0.1 m"},
                )
            ],
        )
        close(matrices(given)[0], rank_one(2e8, [0.4, 0.1]))
        assert assemble(given).pencil().rigid_body.shape[1] == 1

    def test_ring_gear_turns_the_same_way(self):
        given = model(
            "shaft train",
            [rotor("w", 1.0), rotor("p", 1.0)],
            [
                joined("gear", "mesh", "w", "p", teeth=[20, -60]),
                joined("shaft", "s", "p", "g", stiffness="9 N m/rad"),
            ],
        )
        moved = assemble(given).structure.coordinates.to_bodies.toarray()
        np.testing.assert_allclose(moved[1] / moved[0], 1 / 3, rtol=1e-15)


class TestPlane:
    def test_spring_along_its_ends_acts_at_each_end(self):
        given = model(
            "plane",
            [body("a", 0.0, 0.0, inertia=1.0), body("b", 3.0, 4.0, inertia=1.0)],
            [spring("k", "a", "b", "2 N/m", at=(1.0, 0.5), to=(-0.5, 0.25))],
        )
        line = np.array([2.5 - 1.0, 4.25 - 0.5])
        line /= np.linalg.norm(line)
        row = np.concatenate([moves(-1, line, (1.0, 0.5)), moves(1, line, (-0.5, 0.25))])
        close(matrices(given)[0], rank_one(2.0, row))

    def test_directed_spring_between_bodies_acts_midway_with_arms_from_both(self):
        given = model(
            "plane",
            [body("a", 0.0, 0.0, inertia=1.0), body("b", 3.0, 4.0, inertia=1.0)],
            [spring("k", "a", "b", "2 N/m", at=(1.0, 0.5), to=(-0.5, 0.25), direction="y")],
        )
        middle = np.array([(1.0 + 2.5) / 2, (0.5 + 4.25) / 2])
        row = np.concatenate([moves(-1, (0, 1), middle), moves(1, (0, 1), middle - [3.0, 4.0])])
        close(matrices(given)[0], rank_one(2.0, row))

    @pytest.mark.parametrize("turned", [False, True])
    def test_directed_spring_to_a_support_acts_at_the_attachment_on_the_body(self, turned):
        ends = (
            {"start": "g", "stop": "a", "to": (1.0, -0.5)}
            if turned
            else {"start": "a", "stop": "g", "at": (1.0, -0.5)}
        )
        given = model(
            "plane",
            [body("a", 5.0, 7.0, inertia=1.0)],
            [spring("k", stiffness="2 N/m", direction="x", **ends)],
        )
        close(matrices(given)[0], rank_one(2.0, moves(1, (1, 0), (1.0, -0.5))))

    @pytest.mark.parametrize(
        ("direction", "unit"),
        [
            ("-y", (0, -1)),
            ("30 deg", (np.sqrt(0.75), 0.5)),
            ("90 deg", (0, 1)),
            ([3, 4], (0.6, 0.8)),
            ("180 deg", (-1, 0)),
        ],
    )
    def test_directions(self, direction, unit):
        given = model(
            "plane", [body("a", 0.0, 1.0, inertia=1.0)], [spring("k", "a", "g", "2 N/m", direction=direction)]
        )
        close(matrices(given)[0], rank_one(2.0, moves(1, unit, (0, 0))))

    def test_a_direction_of_ninety_degrees_leaves_nothing_across(self):
        given = model(
            "plane", [body("a", 0.0, 1.0, inertia=1.0)], [spring("k", "a", "g", direction="90 deg")]
        )
        assert matrices(given)[0][0, 0] == 0
        assert assemble(given).pencil().rigid_body.shape[1] == 2

    def test_mount_with_turned_axes_and_offset(self):
        given = model(
            "plane",
            [body("a", 0.0, 1.0, inertia=1.0)],
            [mount("m", "a", "g", at=(0.4, -0.3), axes={"x": [1, 1]}, x=7.0, y=3.0, rz=2.0)],
        )
        c = np.sqrt(0.5)
        K = rank_one(7.0, moves(1, (c, c), (0.4, -0.3))) + rank_one(3.0, moves(1, (-c, c), (0.4, -0.3)))
        close(matrices(given)[0], K + np.diag([0, 0, 2.0]))

    def test_mount_damping(self):
        link = mount("m", "a", "g", at=(0.4, -0.3), x=7.0)
        link["damping"] = {"y": "5 N s/m", "rz": "2 N m s/rad"}
        given = model("plane", [body("a", 0.0, 1.0, inertia=1.0)], [link])
        close(matrices(given)[2], rank_one(5.0, moves(1, (0, 1), (0.4, -0.3))) + np.diag([0, 0, 2.0]))

    @pytest.mark.parametrize(("start", "angle"), [((0.0, 0.0), 0.0), ((1.0, -2.0), 0.7)])
    def test_beam_is_the_six_by_six_beam_column(self, start, angle):
        # J. S. Przemieniecki, Theory of Matrix Structural Analysis, chapter 5 (from memory), no shear.
        E, I, A, L = 2.0, 3.0, 5.0, 4.0  # noqa: E741
        c, s = np.cos(angle), np.sin(angle)
        far = (start[0] + L * c, start[1] + L * s)
        given = model(
            "plane",
            [body("a", *start, inertia=1.0), body("b", *map(float, far), inertia=1.0)],
            [joined("beam", "m", "a", "b", E="2 Pa", I="3 m4", A="5 m2")],
        )
        a, b = E * A / L, E * I / L**3
        local = np.array(
            [
                [a, 0, 0, -a, 0, 0],
                [0, 12 * b, 6 * b * L, 0, -12 * b, 6 * b * L],
                [0, 6 * b * L, 4 * b * L**2, 0, -6 * b * L, 2 * b * L**2],
                [-a, 0, 0, a, 0, 0],
                [0, -12 * b, -6 * b * L, 0, 12 * b, -6 * b * L],
                [0, 6 * b * L, 2 * b * L**2, 0, -6 * b * L, 4 * b * L**2],
            ]
        )
        turn = np.kron(np.eye(2), [[c, s, 0], [-s, c, 0], [0, 0, 1]])
        close(matrices(given)[0], turn.T @ local @ turn)

    def test_shaft_is_a_spring_between_rotations(self):
        given = model(
            "plane",
            [body("a", 0.0, 1.0, inertia=1.0), body("b", 1.0, 1.0, inertia=1.0)],
            [joined("shaft", "s", "a", "b", stiffness="4 N m/rad"), spring("k", "a", "g")],
        )
        K = matrices(given)[0]
        close(K[np.ix_([2, 5], [2, 5])], np.array([[4.0, -4.0], [-4.0, 4.0]]))


def space_moves(direction, arm):
    return np.concatenate([direction, np.cross(arm, direction)])


class TestSpace:
    def test_mounts_of_a_block_against_the_classical_six_by_six(self):
        # C. E. Crede, Vibration and Shock Isolation, chapter 2 (from memory): K of elastic supports.
        places = [(-1.05, 0.48, -0.62), (1.2, 0.48, -0.62), (0.15, -0.48, -0.62)]
        k = np.diag([3.0, 4.0, 5.0])
        given = model(
            "space",
            [body("a", 0.0, 0.0, 1.0, inertia=(820.0, 3650.0, 3720.0))],
            [mount(f"m{i}", "a", "g", at=place, x=3.0, y=4.0, z=5.0) for i, place in enumerate(places)],
        )
        K = np.zeros((6, 6))
        for x, y, z in places:
            arm = np.array([[0, z, -y], [-z, 0, x], [y, -x, 0]])  # u + theta x r
            T = np.hstack([np.eye(3), arm])
            K += T.T @ k @ T
        close(matrices(given)[0], K)
        close(matrices(given)[1], np.diag([10.0, 10.0, 10.0, 820.0, 3650.0, 3720.0]))

    def test_mount_axes_turn_translations_and_rotations(self):
        given = model(
            "space",
            [body("a", 0.0, 0.0, 1.0, inertia=(1.0, 1.0, 1.0))],
            [
                mount(
                    "m",
                    "a",
                    "g",
                    at=(1.0, 2.0, 3.0),
                    axes={"x": [0, 1, 0], "y": [-1, 0, 0]},
                    x=7.0,
                    y=5.0,
                    z=3.0,
                    rx=2.0,
                )
            ],
        )
        arm = np.array([1.0, 2.0, 3.0])
        axes = np.array([[0, 1.0, 0], [-1.0, 0, 0], [0, 0, 1.0]])
        K = sum(rank_one(k, space_moves(axis, arm)) for k, axis in zip((7.0, 5.0, 3.0), axes, strict=True))
        close(matrices(given)[0], K + rank_one(2.0, [0, 0, 0, 0, 1, 0]))

    @pytest.mark.parametrize(
        ("axes", "stiffness"),
        [
            ({"x": [1, 0, 0]}, [7.0, 5.0, 3.0]),
            ({"x": [0, 2, 0]}, [5.0, 7.0, 3.0]),
            ({"x": [0, 0, 1]}, [3.0, 5.0, 7.0]),
            ({"y": [2, 0, 0]}, [5.0, 7.0, 3.0]),
            ({"y": [0, 0, 1]}, [3.0, 7.0, 5.0]),
        ],
    )
    def test_missing_mount_axis_is_taken_level(self, axes, stiffness):
        given = model(
            "space",
            [body("a", 0.0, 0.0, 1.0, inertia=(1.0, 1.0, 1.0))],
            [mount("m", "a", "g", axes=axes, x=7.0, y=5.0, z=3.0)],
        )
        close(matrices(given)[0], np.diag([*stiffness, 0.0, 0.0, 0.0]))

    def test_beam_is_the_twelve_by_twelve_with_axes(self):
        # J. S. Przemieniecki, Theory of Matrix Structural Analysis, chapter 5 (from memory), no shear.
        E, A, Iy, Iz, G, J = 2.0, 5.0, 3.0, 7.0, 1.5, 11.0
        p, q, web = np.array([1.0, 2.0, -1.0]), np.array([3.0, 1.0, 1.0]), np.array([0.0, 0.0, 1.0])
        L = np.linalg.norm(q - p)
        x = (q - p) / L
        y = web - (web @ x) * x
        y /= np.linalg.norm(y)
        z = np.cross(x, y)
        given = model(
            "space",
            [
                body("a", *map(float, p), inertia=(1.0, 1.0, 1.0)),
                body("b", *map(float, q), inertia=(1.0, 1.0, 1.0)),
            ],
            [
                joined(
                    "beam",
                    "m",
                    "a",
                    "b",
                    E="2 Pa",
                    A="5 m2",
                    Iy="3 m4",
                    Iz="7 m4",
                    G="1.5 Pa",
                    J="11 m4",
                    axes={"y": [0, 0, 1]},
                )
            ],
        )
        close(matrices(given)[0], space_beam((E, A, Iy, Iz, G, J), L, np.array([x, y, z])))

    def test_square_beam_needs_no_axes(self):
        values = {"E": "2 Pa", "A": "5 m2", "Iy": "3 m4", "Iz": "3 m4", "G": "1.5 Pa", "J": "11 m4"}
        ends = [
            body("a", 1.0, 2.0, 0.0, inertia=(1.0, 1.0, 1.0)),
            body("b", 2.0, 2.0, 2.0, inertia=(1.0, 1.0, 1.0)),
        ]
        plain = matrices(model("space", ends, [joined("beam", "m", "a", "b", **values)]))[0]
        told = matrices(
            model("space", ends, [joined("beam", "m", "a", "b", **values, axes={"y": [1, 2, 3]})])
        )[0]
        close(plain, told)

    def test_shaft_and_gear_turn_about_x_unless_told(self):
        bodies = [
            body("a", 0.0, 0.0, 0.0, inertia=(1.0, 1.0, 1.0)),
            body("b", 1.0, 0.0, 0.0, inertia=(1.0, 1.0, 1.0)),
        ]
        K = matrices(model("space", bodies, [joined("shaft", "s", "a", "b", stiffness="4 N m/rad")]))[0]
        assert K[3, 3] == K[9, 9] == -K[3, 9] == 4.0
        assert np.count_nonzero(K) == 4
        about = matrices(
            model("space", bodies, [joined("shaft", "s", "a", "b", stiffness="4 N m/rad", axis=[0, 3, 4])])
        )[0]
        close(about[3:6, 3:6], rank_one(4.0, [0, 0.6, 0.8]))
        geared = assemble(
            model("space", bodies, [joined("gear", "s", "a", "b", ratio=-3)])
        ).structure.coordinates
        assert ("b", "rx") not in geared.free or ("a", "rx") not in geared.free
        row = dict(
            zip(
                [(i, f) for i in "ab" for f in ("x", "y", "z", "rx", "ry", "rz")],
                geared.to_bodies.toarray(),
                strict=True,
            )
        )
        np.testing.assert_allclose(row["b", "rx"], -3 * row["a", "rx"])

    def test_inertia_tensor_has_minus_the_products(self):
        tensor = {"Ixx": 5.0, "Iyy": 6.0, "Izz": 7.0, "Pxy": 1.0, "Pxz": -0.5, "Pyz": 0.25}
        given = model(
            "space", [body("a", 0.0, 0.0, 1.0, inertia=tensor)], [mount("m", "a", "g", x=1.0, y=1.0, z=1.0)]
        )
        J = np.array([[5.0, -1.0, 0.5], [-1.0, 6.0, -0.25], [0.5, -0.25, 7.0]])
        close(matrices(given)[1][3:, 3:], J)


def space_beam(section, L, axes):
    """Stiffness of a space beam by the textbook, turned into the model's axes (12, 12)."""
    E, A, Iy, Iz, G, J = section
    K = np.zeros((12, 12))
    for value, (i, j) in ((E * A / L, (0, 6)), (G * J / L, (3, 9))):
        K[np.ix_([i, j], [i, j])] += value * np.array([[1, -1], [-1, 1]])
    bend = np.array([[12, 6 * L, -12, 6 * L], [6 * L, 4 * L**2, -6 * L, 2 * L**2]])
    bend = np.vstack([bend, -bend[0], [6 * L, 2 * L**2, -6 * L, 4 * L**2]]) / L**3
    in_xy = [1, 5, 7, 11]
    K[np.ix_(in_xy, in_xy)] += E * Iz * bend
    # In x-z a positive slope dw/dx is a negative rotation about y.
    flip = np.diag([1, -1, 1, -1])
    in_xz = [2, 4, 8, 10]
    K[np.ix_(in_xz, in_xz)] += E * Iy * (flip @ bend @ flip)
    turn = np.kron(np.eye(4), axes)
    return turn.T @ K @ turn


def test_support_rows_are_the_stretch_per_unit_motion_of_the_support():
    given = model(
        "plane",
        [body("a", 1.0, 1.0, inertia=1.0)],
        [mount("m", "a", "g", x=3.0, y=4.0), spring("k", "g", "a", "2 N/m", direction=[3, 4])],
    )
    terms = assemble(given).structure.stiffness
    assert terms.support_freedoms == (("g", "x"), ("g", "y"), ("g", "rz"))
    # A support that shifts with the body stretches nothing; translations only, as its rotation has an arm.
    ones = terms.rows.toarray()[:, :2] + terms.support_rows.toarray()[:, :2]
    np.testing.assert_allclose(ones, 0, atol=1e-15)
    np.testing.assert_allclose(terms.support_rows.toarray()[2, :2], [-0.6, -0.8])
