import numpy as np
import pytest
import scipy.sparse as sp
from exact import chain_rows, random_rows

from modalview.assembly.pencil import pencil_of_matrices, pencil_of_terms
from modalview.eigen.massless import dense_factor, massless_floor
from modalview.errors import NumericalError


def test_projection_has_the_singular_values_of_elimination() -> None:
    rng = np.random.default_rng(2)
    rows = random_rows(rng, 12, 8, ground=True)
    mass = rng.uniform(1, 3, 12)
    mass[[0, 3, 7]] = 0
    pencil = pencil_of_terms(rows, rng.uniform(1, 10, rows.shape[0]), mass)
    projected = dense_factor(pencil)
    assert projected.shape == (rows.shape[0] - 3, 9)
    eliminated = pencil.factor.toarray()
    assert np.allclose(projected.T @ projected, eliminated.T @ eliminated, rtol=0, atol=1e-12)


def test_springs_in_series_keep_their_digits() -> None:
    """Ground, spring, massless junction, spring, mass: k = a b/(a + b) at any ratio."""
    for ratio in (1.0, 1e8, 1e15):
        pencil = pencil_of_terms(chain_rows(2), np.array([ratio, 3.0]), np.array([0.0, 1.0]))
        assert np.sum(dense_factor(pencil) ** 2) == pytest.approx(3 * ratio / (3 + ratio), rel=1e-15)


def test_without_massless_coordinates_it_is_g() -> None:
    pencil = pencil_of_terms(chain_rows(4), np.arange(1.0, 5), np.arange(2.0, 6))
    assert np.array_equal(dense_factor(pencil), pencil.factor.toarray())
    assert massless_floor(pencil) is None


def test_floor_bounds_the_surplus_energy() -> None:
    rng = np.random.default_rng(5)
    rows = random_rows(rng, 10, 5, ground=True)
    mass = rng.uniform(1, 3, 10)
    mass[[2, 6, 8]] = 0
    pencil = pencil_of_terms(rows, rng.uniform(1, 10, rows.shape[0]), mass)
    floor = massless_floor(pencil)
    off = np.zeros((10, 1))
    off[[2, 6, 8], 0] = rng.standard_normal(3)
    surplus = (off.T @ (pencil.K @ off)).item()
    bound = floor.surplus_energy(pencil.K @ off, np.zeros((10, 1)))[0]
    assert surplus <= bound <= 100 * surplus


def test_matrices_have_no_factor() -> None:
    identity = sp.csc_array(np.eye(2))
    with pytest.raises(NumericalError, match="no terms"):
        dense_factor(pencil_of_matrices(identity, identity))
