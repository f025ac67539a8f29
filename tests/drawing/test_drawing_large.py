"""Sheets of more bodies than can be compared each with each."""

import numpy as np
import pytest
from conftest import body

from modalview.drawing import geometry, outline
from modalview.drawing.layout import _apart
from modalview.drawing.sheet import sheet_geometry
from modalview.model.parts import Model, Motion


@pytest.mark.parametrize("columns", [1, 6])
def test_bodies_of_a_lattice_are_sized_the_same_whether_compared_or_by_levels(columns, monkeypatch):
    bodies = tuple(body(f"b{n}", 1.5 * (n % columns), 1.2 * (n // columns)) for n in range(12 * columns))
    model = Model(motion=Motion.PLANE, bodies=bodies)
    compared = sheet_geometry(model, 900, 700).boxes
    monkeypatch.setattr(outline, "COMPARED", 0)
    assert sheet_geometry(model, 900, 700).boxes == pytest.approx(compared)


def test_points_gathered_in_steps_are_the_same(monkeypatch):
    bodies = tuple(body(f"b{n}", 1.5 * (n % 4), 1.2 * (n // 4)) for n in range(20))
    model = Model(motion=Motion.PLANE, bodies=bodies)
    whole = sheet_geometry(model, 900, 700)
    monkeypatch.setattr(geometry, "JOINED_AT_ONCE", 3)
    parts = sheet_geometry(model, 900, 700)
    assert (parts.points.rest == whole.points.rest).all()
    assert (parts.points.bodies == whole.points.bodies).all()
    assert [len(faces) for faces in parts.faces] == [len(faces) for faces in whole.faces]


def test_bodies_between_levels_stay_apart_from_their_neighbours(monkeypatch):
    monkeypatch.setattr(outline, "COMPARED", 0)
    places = np.random.default_rng(3).uniform(0, 9, (30, 2))
    bodies = tuple(body(f"b{n}", *place) for n, place in enumerate(places.tolist()))
    boxes = sheet_geometry(Model(motion=Motion.PLANE, bodies=bodies), 900, 700).boxes
    low, high = boxes[:, None, :2], boxes[None, :, 2:]
    meet = ((low < high) & (boxes[None, :, :2] < boxes[:, None, 2:])).all(axis=2)
    assert meet.sum() == len(bodies)  # each only itself


@pytest.mark.parametrize("twice", [True, False])
def test_bodies_at_one_point_are_told_from_bodies_that_share_heights(twice):
    centres = np.array([[x, y, 0.0] for x in (0.0, 1.0, 2.0) for y in (0.5, -0.5)])
    centres[3] = centres[0] if twice else (1.0, 0.25, 0.0)
    assert _apart(centres) is not twice
