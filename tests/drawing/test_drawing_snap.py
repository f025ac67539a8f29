"""Where a pointer is drawn to, and what lies under it."""

import numpy as np
import pytest

from modalview.drawing import hits, overlay
from modalview.drawing.sheet import sheet_geometry
from modalview.drawing.snap import Wish, grid_step, snapped, world_at
from modalview.places import demo_models
from modalview.store import open_model

PUMP = open_model(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")[0]
SET = open_model(demo_models() / "4-standby-generator-set" / "dynamic-stiffness.keepclear")[0]


@pytest.fixture(scope="module")
def pump():
    return sheet_geometry(PUMP, 652, 438)


def box(geometry, name):
    number = next(n for n, body in enumerate(geometry.model.bodies) if body.id == name)
    return geometry.boxes[number].tolist()


def test_a_pixel_and_its_world_point_are_each_others(pump):
    world = world_at(pump.view, 123.0, 321.0)
    assert pump.view.to_pixels(world[None])[0] == pytest.approx([123.0, 321.0])


def test_in_the_turned_view_a_pointer_moves_along_the_machine_and_up():
    geometry = sheet_geometry(SET, 652, 438)
    through = np.array([0.3, 0.48, 0.1])
    world = world_at(geometry.view, 300.0, 200.0, through)
    assert world[1] == 0.48
    assert geometry.view.to_pixels(world[None])[0] == pytest.approx([300.0, 200.0])


@pytest.mark.parametrize(
    ("scale", "step"), [(9.0, 1.0), (8.9, 2.0), (100.0, 0.1), (450.0, 0.02), (1e5, 1e-4)]
)
def test_the_grid_steps_by_one_two_or_five(scale, step):
    assert grid_step(scale) == step


def test_a_pointer_near_the_middle_of_an_underside_is_drawn_to_it(pump):
    x1, _, x2, y2 = box(pump, "motor")
    found = snapped(pump, (x1 + x2) / 2 + 4, y2 - 3)
    assert (found.x, found.y) == pytest.approx(((x1 + x2) / 2, y2))
    assert found.what == "underside of motor"
    assert found.world[:2] == pytest.approx([-0.5, 1.04])


def test_away_from_parts_it_is_drawn_to_the_grid(pump):
    found = snapped(pump, 33.0, 47.0)
    step = grid_step(pump.view.scale_x)
    assert found.world[:2] / step == pytest.approx(np.round(found.world[:2] / step))


def test_beside_a_part_it_is_drawn_to_its_height_and_says_so(pump):
    _, y1, x2, _ = box(pump, "pump")
    found = snapped(pump, x2 + 31.0, y1 + 3.0)
    assert found.y == pytest.approx(y1)
    assert "level with" in found.what
    assert len(found.lines) >= 1


def test_free_it_is_drawn_to_nothing(pump):
    x1, _, x2, y2 = box(pump, "motor")
    found = snapped(pump, (x1 + x2) / 2 + 4, y2 - 3, Wish(free=True))
    assert (found.x, found.what) == ((x1 + x2) / 2 + 4, "")


def test_straight_it_keeps_the_height_of_its_start(pump):
    found = snapped(pump, 240.0, 130.0, Wish(start=(100.0, 117.0)))
    assert found.y == 117.0


def test_what_moves_is_not_drawn_to_itself(pump):
    x1, _, x2, y2 = box(pump, "motor")
    found = snapped(pump, (x1 + x2) / 2, y2, Wish(leave_out=frozenset({"motor"})))
    assert "motor" not in found.what


def test_handles_stand_about_the_one_chosen_body_and_at_the_ends_of_a_link(pump):
    assert {one.name for one in hits.handles(pump, ("motor",))} == set(hits.CORNERS)
    ends = hits.handles(pump, ("k3",))
    assert [one.name for one in ends] == ["from", "to"]
    assert hits.handle_at(pump, ("k3",), ends[1].x + 2, ends[1].y - 2) == ends[1]
    assert hits.handles(pump, ("motor", "pump")) == ()


def test_a_band_holds_what_lies_wholly_inside(pump):
    x1, y1, _, _ = box(pump, "motor")
    _, _, x2, y2 = box(pump, "base")
    inside = hits.within(pump, (x2 + 60, y1 - 5, x1 - 60, y2 + 5))
    assert set(inside) == {"motor", "pump", "base", "k1", "k2"}
    assert hits.within(pump, (0, 0, 5, 5)) == ()


def test_ground_and_bodies_are_found_under_a_pointer(pump):
    foot = pump.link_ends[2, 1].tolist()
    assert hits.foot_at(pump, foot[0] + 3, foot[1]) == "ground"
    x1, y1, *_ = box(pump, "base")
    assert pump.model.bodies[hits.body_at(pump, x1 + 4, y1 + 4)].id == "base"
    assert hits.body_at(pump, 1.0, 1.0) is None
    assert hits.frame_of(pump, "nothing") is None


def test_a_long_hint_is_broken_into_lines_that_fit():
    box_, *lines = overlay.hint_line("word " * 60, 300.0, 400.0, 1.0)
    assert len(lines) > 2
    assert box_.y + box_.height <= 400.0
