"""K and M in fractions: what was typed, without rounding."""

from fractions import Fraction

from assembly_models import body, model, mount, rotor, spring

from modalview.assembly.assemble import assemble
from modalview.assembly.exactly import ExactForms
from modalview.assembly.parameters import Case


def forms(given):
    return ExactForms(assemble(given))


def test_values_and_tolerances_are_taken_as_typed():
    stiffness = {"value": "0.1 kN/mm", "tolerance": "10 %"}
    found = forms(
        model(
            "single axis",
            [body("a", mass=0.3, tolerance={"minus": "1 %", "plus": "3 %"})],
            [spring("k", "a", "g", stiffness)],
        )
    )
    cases = [found.pencil(case) for case in (Case.NOMINAL, Case.SOFT_HEAVY, Case.STIFF_LIGHT)]
    assert [c.stiffness[0, 0] for c in cases] == [100_000, 90_000, 110_000]
    assert [c.mass[0, 0] for c in cases] == [Fraction(3, 10), Fraction(309, 1000), Fraction(297, 1000)]
    assert found.rounded == ()


def test_a_spring_drawn_between_two_points_stays_exact():
    # along (1, 2): d d^T / 5, though the root of 5 is no fraction
    given = model(
        "plane",
        [body("a", 1.0, 2.0, mass=2.0, dof=["x", "y"])],
        [spring("k", "a", "g", "1e6 N/m"), mount("m", "a", "g", x=1.0, y=1.0)],
    )
    found = forms(given)
    exact = found.pencil(Case.NOMINAL)
    assert exact.stiffness == {(0, 0): 200_001, (1, 0): 400_000, (1, 1): 800_001}
    assert found.rounded == ()


def test_what_holds_an_angle_or_a_root_is_told():
    given = model(
        "plane",
        [body("a", 1.0, 1.0, mass=2.0, inertia=3.0)],
        [
            spring("askew", "a", "g", direction="30 deg"),
            {
                "id": "arm",
                "kind": "beam",
                "from": {"body": "a"},
                "to": {"support": "g"},
                "E": "2e11 Pa",
                "I": "1e-6 m4",
                "A": "1e-3 m2",
            },
        ],
    )
    assert forms(given).rounded == ("askew direction 30 deg", "arm length")
    torsion = model(
        "shaft train",
        [rotor("d", 2.0)],
        [
            {
                "id": "s",
                "kind": "shaft",
                "from": {"body": "d"},
                "to": {"support": "g"},
                "stiffness": "10 N m/deg",
            }
        ],
    )
    assert forms(torsion).rounded == ("s stiffness 10 N m/deg",)


def test_a_full_inertia_tensor_is_taken_entry_by_entry():
    tensor = {"Ixx": 2.0, "Iyy": 3.0, "Izz": 4.0, "Pxy": 0.5, "Pyz": -0.25}
    given = model(
        "space",
        [body("a", 0.0, 0.0, 0.0, mass=5.0, inertia=tensor)],
        [mount("m", "a", "g", x=1.0, y=1.0, z=1.0, rx=1.0, ry=1.0, rz=1.0)],
    )
    exact = forms(given).pencil(Case.NOMINAL)
    assert exact.mass == {
        **{(i, i): Fraction(5) for i in range(3)},
        (3, 3): 2,
        (4, 4): 3,
        (5, 5): 4,
        (4, 3): Fraction(-1, 2),
        (5, 4): Fraction(1, 4),
    }
