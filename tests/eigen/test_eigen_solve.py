from itertools import pairwise

import numpy as np
import pytest
import scipy.sparse as sp
from exact import chain_rows, free_chain, random_rows

from modalview.assembly.pencil import Pencil, pencil_of_matrices, pencil_of_terms
from modalview.eigen import solve
from modalview.eigen.modes import Modes
from modalview.eigen.solve import all_eigenvalues, find_modes
from modalview.errors import CancelledError, InputError


def ring(n: int) -> Pencil:
    rows = sp.csr_array(np.eye(n) - np.roll(np.eye(n), 1, axis=1))
    return pencil_of_terms(rows, np.full(n, 3.0), np.full(n, 2.0), rigid_body=np.ones((n, 1)))


def assert_sound(pencil: Pencil, modes: Modes) -> None:
    size = pencil.modes
    assert modes.number == size
    assert modes.shapes.shape == (pencil.n, size)
    assert np.allclose(modes.shapes.T @ (pencil.M @ modes.shapes), np.eye(size), rtol=0, atol=1e-12)
    force = pencil.K @ modes.shapes - (pencil.M @ modes.shapes) * modes.eigenvalues
    scale = np.abs(pencil.K).max() * np.abs(modes.shapes).max()
    assert np.abs(force).max() <= 1e-12 * scale * size
    assert np.all(modes.lower <= modes.eigenvalues)
    assert np.all(modes.eigenvalues <= modes.upper)
    assert modes.groups[0][0] == 0
    assert modes.groups[-1][1] == size
    assert all(first[1] == second[0] for first, second in pairwise(modes.groups))
    assert modes.complete is True
    assert all(count.found == count.counted for count in modes.counts)


@pytest.mark.parametrize("n", [1, 2, 7, 60])
def test_chain_held_at_one_end(n: int) -> None:
    pencil = pencil_of_terms(chain_rows(n), np.full(n, 4.0), np.full(n, 0.5))
    modes = find_modes(pencil)
    order = np.arange(1, n + 1)
    expected = 2 * np.sqrt(4.0 / 0.5) * np.sin((2 * order - 1) * np.pi / (2 * (2 * n + 1)))
    assert_sound(pencil, modes)
    assert np.allclose(2 * np.pi * modes.frequency_hz, expected, rtol=3e-15, atol=0)
    assert modes.rigid_body_modes == modes.unstable == 0
    assert modes.repeated == ()


@pytest.mark.parametrize("n", [2, 9, 55])
def test_free_chain_has_one_exact_zero(n: int) -> None:
    pencil = free_chain(np.full(n - 1, 4.0), np.full(n, 0.5))
    modes = find_modes(pencil)
    expected = 2 * np.sqrt(4.0 / 0.5) * np.sin(np.arange(n) * np.pi / (2 * n))
    assert_sound(pencil, modes)
    assert np.allclose(2 * np.pi * modes.frequency_hz, expected, rtol=3e-15, atol=0)
    assert modes.rigid_body_modes == 1
    assert modes.frequency_hz[0] == modes.numerical_error_hz[0] == modes.eigenvalues[0] == 0.0


@pytest.mark.parametrize("n", [5, 12, 60])
def test_ring_repeats_its_frequencies(n: int) -> None:
    pencil = ring(n)
    modes = find_modes(pencil)
    expected = np.sort(4 * 3.0 / 2.0 * np.sin(np.pi * np.arange(n) / n) ** 2)
    assert_sound(pencil, modes)
    assert np.allclose(modes.eigenvalues, expected, rtol=1e-14, atol=0)
    assert modes.repeated == tuple((i, i + 2) for i in range(1, n - 1, 2))


def test_star_has_one_large_subspace() -> None:
    leaves = 12
    rows = np.zeros((leaves + 1, leaves + 1))
    rows[:leaves, 0], rows[np.arange(leaves), np.arange(1, leaves + 1)] = -1.0, 1.0
    rows[leaves, 0] = 1.0
    stiffness = np.append(np.full(leaves, 9.0), 5.0)
    pencil = pencil_of_terms(sp.csr_array(rows), stiffness, np.append(4.0, np.ones(leaves)))
    modes = find_modes(pencil)
    # Hub and mean leaf: 4 y'' + (12 9 + 5) y - 12 9 z = 0, z'' + 9 (z - y) = 0; leaves apart: 9.
    pair = np.sort(np.roots([4.0, -(4 * 9.0 + 113.0), 5.0 * 9.0]))
    assert_sound(pencil, modes)
    assert np.allclose(modes.eigenvalues, [pair[0], *[9.0] * 11, pair[1]], rtol=1e-14, atol=0)
    assert modes.repeated == ((1, 12),)


def test_identical_masses_apart_are_one_subspace() -> None:
    pencil = pencil_of_terms(sp.csr_array(sp.eye_array(30)), np.full(30, 2.0), np.full(30, 3.0))
    modes = find_modes(pencil)
    assert_sound(pencil, modes)
    assert modes.groups == ((0, 30),)
    assert np.allclose(modes.eigenvalues, 2 / 3, rtol=1e-15, atol=0)


def test_five_free_pieces_are_five_zeros() -> None:
    piece = chain_rows(6)[1:]
    rows = sp.csr_array(sp.block_diag([piece] * 5))
    rng = np.random.default_rng(4)
    rigid = np.kron(np.eye(5), np.ones((6, 1)))
    pencil = pencil_of_terms(rows, 10 ** rng.uniform(0, 4, 25), 10 ** rng.uniform(0, 2, 30), rigid_body=rigid)
    modes = find_modes(pencil)
    assert_sound(pencil, modes)
    assert modes.rigid_body_modes == 5
    assert modes.groups[0] == (0, 5)
    assert np.all(modes.frequency_hz[:5] == 0)
    assert np.all(modes.lower[5:] > 0)
    again = find_modes(pencil_of_matrices(pencil.K, pencil.M))
    assert again.rigid_body_modes == 5
    assert np.all(again.frequency_hz[:5] == 0)
    assert np.all(again.numerical_error_hz[:5] > 0)
    assert "cannot be told from zero" in again.warnings[0]


@pytest.mark.parametrize("free", [False, True])
def test_negative_spring_is_unstable(*, free: bool) -> None:
    n = 8
    stiffness = np.full(n, 5.0)
    stiffness[3] = -1.0
    rows = chain_rows(n)[1:] if free else chain_rows(n)
    stiffness = stiffness[1:] if free else stiffness
    rigid = np.ones((n, 1)) if free else None
    pencil = pencil_of_terms(sp.csr_array(rows), stiffness, np.ones(n), rigid_body=rigid)
    for given in (pencil, pencil_of_matrices(pencil.K, pencil.M)):
        modes = find_modes(given)
        assert_sound(given, modes)
        assert modes.unstable == 1
        assert modes.rigid_body_modes == int(free)
        assert modes.eigenvalues[0] < 0
        assert modes.frequency_hz[0] == 0
        assert modes.growth_rate[0] == pytest.approx(np.sqrt(-modes.eigenvalues[0]))
        assert np.all(modes.growth_rate[1:] == 0)
        assert modes.warnings[0].startswith("Unstable: 1")
        assert np.all(np.diff(modes.eigenvalues) > 0)


@pytest.mark.parametrize("graded", [False, True])
def test_massless_coordinates_follow(*, graded: bool) -> None:
    rng = np.random.default_rng(8)
    n = 18
    rows = random_rows(rng, n, 10, ground=True)
    mass = rng.uniform(1, 5, n)
    mass[[1, 4, 5, 11]] = 0
    pencil = pencil_of_terms(rows, 10 ** rng.uniform(0, 12 if graded else 2, rows.shape[0]), mass)
    modes = find_modes(pencil)
    assert modes.number == n - 4
    assert modes.complete is True or graded
    assert np.allclose(modes.shapes.T @ (pencil.M @ modes.shapes), np.eye(n - 4), rtol=0, atol=1e-12)
    force = (pencil.K @ modes.shapes)[pencil.massless]
    size = (abs(pencil.K) @ np.abs(modes.shapes))[pencil.massless]
    assert np.all(np.abs(force) <= 1e-12 * size)


def test_all_eigenvalues_agree() -> None:
    pencil = ring(40)
    assert np.allclose(all_eigenvalues(pencil), find_modes(pencil).eigenvalues, rtol=0, atol=1e-13)
    assert all_eigenvalues(pencil)[0] == 0


def test_result_cannot_be_changed() -> None:
    modes = find_modes(ring(5))
    for name in (
        "eigenvalues",
        "shapes",
        "frequency_hz",
        "numerical_error_hz",
        "lower",
        "upper",
        "residuals",
    ):
        assert not getattr(modes, name).flags.writeable


def test_wholly_free_mass() -> None:
    pencil = pencil_of_terms(sp.csr_array((0, 1)), np.zeros(0), np.array([2.0]), rigid_body=np.ones((1, 1)))
    modes = find_modes(pencil)
    assert modes.rigid_body_modes == modes.number == 1
    assert modes.shapes[0, 0] ** 2 == pytest.approx(0.5)


def test_frequency_error_covers_the_interval() -> None:
    modes = find_modes(ring(9))
    low, high = (np.sqrt(end[1:]) / (2 * np.pi) for end in (modes.lower, modes.upper))
    assert np.all(modes.frequency_hz[1:] - modes.numerical_error_hz[1:] <= low)
    assert np.all(modes.frequency_hz[1:] + modes.numerical_error_hz[1:] >= high)
    assert np.all(modes.numerical_error_hz[1:] < 1e-13)


def test_cancel_stops_between_steps() -> None:
    told: list[str] = []
    with pytest.raises(CancelledError):
        find_modes(ring(5), cancelled=lambda: len(told) == 2, progress=lambda what, _: told.append(what))
    assert told == ["rigid-body modes", "all modes"]


def test_progress_rises() -> None:
    shares: list[float] = []
    find_modes(ring(5), progress=lambda _, share: shares.append(share))
    assert shares == sorted(shares)
    assert 0 <= shares[0] < shares[-1] <= 1


def test_too_many_modes_says_what_to_do(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(solve, "LARGEST", 4)
    with pytest.raises(InputError, match=r"5 modes; .* up to 4\. Hold directions"):
        find_modes(ring(5))


def test_no_mass_is_refused() -> None:
    pencil = pencil_of_terms(sp.csr_array(np.eye(2)), np.ones(2), np.zeros(2))
    with pytest.raises(InputError, match="Give a body a mass"):
        find_modes(pencil)
