"""New parts: starting values that say so, ends as pointed at, and refusals with their reason."""

import math

import pytest

from modalview.errors import InputError, ModelFaultsError
from modalview.model.adding import (
    BODY_KINDS,
    STARTING,
    add_body,
    add_excitation,
    add_link,
    add_machine,
    add_support,
    end_at,
    fresh_id,
)
from modalview.model.edits import set_value_text
from modalview.model.parts import LINK_KINDS, End, Excitation, Machine, Model, Motion, SpeedRange
from modalview.model.rules import faults
from modalview.model.rules_links import KINDS
from modalview.store import dump_model, parse_model


def place(motion, x, up):
    return (x, 0.0, up) if motion is Motion.SPACE else (x, up)


def drawn(motion):
    """Two bodies and a support of a motion."""
    kind = BODY_KINDS[motion][0] if motion in (Motion.SINGLE_AXIS, Motion.SHAFT_TRAIN) else "body"
    model = Model(motion=motion)
    model, one = add_body(model, kind, place(motion, 0.0, 1.0), (0.4, 0.2))
    model, other = add_body(model, kind, place(motion, 2.0, 1.5), (0.4, 0.2))
    model, ground = add_support(model, place(motion, 0.0, 0.0))
    return model, one, other, ground


@pytest.mark.parametrize("motion", Motion)
def test_every_kind_of_body_that_has_a_meaning_breaks_no_rule_and_can_be_saved(motion):
    model = Model(motion=motion)
    for number, kind in enumerate(BODY_KINDS[motion]):
        model, name = add_body(model, kind, place(motion, float(number), 1.0), (0.5, 0.2))
        assert model.bodies[-1].id == name
        assert faults(model) == ()
    assert parse_model(dump_model(model)) == model


@pytest.mark.parametrize("motion", Motion)
@pytest.mark.parametrize("kind", LINK_KINDS)
def test_every_kind_of_link_is_made_or_refused_with_the_kinds_that_have_a_meaning(motion, kind):
    model, one, other, _ = drawn(motion)
    if LINK_KINDS[kind] in KINDS[motion]:
        model, name = add_link(model, kind, End(body=one), End(body=other))
        assert (model.links[-1].id, model.links[-1].kind) == (name, kind)
        assert faults(model) == ()
        assert parse_model(dump_model(model)) == model
    else:
        with pytest.raises(InputError, match=f"a {kind} has no meaning in {motion.value}; links here are"):
            add_link(model, kind, End(body=one), End(body=other))


def test_a_value_nobody_gave_says_so_until_it_is_typed():
    model, _, _, _ = drawn(Motion.PLANE)
    mass = model.bodies[0].mass
    assert (mass.text, mass.source, mass.status) == ("100 kg", STARTING, "assumed")
    typed = set_value_text(model, ("bodies", "b1", "mass"), "620 kg").apply(model).bodies[0].mass
    assert (typed.text, typed.source, typed.status) == ("620 kg", None, None)


def test_the_inertia_is_that_of_what_is_drawn():
    model, _ = add_body(Model(motion=Motion.PLANE), "body", (0.0, 0.0), (0.6, 0.8))
    assert model.bodies[0].inertia.si == pytest.approx(100 * (0.6**2 + 0.8**2) / 12, rel=1e-3)
    model, _ = add_body(model, "disc", (0.0, 0.0), (0.6, 0.6))
    assert model.bodies[1].inertia.si == pytest.approx(100 * 0.3**2 / 2, rel=1e-3)
    space, _ = add_body(Model(motion=Motion.SPACE), "body", (0.0, 0.0, 0.0), (0.6, 0.8))
    tensor = space.bodies[0].inertia
    found = (tensor.Ixx.si, tensor.Iyy.si, tensor.Izz.si)
    box = [100 * (a * a + b * b) / 12 for a, b in ((0.6, 0.8), (0.6, 0.8), (0.6, 0.6))]
    assert found == pytest.approx(box, rel=1e-3)


@pytest.mark.parametrize("size", [(0.01, 30.0), (30.0, 0.01), (1e-3, 1e-3), (1.234567, 0.7654321)])
def test_the_rounded_tensor_of_any_box_is_possible(size):
    model, _ = add_body(Model(motion=Motion.SPACE), "body", (0.0, 0.0, 0.0), size)
    assert faults(model) == ()


def test_a_body_of_no_size_or_no_meaning_is_refused():
    with pytest.raises(InputError, match="width and a height above zero"):
        add_body(Model(motion=Motion.PLANE), "body", (0.0, 0.0), (0.0, 1.0))
    with pytest.raises(
        InputError, match="a disc has no meaning in single axis; bodies here are mass, junction"
    ):
        add_body(Model(), "disc", (0.0, 0.0))
    with pytest.raises(ModelFaultsError, match="needs three"):
        add_body(Model(motion=Motion.SPACE), "mass", (0.0, 0.0))


def test_ids_are_the_first_free_ones_of_the_whole_file():
    used = Machine(id="b2", excitations=(Excitation(id="b3", order=1.0),))
    model = Model(motion=Motion.PLANE, machines=(used,))
    model, first = add_body(model, "body", (0.0, 0.0))
    model, second = add_body(model, "body", (0.0, 0.0))
    assert (first, second) == ("b1", "b4")
    assert fresh_id(model, "k") == "k1"


def test_an_end_is_offset_from_the_centre_of_gravity_in_the_units_of_the_body():
    model, one, _, _ = drawn(Motion.PLANE)
    assert end_at(model, one, (0.1 + 0.2, 1.0)) == End(body=one, offset=end_at(model, one, (0.3, 1.0)).offset)
    assert [entry.text for entry in end_at(model, one, (0.3, 0.9)).offset] == ["0.3 m", "-0.1 m"]
    assert end_at(model, one, (0.0, 1.0)) == End(body=one)
    train, disc, _, _ = drawn(Motion.SHAFT_TRAIN)
    assert end_at(train, disc, (0.1, 1.1)) == End(body=disc)


def test_a_spring_between_coinciding_ends_acts_along_the_drag_or_is_refused():
    model, one, _, _ = drawn(Motion.SPACE)
    model, other = add_body(model, "mass", (0.0, 0.0, 1.0))
    made, _ = add_link(model, "spring", End(body=one), End(body=other), drag=(0.1, 0.0, -0.4))
    assert made.links[-1].direction == "z"
    with pytest.raises(ModelFaultsError, match="the ends coincide"):
        add_link(model, "spring", End(body=one), End(body=other))
    apart, _ = add_link(model, "spring", End(body=one), end_at(model, other, (0.0, 0.5, 1.0)), drag=(1, 0, 0))
    assert apart.links[-1].direction is None


def test_a_mount_resists_every_shift_and_no_turn():
    model, one, _, ground = drawn(Motion.SPACE)
    stiffness = add_link(model, "mount", End(body=one), End(support=ground))[0].links[-1].stiffness
    assert [stiffness.x.si, stiffness.y.si, stiffness.z.si] == [1e6] * 3
    assert (stiffness.rx, stiffness.ry, stiffness.rz) == (None, None, None)


def test_a_shaft_in_space_turns_about_the_line_it_is_drawn_along():
    model, one, other, _ = drawn(Motion.SPACE)
    made, _ = add_link(model, "shaft", End(body=one), End(body=other))
    assert made.links[-1].axis == pytest.approx((2 / math.hypot(2, 0.5), 0.0, 0.5 / math.hypot(2, 0.5)))


def test_a_gear_drawn_between_two_discs_reverses():
    from modalview.model.gears import gear_ratio

    model, one, other, ground = drawn(Motion.SHAFT_TRAIN)
    made, _ = add_link(model, "gear", End(body=one), End(body=other))
    assert gear_ratio(made.links[-1]) == -2
    with pytest.raises(ModelFaultsError, match="a gear joins two bodies"):
        add_link(model, "gear", End(body=one), End(support=ground))


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [
        ("600 to 1800 rpm", "600 rpm", "1800 rpm"),
        ("600\u20131800 rpm", "600 rpm", "1800 rpm"),
        ("10 Hz to 1800 rpm", "10 Hz", "1800 rpm"),
    ],
)
def test_a_range_of_speeds_is_typed_as_one_text(text, low, high):
    model, name = add_machine(Model(), "fan", text, "15 %")
    speed = model.machines[0].speed
    assert isinstance(speed, SpeedRange)
    assert (speed.from_.text, speed.to.text, name) == (low, high, "mc1")


def test_a_machine_has_no_default_margin_and_every_wrong_field_is_told():
    with pytest.raises(ModelFaultsError) as told:
        add_machine(Model(), "fan", "600 kg", " ", on="nobody")
    assert [fault.path for fault in told.value.faults] == ["speed", "margin", "on"]
    assert "has no default" in str(told.value)
    with pytest.raises(ModelFaultsError, match=r"margin: .*15 %"):
        add_machine(Model(), "fan", "600 rpm", "15")


def test_margins_to_both_sides_may_differ_and_take_a_decimal_comma():
    margin = add_machine(Model(), "", "600 rpm", "-10 % / +12,5 %")[0].machines[0].margin
    assert (margin.below.text, margin.above.text) == ("10 %", "12.5 %")


@pytest.mark.parametrize(
    ("motion", "text", "kind"),
    [
        (Motion.PLANE, "400 N", "force"),
        (Motion.PLANE, "0,3 kN m", "torque"),
        (Motion.PLANE, "850 g mm", "unbalance"),
        (Motion.PLANE, "G 6,3 of 320 kg", "grade"),
        (Motion.SHAFT_TRAIN, "150 N m", "torque"),
    ],
)
def test_the_unit_of_a_magnitude_says_what_it_is(motion, text, kind):
    model, one, _, _ = drawn(motion)
    model, machine = add_machine(model, "fan", "600 rpm", "15 %")
    direction = "y" if motion is Motion.PLANE and kind != "torque" else None
    model, _ = add_excitation(model, machine, "1x", at=End(body=one), direction=direction, magnitude=text)
    magnitude = model.machines[0].excitations[0].magnitude
    assert getattr(magnitude, kind) is not None
    assert faults(model) == ()


def test_a_motion_belongs_to_a_support_and_is_an_angle_in_a_shaft_train():
    model, one, _, ground = drawn(Motion.PLANE)
    model, machine = add_machine(model, "press", "60 rpm", "15 %")
    made, _ = add_excitation(
        model, machine, "2", at=End(support=ground), direction="y", magnitude="0,1 mm", name=" floor "
    )
    assert made.machines[0].excitations[0].magnitude.motion.text == "0.1 mm"
    assert made.machines[0].excitations[0].name == "floor"
    with pytest.raises(ModelFaultsError) as told:
        add_excitation(model, machine, "2", at=End(body=one), direction="y", magnitude="0.1 mm")
    assert [fault.path for fault in told.value.faults] == ["at"]


def test_orders_and_frequencies_are_told_apart_and_excitations_are_called_by_them():
    model, machine = add_machine(Model(), "fan", "600 rpm", "15 %")
    model, first = add_excitation(model, machine, "7x")
    model, second = add_excitation(model, machine, "7")
    model, third = add_excitation(model, machine, "100 Hz")
    orders = [(one.order, one.frequency and one.frequency.text) for one in model.machines[0].excitations]
    assert orders == [(7.0, None), (7.0, None), (None, "100 Hz")]
    assert (first, second, third) == ("7x", "7x 2", "f1")
    with pytest.raises(ModelFaultsError, match=r"order: .*cannot be read as frequency"):
        add_excitation(model, machine, "seven")
    with pytest.raises(ModelFaultsError, match="order: must be above zero"):
        add_excitation(model, machine, "0")


def test_an_order_may_be_of_the_speed_of_another_shaft_a_fixed_frequency_is_of_none():
    model, one, other, _ = drawn(Motion.SHAFT_TRAIN)
    model, machine = add_machine(model, "train", "1485 rpm", "10 %", on=one)
    model, _ = add_excitation(model, machine, "1x", at=End(body=other), of=other)
    model, _ = add_excitation(model, machine, "100 Hz", at=End(body=other), of=other)
    assert [one.of for one in model.machines[0].excitations] == [other, None]
    assert faults(model) == ()


def test_a_machine_of_fixed_frequencies_alone_has_no_speed():
    model, machine = add_machine(Model(), "hall", "", "10 %")
    assert model.machines[0].speed is None
    assert add_excitation(model, machine, "100 Hz")[0].machines[0].excitations[0].frequency.text == "100 Hz"
    with pytest.raises(ModelFaultsError, match="machine's speed, which is missing"):
        add_excitation(model, machine, "1x")
