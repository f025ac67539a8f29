"""Modes near a frequency: nothing missed, nothing wrong, ties whole."""

import numpy as np
import pytest
import scipy.sparse as sp
from exact import chain_rows, free_chain

from modalview.assembly.pencil import Pencil, pencil_of_matrices, pencil_of_terms
from modalview.eigen.near import MOST, NearModes, find_near
from modalview.eigen.solve import find_modes
from modalview.errors import CancelledError, InputError


def random_chain(n: int, seed: int = 1) -> Pencil:
    rng = np.random.default_rng(seed)
    return pencil_of_terms(chain_rows(n), 10 ** rng.uniform(5, 8, n), rng.uniform(10, 1000, n))


def grid(nx: int, ny: int, *, ground: bool = True) -> Pencil:
    """A square net of equal masses and springs: almost every frequency is there twice."""
    along, across = chain_rows(nx), chain_rows(ny)
    if not ground:
        along, across = along[1:], across[1:]
    rows = sp.csr_array(sp.vstack([sp.kron(along, sp.eye_array(ny)), sp.kron(sp.eye_array(nx), across)]))
    rigid = None if ground else np.ones((nx * ny, 1))
    return pencil_of_terms(rows, np.full(rows.shape[0], 1e6), np.full(nx * ny, 10.0), rigid_body=rigid)


def fiftyfold() -> Pencil:
    """Fifty-one equal masses on equal springs on one carrier: one frequency is there 50 times."""
    light = 51
    rows = sp.lil_array((light + 1, light + 1))
    rows[light, 0] = 1.0
    for i in range(light):
        rows[i, 0], rows[i, i + 1] = -1.0, 1.0
    stiffness = np.append(np.full(light, 1e6), 1e7)
    return pencil_of_terms(sp.csr_array(rows), stiffness, np.append(500.0, np.full(light, 10.0)))


def side_by_side(*parts: Pencil) -> Pencil:
    rows = sp.csr_array(sp.block_diag([part.rows for part in parts]))
    stiffness = np.concatenate([part.stiffness for part in parts])
    return pencil_of_terms(rows, stiffness, np.concatenate([part.M.diagonal() for part in parts]))


def check_against_all(pencil: Pencil, sigma: float, count: int) -> NearModes:
    """Hold the modes found against all modes of the pencil."""
    near, every = find_near(pencil, sigma, count), find_modes(pencil)
    certificate = near.certificate
    number = np.arange(1, every.number + 1)
    elastic = (number <= every.unstable) | (number > every.unstable + every.rigid_body_modes)
    inside = elastic & (every.eigenvalues > certificate.low) & (every.eigenvalues < certificate.high)
    assert near.modes.complete is True
    assert certificate.counted == certificate.found == near.modes.number == np.sum(inside)
    assert near.modes.number >= min(count, int(elastic.sum()))
    assert near.numbers == tuple(number[inside])
    scale = max(sigma, float(every.eigenvalues[inside].max()))
    assert np.abs(near.modes.eigenvalues - every.eigenvalues[inside]).max() < 1e-14 * scale
    assert np.all(near.modes.lower <= every.upper[inside])
    assert np.all(near.modes.upper >= every.lower[inside])
    gram = near.modes.shapes.T @ (pencil.M @ near.modes.shapes)
    assert np.abs(gram - np.eye(near.modes.number)).max() < 1e-10
    return near


@pytest.mark.parametrize("sigma", [0.0, 1e3, 3.5e4, 1e8])
def test_chain(sigma):
    near = check_against_all(random_chain(150), sigma, 6)
    assert near.history[-1].residual < 1e-11


@pytest.mark.parametrize("sigma", [0.0, 1.0, 2e5, 3e5])
@pytest.mark.parametrize("ground", [True, False])
def test_pairs_of_equal_frequencies(sigma, ground):
    check_against_all(grid(12, 12, ground=ground), sigma, 5)


@pytest.mark.parametrize(("sigma", "count"), [(1.2e5, 3), (1e5, 3), (1e5, 52), (0.0, 1)])
def test_fifty_equal_frequencies(sigma, count):
    near = check_against_all(fiftyfold(), sigma, count)
    if count > 1:
        assert max(stop - start for start, stop in near.modes.groups) == 50


def test_equal_pieces_keep_apart():
    near = check_against_all(side_by_side(*(random_chain(30) for _ in range(4))), 3.5e4, 3)
    moving = np.abs(near.modes.shapes).reshape(4, 30, -1).max(axis=1)
    assert np.all(np.sum(moving > 0, axis=0) == 1)


def test_more_equal_pieces_than_are_split():
    single = pencil_of_terms(chain_rows(1), np.array([1e6]), np.array([10.0]))
    near = check_against_all(side_by_side(*(single for _ in range(40))), 1.1e5, 3)
    assert near.modes.number == 40


def test_a_tie_too_large_is_said():
    n = 600
    near = find_near(
        pencil_of_terms(sp.csr_array(sp.eye_array(n)), np.full(n, 1e6), np.full(n, 10.0)), 1e5, 3
    )
    assert near.modes.complete is False
    assert near.numbers is None
    assert near.certificate.counted == n
    assert "600 modes" in near.modes.warnings[0]


@pytest.mark.parametrize("decades", [6, 10, 14])
def test_graded(decades):
    rng = np.random.default_rng(decades)
    n = 24
    chain = pencil_of_terms(chain_rows(n), 10 ** rng.uniform(0, decades, n), 10 ** rng.uniform(-4.5, 4.5, n))
    every = find_modes(chain)
    for sigma in (0.0, 1.0):
        near = find_near(chain, sigma, 3)
        assert near.modes.complete is True
        where = np.array(near.numbers) - 1
        error = np.abs(near.modes.eigenvalues / every.eigenvalues[where] - 1)
        assert error.max() < 1e-13


def test_massless_coordinates():
    mass = np.full(60, 10.0)
    mass[::3] = 0
    check_against_all(pencil_of_terms(chain_rows(60), np.full(60, 1e6), mass), 1e5, 5)


def test_at_an_eigenvalue():
    pencil = random_chain(80)
    check_against_all(pencil, float(find_modes(pencil).eigenvalues[7]), 3)


def test_fewer_modes_than_asked_for():
    assert check_against_all(random_chain(5), 1e4, 40).modes.number == 5


def test_rigid_body_modes_only_when_asked_for():
    rng = np.random.default_rng(5)
    pencil = free_chain(rng.uniform(1e5, 1e6, 39), rng.uniform(10, 20, 40))
    assert find_near(pencil, 10.0, 2).numbers == (2, 3)
    asked = find_near(pencil, 0.0, 2, rigid_body=True)
    assert asked.numbers == (1, 2, 3)
    assert asked.modes.eigenvalues[0] == 0
    assert asked.modes.rigid_body_modes == 1


def test_matrices_of_others():
    terms = random_chain(100)
    check_against_all(pencil_of_matrices(terms.K, terms.M), 3.5e4, 4)


def test_an_unstable_matrix():
    K = sp.csc_array(np.diag([-4.0, 1.0, 9.0, 16.0]))
    near = find_near(pencil_of_matrices(K, sp.csc_array(sp.eye_array(4))), 0.0, 3)
    assert near.modes.unstable == 1
    assert near.numbers == (1, 2, 3)


def test_the_same_every_time():
    first, second = (find_near(random_chain(60), 3e4, 4) for _ in range(2))
    assert np.array_equal(first.modes.shapes, second.modes.shapes)


def test_what_cannot_be_asked_for():
    pencil = random_chain(5)
    with pytest.raises(InputError, match=f"1 to {MOST}"):
        find_near(pencil, 1.0, 0)
    with pytest.raises(InputError, match="below zero"):
        find_near(pencil, -1.0, 2)
    loose = pencil_of_terms(sp.csr_array((0, 2)), np.zeros(0), np.ones(2), rigid_body=np.eye(2))
    with pytest.raises(InputError, match="no elastic mode"):
        find_near(loose, 1.0, 1)


def test_cancelled_between_solves():
    told = []
    with pytest.raises(CancelledError):
        find_near(
            random_chain(300), 3e4, 6, cancelled=lambda: len(told) > 5, progress=lambda *_: told.append(1)
        )
    assert len(told) == 6
