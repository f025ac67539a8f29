from collections.abc import Callable

import mpmath
import numpy as np
import pytest
import scipy.sparse as sp
from exact import chain_rows, free_chain, held, random_rows, spectrum

from modalview.assembly.pencil import Pencil, pencil_of_terms
from modalview.eigen.solve import find_modes

DIGITS = 80
# Measured: 8e-16 at worst over 1,000 random models with positive terms of up to 16 modes.
ACCURACY = 1e-14
N = 16


def stiff_on_soft(ratio: float) -> Pencil:
    stiffness = np.full(N, ratio)
    stiffness[0] = 1.0
    return pencil_of_terms(chain_rows(N), stiffness, np.ones(N))


def both_graded(ratio: float) -> Pencil:
    rng = np.random.default_rng(int(np.log10(ratio)))
    stiffness = 10 ** rng.uniform(0, np.log10(ratio), N)
    return pencil_of_terms(chain_rows(N), stiffness, 10 ** rng.uniform(0, 9, N))


def network(ratio: float) -> Pencil:
    rng = np.random.default_rng(int(np.log10(ratio)))
    rows = random_rows(rng, N, 6, ground=True)
    stiffness = 10 ** rng.uniform(0, np.log10(ratio), rows.shape[0])
    return pencil_of_terms(rows, stiffness, 10 ** rng.uniform(0, 3, N))


def free(ratio: float) -> Pencil:
    rng = np.random.default_rng(int(np.log10(ratio)))
    return free_chain(10 ** rng.uniform(0, np.log10(ratio), N - 1), 10 ** rng.uniform(0, 6, N))


def with_massless(ratio: float) -> Pencil:
    rng = np.random.default_rng(int(np.log10(ratio)))
    rows = random_rows(rng, N, 6, ground=True)
    mass = 10 ** rng.uniform(0, 3, N)
    mass[[2, 5, 9]] = 0
    return pencil_of_terms(rows, 10 ** rng.uniform(0, np.log10(ratio), rows.shape[0]), mass)


@pytest.mark.parametrize("ratio", [1e3, 1e6, 1e9, 1e12, 1e14])
@pytest.mark.parametrize("build", [stiff_on_soft, both_graded, network, free, with_massless])
def test_every_frequency_to_full_accuracy(build: Callable[[float], Pencil], ratio: float) -> None:
    pencil = build(ratio)
    zeros = pencil.rigid_body.shape[1]
    modes = find_modes(pencil)
    with mpmath.workdps(DIGITS):
        found = [
            [mpmath.mpf(float(x)) for x in part[zeros:]]
            for part in (modes.eigenvalues, modes.lower, modes.upper)
        ]
        for value, low, high, truth in zip(*found, spectrum(pencil, DIGITS)[zeros:], strict=True):
            assert abs(value / truth - 1) <= ACCURACY
            assert low <= truth <= high


def test_larger_than_jacobi_polishes_twice() -> None:
    """Two stiff ends of one chain with the exact lowest mode of a mass on one soft spring."""
    n = 230
    stiffness = np.full(n, 1e12)
    stiffness[0] = 1.0
    pencil = pencil_of_terms(chain_rows(n), stiffness, np.ones(n))
    modes = find_modes(pencil)
    # Chain held by k0: (1 - c) tan-like secular equation, solved to 40 digits.
    with mpmath.workdps(40):
        lowest = mpmath.findroot(lambda lam: _held_chain(lam, n, 1, mpmath.mpf(10) ** 12), mpmath.mpf(1) / n)
    assert modes.method.startswith("tridiagonalisation")
    assert modes.eigenvalues[0] == pytest.approx(float(lowest), rel=1e-14)
    assert modes.lower[0] <= float(lowest) <= modes.upper[0]


def _held_chain(lam: mpmath.mpf, n: int, soft: int, stiff: mpmath.mpf) -> mpmath.mpf:
    """Force left at the free end when the first mass moves by 1; zero at an eigenvalue."""
    motion, force = mpmath.mpf(1), mpmath.mpf(soft)
    for _ in range(n - 1):
        force -= lam * motion
        motion += force / stiff
    return force - lam * motion


def test_repeated_graded_pairs_stay_enclosed() -> None:
    """Two equal stiff-on-soft chains side by side: every frequency twice."""
    one = stiff_on_soft(1e10)
    rows = sp.csr_array(sp.block_diag([one.rows, one.rows]))
    pencil = pencil_of_terms(rows, np.tile(one.stiffness, 2), np.ones(2 * N))
    modes = find_modes(pencil)
    assert held(one, modes.lower[::2], modes.upper[::2], DIGITS)
    assert held(one, modes.lower[1::2], modes.upper[1::2], DIGITS)
    assert modes.repeated == tuple((i, i + 2) for i in range(0, 2 * N, 2))
