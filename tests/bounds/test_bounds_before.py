"""Bounds bracket the spectrum: chains, plane models, blocks of mass, massless junctions, free models."""

import numpy as np
import pytest
import scipy.sparse as sp
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.assembly.pencil import Coordinate, Pencil, pencil_of_matrices, pencil_of_terms
from modalview.bounds.before import before_solve
from modalview.bounds.discs import discs_of
from modalview.bounds.forms import forms_of
from modalview.bounds.rigid import rigid_body
from modalview.bounds.scaling import collatz_wielandt

QUIET = settings(derandomize=True, deadline=None, max_examples=8)
SEEDS = st.integers(0, 10**6)


def chain(stiffness, mass, *, free=False):
    n = len(mass)
    rows = np.eye(n + 1, n) - np.eye(n + 1, n, -1)
    rows = rows[1:-1] if free else rows
    stiffness = np.asarray(stiffness, dtype=float)[: len(rows)]
    rigid = np.ones((n, 1)) if free else None
    return pencil_of_terms(sp.csr_array(rows), stiffness, np.asarray(mass, dtype=float), rigid_body=rigid)


def plane(rng, nodes, *, free=False, massless=0, unit=1.0):
    """Bodies x, y, rz joined in a row by mounts halfway, tied down unless free; lengths in ``unit``."""
    place = np.column_stack([np.arange(nodes) * 1.0, rng.uniform(-0.3, 0.3, nodes)]) / unit
    pairs = [(i, i + 1) for i in range(nodes - 1)] + ([] if free else [(0, None), (nodes - 1, None)])
    rows, stiffness = [], []
    for i, j in pairs:
        point = place[i] + 0.2 / unit if j is None else (place[i] + place[j]) / 2
        for direction in ((1.0, 0.0), (0.0, 1.0), None):
            row = np.zeros(3 * nodes)
            for body, sign in ((i, -1.0), (j, 1.0)):
                if body is None:
                    continue
                arm = point - place[body]
                turn = 1.0 if direction is None else direction[1] * arm[0] - direction[0] * arm[1]
                row[3 * body + 2] = sign * turn
                row[3 * body : 3 * body + 2] = sign * np.array(direction or (0.0, 0.0))
            rows.append(row)
            # per metre of the new unit: N/m -> unit N per new unit length, N m/rad -> N unit**-1 ...
            stiffness.append(10 ** rng.uniform(4, 6) * (1.0 if direction else unit**-2))
    mass = np.repeat(rng.uniform(5, 50, nodes), 3)
    radius = rng.uniform(0.2, 0.6, nodes) / unit
    mass[2::3] *= radius**2
    mass[3 : 3 + 3 * massless] = 0.0
    scale = np.ones(3 * nodes)
    scale[2::3] = radius
    rigid = np.zeros((3 * nodes, 3 if free else 0))
    if free:
        rigid[0::3, 0] = rigid[1::3, 1] = rigid[2::3, 2] = 1.0
        rigid[0::3, 2], rigid[1::3, 2] = -place[:, 1], place[:, 0]
    return pencil_of_terms(
        sp.csr_array(np.array(rows)), np.array(stiffness), mass, rigid_body=rigid, scale=scale
    )


def clustered(rng):
    """Coordinates of two and three share inertia."""
    base = plane(rng, 4)
    n = base.n
    mass = base.M.toarray()
    for pair in ((0, 1, 2), (4, 5)):
        block = rng.normal(size=(len(pair), len(pair)))
        mass[np.ix_(pair, pair)] += 3 * block @ block.T
    coordinates = [Coordinate(f"b{i // 3}", ("x", "y", "rz")[i % 3], i // 3) for i in range(n)]
    return Pencil(
        K=base.K,
        M=sp.csc_array((mass + mass.T) / 2),
        massless=np.zeros(n, dtype=bool),
        scale=base.scale,
        rigid_body=np.zeros((n, 0)),
        rows=base.rows,
        stiffness=base.stiffness,
        coordinates=coordinates,
    )


def spectrum(pencil):
    return np.linalg.eigvalsh(pencil.standard.toarray())


def assert_brackets(pencil, rigid=0):
    exact = spectrum(pencil)
    noise = 1e-13 * exact[-1]  # of the dense solve that judges
    bounds = before_solve(pencil)
    assert bounds.rigid_body_modes == rigid
    hz = np.sqrt(np.maximum([exact[rigid] - noise, exact[rigid] + noise, exact[-1]], 0)) / (2 * np.pi)
    assert bounds.lowest_hz[0] <= hz[1]
    assert bounds.lowest_hz[1] >= hz[0]
    assert bounds.highest_hz[0] <= hz[2] * (1 + 1e-14)
    assert bounds.highest_hz[1] >= hz[2] * (1 - 1e-14)
    for discs in (bounds.rows, bounds.columns, bounds.symmetric):
        if discs is None:
            continue
        assert discs.centres.size == pencil.modes
        assert sum(group.number for group in discs.groups) == pencil.modes
        for group in discs.groups:
            inside = (exact >= group.low - noise) & (exact <= group.high + noise)
            assert inside.sum() == group.number
    for norm in (bounds.norms.one, bounds.norms.infinity, bounds.norms.frobenius):
        assert norm is None or norm >= exact[-1] * (1 - 1e-13)
    return bounds, exact


@QUIET
@given(st.integers(1, 9), SEEDS)
def test_random_chains(n, seed):
    rng = np.random.default_rng(seed)
    bounds, exact = assert_brackets(chain(10 ** rng.uniform(2, 6, n + 1), 10 ** rng.uniform(-2, 2, n)))
    assert bounds.lowest_hz[0] > 0.1 * np.sqrt(exact[0]) / (2 * np.pi)


@QUIET
@given(st.integers(2, 9), SEEDS)
def test_free_chains_have_one_rigid_body_mode(n, seed):
    rng = np.random.default_rng(seed)
    pencil = chain(10 ** rng.uniform(2, 4, n + 1), 10 ** rng.uniform(-1, 1, n), free=True)
    bounds, exact = assert_brackets(pencil, rigid=1)
    assert bounds.lowest_hz[0] > 0.1 * np.sqrt(exact[1]) / (2 * np.pi)


@QUIET
@given(st.integers(2, 6), SEEDS, st.booleans())
def test_plane_models_free_and_grounded(nodes, seed, free):
    pencil = plane(np.random.default_rng(seed), nodes, free=free)
    assert_brackets(pencil, rigid=3 if free else 0)


@QUIET
@given(SEEDS)
def test_massless_junctions_are_condensed(seed):
    pencil = plane(np.random.default_rng(seed), 5, massless=2)
    bounds, _ = assert_brackets(pencil)
    assert bounds.rows.centres.size == 9


@QUIET
@given(SEEDS)
def test_clusters_share_blocks_of_mass(seed):
    bounds, _ = assert_brackets(clustered(np.random.default_rng(seed)))
    assert bounds.rows is not None


@QUIET
@given(SEEDS)
def test_a_full_mass_matrix_of_others_has_no_discs_but_bounds(seed):
    rng = np.random.default_rng(seed)
    n = 8
    root, stretch = rng.normal(size=(n, n)), rng.normal(size=(n + 4, n))
    mass, K = root @ root.T + np.eye(n), stretch.T @ stretch
    pencil = pencil_of_matrices(sp.csc_array((K + K.T) / 2), sp.csc_array((mass + mass.T) / 2))
    bounds, _ = assert_brackets(pencil)
    assert bounds.rows is None
    assert bounds.norms.one is None
    assert "No discs" in bounds.notes[0]


def test_zero_modes_of_matrices_of_others_are_found_by_counts():
    free = plane(np.random.default_rng(5), 4, free=True)
    bounds, _ = assert_brackets(pencil_of_matrices(free.K, free.M), rigid=3)
    assert any(note.startswith("Zero modes by counts") for note in bounds.notes)
    assert bounds.lowest_hz[0] > 0


def test_an_unstable_model_says_so():
    bounds = before_solve(pencil_of_matrices(sp.csc_array(np.diag([-1.0, 4.0])), sp.csc_array(np.eye(2))))
    assert bounds.lowest_hz is None
    assert any("Unstable" in note for note in bounds.notes)


def test_a_lone_free_mass_has_no_elastic_mode():
    bounds = before_solve(chain([1.0, 1.0], [2.0], free=True))
    assert bounds.lowest_hz is None
    assert bounds.rigid_body_modes == 1


def test_one_mass_on_one_spring_is_known_to_the_last_digits():
    bounds = before_solve(pencil_of_terms(sp.csr_array(np.array([[1.0]])), np.array([3.0]), np.array([7.0])))
    exact = np.sqrt(3 / 7) / (2 * np.pi)
    for low, high in (bounds.lowest_hz, bounds.highest_hz):
        assert low <= exact <= high
        assert high - low < 1e-11 * exact


def test_dunkerley_of_the_hanging_chain_of_three():
    # 1/w^2 ~ (1 + 2 + 3) m/k, so w ~ 0.40825 sqrt(k/m) below the exact 0.44504 (S. S. Rao, sec. 7.2)
    pencil = chain([1.0, 1.0, 1.0, 0.0], [1.0, 1.0, 1.0])
    bounds = before_solve(pencil)
    assert 2 * np.pi * bounds.lowest_hz[0] == pytest.approx(1 / np.sqrt(6), rel=1e-9)
    assert 2 * np.pi * bounds.lowest_hz[1] == pytest.approx(0.4450418679126, rel=1e-2)


@pytest.mark.parametrize("ratio", [1e4, 1e8, 1e12, 1e15])
def test_dunkerley_never_exceeds_the_truth_of_graded_chains(ratio):
    # stiff chain on a soft ground: the lowest mode is nearly k / sum m (1 - O(1/ratio))
    n = 16
    pencil = chain(np.r_[1.0, np.full(n - 1, ratio), 0.0], np.ones(n))
    bounds = before_solve(pencil)
    assert bounds.lowest_hz[0] <= np.sqrt(1 / n) / (2 * np.pi) <= bounds.lowest_hz[1] * (1 + n / ratio)
    if ratio <= 1e8:
        assert bounds.lowest_hz[0] > 0.9 * np.sqrt(1 / n) / (2 * np.pi)


def test_large_models_prove_the_lower_bound_by_counts(monkeypatch):
    monkeypatch.setattr("modalview.bounds.lowest.DENSE_TRACE", 3)
    monkeypatch.setattr("modalview.bounds.forms.DENSE", 3)
    for free in (False, True):
        bounds, exact = assert_brackets(plane(np.random.default_rng(8), 5, free=free), rigid=3 if free else 0)
        lowest = np.sqrt(exact[3 if free else 0]) / (2 * np.pi)
        assert bounds.lowest_hz[0] > 0.3 * lowest
        assert "counts" in bounds.notes[-1]


def test_interval_of_a_matrix_of_three():
    # J. Kiusalaas, Numerical Methods in Engineering with Python 3, example 9.10: all in [0, 8]
    pencil = chain([2.0, 2.0, 2.0, 3.0], [1.0, 1.0, 1.0])
    _, _, symmetric = discs_of(pencil, forms_of(pencil))
    assert symmetric.groups[0].low == pytest.approx(0.0, abs=1e-12)
    assert symmetric.groups[-1].high == pytest.approx(8.0, rel=1e-12)


def test_two_scalings_of_two_unequal_masses():
    # rows of M^-1 K: [2, 4] and [0.25, 0.75]; S: [2.5, 3.5] and [0, 1]
    pencil = chain([2.0, 1.0, 1.0], [1.0, 4.0])
    rows, _, symmetric = discs_of(pencil, forms_of(pencil))
    found = [
        (d.centres[i] - d.radii[i], d.centres[i] + d.radii[i]) for d in (rows, symmetric) for i in (0, 1)
    ]
    assert np.allclose(found, [(2, 4), (0.25, 0.75), (2.5, 3.5), (0, 1)], rtol=1e-12, atol=1e-12)
    assert [group.number for group in rows.groups] == [1, 1]
    assert rows.groups[0].low < 0.4037087982164 < rows.groups[0].high
    assert rows.groups[1].low < 3.096291201784 < rows.groups[1].high


def test_discs_are_the_same_in_metres_and_millimetres():
    metres = plane(np.random.default_rng(3), 4)
    millimetres = plane(np.random.default_rng(3), 4, unit=1e-3)
    # the same model with lengths in millimetres: rotations keep their unit, translations count 1e-3 m
    for one, other in zip(
        discs_of(metres, forms_of(metres)), discs_of(millimetres, forms_of(millimetres)), strict=True
    ):
        assert np.allclose(one.centres, other.centres, rtol=1e-10)
        assert np.allclose(one.radii, other.radii, rtol=1e-10)


@QUIET
@given(st.integers(2, 30), SEEDS)
def test_power_steps_bring_the_upper_bound_of_chains_to_the_truth(n, seed):
    rng = np.random.default_rng(seed)
    pencil = chain(rng.uniform(1e5, 1e6, n + 1), rng.uniform(1, 10, n))
    exact, forms = spectrum(pencil)[-1], forms_of(pencil)
    assert exact * (1 - 1e-14) <= collatz_wielandt(forms) <= 1.05 * exact
    assert collatz_wielandt(forms) <= collatz_wielandt(forms, 0) * (1 + 1e-12)


def test_parts_that_do_not_feel_each_other_do_not_blow_up_the_rounding():
    # symmetric about both axes: x and rotation cancel in K exactly, but their terms do not
    rows = np.array([[1.0, 1.0], [1.0, -1.0]])
    pencil = pencil_of_terms(sp.csr_array(rows), np.array([1e6, 1e6]), np.array([1.0, 1e9]))
    assert collatz_wielandt(forms_of(pencil)) == pytest.approx(2e6, rel=1e-9)


def test_rigid_body_directions_of_matrices_stretch_nothing():
    free = chain(np.linspace(1e3, 2e3, 8), np.ones(7), free=True)
    found = rigid_body(pencil_of_matrices(free.K, free.M))
    assert found.number == 1
    assert np.abs(free.standard @ found.directions).max() < 1e-10
