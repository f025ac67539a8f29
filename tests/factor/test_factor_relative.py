"""Counts next to very stiff parts: decided, and right by exact rational inertia."""

import numpy as np
import pytest
import scipy.sparse as sp
from test_factor_counts import assert_decided, chain

from modalview.assembly.pencil import pencil_of_terms
from modalview.factor import relative as relative_module
from modalview.factor.counts import count_at_most
from modalview.factor.pattern import Pattern
from modalview.factor.relative import METHOD
from modalview.factor.stiffbasis import product, relative_basis


def softly_held(ratio):
    """Five masses joined stiffly, on a soft spring at each end: one soft mode, 3/6.1 nearly."""
    return chain([1.0, ratio, 3 * ratio, ratio, 0.3 * ratio, 2.0], [1.0, 1.3, 0.7, 2.0, 1.1])


def frame(seed, ratio, bodies=4):
    """Plane bodies of 3 coordinates joined by oblique springs, every other joint stiff."""
    rng = np.random.default_rng(seed)
    rows, stiffness = [], []

    def end(row, body, sign, direction):
        x, y = rng.uniform(-0.5, 0.5, 2)
        row[3 * body : 3 * body + 3] = sign * np.array([*direction, x * direction[1] - y * direction[0]])

    for body in range(-1, bodies - 1):
        for _ in range(3):
            angle = rng.uniform(0, np.pi)
            row, direction = np.zeros(3 * bodies), (np.cos(angle), np.sin(angle))
            if body >= 0:
                end(row, body, -1, direction)
            end(row, body + 1, 1, direction)
            rows.append(row)
            stiffness.append((ratio if body % 2 == 0 else 1.0) * rng.uniform(0.5, 2))
    mass = rng.uniform(0.5, 3, 3 * bodies)
    return pencil_of_terms(sp.csr_array(np.array(rows)), np.array(stiffness), mass)


def soft_eigenvalues(pencil, number):
    # one-sided: the factor keeps what the formed matrix loses
    return np.sort(np.linalg.svd(pencil.factor.toarray(), compute_uv=False))[:number] ** 2


@pytest.mark.parametrize("ratio", [1e9, 1e12, 1e14])
def test_a_soft_mode_of_a_stiff_chain_is_counted_to_a_millionth(ratio):
    for lam in (3.0 / 6.1 * (1 + d) for d in (-0.5, -1e-3, -1e-5, 1e-5, 1e-3, 0.5)):
        assert_decided(softly_held(ratio), lam)
    assert softly_held(ratio).shifted.relative.factorize(0.4).uncertainty < 1e-9 * 0.4


@pytest.mark.parametrize("seed", [0, 1])
@pytest.mark.parametrize(("k", "m"), [(1e14, 1.0), (1e9, 1e9), (1e14, 1e9)])
def test_chains_graded_in_stiffness_and_mass_are_decided(seed, k, m):
    rng = np.random.default_rng(seed)
    n = 6
    pencil = chain(k ** rng.uniform(0, 1, n + 1), m ** rng.uniform(0, 1, n))
    for lam in soft_eigenvalues(pencil, n):
        for share in (0.7, 1 - 1e-4, 1 + 1e-4):
            assert_decided(pencil, share * lam)


def test_a_free_shaft_train_with_stiff_couplings_keeps_its_zero_mode():
    pencil = chain([1e14, 5.0, 2e14, 8.0], [5.0, 11.0, 0.3, 22.0, 1.0], free=True)
    for lam in (1e-3, 0.5, 1.0, 3.0, 30.0):
        assert_decided(pencil, lam)


@pytest.mark.parametrize("ratio", [1e9, 1e14])
def test_plane_frames_with_stiff_joints_are_decided(ratio):
    pencil = frame(3, ratio)
    for lam in soft_eigenvalues(pencil, 4):
        for share in (0.8, 1 + 1e-4):
            assert_decided(pencil, share * lam)


def test_massless_coordinates_between_stiff_springs_are_counted_along():
    pencil = chain([1.0, 1e13, 1e13, 1e13, 1.0], [1.0, 0.0, 2.0, 0.0])
    for lam in (0.3, 2.0 / 3.0 * (1 - 1e-4), 2.0 / 3.0 * (1 + 1e-4), 1e5):
        assert_decided(pencil, lam)


def test_the_method_is_told_and_used_only_where_it_is_needed():
    assert count_at_most(softly_held(1e3).shifted, 0.4).method == "sparse LDL^T"
    assert count_at_most(softly_held(1e12).shifted, 0.4).method == METHOD


def test_few_factorizations_decide_beside_stiff_parts(monkeypatch):
    pencil, made = softly_held(1e12), []
    factorize = Pattern.factorize
    monkeypatch.setattr(Pattern, "factorize", lambda self, data: made.append(1) or factorize(self, data))
    assert count_at_most(pencil.shifted, 0.4).number == 0
    assert len(made) <= 3


def test_an_uncertainty_that_is_enough_is_not_bettered():
    relative = softly_held(1e9).shifted.relative
    assert relative.factorize(0.4).uncertainty < relative.factorize(0.4, 3e-8 * 0.4).uncertainty < 3e-8 * 0.4


def test_the_basis_makes_stiff_terms_stretch_relative_coordinates_only():
    pencil = softly_held(1e9)
    T = relative_basis(pencil.rows, pencil.stiffness, pencil.scale)
    rows = product(pencil.rows, T).toarray()
    assert abs(round(np.linalg.det(T.toarray()))) == 1
    unstretched = np.flatnonzero(~rows[1:5].any(axis=0))
    assert unstretched.size == 1
    assert np.all(rows[[0, 5], unstretched[0]] != 0)


def test_products_that_cancel_keep_their_last_digit():
    left = sp.csr_array(np.array([[1.0 + 2.0**-52, -1.0, 0.0]]))
    right = sp.csr_array(np.array([[1.0 - 2.0**-52], [1.0], [3.0]]))
    assert product(left, right).toarray().tolist() == [[-(2.0**-104)]]


def test_an_edge_moves_as_far_as_it_may_where_rounding_is_wide(monkeypatch):
    # 2.1 times this share, and an edge a quarter farther out than that, just fit into a millionth
    monkeypatch.setattr(relative_module, "SHARES", (2e-7,))
    pencil = softly_held(1e12)
    for share in (0.9, 1 - 1e-5, 1 + 1e-5, 1.1):
        assert_decided(pencil, share * soft_eigenvalues(pencil, 1)[0])
