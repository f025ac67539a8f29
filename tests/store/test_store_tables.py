"""Tables of nodes and springs: headings, units, decimal commas, and every fault with its cell."""

import sys
from decimal import Decimal
from pathlib import Path

import numpy as np
import pytest

from modalview.assembly.assemble import assemble
from modalview.errors import FileFaultsError
from modalview.model.parts import Motion
from modalview.store import dump_model, parse_model
from modalview.store.tables import read_table
from modalview.store.tables_network import import_network
from modalview.study import Request, solve
from modalview.units import quantities as q

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import open_data

NODES = "node,mass_kg,x_mm,y_mm\nA,5,0,0\nB,3,100,0\nfloor,fixed,200,50\n"
SPRINGS = "node_a,node_b,stiffness_N/mm\nA,B,2\nB,floor,4.5\n"
DALTON = Decimal("1.66053906892e-27")


@pytest.fixture
def tables(tmp_path):
    def written(nodes=NODES, springs=SPRINGS):
        paths = tmp_path / "nodes.csv", tmp_path / "springs.csv"
        for path, text in zip(paths, (nodes, springs), strict=True):
            path.write_bytes(text if isinstance(text, bytes) else text.encode("utf-8"))
        return paths

    return written


def imported(paths, motion=Motion.SINGLE_AXIS, units=None, **words):
    return import_network(*paths, motion, units, **words)


def values(model):
    return [body.mass.si for body in model.bodies], [link.stiffness.si for link in model.links]


class TestReading:
    def test_model(self, tables):
        found = imported(tables())
        model = found.model
        assert values(model) == ([5, 3], [2000, 4500])
        assert [support.id for support in model.supports] == ["floor"]
        assert [entry.text for entry in model.bodies[1].position] == ["100 mm", "0 mm"]
        assert (model.links[1].from_.body, model.links[1].to.support) == ("B", "floor")
        assert found.notes == ()
        assert parse_model(dump_model(model)) == model

    @pytest.mark.parametrize(
        "nodes",
        [
            "Node;Mass [kg];x [mm];y [mm]\nA;5;0;0\nB;3;100;0\nfloor;fixed;200;50\n",
            "node\tmass / kg\tx / mm\ty / mm\nA\t5\t0\t0\nB\t3\t100\t0\nfloor\tGround\t200\t50\n",
            "id,mass (kg),x (mm),y (mm)\nA,5,0,0\nB,3,100,0\nfloor,fixed,200,50\n",
            "\ufeffname, mass kg, X_mm, Y_mm,,\r\n\r\nA, 5, 0, 0,,\r\nB, 3, 100, 0\r\n".replace(
                "B, 3, 100, 0\r\n", "B, 3, 100, 0,,\r\n# a note\r\nfloor, fixed, 200, 50,,\r\n"
            ),
            NODES.replace(",", "\t").encode("utf-16"),
            b"\xfe\xff" + NODES.encode("utf-16-be"),
            'node,"mass","x","y"\nA,5000 g,0 m,0 m\nB,3 kg,10 cm,0 m\nfloor,fixed,200 mm,50 mm\n',
        ],
    )
    def test_headings_and_separators(self, tables, nodes):
        model = imported(tables(nodes)).model
        assert values(model)[0] == [5, 3]
        assert [entry.si for entry in model.supports[0].position] == [0.2, 0.05]

    @pytest.mark.parametrize("heading", ["k_kN/m", "stiffness_kN_per_m", "Spring rate [kN/m]", "rate / kN/m"])
    def test_headings_of_stiffness(self, tables, heading):
        model = imported(tables(springs=f"from,to,{heading}\nA,B,2\nB,floor,4.5\n")).model
        assert values(model)[1] == [2000, 4500]

    def test_units_by_option(self, tables):
        units = {q.MASS: "t", q.STIFFNESS: "kN/mm", q.LENGTH: "m"}
        paths = tables("node,mass,x,y\nA,5,0,0\nB,3,1,0\n", "a,b,k\nA,B,2\n")
        assert values(imported(paths, units=units).model) == ([5000, 3000], [2e6])

    def test_units_of_molecules_are_converted(self, tables):
        paths = tables("node,mass_dalton,x_angstrom,y_nm\nA,100,20.255,0.1\nB,3,1,0\n", "a,b,k_N/m\nA,B,2\n")
        body = imported(paths).model.bodies[0]
        assert body.mass.text == "1.66053906892e-25 kg"
        assert [entry.text for entry in body.position] == ["2.0255e-09 m", "1e-10 m"]

    def test_decimal_commas_between_semicolons(self, tables):
        found = imported(tables("node;mass_kg\nA;5,125\nB;0,5\n", "a;b;k_N/m\nA;B;1,5e3\n"))
        assert values(found.model) == ([5.125, 0.5], [1500])
        assert found.model.bodies[0].mass.text == "5.125 kg"
        assert found.notes == (
            "Commas in nodes.csv are read as decimal: 0,5 is 0.5.",
            "Commas in springs.csv are read as decimal: 1,5e3 is 1.5e3.",
        )

    @pytest.mark.parametrize(
        "nodes", ["node;mass_kg\nA;1,234\nB;2\n", 'node,mass\nA,"\u22121,234 kg"\nB,2 kg\n']
    )
    def test_a_comma_with_two_readings_is_refused_unless_told(self, tables, nodes):
        paths = tables(nodes, "a;b;k_N/m\nA;B;2\n")
        with pytest.raises(
            FileFaultsError, match=r"can be read as .?1\.234( kg)? or .?1234( kg)?; write a point"
        ):
            imported(paths)
        if "\u2212" not in nodes:
            found = imported(paths, commas_decimal=True)
            assert values(found.model)[0] == [1.234, 2]
            assert found.notes == ("Commas in nodes.csv are read as decimal: 1,234 is 1.234.",)

    @pytest.mark.parametrize("line", ["sep=;\r\n", '"sep=;"\n', "SEP=;\n", "\ufeffsep=;\n"])
    def test_a_first_line_that_names_the_separator(self, tables, line):
        # Rows are counted as a spreadsheet shows them: without that line.
        paths = tables(f"{line}node;mass, kg\nA;1,5\nB;x\n", "a;b;k_N/m\nA;B;2\n")
        with pytest.raises(FileFaultsError, match=r'nodes\.csv, row 3, column "mass, kg": "x" is no number'):
            imported(paths)

    def test_a_named_comma_goes_before_what_the_headings_hold(self, tables):
        paths = tables("sep=,\nnode,mass_kg,note; old\nA,5,\nB,1,\n", "a,b,k_N/m\nA,B,2\n")
        assert values(imported(paths).model)[0] == [5, 1]

    def test_decimal_commas_in_quotes(self, tables):
        model = imported(tables('node,mass_kg\nA,"5,125"\nB,"0,5"\n', "a,b,k_N/m\nA,B,2\n")).model
        assert values(model)[0] == [5.125, 0.5]

    def test_ground_needs_no_row_in_single_axis(self, tables):
        model = imported(tables("node,mass_kg\nA,5\n", "a,b,k_N/m\nA,ground,2\n")).model
        assert model.links[0].to.support == "ground"
        assert model.bodies[0].position is None

    def test_columns_that_are_not_read_are_told(self, tables):
        paths = tables("node,chain,mass_kg,colour\nA,a,5,red\nB,b,1,red\n", "a,b,k_N/m\nA,B,2\n")
        found = imported(paths)
        assert found.notes == ("Not read from nodes.csv: chain, colour.",)
        assert found.model.assumptions[1:] == found.notes

    def test_ids_of_springs_never_meet_those_of_nodes(self, tables):
        model = imported(tables("node,mass_kg\ns1,5\ns2,1\n", "a,b,k_N/m,name\ns1,s2,2,coil\n")).model
        assert [(link.id, link.name) for link in model.links] == [("s_1", "coil")]

    def test_plane(self, tables):
        model = imported(tables(), Motion.PLANE).model
        assert assemble(model).pencil().n == 4  # two points, nothing turns


class TestFaults:
    def refused(self, paths, motion=Motion.SINGLE_AXIS):
        with pytest.raises(FileFaultsError) as error:
            imported(paths, motion)
        return [str(fault) for fault in error.value.faults]

    @pytest.mark.parametrize(
        ("nodes", "says"),
        [
            ("", "nodes.csv: holds nothing"),
            ("node,mass_kg\n", "nodes.csv: holds no row below its headings"),
            (b"node,mass_kg\n\xff\xfe,1\n", "nodes.csv, byte 13: the table is not UTF-8"),
            (b"node,mass_kg\nA,1\0\n", "nodes.csv: holds zero bytes"),
            ('node,mass_kg\n"A,1\n', "nodes.csv: is no table that can be read"),
            ("node,colour\nA,1\n", 'nodes.csv: has no column of the mass: "mass"'),
            ("mass_kg\n1\n", "nodes.csv: has no column of the node"),
            ("node,mass_kg,mass_lb\nA,1,2\n", '"mass_kg" and "mass_lb" are both the mass; keep one'),
            ("node,node,mass_kg\nA,B,2\n", '"node" and "node" are both the node'),
            ("node,mass\nA,1\n", 'nodes.csv, column "mass": has no unit'),
            ("node,mass_furlong\nA,1\n", "has no column of the mass"),
            (
                "node,mass_kg\nA,1,5\n",
                "row 2: has 3 cells under 2 headings; where numbers have decimal commas",
            ),
            ("node,mass_kg\nA\n", "row 2: has 1 cells under 2 headings"),
            ("node,mass_kg\nA,heavy\n", 'nodes.csv, row 2, column "mass_kg": "heavy" is no number'),
            ("node,mass_kg\nA,\n", 'row 2, column "mass_kg": is empty'),
            ("node,mass_kg\nA,nan\n", '"nan" is no number'),
            ("node,mass_kg\nA,1e400\n", "too large"),
            ("node,mass_kg\nA,1e99\n", "no machine has such a mass"),
            ("node,mass_kg\nA,-1\n", '"-1 kg" is below zero'),
            ("node,mass_kg\nA,1 N\n", "row 2"),
            ("node,mass_kg\n,1\n", 'row 2, column "node": is empty'),
            ("node,mass_kg\nA,1\nA,2\n", 'row 3, column "node": "A" is already the node of row 2'),
            ('node,mass_kg\nA,"1,200"\n', '"1,200" can be read as 1.200 or 1200; write a point'),
            ('node,mass_kg\nA,"1.500,0"\n', '"1.500,0" has a comma and a point; write it with one point'),
            ("node;mass_kg\nA;1,5\nB;1.5\n", "has a comma where other numbers have a point"),
        ],
    )
    def test_nodes(self, tables, nodes, says):
        assert any(says in fault for fault in self.refused(tables(nodes)))

    @pytest.mark.parametrize(
        ("springs", "says"),
        [
            (
                "node_a,node_b,stiffness_N/m\nA,C,2\n",
                'springs.csv, row 2, column "node_b": there is no node "C"',
            ),
            ("node_a,node_b,stiffness_N/m\nA,,2\n", 'column "node_b": is empty; name a node'),
            ("node_a,node_b,stiffness_N/m\nA,A,2\n", 'both ends are the node "A"'),
            ("node_a,node_b,stiffness_N/m\nA,B,0\n", '"0 N/m" is not above zero'),
            ("node_a,node_b,stiffness_N/m\nA,B,-3\n", '"-3 N/m" is not above zero'),
            ("node_a,stiffness_N/m\nA,2\n", "has no column of the second node"),
        ],
    )
    def test_springs(self, tables, springs, says):
        assert any(says in fault for fault in self.refused(tables(springs=springs)))

    def test_all_faults_of_both_tables_at_once(self, tables):
        nodes = "node,mass_kg\nA,x\nB,-1\nC,1\n"
        springs = "a,b,k_N/m\nA,D,1\nA,B,0\n"
        assert len(self.refused(tables(nodes, springs))) == 4

    def test_nodes_at_one_place(self, tables):
        nodes = "node,mass_kg,x_m,y_m\nA,5,1,1\nB,3,1,1\n"
        (fault,) = self.refused(tables(nodes, "a,b,k_N/m\nA,B,1\n"), Motion.PLANE)
        assert 'the nodes "A" and "B" are at one place' in fault

    def test_space_needs_three_coordinates(self, tables):
        (fault,) = self.refused(tables(), Motion.SPACE)
        assert "nodes.csv: has no column of the z" in fault

    def test_shaft_train(self, tables):
        (fault,) = self.refused(tables(), Motion.SHAFT_TRAIN)
        assert "a shaft train turns" in fault

    def test_too_many_nodes(self, tables):
        rows = "".join(f"{i},1,0,0,0\n" for i in range(33334))
        paths = tables(f"node,mass_kg,x_m,y_m,z_m\n{rows}", "a,b,k_N/m\n1,2,1\n")
        assert any("33334 nodes; at most 33333" in fault for fault in self.refused(paths, Motion.SPACE))


def test_rows_count_as_in_a_spreadsheet(tables):
    path, _ = tables("\nnode,mass_kg\n\nA,1\n")
    assert read_table(path).rows == ((4, ("A", "1")),)


def test_points_in_space(tables):
    """Six corners of an octahedron, each joined to all others: six rigid-body modes, no corner turns."""
    corners = [(1, 0, 0), (-1, 0, 0), (0, 1, 0), (0, -1, 0), (0, 0, 1), (0, 0, -1)]
    pairs = [(a, b) for b in range(6) for a in range(b)]
    nodes = "".join(f"n{i},2,{x},{y},{z}\n" for i, (x, y, z) in enumerate(corners))
    springs = "".join(f"n{a},n{b},8\n" for a, b in pairs)
    paths = tables(f"node,mass_kg,x_m,y_m,z_m\n{nodes}", f"from,to,k_N/m\n{springs}")
    solution = solve(Request(imported(paths, Motion.SPACE).model))
    assert solution.outlook.notes[:2] == (
        "n0, n1, n2, n3 and 2 more: no inertia is given; taken as point masses",
        "n0, n1, n2, n3 and 2 more: their motions rx, ry, rz have no inertia and no resistance; left out",
    )
    raw = solution.raw
    place = np.array(corners, dtype=float)
    stiffness = np.zeros((18, 18))
    for a, b in pairs:
        row = np.zeros((6, 3))
        row[b] = (place[b] - place[a]) / np.linalg.norm(place[b] - place[a])
        row[a] = -row[b]
        stiffness += 8 * np.outer(row, row)
    assert raw.rigid_body_modes == 6
    assert raw.complete is True
    assert np.allclose(raw.eigenvalues, np.linalg.eigvalsh(stiffness) / 2, rtol=0, atol=1e-12)


@pytest.mark.parametrize(
    ("name", "motion", "rigid"),
    [
        ("gnm_1a8o", Motion.SINGLE_AXIS, 1),
        ("gnm_2beg_chains", Motion.SINGLE_AXIS, 5),
        pytest.param("anm_1a8o", Motion.SPACE, 6, marks=pytest.mark.slow),
    ],
)
def test_networks_of_others_give_the_reference_values(name, motion, rigid):
    """Masses in dalton and springs of 1 N/m: the references, per dalton."""
    one = open_data.read(name)
    model = import_network(
        one.folder / "nodes.csv", one.folder / "springs.csv", motion, {q.STIFFNESS: "N/m"}
    ).model
    raw = solve(Request(model)).raw
    truth = [Decimal(value) / DALTON for value in one.spectrum()]
    assert raw.number == len(truth)
    assert raw.rigid_body_modes == rigid
    assert raw.complete is True
    wrong = [
        abs(float(Decimal(float(found)) / value - 1))
        for found, value in zip(raw.eigenvalues[rigid:], truth[rigid:], strict=True)
    ]
    assert max(wrong) <= 2e-15
    matrices = assemble(model).pencil()
    factor = float(1 / DALTON)
    if name.startswith("gnm"):
        assert abs(matrices.K - one.K).max() == 0
    assert np.allclose(matrices.M.diagonal() * factor, one.M.diagonal(), rtol=1e-15, atol=0)
