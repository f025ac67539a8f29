import pytest

from modalview.drawing.captions import body_lines, excitation_line, link_lines, shortened, tolerance_text
from modalview.drawing.textsize import text_width
from modalview.model.parts import (
    Body,
    DefaultTolerance,
    End,
    Excitation,
    Gear,
    InertiaTensor,
    Magnitude,
    Model,
    Mount,
    MountStiffness,
    RigidLink,
    Spring,
)
from modalview.model.values import Entry, Tolerance, Value
from modalview.units import quantities as q

ENDS = {"from_": End(body="a"), "to": End(support="g")}
STIFFNESS = Value.typed("4e8 N/m", q.STIFFNESS)


@pytest.mark.parametrize(
    ("tolerance", "written"),
    [
        (None, ""),
        (Tolerance.symmetric("10 %"), "±10 %"),
        (Tolerance(minus=Entry.typed("5 %", q.RATIO), plus=Entry.typed("20 %", q.RATIO)), "−5 % +20 %"),
        (Tolerance(low=Entry("1 kg", 1.0), high=Entry("2 kg", 2.0)), "(1 kg to 2 kg)"),
    ],
)
def test_tolerances_are_written_as_typed(tolerance: Tolerance | None, written: str):
    assert tolerance_text(tolerance) == written


def test_the_nearest_tolerance_counts():
    model = Model(default_tolerance=DefaultTolerance(stiffness=Tolerance.symmetric("25 %")))
    spring = Spring(id="k", name="pedestal", stiffness=STIFFNESS, **ENDS)
    assert link_lines(model, spring) == ("pedestal", "4e8 N/m ±25 %")
    own = Spring(id="k", stiffness=STIFFNESS, tolerance=Tolerance.symmetric("10 %"), **ENDS)
    assert link_lines(model, own) == ("k", "4e8 N/m ±10 %")


def test_directions_of_a_mount_that_share_a_value_share_a_line():
    soft = Value.typed("1e6 N/m", q.STIFFNESS, "15 %")
    mount = Mount(id="m", stiffness=MountStiffness(x=soft, y=soft, z=STIFFNESS), **ENDS)
    assert link_lines(Model(), mount) == ("m", "x, y 1e6 N/m ±15 %", "z 4e8 N/m")


def test_gears_and_rigid_links_say_what_they_join():
    assert link_lines(Model(), Gear(id="g", teeth=(84, 20), **ENDS))[1] == "84 : 20 teeth"
    assert link_lines(Model(), Gear(id="g", ratio="-21/5", **ENDS))[1] == "ratio -21/5"
    assert link_lines(Model(), RigidLink(id="r", directions=("x", "rz"), **ENDS))[1] == "rigid in x, rz"


def test_a_tensor_is_written_by_its_diagonal():
    moments = {axis: Value.typed(f"{size} kg m2", q.INERTIA) for axis, size in (("Ixx", 820), ("Iyy", 3650))}
    tensor = InertiaTensor(**moments, Izz=Value.typed("3720 kg m2", q.INERTIA))
    assert body_lines(Model(), Body(id="set", inertia=tensor)) == ("set", "I 820, 3650, 3720 kg m2")


def test_an_excitation_is_written_with_its_strength():
    strength = Magnitude(grade=Entry("G 6.3", 0.0063), rotor_mass=Entry("190 kg", 190.0))
    unbalance = Excitation(id="1x", name="unbalance", order=1, magnitude=strength)
    assert excitation_line(unbalance) == "1× unbalance, rotor 190 kg, G 6.3"
    line = Excitation(id="line", frequency=Entry.typed("100 Hz", q.FREQUENCY))
    assert excitation_line(line) == "100 Hz line"


def test_shortened_texts_fit():
    text = "Cooling-water pump P-3 on its baseplate"
    for room in (30.0, 100.0, 200.0):
        assert text_width(shortened(text, room)) <= room
    assert shortened(text, 1000.0) == text
