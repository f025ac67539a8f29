import numpy as np
import pytest

from modalview.eigen.standard import SMALL, eigenpairs, eigenvalues
from modalview.errors import NumericalError

SIZES = [1, 2, 3, 25, 26, SMALL - 1, SMALL, 90]


def symmetric(n: int) -> np.ndarray:
    entries = np.random.default_rng(n).standard_normal((n, n))
    return entries + entries.T


@pytest.mark.parametrize("n", SIZES)
def test_pairs_reproduce_the_matrix(n: int) -> None:
    matrix = symmetric(n)
    values, vectors = eigenpairs(matrix)
    assert np.allclose(vectors * values @ vectors.T, matrix, rtol=0, atol=1e-14 * n * np.abs(matrix).max())
    assert np.allclose(vectors.T @ vectors, np.eye(n), rtol=0, atol=1e-14 * n)
    assert np.all(np.diff(values) >= 0)


@pytest.mark.parametrize("n", SIZES)
def test_values_alone_agree(n: int) -> None:
    matrix = symmetric(n)
    assert np.allclose(eigenvalues(matrix), eigenpairs(matrix)[0], rtol=0, atol=1e-13 * n)


def test_input_is_left_alone() -> None:
    matrix = symmetric(6)
    before = matrix.copy()
    eigenvalues(matrix)
    eigenpairs(matrix)
    assert np.array_equal(matrix, before)


def test_diagonal_of_ones_is_repeated() -> None:
    values, vectors = eigenpairs(np.eye(8))
    assert np.array_equal(values, np.ones(8))
    assert np.allclose(vectors.T @ vectors, np.eye(8))


def test_nothing_has_no_eigenvalues() -> None:
    assert eigenvalues(np.zeros((0, 0))).size == 0
    assert eigenpairs(np.zeros((0, 0)))[1].shape == (0, 0)


def test_entries_that_are_no_numbers_are_refused() -> None:
    with pytest.raises(NumericalError):
        eigenpairs(np.full((SMALL, SMALL), np.nan))
