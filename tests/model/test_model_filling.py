"""Typing where nothing stands yet, and several texts at once."""

import pytest

from modalview.errors import InputError, ModelFaultsError, UnitError
from modalview.model.addresses import look
from modalview.model.composites import composite_text, read_composite
from modalview.model.edits import set_value_text
from modalview.model.filling import typed_together
from modalview.model.parts import (
    Body,
    Damper,
    End,
    Excitation,
    Gear,
    Machine,
    Model,
    Motion,
    Mount,
    MountStiffness,
    RigidLink,
    Spring,
    Support,
)
from modalview.model.values import STARTING, Entry, Value
from modalview.units import quantities as q

GROUND = Support(id="g", position=(Entry("0 m", 0.0),) * 3)


def point(*texts):
    return tuple(Entry.typed(text, q.LENGTH) for text in texts)


def set_in_space():
    body = Body(id="set", mass=Value.typed("3200 kg", q.MASS), position=point("0 m", "0 m", "1 m"))
    mount = Mount(
        id="m1",
        from_=End(body="set"),
        to=End(support="g"),
        stiffness=MountStiffness(z=Value.typed("9e5 N/m", q.STIFFNESS)),
    )
    return Model(motion=Motion.SPACE, bodies=(body,), supports=(GROUND,), links=(mount,))


def typed(model, *pairs):
    edit = typed_together(model, pairs, "Type")
    changed = edit.apply(model)
    assert edit.revert(changed) == model
    return changed


def test_an_absent_direction_of_a_mount_is_made():
    changed = typed(set_in_space(), (("links", "m1", "stiffness", "x"), "540 kN/m"))
    assert changed.links[0].stiffness.x.text == "540 kN/m"


def test_the_first_damping_of_a_mount_makes_its_record_and_the_last_one_taken_away_removes_it():
    address = ("links", "m1", "damping", "rz")
    changed = typed(set_in_space(), (address, "35 N m s/rad"))
    assert changed.links[0].damping.rz.si == 35.0
    assert typed(changed, (address, "")).links[0].damping is None


def test_moments_of_inertia_are_only_right_together():
    model = set_in_space()
    at = ("bodies", "set", "inertia")
    with pytest.raises(UnitError, match="Iyy and Izz must be given too"):
        typed_together(model, [((*at, "Ixx"), "820 kg m2")], "Type")
    changed = typed(
        model, ((*at, "Ixx"), "820 kg m2"), ((*at, "Iyy"), "3650 kg m2"), ((*at, "Izz"), "3720 kg m2")
    )
    assert changed.bodies[0].inertia.Izz.si == 3720.0


def test_the_first_coordinate_of_an_offset_sets_the_others_to_zero():
    changed = typed(set_in_space(), (("links", "m1", "from_", "offset", 1), "-0,48 m"))
    assert [one.text for one in changed.links[0].from_.offset] == ["0 m", "-0.48 m", "0 m"]


def test_what_breaks_a_rule_together_is_refused_as_a_whole():
    model = set_in_space()
    with pytest.raises(ModelFaultsError, match="above zero"):
        typed_together(
            model,
            [(("bodies", "set", "mass"), "3300 kg"), (("links", "m1", "stiffness", "z"), "-1 N/m")],
            "Type",
        )


def test_a_required_field_cannot_be_left_empty():
    with pytest.raises(InputError, match="cannot be left empty"):
        typed_together(set_in_space(), [(("links", "m1", "from_"), "")], "Type")


def test_a_magnitude_changes_its_kind_in_one_edit():
    unbalance = Excitation(id="1x", order=1.0, at=End(body="a"), direction="y")
    fan = Machine(
        id="fan",
        speed=Entry.typed("1480 rpm", q.SPEED),
        margin=Entry.typed("15 %", q.RATIO),
        excitations=(unbalance,),
    )
    model = Model(bodies=(Body(id="a", mass=Value.typed("1 t", q.MASS)),), machines=(fan,))
    at = ("machines", "fan", "excitations", "1x", "magnitude")
    forced = typed(model, ((*at, "force"), "400 N"))
    graded = typed(forced, ((*at, "force"), ""), ((*at, "grade"), "G 6.3"), ((*at, "rotor_mass"), "190 kg"))
    magnitude = graded.machines[0].excitations[0].magnitude
    assert (magnitude.force, magnitude.grade.text, magnitude.rotor_mass.text) == (None, "G 6.3", "190 kg")
    without = typed(graded, ((*at, "grade"), ""), ((*at, "rotor_mass"), ""))
    assert without.machines[0].excitations[0].magnitude is None


def test_limits_of_a_tolerance_are_read_in_the_value_s_quantity():
    changed = typed(set_in_space(), (("links", "m1", "stiffness", "z", "tolerance"), "8e5 N/m to 1e6 N/m"))
    assert changed.links[0].stiffness.z.tolerance.low.si == 8e5


def test_a_starting_value_counts_as_given_once_it_is_typed_even_with_the_same_number():
    start = Value(Entry("100 kg", 100.0), source=STARTING, status="assumed")
    model = Model(bodies=(Body(id="a", mass=start),))
    at = ("bodies", "a", "mass")
    for changed in (set_value_text(model, at, "100 kg").apply(model), typed(model, (at, "4*25 kg"))):
        assert (look(changed, at).source, look(changed, at).status) == (None, None)


COMPOSITES = [
    (Machine, "speed", "2950 rpm", "2950 rpm"),
    (Machine, "speed", "600 rpm to 1800 rpm", "600 rpm to 1800 rpm"),
    (Machine, "speed", "600 to 1800 rpm", "600 rpm to 1800 rpm"),
    (Machine, "speed", "10 to 30 Hz", "10 Hz to 30 Hz"),
    (Machine, "margin", "15 %", "15 %"),
    (Machine, "margin", "±15 %", "15 %"),
    (Excitation, "margin", "-10 % / +12,5 %", "-10 % / +12.5 %"),
    (Spring, "direction", "-y", "-y"),
    (Spring, "direction", "30 deg", "30 deg"),
    (Damper, "direction", "0 0.6 0.8", "0 0.6 0.8"),
    (Excitation, "direction", "[0, -1, 0]", "0 -1 0"),
    (Excitation, "order", "7x", "7"),
    (Excitation, "order", "0,5", "0.5"),
    (Gear, "teeth", "84:20", "84 : 20"),
    (Gear, "teeth", "84 / -20", "84 : -20"),
    (Gear, "axis", "1 0 0", "1 0 0"),
    (Body, "dof", "x, rz", "x, rz"),
    (RigidLink, "directions", "x y", "x, y"),
]


@pytest.mark.parametrize(("part", "name", "text", "written"), COMPOSITES)
def test_a_composite_is_read_and_written(part, name, text, written):
    item = read_composite(part, name, text)
    assert composite_text(part, name, item) == written
    assert read_composite(part, name, written) == item


@pytest.mark.parametrize(
    ("part", "name", "text", "words"),
    [
        (Machine, "speed", "600 to 1800", "the unit is missing"),
        (Machine, "speed", "fast", "plain number"),
        (Machine, "margin", "10 % / 20 %", 'write "-10 % / \\+20 %"'),
        (Excitation, "order", "100 Hz", "is a fixed frequency"),
        (Gear, "teeth", "84", 'such as "84 : 20"'),
        (Gear, "teeth", "8.4 : 2", 'such as "84 : 20"'),
        (Gear, "axis", "y", "write its components"),
        (Machine, "speed", "1,200 rpm", "can be read as"),
    ],
)
def test_a_composite_is_refused_with_the_way_it_is_written(part, name, text, words):
    with pytest.raises(UnitError, match=words):
        read_composite(part, name, text)


def test_with_a_mass_typed_in_a_form_goes_the_inertia_that_nobody_gave():
    drawn = Value(Entry("37.5 kg m2", 37.5), source=STARTING)
    model = Model(
        motion=Motion.PLANE,
        bodies=(
            Body(id="b", mass=Value.typed("100 kg", q.MASS), inertia=drawn, position=GROUND.position[:2]),
        ),
    )
    edit = typed_together(model, [(("bodies", "b", "mass"), "250 kg")], "Set mass")
    assert edit.apply(model).bodies[0].inertia.si == pytest.approx(93.75, rel=1e-3)
    assert edit.apply(model).bodies[0].mass.text == "250 kg"
