"""Modes are known again by their shapes."""

import numpy as np
import pytest
import scipy.sparse as sp

from modalview.eigen.following import followed, likeness
from modalview.errors import InputError

MASS = sp.csc_array(np.diag([4.0, 1.0]))


def test_orthonormal_shapes_are_like_themselves_alone():
    shapes = np.diag([0.5, 1.0])
    assert likeness(shapes, shapes, MASS) == pytest.approx(np.eye(2))


def test_modes_that_changed_places_are_followed():
    shapes = np.diag([0.5, 1.0])
    places, size = followed(likeness(shapes, shapes[:, ::-1], MASS))
    assert places.tolist() == [1, 0]
    assert size == pytest.approx([1.0, 1.0])


def test_every_mode_is_taken_once():
    places, _ = followed(np.array([[0.9, 0.1], [0.8, 0.2]]))
    assert sorted(places.tolist()) == [0, 1]


def test_rows_sum_to_one_over_all_modes():
    turn = np.linalg.qr(np.random.default_rng(3).normal(size=(2, 2)))[0]
    before = np.diag([0.5, 1.0])
    assert likeness(before, before @ turn, MASS).sum(axis=1) == pytest.approx([1.0, 1.0])


def test_other_coordinates_are_refused():
    with pytest.raises(InputError, match="before has 2 coordinates and after 3"):
        likeness(np.eye(2), np.eye(3), sp.csc_array(sp.eye_array(3)))
