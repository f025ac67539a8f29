from dataclasses import replace

import numpy as np
import pytest

from modalview.drawing.furniture import title_lines
from modalview.drawing.marks import pitch_radii
from modalview.drawing.modepicture import mode_geometry, mode_picture, still_picture
from modalview.drawing.motion import frame, pose
from modalview.drawing.primitives import Lines, Text
from modalview.drawing.sheet import sheet_drawing, sheet_geometry
from modalview.drawing.symbols import bent
from modalview.model.adding import add_body
from modalview.model.adding_machines import add_excitation, add_machine
from modalview.model.parts import Drawn, End, Model, Motion


def test_pitch_circles_roll_without_slip():
    for ratio in (-0.3, -1.0, -4.2, 0.4, 3.0):
        one, other = pitch_radii(ratio, 10.0)
        assert one * 1.0 == pytest.approx(other * abs(ratio))
        assert (one + other if ratio < 0 else abs(one - other)) == pytest.approx(10.0)
    assert pitch_radii(1.0, 10.0) is None


def test_a_gear_in_a_plane_is_drawn_as_two_touching_circles(plane_model: Model):
    geometry = sheet_geometry(plane_model, 720, 540)
    circles = [mark for mark in geometry.marks if len(mark.lines) > 10]
    assert len(circles) == 2
    centres = geometry.points.rest[geometry.centres[:2]]
    radii = [
        np.hypot(*(geometry.points.rest[mark.lines[:, 0]] - centre).T)
        for mark, centre in zip(circles, centres, strict=True)
    ]
    assert all(np.ptp(radius) < 1e-6 * radius[0] for radius in radii)
    assert radii[0][0] + radii[1][0] == pytest.approx(np.hypot(*(centres[1] - centres[0])))


def test_a_disc_in_a_plane_shows_how_far_it_has_turned(plane_model: Model):
    disc = replace(plane_model.bodies[0], drawn=Drawn(shape="disc"))
    model = replace(plane_model, bodies=(disc, *plane_model.bodies[1:]), links=())
    geometry = sheet_geometry(model, 720, 540)
    (mark,) = geometry.marks
    motion = np.zeros((3, 6))
    motion[0, 5] = 1.0
    posed = pose(geometry, motion)
    rim = mark.lines[0, 1]
    assert posed.steps[rim, 0] < 0  # anticlockwise: the top goes left
    assert posed.steps[mark.lines[0, 0]] == pytest.approx([0, 0])


def test_a_bent_beam_keeps_the_slopes_of_its_ends():
    rest = np.array([[[0.0, 0.0], [100.0, 0.0]]])
    slopes = np.array([[[0.0, -10.0], [0.0, 0.0]]])  # the near end turns by 0.1
    line = bent(rest, np.zeros((1, 2, 2)), slopes)
    first, last = line[0], line[-1]
    assert (first[3] - first[1]) / (first[2] - first[0]) == pytest.approx(-0.1, rel=0.2)
    assert (last[3] - last[1]) / (last[2] - last[0]) == pytest.approx(0.0, abs=0.02)
    assert line[0, :2] == pytest.approx([0, 0])
    assert line[-1, 2:] == pytest.approx([100, 0])


def test_a_rigid_turn_leaves_a_beam_straight():
    rest = np.array([[[0.0, 0.0], [100.0, 0.0]]])
    turned = np.array([[[0.0, 0.0], [0.0, -8.0]]])
    slopes = np.array([[[0.0, -8.0], [0.0, -8.0]]])
    line = bent(rest, turned, slopes)
    assert line[:, 1] == pytest.approx(-0.08 * line[:, 0])


def test_beams_bend_with_the_rotation_of_their_bodies(plane_model: Model):
    geometry = sheet_geometry(plane_model, 720, 540)
    motion = np.zeros((3, 6))
    motion[0, 5] = 1.0
    still, bending = (
        next(item for item in frame(geometry, pose(geometry, motion), f).items if _is_beam(item))
        for f in (0.0, 1.0)
    )
    step = still.segments[-1, 2:] - still.segments[0, :2]
    across = np.array([step[1], -step[0]]) / np.hypot(*step)
    assert np.ptp((still.segments[:, :2] - still.segments[0, :2]) @ across) < 1e-6
    bow = (bending.segments[:, :2] - bending.segments[0, :2]) @ across
    straight = np.linspace(bow[0], bow[-1], len(bow))
    assert np.abs(bow - straight).max() > 0.2


def _is_beam(item) -> bool:
    return isinstance(item, Lines) and item.width == 4.5


def test_parts_out_of_step_pass_their_rest_position_at_different_phases(tower_model: Model):
    geometry = sheet_geometry(tower_model, 720, 540)
    motion = np.zeros((3, 6), dtype=complex)
    motion[:, 1] = [1.0, 1j, 0.0]
    posed = pose(geometry, motion)
    quarter = np.real(1j * posed.centre_steps)
    assert quarter[0] == pytest.approx([0, 0])
    assert abs(quarter[1, 1]) == pytest.approx(geometry.reach)


def test_a_picture_is_what_stands_still_under_what_moves(demo_model: Model):
    geometry = mode_geometry(demo_model, 220, 100)
    posed = pose(geometry, np.zeros((len(demo_model.bodies), 6)))
    whole = mode_picture(geometry, posed, 0.5).items
    assert len(whole) == len(still_picture(geometry).items) + len(frame(geometry, posed, 0.5).items)


def test_with_large_texts_labels_fall_away_before_the_model_shrinks(demo_model: Model):
    plain, large = (sheet_geometry(demo_model, 1000, 700, text_scale=scale) for scale in (1.0, 2.0))
    for geometry in (plain, large):
        assert all(np.isfinite(geometry.boxes).ravel())
    wide = [np.ptp(g.boxes[:, [0, 2]]) for g in (plain, large)]
    high = [np.ptp(g.link_ends[..., 1]) + np.ptp(g.boxes[:, [1, 3]]) for g in (plain, large)]
    assert wide[1] > 0.5 * wide[0] or high[1] > 0.5 * high[0]


def test_a_long_title_stands_in_two_lines_before_it_is_cut(tower_model: Model):
    model = replace(tower_model, title="Standby generator set with dynamic stiffness of its mounts")
    items = sheet_drawing(sheet_geometry(model, 650, 480), title_lines(model)).items
    texts = [item.text for item in items if isinstance(item, Text)]
    assert not any("…" in text for text in texts)
    assert any(text.endswith("its mounts") for text in texts)


def test_the_text_of_a_straight_arrow_stands_by_it_rather_than_across_its_body():
    model = Model(motion=Motion.PLANE)
    model, fan = add_body(model, "body", (0.0, 1.0), (2.0, 0.7))
    model, machine = add_machine(model, "fan", "900 rpm", "20 %")
    model, _ = add_excitation(model, machine, "1", at=End(body=fan), direction="y", name="unbalance")
    geometry = sheet_geometry(model, 595, 435)
    text = next(text for _, text in geometry.body_labels if text.text == "1× unbalance")
    ((_, segments),) = geometry.body_arrows
    low, high = segments.reshape(-1, 2).min(axis=0), segments.reshape(-1, 2).max(axis=0)
    assert low[1] - 24.0 < text.y < high[1] + 8.0
    assert low[0] - 24.0 < text.x < high[0] + 24.0
