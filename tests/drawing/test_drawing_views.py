"""Space models seen turned and straight: projections, what lies along the line of sight, what is behind."""

from dataclasses import replace

import numpy as np
import pytest

from modalview.drawing.endon import sight_segments
from modalview.drawing.furniture import MARGIN, axes, switch_room, title_size
from modalview.drawing.geometry import SheetGeometry
from modalview.drawing.modepicture import mode_geometry, mode_picture
from modalview.drawing.motion import frame, frozen, moved, pose
from modalview.drawing.primitives import Circles, Lines, Role, Size, Text
from modalview.drawing.sheet import part_at, parts_at, sheet_drawing, sheet_geometry
from modalview.drawing.snap import drawn_axes, hidden_axis, snapped, with_depth, world_at
from modalview.drawing.view import STRAIGHT, Viewpoint, projection
from modalview.model.parts import (
    Body,
    Drawn,
    End,
    Excitation,
    Machine,
    Model,
    Motion,
    Mount,
    MountStiffness,
    Spring,
    Support,
)
from modalview.model.templates import TEMPLATES, build
from modalview.model.values import Entry, Value
from modalview.places import demo_models
from modalview.store import open_model
from modalview.units import quantities as q

SET = open_model(demo_models() / "4-standby-generator-set" / "dynamic-stiffness.keepclear")[0]
SIZE = (720, 540)
STIFFNESS = Value.typed("1e6 N/m", q.STIFFNESS)
UNIT = {"x": 0, "y": 1, "z": 2}


def metres(*lengths):
    return tuple(Entry(f"{length} m", length) for length in lengths)


def box(name, *position, width=1.0, height=0.5):
    return Body(
        id=name,
        mass=Value.typed("100 kg", q.MASS),
        position=metres(*position),
        drawn=Drawn(width=metres(width)[0], height=metres(height)[0]),
    )


def seen(model, view) -> SheetGeometry:
    return sheet_geometry(model, *SIZE, viewpoint=Viewpoint(view))


@pytest.mark.parametrize(
    ("view", "right", "up", "towards"),
    [("front", "x", "z", "-y"), ("side", "y", "z", "x"), ("top", "x", "y", "z")],
)
def test_a_straight_view_shows_two_axes_as_they_are_and_hides_the_third(view, right, up, towards):
    matrix = projection(Motion.SPACE, Viewpoint(view))
    assert matrix.tolist() == np.eye(3)[[UNIT[right], UNIT[up]]].tolist()
    geometry = seen(SET, view)
    sign = -1.0 if towards.startswith("-") else 1.0
    assert geometry.view.towards.tolist() == (sign * np.eye(3)[UNIT[towards[-1]]]).tolist()
    assert drawn_axes(geometry.view) == STRAIGHT[Viewpoint(view)]
    assert hidden_axis(geometry.view) == UNIT[towards[-1]]


@pytest.mark.parametrize("view", Viewpoint)
def test_a_pixel_and_its_world_point_are_each_others_and_keep_the_depth(view):
    geometry = seen(SET, view)
    through = np.array([0.31, -0.47, 0.83])
    world = world_at(geometry.view, 301.5, 207.25, through)
    assert geometry.view.to_pixels(world[None])[0] == pytest.approx([301.5, 207.25])
    hidden = hidden_axis(geometry.view)
    assert world[hidden] == through[hidden]
    deeper = with_depth(geometry.view, world, 2.0)
    assert deeper[hidden] == 2.0
    assert geometry.view.to_pixels(deeper[None])[0] == pytest.approx([301.5, 207.25])


@pytest.mark.parametrize("view", Viewpoint)
def test_a_view_can_be_zoomed_and_panned_and_stays_what_it_is(view):
    geometry = seen(SET, view)
    again = sheet_geometry(SET, *SIZE, view=geometry.view.zoomed(1.5, 100, 100).panned(10, -5))
    assert again.view.viewpoint == view
    assert again.view.scale_x == pytest.approx(1.5 * geometry.view.scale_x)


def test_other_motions_have_one_view():
    model = Model(motion=Motion.PLANE, bodies=(Body(id="b", position=metres(0, 0)),))
    geometry = seen(model, "top")
    assert geometry.view.viewpoint is Viewpoint.TURNED
    assert not geometry.view.straight


@pytest.mark.parametrize(
    ("view", "wide", "high"), [("front", 3.0, 1.24), ("side", 1.2, 1.24), ("top", 3.0, 1.2)]
)
def test_a_body_has_the_same_three_sides_in_every_view(view, wide, high):
    geometry = seen(SET, view)
    assert [len(faces) for faces in geometry.faces] == [1]
    x1, y1, x2, y2 = geometry.boxes[0] / geometry.view.scale_x
    assert (x2 - x1, y2 - y1) == pytest.approx((wide, high))
    turned = seen(SET, "turned").outline
    assert (geometry.outline.high - geometry.outline.low)[0] == pytest.approx((turned.high - turned.low)[0])


def test_without_links_on_both_sides_a_body_is_as_deep_as_a_share_of_its_width():
    geometry = seen(Model(motion=Motion.SPACE, bodies=(box("b", 0, 0, 0, width=2.0),)), "top")
    assert (geometry.outline.high - geometry.outline.low)[0] == pytest.approx([2.0, 1.2, 0.5])


@pytest.mark.parametrize(("view", "step"), [("front", (0, -1, 0)), ("side", (1, 0, 0)), ("top", (0, 0, 1))])
def test_the_body_nearer_to_the_eye_is_painted_last(view, step):
    far, near = box("far", 0, 0, 0), box("near", *step)
    for bodies in ((far, near), (near, far)):
        geometry = seen(Model(motion=Motion.SPACE, bodies=bodies), view)
        order = [int(body) for faces in geometry.faces for body in geometry.points.bodies[faces[:, 0]]]
        assert bodies[order[-1]].id == "near"


def test_links_along_the_line_of_sight_are_rings_that_can_be_chosen():
    geometry = seen(SET, "top")
    assert geometry.links_end_on.all()
    assert not seen(SET, "front").links_end_on.any()
    assert not seen(SET, "turned").links_end_on.any()
    true = geometry.view.to_pixels(geometry.places.ends[:, 0])
    rings = np.vstack(
        [item.centres for item in sheet_drawing(geometry, None).items if isinstance(item, Circles)]
    )
    for number, place in enumerate(true):
        assert (np.abs(rings - place).max(axis=1) < 0.01).any()
        assert part_at(geometry, *place) == SET.links[number].id
        assert "set" in parts_at(geometry, *place)


def test_links_one_behind_the_other_are_drawn_beside_each_other():
    geometry = seen(SET, "front")
    middles = geometry.link_ends.mean(axis=1)
    apart = np.hypot(*(middles[:, None] - middles[None]).T) + 100 * np.eye(6)
    assert apart.min() > 15.0
    for number, middle in enumerate(middles):
        assert part_at(geometry, *middle) == SET.links[number].id


@pytest.mark.parametrize("kind", [Spring, Mount])
@pytest.mark.parametrize("view", ["front", "side", "top"])
def test_a_link_between_bodies_one_behind_the_other_does_not_vanish(kind, view):
    step = {"front": (0, 1, 0), "side": (1, 0, 0), "top": (0, 0, 1)}[view]
    values = STIFFNESS if kind is Spring else MountStiffness(x=STIFFNESS)
    link = kind(id="k", from_=End(body="a"), to=End(body="b"), stiffness=values)
    bodies = (box("a", 0, 0, 0), box("b", *step))
    geometry = seen(Model(motion=Motion.SPACE, bodies=bodies, links=(link,)), view)
    assert geometry.links_end_on.tolist() == [True]
    assert part_at(geometry, *geometry.link_ends[0, 0]) == "k"
    assert geometry.links[0].on_top


@pytest.mark.parametrize(("view", "end_on"), [("front", True), ("side", False), ("top", False)])
def test_a_spring_with_a_direction_of_its_own_is_seen_end_on_along_that(view, end_on):
    link = Spring(id="k", from_=End(body="a"), to=End(support="s"), stiffness=STIFFNESS, direction="y")
    model = Model(
        motion=Motion.SPACE,
        bodies=(box("a", 0, 0, 0),),
        supports=(Support(id="s", position=metres(0, 0, 0)),),
        links=(link,),
    )
    geometry = seen(model, view)
    assert geometry.links_end_on.tolist() == [end_on]
    step = np.abs(geometry.link_ends[0, 1] - geometry.link_ends[0, 0])
    expected = {"front": (0, 0), "side": (46, 0), "top": (0, 46)}[view]
    assert step == pytest.approx(expected)


@pytest.mark.parametrize("view", Viewpoint)
@pytest.mark.parametrize("axis", range(3))
def test_a_motion_is_seen_along_its_axis_or_told_by_a_mark(view, axis):
    geometry = seen(SET, view)
    motion = np.zeros((1, 6))
    motion[0, axis] = 1.0
    posed = pose(geometry, motion)
    assert posed.sizes.tolist() == pytest.approx([1.0])
    if view is Viewpoint.TURNED:
        assert np.hypot(*posed.centre_steps[0]) == pytest.approx(geometry.reach)
        return
    toward = geometry.view.towards[axis]
    assert posed.nearing[0] == pytest.approx(toward)
    flat = geometry.view.matrix[:, axis] * [1.0, -1.0]
    assert posed.centre_steps[0] == pytest.approx(geometry.reach * flat, abs=1e-9)
    marks = _accents(frozen(geometry, posed)) - _accents(frame(geometry, posed, 1.0))
    assert marks == (3 if toward == 0 else len(sight_segments((0, 0), towards=bool(toward > 0))))


def _accents(drawing) -> int:
    return sum(len(i.segments) for i in drawing.items if isinstance(i, Lines) and i.role is Role.ACCENT)


@pytest.mark.parametrize(("view", "axis", "sign"), [("front", 4, -1), ("side", 3, 1), ("top", 5, 1)])
def test_a_turn_about_the_line_of_sight_is_seen_anticlockwise_from_the_eye(view, axis, sign):
    geometry = seen(SET, view)
    motion = np.zeros((1, 6))
    motion[0, axis] = sign
    posed = pose(geometry, motion)
    assert posed.turns[0] > 0.5
    right = int(np.argmax(geometry.points.rest[:, 0]))
    assert posed.steps[right, 1] < 0  # what is on the right goes up


@pytest.mark.parametrize("view", Viewpoint)
def test_a_small_picture_moves_in_every_view(view):
    geometry = mode_geometry(SET, 180, 90, view)
    drawing = mode_picture(geometry, pose(geometry, np.ones((1, 6))), 1.0)
    assert geometry.view.viewpoint is view
    assert drawing.items


@pytest.mark.parametrize(("view", "away"), [("front", "y"), ("side", "x"), ("top", "z")])
def test_the_axis_along_the_line_of_sight_stands_in_a_circle(view, away):
    items, _ = axes(Motion.SPACE, 1.0, viewpoint=Viewpoint(view))
    texts = [item.text for item in items if isinstance(item, Text)]
    assert texts == ["x", "y", "z", f"{view} view"]
    segments = [len(item.segments) for item in items if isinstance(item, Lines)]
    assert segments == [6, *[len(sight_segments((0, 0), towards=view != "front"))]]
    assert away in texts


@pytest.mark.parametrize(("direction", "sight"), [("y", True), ("-y", True), ("x", False), ("z", False)])
def test_a_force_along_the_line_of_sight_is_a_point_or_a_cross_in_a_circle(direction, sight):
    acting = Excitation(id="e", order=1, at=End(body="set"), direction=direction)
    model = replace(SET, machines=(Machine(id="m", excitations=(acting,)),))
    ((_, segments),) = seen(model, "front").body_arrows
    if sight:
        assert len(segments) == len(sight_segments((0, 0), towards=direction == "-y"))
    assert (np.ptp(segments.reshape(-1, 2), axis=0).min() > 10.0) == sight


@pytest.mark.parametrize("view", Viewpoint)
@pytest.mark.parametrize("size", [(1000, 700), (420, 300)])
def test_texts_of_every_view_stay_on_the_sheet(view, size):
    geometry = sheet_geometry(SET, *size, viewpoint=view)
    for item in (*geometry.labels, *(text for _, text in geometry.body_labels)):
        assert 0 <= item.x <= size[0]
        assert 0 <= item.y <= size[1]
    assert moved(geometry, np.ones((1, 6)), 1.0, 0.0).items


# Snapping


def test_a_pointer_near_the_end_of_a_link_is_drawn_to_it_at_its_own_depth():
    geometry = seen(SET, "front")
    for number in (0, 1):  # one behind the other: which of the two is found, its whole place is right
        place = geometry.view.to_pixels(geometry.places.ends[number, 0])
        found = snapped(geometry, place[0] + 3, place[1] - 2)
        assert found.on_point
        assert found.what in ("attachment of rear right mount", "attachment of rear left mount")
        assert abs(found.world[1]) == 0.48
        assert found.world[[0, 2]] == pytest.approx(geometry.places.ends[number, 0, [0, 2]])


def test_beside_a_body_a_pointer_gets_its_depth_and_far_from_all_none():
    geometry = seen(Model(motion=Motion.SPACE, bodies=(box("b", 0, 0.7, 0),)), "front")
    x1, y1, x2, y2 = geometry.boxes[0]
    assert snapped(geometry, x2 + 20, y1 + 31).world[1] == 0.7
    assert snapped(geometry, x1 - 100.3, y2 + 77.7).world[1] == 0.0
    assert snapped(geometry, x1 - 100.3, y2).world[1] == 0.7  # level with its underside


def test_what_is_moved_keeps_its_depth_wherever_it_is_drawn_to():
    geometry = seen(SET, "front")
    middle = geometry.points.rest[geometry.centres[0]]
    found = snapped(geometry, *middle, through=np.array([9.0, 1.25, 9.0]))
    assert found.world == pytest.approx([0.0, 1.25, 1.05])


@pytest.mark.parametrize("view", Viewpoint)
@pytest.mark.parametrize(
    ("size", "text_scale"), [((595.0, 434.0), 1.0), ((660.0, 496.0), 1.5), ((900.0, 700.0), 2.0)]
)
def test_the_switch_of_the_views_stands_before_no_body(view, size, text_scale):
    set_of_six = build(
        next(one for one in TEMPLATES if one.title == "Machine on four, six or more mounts"), {"number": "6"}
    )
    geometry = sheet_geometry(set_of_six, *size, text_scale=text_scale, viewpoint=view)
    room = size[0] - 2 * MARGIN - title_size(set_of_six.title, size, text_scale)[0]
    x, y, wide, tall = switch_room(text_scale, room)
    x1, y1, x2, _ = geometry.boxes[0]
    assert y + tall <= y1 or x + wide <= x1 or x >= x2
    assert geometry.boxes[0][3] - y1 > 0.15 * size[1]


def test_values_of_a_body_are_written_small_before_they_fall_away():
    six = next(one for one in TEMPLATES if one.title == "Machine on four, six or more mounts")
    geometry = sheet_geometry(build(six, {"number": "6"}), 595, 434)
    told = {text.text: text.size for _, text in geometry.body_labels}
    assert told == {"machine": Size.NORMAL, "3000 kg": Size.SMALL, "I 800, 3500, 3500 kg m2": Size.SMALL}
