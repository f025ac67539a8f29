"""Shifted systems of one matrix."""

import numpy as np
import pytest

from modalview.response.hessenberg import reduced


@pytest.mark.parametrize("size", [1, 2, 3, 17, 60])
@pytest.mark.parametrize("imaginary", [0.0, 1.0])
def test_systems_are_solved_backward_stably(size, imaginary):
    rng = np.random.default_rng(size)
    matrix = rng.standard_normal((size, size))
    if imaginary:
        matrix = matrix + 1j * rng.standard_normal((size, size))
    shifts = 1j * np.linspace(0.1, 9.0, 50)
    right = rng.standard_normal((size, 50)) + 1j * rng.standard_normal((size, 50))
    found = reduced(matrix).solve(shifts, right)
    rest = shifts * found - matrix @ found - right
    scale = np.linalg.norm(matrix) * np.linalg.norm(found, axis=0) + np.linalg.norm(right, axis=0)
    assert np.max(np.linalg.norm(rest, axis=0) / scale) < 1e-14


def test_a_defective_matrix_and_entries_of_zero_below_the_diagonal():
    matrix = np.array([[-1.0, 1.0, 0.0], [0.0, -1.0, 0.0], [0.0, 0.0, -2.0]])
    shifts, right = np.array([1j, 3j]), np.ones((3, 2), dtype=complex)
    found = reduced(matrix).solve(shifts, right)
    for column, shift in enumerate(shifts):
        exact = np.linalg.solve(shift * np.eye(3) - matrix, right[:, column])
        assert found[:, column] == pytest.approx(exact, rel=1e-14)


def test_a_singular_system_gives_something_very_large_and_no_warning():
    found = reduced(np.array([[0.0, 2.0], [-2.0, 0.0]])).solve(np.array([2j]), np.ones((2, 1), dtype=complex))
    assert np.abs(found).max() > 1e12
