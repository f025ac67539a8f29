"""Mirroring and turning: directions, axes, freedoms, tensors and what refers to them."""

from dataclasses import replace

import pytest

from modalview.errors import InputError
from modalview.model.adding import (
    add_body,
    add_excitation,
    add_link,
    add_machine,
    add_support,
    end_at,
)
from modalview.model.parts import (
    Axes,
    End,
    InertiaTensor,
    Limit,
    LoadCase,
    LoadChange,
    MeasuredPeak,
    Model,
    Motion,
    ShapePoint,
)
from modalview.model.rules import faults
from modalview.model.turning import mirrored, rotated
from modalview.model.turns import reflection, rotation, turned_direction, turned_names, turned_tensor
from modalview.model.values import Entry, Tolerance, Value
from modalview.units.quantities import FREQUENCY, INERTIA, PRODUCT_OF_INERTIA

ORIGIN = (0.0, 0.0)
CENTRE = (0.0, 0.0, 0.0)


def texts(point):
    return [entry.text for entry in point]


def one_on_ground(motion=Motion.PLANE, kind="spring"):
    """A body with a link from an offset point to the ground under it."""
    up = (lambda x, y: (x, 0.0, y)) if motion is Motion.SPACE else (lambda x, y: (x, y))
    model, body = add_body(Model(motion=motion), "body", up(1.0, 0.5), (0.6, 0.4))
    model, ground = add_support(model, up(1.2, 0.0))
    return add_link(model, kind, end_at(model, body, up(1.2, 0.3)), End(support=ground))[0]


def test_a_body_is_mirrored_with_its_ends_and_the_ground_that_carries_nothing_else():
    model = one_on_ground()
    after = mirrored(model, ["b1"], "x", ORIGIN)
    assert texts(after.bodies[0].position) == ["-1 m", "0.5 m"]
    assert texts(after.links[0].from_.offset) == ["-0.2 m", "-0.2 m"]
    assert texts(after.supports[0].position) == ["-1.2 m", "0 m"]
    assert after.bodies[0].position[1] is model.bodies[0].position[1]
    left = mirrored(model, ["b1"], "x", ORIGIN, lone_supports_follow=False)
    assert left.supports is model.supports


def test_a_quarter_turn_is_exact_and_exchanges_the_drawn_sides():
    after = rotated(one_on_ground(), ["b1"], 90, (1.0, 0.5))
    assert texts(after.bodies[0].position) == ["1 m", "0.5 m"]
    assert texts(after.links[0].from_.offset) == ["0.2 m", "0.2 m"]
    assert texts(after.supports[0].position) == ["1.5 m", "0.7 m"]
    assert (after.bodies[0].drawn.width.text, after.bodies[0].drawn.height.text) == ("0.4 m", "0.6 m")


def test_what_is_not_turned_is_the_very_same_object():
    model = one_on_ground()
    model, other = add_body(model, "body", (3.0, 0.0), (0.2, 0.2))
    after = rotated(model, ["b1"], 30, ORIGIN)
    assert after.bodies[1] is model.bodies[1]
    assert rotated(model, [other], 360, ORIGIN) is model
    assert mirrored(model, ["k1"], "x", ORIGIN) is model


@pytest.mark.parametrize(
    ("given", "degrees", "told"),
    [
        ("x", 90, "y"),
        ("-y", 90, "x"),
        ("x", 30, "30 deg"),
        ("30 deg", 60, "y"),
        ("30.5 deg", -90, "-59.5 deg"),
        ("rz", 30, "rz"),
        ("rotating", 30, "rotating"),
        ((3.0, 4.0), 90, (-4.0, 3.0)),
    ],
)
def test_directions_turn_with_their_sense(given, degrees, told):
    assert turned_direction(given, rotation(degrees), 2) == told


def test_a_reflection_turns_the_sense_of_a_rotation_round():
    assert turned_direction("x", reflection("x"), 2) == "-x"
    assert turned_direction("y", reflection("x"), 2) == "y"
    assert turned_direction("30 deg", reflection("x"), 2) == "150 deg"
    assert turned_direction("rz", reflection("x"), 2) == "-rz"
    assert turned_direction("rx", reflection("x"), 3) == "rx"


def test_the_line_of_a_spring_has_no_sense():
    model = one_on_ground()
    along = replace(model.links[0], direction="x")
    model = replace(model, links=(along,))
    assert mirrored(model, ["b1"], "x", ORIGIN).links[0].direction == "x"
    assert rotated(model, ["b1"], -90, ORIGIN).links[0].direction == "y"
    assert rotated(model, ["b1"], 30, ORIGIN).links[0].direction == "30 deg"


def test_a_link_that_leaves_the_selection_keeps_its_direction():
    model, other = add_body(one_on_ground(), "body", (3.0, 0.0), (0.2, 0.2))
    model, _ = add_link(model, "mount", End(body="b1"), End(body=other))
    model = replace(model, links=(model.links[0], replace(model.links[1], axes=Axes(x=(3.0, 4.0)))))
    after = rotated(model, ["b1"], 90, ORIGIN)
    assert after.links[1] is model.links[1]


def test_a_mount_gets_axes_of_its_own_and_loses_them_when_they_are_the_models_again():
    model = one_on_ground(kind="mount")
    turned = rotated(model, ["b1"], 90, ORIGIN)
    assert turned.links[0].axes == Axes(x=(0.0, 1.0))
    assert rotated(turned, ["b1"], 90, ORIGIN).links[0].axes is None
    assert mirrored(model, ["b1"], "x", ORIGIN).links[0].axes is None
    space = rotated(one_on_ground(Motion.SPACE, "mount"), ["b1"], 90, CENTRE, "x")
    assert space.links[0].axes == Axes(x=(1.0, 0.0, 0.0), y=(0.0, 0.0, 1.0))
    assert faults(space) == ()


def test_axes_that_were_left_out_are_completed_before_they_are_turned():
    model = one_on_ground(Motion.SPACE, "mount")
    upright = replace(model, links=(replace(model.links[0], axes=Axes(x=(0.0, 0.0, 1.0))),))
    after = rotated(upright, ["b1"], 90, CENTRE, "z")
    # Without y, an axis x that is upright has y along the model's y: it turns to x.
    assert after.links[0].axes == Axes(x=(0.0, 0.0, 1.0), y=(1.0, 0.0, 0.0))


def test_the_axis_of_a_shaft_in_space_is_told_once_it_is_not_x():
    model, one = add_body(Model(motion=Motion.SPACE), "body", CENTRE, (0.2, 0.2))
    model, other = add_body(model, "body", (1.0, 0.0, 0.0), (0.2, 0.2))
    model, _ = add_link(model, "shaft", End(body=one), End(body=other))
    assert model.links[0].axis is None
    after = rotated(model, [one, other], -90, CENTRE, "z")
    assert after.links[0].axis == (0.0, 1.0, 0.0)
    assert rotated(after, [one, other], 90, CENTRE, "z").links[0].axis == (1.0, 0.0, 0.0)
    assert rotated(model, [one, other], 30, CENTRE, "x").links[0] is model.links[0]


def test_the_section_of_a_beam_turns_with_it():
    model, one = add_body(Model(motion=Motion.SPACE), "body", CENTRE, (0.2, 0.2))
    model, other = add_body(model, "body", (1.0, 0.0, 0.0), (0.2, 0.2))
    model, _ = add_link(model, "beam", End(body=one), End(body=other))
    model = replace(model, links=(replace(model.links[0], axes=Axes(y=(0.0, 1.0, 0.0))),))
    assert rotated(model, [one, other], 90, CENTRE, "x").links[0].axes == Axes(y=(0.0, 0.0, 1.0))


def test_a_body_that_moves_along_one_axis_turns_by_quarters_or_is_refused():
    assert turned_names(("x", "rz"), ("x", "y", "rz"), rotation(90), "body") == ("y", "rz")
    assert turned_names(("x", "y"), ("x", "y", "rz"), rotation(30), "body") == ("x", "y")
    assert turned_names(("z", "rx", "ry"), ("x", "y", "z", "rx", "ry", "rz"), rotation(30), "b") == (
        "z",
        "rx",
        "ry",
    )
    model = one_on_ground()
    held = replace(model, bodies=(replace(model.bodies[0], dof=("y",)),))
    assert rotated(held, ["b1"], 90, ORIGIN).bodies[0].dof == ("x",)
    with pytest.raises(InputError, match=r'body "b1" is limited to y .* by quarter turns, not by 30 deg'):
        rotated(held, ["b1"], 30, ORIGIN)


def test_a_rigid_link_in_listed_directions_turns_by_quarters_or_is_refused():
    model, other = add_body(one_on_ground(), "body", (3.0, 0.0), (0.2, 0.2))
    model, _ = add_link(model, "rigid link", End(body="b1"), End(body=other))
    model = replace(model, links=(model.links[0], replace(model.links[1], directions=("y",))))
    assert rotated(model, ["b1", other], 90, ORIGIN).links[1].directions == ("x",)
    with pytest.raises(InputError, match='rigid link "r1" is limited to y'):
        rotated(model, ["b1", other], 30, ORIGIN)


def tensor(**entries):
    return InertiaTensor(
        tolerance=Tolerance.symmetric("5 %"),
        **{
            key: Value(
                Entry.typed(text, PRODUCT_OF_INERTIA if key[0] == "P" else INERTIA), source="maker", by="box"
            )
            for key, text in entries.items()
        },
    )


def test_an_exact_turn_of_a_tensor_keeps_texts_and_sources_but_not_the_handbook():
    given = tensor(Ixx="2 t m2", Iyy="3 t m2", Izz="4 t m2", Pxy="0.5 t m2", Pxz="-0.25 t m2")
    image = turned_tensor(given, reflection("x"))
    assert (image.Pxy.text, image.Pxz.text, image.Pyz) == ("-0.5 t m2", "0.25 t m2", None)
    assert image.Ixx is given.Ixx
    turned = turned_tensor(given, rotation(90, "z"))
    found = {key: getattr(turned, key).text for key in ("Ixx", "Iyy", "Izz", "Pxy", "Pyz")}
    # x goes to y and y to -x: P'xy = -Pxy, P'yz = Pxz.
    assert found == {
        "Ixx": "3 t m2",
        "Iyy": "2 t m2",
        "Izz": "4 t m2",
        "Pxy": "-0.5 t m2",
        "Pyz": "-0.25 t m2",
    }
    assert turned.Pxz is None
    assert (turned.Ixx.source, turned.Ixx.by) == ("maker", None)
    assert turned.Izz is given.Izz
    assert turned.tolerance == given.tolerance


def test_any_other_turn_of_a_tensor_computes_its_products():
    turned = turned_tensor(tensor(Ixx="2 kg m2", Iyy="4 kg m2", Izz="5 kg m2"), rotation(45, "z"))
    assert [turned.Ixx.si, turned.Iyy.si, turned.Izz.si] == pytest.approx([3, 3, 5], rel=1e-14)
    # J'xy = (Ixx - Iyy) sin cos = -1, and P is minus that.
    assert turned.Pxy.si == pytest.approx(1, rel=1e-14)
    assert (turned.Pxz, turned.Pyz) == (None, None)
    assert turned.Ixx.source == "maker"


def test_excitations_peaks_and_limits_at_a_turned_body_follow():
    model = one_on_ground()
    at = end_at(model, "b1", (1.3, 0.5))
    model, machine = add_machine(model, "fan", "600 rpm", "15 %")
    model, _ = add_excitation(model, machine, "1x", at=at, direction="y", magnitude="5 N")
    model, _ = add_excitation(model, machine, "2x", direction="y")
    point = ShapePoint(at=at, direction="x", amplitude=1.0)
    frequency = Entry.typed("17 Hz", FREQUENCY)
    model = replace(
        model,
        measured=(MeasuredPeak(id="p", frequency=frequency, at=at, direction="x", shape=(point,)),),
        limits=(Limit(id="l", at=at, direction="x", quantity="velocity rms", value="4.5 mm/s"),),
    )
    after = rotated(model, ["b1"], 90, ORIGIN)
    first, second = after.machines[0].excitations
    assert (texts(first.at.offset), first.direction) == (["0 m", "0.3 m"], "-x")
    assert second is model.machines[0].excitations[1]
    for told in (after.measured[0], after.measured[0].shape[0], after.limits[0]):
        assert (texts(told.at.offset), told.direction) == (["0 m", "0.3 m"], "y")
    assert faults(after) == ()


def test_the_axis_of_a_rotating_force_in_space_is_told_once_it_is_not_x():
    model = one_on_ground(Motion.SPACE)
    model, machine = add_machine(model, "fan", "600 rpm", "15 %")
    model, _ = add_excitation(model, machine, "1x", at=End(body="b1"), direction="rotating")
    turned = rotated(model, ["b1"], 90, CENTRE, "z").machines[0].excitations[0]
    assert turned.axis == (0.0, 1.0, 0.0)
    assert mirrored(model, ["b1"], "y", CENTRE).machines[0].excitations[0].axis == (-1.0, 0.0, 0.0)
    assert mirrored(model, ["b1"], "x", CENTRE).machines == model.machines


def test_a_load_case_follows_its_moment_of_inertia_or_the_turn_is_refused():
    model = one_on_ground(Motion.SPACE)
    changes = (LoadChange(part="b1", key="inertia.Ixx", value="9 kg m2"),)
    model = replace(model, load_cases=(LoadCase(id="full", changes=changes),))
    assert rotated(model, ["b1"], 90, CENTRE, "z").load_cases[0].changes[0].key == "inertia.Iyy"
    assert mirrored(model, ["b1"], "x", CENTRE).load_cases is model.load_cases
    with pytest.raises(InputError, match=r'load case "full" changes inertia.Ixx of "b1"'):
        rotated(model, ["b1"], 30, CENTRE, "z")


def test_what_keeps_its_direction_can_be_mirrored_and_turned_half_round_only():
    model, name = add_body(Model(), "mass", (1.0, 2.0))
    assert texts(rotated(model, [name], 180, ORIGIN).bodies[0].position) == ["-1 m", "-2 m"]
    with pytest.raises(InputError, match="in single axis every part keeps its direction"):
        rotated(model, [name], 90, ORIGIN)
    with pytest.raises(InputError, match='no axis "z" here; it has x, y'):
        mirrored(model, [name], "z", ORIGIN)
    with pytest.raises(InputError, match="finite"):
        rotated(one_on_ground(), ["b1"], float("inf"), ORIGIN)
