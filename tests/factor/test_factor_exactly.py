"""Exact inertia against closed forms, Gauss elimination on fractions and floating point."""

from fractions import Fraction

import numpy as np
import pytest

from modalview.factor import exactly
from modalview.factor.exactly import exact_limit, exact_negative


def lower(matrix):
    return {(i, j): x for i, row in enumerate(matrix) for j, x in enumerate(row[: i + 1]) if x}


def leading_signs(matrix):
    """Negative eigenvalues by plain elimination on fractions; None at a zero pivot."""
    rows, negative = [row[:] for row in matrix], 0
    for k in range(len(rows)):
        if rows[k][k] == 0:
            return None
        negative += rows[k][k] < 0
        for i in range(k + 1, len(rows)):
            factor = rows[i][k] / rows[k][k]
            rows[i] = [a - factor * b for a, b in zip(rows[i], rows[k], strict=True)]
    return negative


def random_matrix(seed, n, share):
    rng = np.random.default_rng(seed)
    matrix = [[Fraction(0)] * n for _ in range(n)]
    for i in range(n):
        for j in range(i + 1):
            if i == j or rng.random() < share:
                entry = Fraction(int(rng.integers(-(10**6), 10**6)), int(rng.integers(1, 99)))
                matrix[i][j] = matrix[j][i] = entry
    return matrix


@pytest.mark.parametrize("share", [0.1, 0.4, 1.0])
@pytest.mark.parametrize("n", [1, 2, 7, 16])
def test_counts_of_random_matrices_agree_with_plain_elimination(n, share):
    for seed in range(6):
        matrix = random_matrix(seed, n, share)
        assert exact_negative(lower(matrix), n) == leading_signs(matrix)


@pytest.mark.parametrize("fast", [True, False])
def test_graded_matrices_beyond_doubles_are_counted(monkeypatch, fast):
    if fast:
        pytest.importorskip("gmpy2")
    else:
        monkeypatch.setattr(exactly, "find_spec", lambda _name: None)
    # [[1, 1], [1, 1 + s t]] has the determinant s t: its sign is lost in any double
    tiny = Fraction(1, 10**40)
    for sign, expected in ((1, 0), (-1, 1)):
        assert (
            exact_negative({(0, 0): Fraction(1), (1, 0): Fraction(1), (1, 1): 1 + sign * tiny}, 2) == expected
        )


def test_a_zero_pivot_is_told():
    one = Fraction(1)
    assert exact_negative({(0, 0): one, (1, 0): one, (1, 1): one}, 2) is None


def test_the_limit_depends_on_what_is_installed(monkeypatch):
    monkeypatch.setattr(exactly, "find_spec", lambda _name: None)
    assert exact_limit() == exactly.PLAIN_LIMIT
    monkeypatch.setattr(exactly, "find_spec", lambda name: name)
    assert exact_limit() == exactly.FAST_LIMIT


def test_progress_is_told_and_may_stop():
    told = []
    exact_negative(lower(random_matrix(0, 9, 0.5)), 9, step=told.append)
    assert told == pytest.approx([(i + 1) / 9 for i in range(9)])

    def stop(_share):
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        exact_negative(lower(random_matrix(0, 9, 0.5)), 9, step=stop)
