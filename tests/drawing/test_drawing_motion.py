import numpy as np
import pytest

from modalview.drawing.modepicture import mode_geometry, mode_picture
from modalview.drawing.motion import frame, frozen, moved, pose, still_drawing
from modalview.drawing.primitives import Circles, Lines, Polygons, Role, Text
from modalview.drawing.sheet import sheet_geometry
from modalview.model.parts import FREEDOMS, Model

AXES = ("x", "y", "z", "rx", "ry", "rz")


def motion_of(model: Model, **directions: list[float]) -> np.ndarray:
    motion = np.zeros((len(model.bodies), 6))
    for name, values in directions.items():
        motion[:, AXES.index(name)] = values
    return motion


def random_motion(model: Model) -> np.ndarray:
    motion = np.zeros((len(model.bodies), 6))
    columns = [AXES.index(name) for name in FREEDOMS[model.motion]]
    motion[:, columns] = np.random.default_rng(7).uniform(-1, 1, (len(model.bodies), len(columns)))
    return motion


def test_at_rest_a_frame_is_the_sheet(plane_model: Model):
    geometry = sheet_geometry(plane_model, 720, 540)
    posed = pose(geometry, random_motion(plane_model))
    bodies = [item for item in frame(geometry, posed, 0.0).items if isinstance(item, Polygons)]
    assert np.array_equal(bodies[0].points, geometry.points.rest[geometry.faces[0]])


def test_bodies_move_along_their_mode(tower_model: Model):
    geometry = sheet_geometry(tower_model, 720, 540)
    posed = pose(geometry, motion_of(tower_model, y=[1.0, -0.5, 0.0]))
    assert np.allclose(posed.centre_steps[:, 0], 0)
    assert np.allclose(posed.centre_steps[:, 1], [-geometry.reach, geometry.reach / 2, 0])
    assert np.allclose(posed.sizes, [1, 0.5, 0])


def test_the_largest_motion_is_the_reach_whatever_the_scale(demo_model: Model):
    geometry = sheet_geometry(demo_model, 720, 540)
    motion = random_motion(demo_model)
    one, other = pose(geometry, motion), pose(geometry, 1e-6 * motion)
    assert np.allclose(one.steps, other.steps)
    assert np.max(np.hypot(*one.steps.T), initial=np.abs(one.centre_steps).max()) == pytest.approx(
        geometry.reach
    )


def test_springs_stay_on_the_bodies_they_stretch_between(plane_model: Model):
    geometry = sheet_geometry(plane_model, 720, 540)
    posed = pose(geometry, motion_of(plane_model, rz=[1.0, 0.0, 0.0]))
    centre = geometry.points.rest[geometry.centres[0]]
    for index in np.flatnonzero(geometry.points.bodies == 0):
        arm = geometry.points.rest[index] - centre
        # Turning anticlockwise by a small angle steps at right angles to the arm (y down on the sheet).
        assert posed.steps[index] @ arm == pytest.approx(0, abs=1e-6)
        assert posed.steps[index][1] * arm[0] <= 1e-9
    assert not posed.steps[geometry.points.bodies == -1].any()


def test_a_train_shows_rotation_in_end_views_and_by_a_line(train_model: Model):
    geometry = sheet_geometry(train_model, 720, 540)
    posed = pose(geometry, motion_of(train_model, rz=[1.0, 0.5, -1.0, 0.0]))
    still, turned = (frame(geometry, posed, factor).items for factor in (0.0, 1.0))
    accents = [
        (one, other)
        for one, other in zip(still, turned, strict=True)
        if isinstance(one, Lines) and isinstance(other, Lines) and one.role is Role.ACCENT
    ]
    assert len(accents) == 3
    assert all(not np.allclose(one.segments, other.segments) for one, other in accents)


def test_names_move_with_their_bodies(tower_model: Model):
    geometry = sheet_geometry(tower_model, 720, 540)
    posed = pose(geometry, motion_of(tower_model, y=[1.0, 0.0, 0.0]))
    rest, there = (
        next(
            item
            for item in frame(geometry, posed, factor).items
            if isinstance(item, Text) and item.text == "left"
        )
        for factor in (0.0, 1.0)
    )
    assert there.y - rest.y == pytest.approx(-geometry.reach)


def test_frozen_frames_point_and_mark_what_stands_still(tower_model: Model):
    geometry = sheet_geometry(tower_model, 720, 540)
    posed = pose(geometry, motion_of(tower_model, y=[1.0, -0.5, 0.01]))
    items = frozen(geometry, posed, 1.0).items
    arrows = [item for item in items if isinstance(item, Lines) and item.role is Role.ACCENT]
    assert sum(len(item.segments) for item in arrows) == 2 * 3
    corner = geometry.boxes[2, :2]
    assert any(isinstance(item, Circles) and np.array_equal(item.centres, [corner]) for item in items)


def test_the_ghost_stays_at_rest_in_dashes(tower_model: Model):
    items = still_drawing(sheet_geometry(tower_model, 720, 540), None).items
    ghosts = [item for item in items if isinstance(item, Lines) and item.role is Role.GHOST]
    assert max(len(item.segments) for item in ghosts) > 4 * len(tower_model.bodies)


def test_a_quarter_turn_of_phase_is_at_rest(plane_model: Model):
    geometry = sheet_geometry(plane_model, 720, 540)
    drawing = moved(geometry, random_motion(plane_model), 1.0, np.pi / 2)
    body = next(item for item in drawing.items if isinstance(item, Polygons))
    assert np.allclose(body.points, geometry.points.rest[geometry.faces[0]])


def test_small_pictures_hold_the_moved_model_and_no_text(demo_model: Model):
    geometry = mode_geometry(demo_model, 220, 100)
    drawing = mode_picture(geometry, pose(geometry, random_motion(demo_model)), 1.0)
    assert not any(isinstance(item, Text) for item in drawing.items)
    for item in drawing.items:
        if isinstance(item, Polygons):
            assert (item.points >= -1).all()
            assert (item.points <= [221, 101]).all()


def test_a_model_without_bodies_does_not_move():
    geometry = sheet_geometry(Model(), 400, 300)
    assert frozen(geometry, pose(geometry, np.zeros((0, 6)))).bounds == (0, 0, 400, 300)
