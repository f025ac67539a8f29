"""The uncertainty bounds the norm it stands for, and the distance it stands for."""

import numpy as np
import pytest
import scipy.sparse as sp

from modalview.assembly.pencil import pencil_of_terms
from modalview.factor.uncertainty import factor_rounding


def ladder(seed, *, massless):
    """Forty coordinates joined at random, masses over six decades."""
    rng = np.random.default_rng(seed)
    n = 40
    i, j = rng.integers(0, n, 90), rng.integers(0, n, 90)
    rows = np.vstack([np.eye(n), (np.eye(n)[i] - np.eye(n)[j])[i != j]])
    mass = 10 ** rng.uniform(-3, 3, n)
    mass[:massless] = 0.0
    return pencil_of_terms(sp.csr_array(rows), 10 ** rng.uniform(2, 4, len(rows)), mass)


@pytest.mark.parametrize("massless", [0, 5])
@pytest.mark.parametrize("seed", [1, 2, 3])
def test_power_steps_sharpen_the_norm_and_stay_above_it(seed, massless):
    shifted = ladder(seed, massless=massless).shifted
    pattern, extents = shifted.pattern, shifted.extents
    sigma = 1e-2 * extents.top
    lu, tau = shifted.factorize(sigma).lu, extents.tau(sigma)

    _, again = factor_rounding(pattern, lu)
    first = again(extents.vector(tau))
    columns = np.eye(extents.press(first, tau).size)
    norm = np.linalg.norm(
        np.array([extents.press(again(extents.lift(column, tau)), tau) for column in columns]), 2
    )
    plain, refined = extents.uncertainty(sigma, first), extents.refined(sigma, first, again)
    least = shifted.least_uncertainty(sigma)
    assert norm < refined < plain + least
    assert refined - least < 1.5 * norm


def test_the_factors_lie_within_their_rounding_of_the_matrix():
    # in long double, where there is one: |H D H^T - B| against the bound, entry by entry
    shifted = ladder(7, massless=0).shifted
    pattern = shifted.pattern
    data = shifted.stiffness - 50.0 * shifted.inertia
    lu = pattern.factorize(data)
    exact = np.longdouble
    lower, upper = lu.L.toarray().astype(exact), lu.U.toarray().astype(exact)
    pivots = np.diag(upper)
    middle = (lower + (upper / pivots[:, None]).T) / 2
    _, times = factor_rounding(pattern, lu)
    order = np.argsort(pattern.turned)
    matrix = pattern.matrix(data).toarray()[np.ix_(order, order)].astype(exact)
    apart = np.abs(matrix - (middle * pivots) @ middle.T).astype(float)
    bound = np.array([times(column) for column in np.eye(shifted.n)])
    noise = (
        np.finfo(exact).eps * np.abs((np.abs(middle) * np.abs(pivots)) @ np.abs(middle.T)).astype(float) * 50
    )
    assert np.all(apart <= bound + noise)
    assert apart.max() > 0


def test_solving_with_the_factors_undoes_the_shifted_pencil():
    pencil = ladder(4, massless=3)
    found = pencil.shifted.factorize(-10.0)
    right = np.random.default_rng(0).normal(size=(pencil.n, 2))
    solution = pencil.shifted.solve(found, right)
    assert np.allclose((pencil.K + 10.0 * pencil.M) @ solution, right, rtol=1e-8, atol=1e-8)
