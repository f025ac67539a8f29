"""Counts never err on their side: judged by exact rational inertia, closed forms and dense spectra."""

from fractions import Fraction

import numpy as np
import pytest
import scipy.sparse as sp
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.assembly.pencil import Pencil, pencil_of_matrices, pencil_of_terms
from modalview.factor.counts import count_at_most, count_below, count_negative, count_zero

QUIET = settings(derandomize=True, deadline=None, max_examples=8)


def chain(stiffness, mass, *, free=False):
    """Springs before, between and after masses; ``free`` leaves both ends loose."""
    n = len(mass)
    rows = np.eye(n + 1, n) - np.eye(n + 1, n, -1)
    rows = rows[1:-1] if free else rows
    stiffness = np.asarray(stiffness, dtype=float)[: len(rows)]
    rigid = np.ones((n, 1)) if free else None
    return pencil_of_terms(sp.csr_array(rows), stiffness, np.asarray(mass, dtype=float), rigid_body=rigid)


def negatives(matrix):
    """Numbers of negative and zero eigenvalues of a symmetric matrix of fractions."""
    a = [row[:] for row in matrix]
    negative = 0
    while a:
        n = len(a)
        at = next((i for i in range(n) if a[i][i] != 0), None)
        if at is None:
            pair = next(((i, j) for i in range(n) for j in range(i) if a[i][j] != 0), None)
            if pair is None:
                return negative, n
            i, j = pair  # add row and column j to i: a congruence that makes a pivot
            for k in range(n):
                a[i][k] += a[j][k]
            for k in range(n):
                a[k][i] += a[k][j]
            continue
        pivot = a[at][at]
        negative += pivot < 0
        rest = [i for i in range(n) if i != at]
        a = [[a[i][j] - a[i][at] * a[at][j] / pivot for j in rest] for i in rest]
    return negative, 0


def truth(pencil: Pencil, lam: float):
    """Exact numbers of eigenvalues < lam and <= lam, from the terms and masses as stored."""
    n = pencil.n
    lam = Fraction(lam)
    a = [[-lam * Fraction(x) for x in row] for row in pencil.M.toarray().tolist()]
    if pencil.rows is None:
        for i, row in enumerate(pencil.K.toarray().tolist()):
            for j, x in enumerate(row):
                a[i][j] += Fraction(x)
    else:
        for k, row in zip(pencil.stiffness.tolist(), pencil.rows.toarray().tolist(), strict=True):
            stretch = [Fraction(x) for x in row]
            for i in range(n):
                for j in range(n):
                    if stretch[i] and stretch[j]:
                        a[i][j] += Fraction(k) * stretch[i] * stretch[j]
    below, zero = negatives(a)
    return below, below + zero


def assert_one_sided(pencil, lam):
    below, at_most = truth(pencil, lam)
    upper, lower = count_at_most(pencil.shifted, lam), count_below(pencil.shifted, lam)
    assert upper.number is None or upper.number >= at_most
    assert lower.number is None or lower.number <= below
    return upper, lower, below, at_most


def assert_decided(pencil, lam):
    upper, lower, *_ = assert_one_sided(pencil, lam)
    assert upper.number <= truth(pencil, lam * (1 + 1e-6))[1]
    assert lower.number >= truth(pencil, lam * (1 - 1e-6))[0]


def hostile_shifts(pencil):
    for lam in pencil.K.diagonal()[~pencil.massless] / pencil.M.diagonal()[~pencil.massless]:
        yield from (
            lam,
            np.nextafter(lam, 0),
            np.nextafter(lam, np.inf),
            lam * (1 - 1e-15),
            lam * (1 + 1e-15),
        )


@QUIET
@given(st.integers(2, 4), st.integers(0, 10**6))
def test_counts_at_hostile_shifts_of_random_chains_stay_on_their_side_and_are_decided(n, seed):
    rng = np.random.default_rng(seed)
    pencil = chain(10 ** rng.uniform(2, 5, n + 1), 10 ** rng.uniform(-1, 1, n), free=bool(seed % 2))
    for lam in hostile_shifts(pencil):
        assert_decided(pencil, lam)


@pytest.mark.parametrize("n", [2, 3, 4, 5])
def test_uniform_chain_where_pivots_vanish(n):
    pencil = chain(np.ones(n + 1), np.ones(n))
    for lam in {*hostile_shifts(pencil), 1.0, 3.0, 4.0}:
        assert_decided(pencil, lam)


@pytest.mark.parametrize("n", [3, 8, 40])
def test_counts_at_a_repeated_eigenvalue_itself(n):
    # every pair joined by a unit spring and every unit mass grounded by one: 1 once, n + 1 repeated
    i, j = np.triu_indices(n, 1)
    eye = np.eye(n)
    pencil = pencil_of_terms(sp.csr_array(np.vstack([eye, eye[i] - eye[j]])), np.ones(n + len(i)), np.ones(n))
    assert count_at_most(pencil.shifted, n + 1.0).number == n
    assert count_below(pencil.shifted, n + 1.0).number == 1
    assert count_at_most(pencil.shifted, 1.0).number == 1
    assert count_below(pencil.shifted, 1.0).number == 0


@pytest.mark.parametrize("ratio", [1e6, 1e9, 1e12, 1e14])
def test_stiff_matrices_of_others_are_undecided_rather_than_wrong(ratio):
    terms = chain([1.0, ratio, 3 * ratio, ratio, 0.3 * ratio, 2.0], [1.0, 1.3, 0.7, 2.0, 1.1])
    pencil = pencil_of_matrices(terms.K, terms.M)
    stiff, soft = float(pencil.standard.diagonal().max()), 3.0 / 6.1
    undecided = 0
    for lam in (*(soft * (1 + d) for d in (-0.5, -1e-3, -1e-6, 0, 1e-6, 1e-3)), stiff, 0.1 * stiff):
        upper, lower, *_ = assert_one_sided(pencil, lam)
        undecided += (upper.number is None) + (lower.number is None)
    assert undecided == 0 if ratio < 1e9 else undecided > 0


def test_massless_coordinates_are_left_in_and_change_no_count():
    pencil = chain([4.0, 2.0, 5.0, 1.0, 3.0], [1.0, 0.0, 2.0, 0.0])
    exact = np.linalg.eigvalsh(pencil.standard.toarray())
    for lam in (0.1, *(exact * 0.999), *(exact * 1.001), 1e3):
        assert_decided(pencil, lam)


def test_a_massless_coordinate_held_by_next_to_nothing_makes_no_count_wrong():
    rows = sp.csr_array(np.array([[1.0, 0, 0], [-1, 1, 0], [0, 1, -1], [0, 0, 1]]))
    for weak in (1e-3, 1e-9, 1e-15):
        pencil = pencil_of_terms(rows, np.array([1.0, weak, 1.0, weak]), np.array([1.0, 0.0, 0.0]))
        for lam in (0.5, 1.0, 1.5):
            assert_one_sided(pencil, lam)


def test_a_long_run_of_massless_junctions_is_proven_held_by_counts():
    n = 603
    mass = np.zeros(n)
    mass[[0, -1]] = 1.0
    pencil = chain(np.full(n + 1, 602.0), mass)
    # two unit masses, each on a spring of 602, joined by 602 springs of 602 in series: lambda = 602 and 604
    found = [count_at_most(pencil.shifted, lam).number for lam in (601.9, 602.1, 603.9, 604.1)]
    assert found == [0, 1, 1, 2]
    assert 0 < pencil.shifted.extents.margin <= 1 - np.cos(np.pi / (n - 1))


def test_a_block_of_mass_counts_like_the_standard_form():
    rng = np.random.default_rng(4)
    n = 12
    root = rng.normal(size=(n, n))
    mass = sp.csc_array(
        sp.block_diag([sp.coo_array(root[:6, :6] @ root[:6, :6].T + np.eye(6)), 3.0 * sp.eye_array(6)])
    )
    stretch = rng.normal(size=(20, n))
    K = sp.csc_array(stretch.T @ np.diag(10 ** rng.uniform(3, 6, 20)) @ stretch)
    pencil = pencil_of_matrices((K + K.T) / 2, (mass + mass.T) / 2)
    exact = np.linalg.eigvalsh(pencil.standard.toarray())
    for i, lam in enumerate(exact):
        assert count_at_most(pencil.shifted, 1.0001 * lam).number == i + 1
        assert count_below(pencil.shifted, 0.9999 * lam).number == i


def test_train_of_three_discs_counts_its_zero_mode():
    # J = 5, 11, 22 kg m2 with 0.1e6 and 0.2e6 N m/rad, trial speeds 100, 150, 250 rad/s
    pencil = chain([0.1e6, 0.2e6], [5.0, 11.0, 22.0], free=True)
    counts = [count_below(pencil.shifted, omega**2).number for omega in (100.0, 150.0, 250.0)]
    assert counts == [1, 2, 3]
    assert count_below(pencil.shifted, 1e-30).number in (1, None)
    assert count_below(pencil.shifted, 0.0).number == 1
    assert count_at_most(pencil.shifted, 0.0).number == 1
    assert count_at_most(pencil.shifted, -1.0).number == 0


def test_counts_where_a_leading_minor_vanishes():
    K = sp.csc_array(np.array([[4.0, -2, 0], [-2, 4, -2], [0, -2, 5]]))
    pencil = pencil_of_matrices(K, sp.csc_array(np.eye(3)))
    assert [count_below(pencil.shifted, lam).number for lam in (4.0, 6.0)] == [1, 2]
    assert [count_at_most(pencil.shifted, lam).number for lam in (4.0, 6.0)] == [1, 2]


def test_entries_that_cancel_exactly_leave_the_count_right():
    K = np.array([[1.0, 1, 1, 0], [1, 2, 1, 1], [1, 1, 5, 1], [0, 1, 1, 7]])
    pencil = pencil_of_matrices(sp.csc_array(K), sp.csc_array(np.eye(4)))
    exact = np.linalg.eigvalsh(K)
    for lam in (-1.0, 1e-3, 1.0, 3.0, 6.0, 9.0):
        assert count_at_most(pencil.shifted, lam).number == (exact <= lam).sum()


def test_an_unstable_model_is_counted_below_zero():
    K = sp.csc_array(np.diag([-3.0, 2.0, 5.0]))
    pencil = pencil_of_matrices(K, sp.csc_array(np.eye(3)))
    assert count_negative(pencil.shifted).number == 1
    assert count_at_most(pencil.shifted, -3.0).number == 1
    assert count_below(pencil.shifted, -3.0).number == 0


@pytest.mark.parametrize("n", [4, 30])
def test_zero_modes_of_matrices_of_others(n):
    free = chain(np.linspace(1e5, 3e5, n + 1), np.linspace(1, 2, n), free=True)
    zero = count_zero(pencil_of_matrices(free.K, free.M).shifted)
    assert (zero.number, zero.below) == (1, 0)
    assert 0 < zero.reach < 1e-8 * np.linalg.eigvalsh(free.standard.toarray())[-1]


def test_dense_pivoting_agrees_where_sparse_pivots_vanish():
    n = 21
    pencil = chain(np.ones(n + 1), np.ones(n))
    exact = 4 * np.sin(np.arange(1, n + 1) * np.pi / (2 * n + 2)) ** 2
    for sigma in (1.0 + 1e-16, 1.5, 1.7, 3.0):
        found = pencil.shifted.factorize_dense(sigma)
        assert found.uncertainty < 1e-12
        assert found.negative in ((exact < sigma - 1e-12).sum(), (exact < sigma + 1e-12).sum())
