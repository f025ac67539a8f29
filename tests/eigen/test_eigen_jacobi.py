import numpy as np
import pytest

from modalview.eigen.jacobi import singular_pairs


@pytest.mark.parametrize(("rows", "columns"), [(1, 1), (3, 5), (5, 5), (9, 5), (40, 21)])
def test_pairs_of_a_random_factor(rows: int, columns: int) -> None:
    factor = np.random.default_rng(rows).standard_normal((rows, columns))
    squares, right = singular_pairs(factor)
    assert np.allclose(squares, np.linalg.eigvalsh(factor.T @ factor), rtol=0, atol=1e-12)
    assert np.allclose(right.T @ right, np.eye(columns), rtol=0, atol=1e-13)
    assert np.allclose(factor.T @ (factor @ right), right * squares, rtol=0, atol=1e-12)


def test_scaled_columns_keep_relative_accuracy() -> None:
    """Orthogonal columns of unlike length: the exact answer is their lengths."""
    lengths = 10.0 ** np.arange(-8, 8, 2)
    orthogonal = np.array([[1.0]])
    for _ in range(3):
        orthogonal = np.block([[orthogonal, orthogonal], [orthogonal, -orthogonal]])
    squares, _ = singular_pairs(orthogonal * lengths)
    assert np.allclose(squares, 8 * lengths**2, rtol=1e-14, atol=0)


def test_no_column() -> None:
    squares, right = singular_pairs(np.zeros((3, 0)))
    assert squares.size == 0
    assert right.shape == (0, 0)
