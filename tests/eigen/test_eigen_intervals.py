import mpmath
import numpy as np
import pytest
import scipy.sparse as sp
from exact import chain_rows, exact_stiffness, free_chain, held, random_rows, spectrum

from modalview.assembly.pencil import Pencil, pencil_of_matrices, pencil_of_terms
from modalview.eigen.intervals import enclose
from modalview.eigen.rayleigh import Energy
from modalview.eigen.solve import find_modes


def network(seed: int, *, ground: bool = True) -> Pencil:
    rng = np.random.default_rng(seed)
    n = int(rng.integers(3, 9))
    rows = random_rows(rng, n, n // 2, ground=ground)
    decades = rng.choice([0.0, 3.0, 9.0, 14.0])
    stiffness = 10 ** rng.uniform(0, decades, rows.shape[0])
    rigid = None if ground else np.ones((n, 1))
    return pencil_of_terms(rows, stiffness, 10 ** rng.uniform(0, 4, n), rigid_body=rigid)


@pytest.mark.parametrize("seed", range(20))
def test_truth_inside_from_terms_and_from_entries(seed: int) -> None:
    pencil = network(seed)
    for given in (pencil, pencil_of_matrices(pencil.K, pencil.M)):
        modes = find_modes(given)
        assert held(given, modes.lower, modes.upper, 80)


@pytest.mark.parametrize("seed", range(6))
def test_truth_inside_for_free_models(seed: int) -> None:
    pencil = network(seed, ground=False)
    modes = find_modes(pencil)
    assert held(
        pencil_of_terms(pencil.rows, pencil.stiffness, pencil.M.diagonal()),
        modes.lower - 1e-60,
        modes.upper + 1e-60,
        90,
    )


@pytest.mark.parametrize("seed", range(6))
def test_truth_inside_for_full_mass_and_for_negative_springs(seed: int) -> None:
    plain = network(seed)
    rng = np.random.default_rng(100 + seed)
    spread = rng.standard_normal((plain.n, plain.n))
    full = Pencil(
        K=plain.K,
        M=sp.csc_array(spread @ spread.T + np.eye(plain.n)),
        massless=plain.massless,
        scale=plain.scale,
        rigid_body=plain.rigid_body,
        rows=plain.rows,
        stiffness=plain.stiffness,
    )
    stiffness = np.array(plain.stiffness)
    stiffness[0] *= -1
    negative = pencil_of_terms(plain.rows, stiffness, plain.M.diagonal())
    for pencil in (full, negative):
        modes = find_modes(pencil)
        assert held(pencil, modes.lower, modes.upper, 80)


@pytest.mark.parametrize("copies", [2, 3])
def test_truth_inside_for_repeated_spectra(copies: int) -> None:
    one = network(3)
    rows = sp.csr_array(sp.block_diag([one.rows] * copies))
    pencil = pencil_of_terms(rows, np.tile(one.stiffness, copies), np.tile(one.M.diagonal(), copies))
    modes = find_modes(pencil)
    truth = np.repeat(np.array(spectrum(one, 80), dtype=object), copies)
    inside = zip(modes.lower, truth, modes.upper, strict=True)
    assert all(float(low) <= value <= float(high) for low, value, high in inside)
    assert modes.repeated == tuple((i, i + copies) for i in range(0, pencil.n, copies))


def test_quotient_and_residual_bounds_hold_for_any_shape() -> None:
    """Shapes far from any mode: computed quotient and residual against 60 digits."""
    pencil = network(11)
    shapes = np.random.default_rng(1).standard_normal((pencil.n, 3))
    found = Energy.of(pencil).rayleigh(shapes)
    with mpmath.workdps(60):
        stiffness = exact_stiffness(pencil)
        mass = mpmath.diag([mpmath.mpf(float(m)) for m in pencil.M.diagonal()])
        for j in range(3):
            x = mpmath.matrix(shapes[:, j].tolist())
            norm2 = (x.T * mass * x)[0]
            quotient = (x.T * stiffness * x)[0] / norm2
            assert abs(quotient - mpmath.mpf(float(found.quotient[j]))) <= found.quotient_error[j]
            left = stiffness * x - mpmath.mpf(float(found.quotient[j])) * (mass * x)
            size = mpmath.sqrt(sum(left[i] ** 2 / mass[i, i] for i in range(pencil.n)) / norm2)
            assert size <= found.residual[j] <= 1.001 * size


def test_shapes_that_are_not_modes_get_honest_intervals() -> None:
    """Slightly wrong shapes: wide but true intervals, still one for every mode."""
    pencil = pencil_of_terms(chain_rows(5), np.full(5, 2.0), np.ones(5))
    wrong = find_modes(pencil).shapes + 1e-4 * np.random.default_rng(0).standard_normal((5, 5))
    shapes = np.linalg.qr(wrong)[0]
    energy = Energy.of(pencil)
    found = energy.rayleigh(shapes)
    intervals = enclose(energy, shapes, found, 0)
    assert intervals.separate
    assert held(pencil, intervals.lower, intervals.upper)
    widths = intervals.upper - intervals.lower
    assert np.all(widths > 1e-9)
    assert np.all(widths < 1e-4)


def test_one_shape_twice_proves_nothing() -> None:
    pencil = pencil_of_terms(chain_rows(3), np.ones(3), np.ones(3))
    shapes = np.array(find_modes(pencil).shapes)
    shapes[:, 1] = shapes[:, 0]
    energy = Energy.of(pencil)
    intervals = enclose(energy, shapes, energy.rayleigh(shapes), 0)
    assert not intervals.separate
    assert held(pencil, intervals.lower, intervals.upper)


def test_known_zeros_sharpen_the_first_elastic_mode() -> None:
    pencil = free_chain(np.full(6, 1e8), np.logspace(0, 5, 7))
    modes = find_modes(pencil)
    half = (modes.upper - modes.lower)[1:] / modes.eigenvalues[1:] / 2
    assert np.all(half < 1e-13)
