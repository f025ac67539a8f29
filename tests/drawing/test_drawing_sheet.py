from dataclasses import replace

import numpy as np
import pytest

from modalview.drawing.excitations import pushes
from modalview.drawing.furniture import MARGIN, title_block, title_lines, title_size
from modalview.drawing.labels import extent
from modalview.drawing.lettering import USUAL
from modalview.drawing.overlay import chosen_items
from modalview.drawing.primitives import Box, Drawing, Lines, Role, Text
from modalview.drawing.sheet import SheetGeometry, part_at, sheet_drawing, sheet_geometry
from modalview.model.adding import add_body, add_link
from modalview.model.parts import End, Model
from modalview.places import demo_models
from modalview.store.reading import read_model

SIZES = [(720.0, 540.0), (1000.0, 700.0)]


def texts(drawing: Drawing) -> list[Text]:
    return [item for item in drawing.items if isinstance(item, Text)]


def overlap(one: tuple[float, ...], other: tuple[float, ...]) -> bool:
    return one[0] < other[2] and other[0] < one[2] and one[1] < other[3] and other[1] < one[3]


@pytest.mark.parametrize("size", SIZES)
def test_demo_models_find_room_for_every_label(demo_model: Model, size: tuple[float, float]):
    geometry = sheet_geometry(demo_model, *size)
    assert geometry.unlabelled == ()


@pytest.mark.parametrize("size", SIZES)
def test_labels_of_demo_models_meet_neither_each_other_nor_the_edge(
    demo_model: Model, size: tuple[float, float]
):
    drawing = sheet_drawing(sheet_geometry(demo_model, *size), title_lines(demo_model))
    boxes = [extent([text], 1.0) for text in texts(drawing)]
    for number, one in enumerate(boxes):
        assert one[0] >= 0
        assert one[1] >= 0
        assert one[2] <= size[0]
        assert one[3] <= size[1]
        for other in boxes[number + 1 :]:
            # Lines of one label touch; a pixel is not an overlap.
            assert not overlap((one[0], one[1] + 1, one[2], one[3] - 1), other)


def test_labels_beside_bodies_of_demo_models_keep_off_them(demo_model: Model):
    geometry = sheet_geometry(demo_model, 720, 540)
    for label in geometry.labels:
        for box in geometry.boxes:
            assert not overlap(extent([label], 1.0), tuple(box))


def test_every_part_of_demo_models_is_on_the_sheet(demo_model: Model):
    geometry = sheet_geometry(demo_model, 720, 540)
    for corners in (geometry.boxes.reshape(-1, 2), geometry.link_ends.reshape(-1, 2)):
        assert (corners >= 0).all()
        assert (corners <= [720, 540]).all()


def _apart(one: tuple[float, ...], other: tuple[float, ...]) -> float:
    across = max(other[0] - one[2], one[0] - other[2], 0.0)
    return float(np.hypot(across, max(other[1] - one[3], one[1] - other[3], 0.0)))


@pytest.mark.parametrize("size", [(550.0, 330.0), (658.0, 430.0), (720.0, 540.0)])
@pytest.mark.parametrize("text_scale", [1.0, 2.0])
def test_names_stand_nearest_to_their_own_body(
    demo_model: Model, size: tuple[float, float], text_scale: float
):
    geometry = sheet_geometry(demo_model, *size, text_scale=text_scale)
    boxes = [tuple(box) for box in geometry.boxes.tolist()]
    names = [body.name or body.id for body in demo_model.bodies]
    for number, label in geometry.body_labels:
        if label.text in names:
            place = extent([label], text_scale)
            nearest = min(_apart(place, box) for box in boxes)
            assert _apart(place, boxes[number]) <= nearest + 1.0 or geometry.train is not None


def test_each_arrow_has_its_own_text_beside_it_on_a_low_sheet():
    model = read_model(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")
    geometry = sheet_geometry(model, 658, 330)
    motor, pump = geometry.boxes[:2].tolist()
    texts = {label.text.partition(",")[0]: label for _, label in geometry.body_labels}
    for name, own, other in (("1× unbalance", motor, pump), ("7× vane pass", pump, motor)):
        place = extent([texts[name]], 1.0)
        assert _apart(place, tuple(own)) < _apart(place, tuple(other))


@pytest.mark.parametrize("size", [(660.0, 430.0), (720.0, 540.0), (1130.0, 640.0)])
def test_of_two_arrows_on_one_body_each_text_stands_nearer_to_its_own(size: tuple[float, float]):
    model = read_model(demo_models() / "4-standby-generator-set" / "dynamic-stiffness.keepclear")
    geometry = sheet_geometry(model, *size)
    acting = pushes(geometry)
    assert len(acting) == 2
    for push, other in (acting, acting[::-1]):
        head = push.texts[0].partition(",")[0]
        label = next(text for _, text in geometry.body_labels if text.text.startswith(head))
        place = extent([label], 1.0)
        assert _apart(place, tuple(push.box[0])) <= _apart(place, tuple(other.box[0]))


def test_what_moves_with_a_body_stays_off_the_title_block():
    model = read_model(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")
    geometry = sheet_geometry(model, 658, 430)
    bottom = MARGIN + title_size(model.title, (658, 430), 1.0)[1]
    for _, label in geometry.body_labels:
        assert extent([label], 1.0)[1] - USUAL * geometry.reach > bottom


def test_a_title_block_that_would_fill_the_sheet_is_a_strip_with_the_verdict(demo_model: Model):
    lines = title_lines(demo_model, checked="mode in band")
    for size, text_scale in (((740.0, 500.0), 2.0), ((400.0, 260.0), 1.0)):
        items = title_block(lines, size, text_scale)
        (box,) = (item for item in items if isinstance(item, Box))
        assert box.width * box.height < 0.13 * size[0] * size[1]
        assert box.x >= 60
        assert "mode in band" in {item.text for item in items if isinstance(item, Text)}


def test_the_title_block_writes_all_its_texts_in_one_size(demo_model: Model):
    items = title_block(title_lines(demo_model, checked="clear at nominal only"), (660.0, 430.0), 1.0)
    assert len({item.size for item in items if isinstance(item, Text) and item.role is Role.INK}) == 1


def test_larger_texts_still_fit(demo_model: Model):
    geometry = sheet_geometry(demo_model, 1000, 700, text_scale=1.5)
    for label in geometry.labels:
        x1, y1, x2, y2 = extent([label], 1.5)
        assert min(x1, y1) >= 0
        assert x2 <= 1000
        assert y2 <= 700


def test_every_kind_of_link_is_drawn(plane_model: Model):
    whole = _segments(sheet_geometry(plane_model, 720, 540))
    for link in plane_model.links:
        if link.kind == "gear":  # drawn by its touching bodies
            continue
        rest = replace(plane_model, links=tuple(other for other in plane_model.links if other is not link))
        assert _segments(sheet_geometry(rest, 720, 540)) < whole


def _segments(geometry: SheetGeometry) -> int:
    items = sheet_drawing(geometry, None).items
    return sum(len(item.segments) for item in items if isinstance(item, Lines))


def test_a_massless_junction_is_named_beside_its_point(plane_model: Model):
    geometry = sheet_geometry(plane_model, 720, 540)
    (label,) = (text for body, text in geometry.body_labels if body == 2)
    assert label.text == "j"
    x1, _, x2, _ = geometry.boxes[2]
    assert x2 - x1 < 15


def test_springs_end_on_their_bodies(tower_model: Model):
    geometry = sheet_geometry(tower_model, 720, 540)
    for ends, pair in zip(geometry.link_ends, geometry.link_bodies, strict=True):
        for point, number in zip(ends, pair, strict=True):
            if number >= 0:
                x1, y1, x2, y2 = geometry.boxes[number]
                assert x1 - 1 <= point[0] <= x2 + 1
                assert y1 - 1 <= point[1] <= y2 + 1


def test_a_model_without_positions_stands_in_rows(tower_model: Model):
    left, right, base = sheet_geometry(tower_model, 720, 540).boxes
    assert left[3] < base[1]
    assert right[3] < base[1]
    assert left[2] < right[0]


def test_links_between_the_same_parts_stand_apart(tower_model: Model):
    geometry = sheet_geometry(tower_model, 720, 540)
    one, other = geometry.link_ends[2], geometry.link_ends[3]
    assert abs(one[0, 0] - other[0, 0]) > 15


def test_gears_touch(train_model: Model):
    _, wheel, pinion, _ = sheet_geometry(train_model, 720, 540).boxes
    assert wheel[3] == pytest.approx(pinion[1])
    assert (wheel[3] - wheel[1]) / (pinion[3] - pinion[1]) == pytest.approx(84 / 20)


def test_a_point_of_the_sheet_names_its_part(tower_model: Model):
    geometry = sheet_geometry(tower_model, 720, 540)
    x1, y1, x2, y2 = geometry.boxes[0]
    assert part_at(geometry, (x1 + x2) / 2, (y1 + y2) / 2) == "left"
    assert part_at(geometry, *geometry.link_ends[0].mean(axis=0)) == "k0"
    foot = geometry.link_ends[2, 1]
    assert part_at(geometry, foot[0], foot[1] + 6) == "s"
    assert part_at(geometry, 3, 3) is None


def test_every_chosen_part_is_framed_and_a_single_one_has_handles(tower_model: Model):
    geometry = sheet_geometry(tower_model, 720, 540)
    for part, grips in (("left", 8), ("k0", 2), ("s", 0)):
        assert len(chosen_items(geometry, (part,))) == 1 + grips
    assert len(chosen_items(geometry, ("left", "k0", "s"))) == 3


def test_a_moved_view_moves_every_point(plane_model: Model):
    geometry = sheet_geometry(plane_model, 720, 540)
    moved = sheet_geometry(plane_model, 720, 540, view=geometry.view.panned(30, -20))
    assert np.allclose(moved.boxes, geometry.boxes + np.array([30, -20, 30, -20]))


def test_zooming_keeps_the_point_under_the_pointer(plane_model: Model):
    view = sheet_geometry(plane_model, 720, 540).view
    world = np.array([[1.0, 1.0, 0.0]])
    x, y = view.to_pixels(world)[0]
    assert np.allclose(view.zoomed(1.7, x, y).to_pixels(world)[0], [x, y])


@pytest.mark.parametrize("motion", ["single axis", "shaft train", "plane", "space"])
def test_an_empty_model_is_an_empty_sheet(motion: str):
    model = Model(motion=type(Model().motion)(motion))
    drawing = sheet_drawing(sheet_geometry(model, 400, 300), title_lines(model))
    assert any(text.text == "untitled" for text in texts(drawing))


def test_the_title_block_tells_the_motion_and_the_verdict(tower_model: Model):
    lines = title_lines(tower_model, checked="mode in band")
    assert lines.motion == "single axis · 3 DOF"
    found = {text.text for text in texts(sheet_drawing(sheet_geometry(tower_model, 720, 540), lines))}
    assert {"tower", "mode in band", "single axis · 3 DOF"} <= found


def test_no_text_of_a_link_stands_past_the_body_that_it_carries():
    model = Model()
    bodies = []
    for place, size in (((-0.85, 0.55), (1.3, 0.5)), ((1.05, 0.55), (1.1, 0.5)), ((0.05, -0.4), (3.1, 0.4))):
        model, body = add_body(model, "mass", place, size)
        bodies.append(body)
    motor, _, plate = (End(body=body) for body in bodies)
    model, link = add_link(model, "spring", motor, plate)
    view = replace(sheet_geometry(model, 595, 434).view, scale_x=100.0, scale_y=100.0, left=297.0, top=240.0)
    geometry = sheet_geometry(model, 595, 434, view=view)
    name = next(text for text in geometry.labels if text.text == link)
    assert name.y > geometry.boxes[0][1]
