import numpy as np
import pytest
import scipy.sparse as sp
from exact import free_chain, random_rows

from modalview.assembly.pencil import Pencil, pencil_of_matrices, pencil_of_terms
from modalview.eigen.shares import kinetic_shares, modal_mass, participation, strain_shares
from modalview.eigen.solve import find_modes
from modalview.errors import InputError, NumericalError


def network(stiffness: np.ndarray, mass: np.ndarray) -> Pencil:
    return pencil_of_terms(random_rows(np.random.default_rng(6), 7, 4, ground=True), stiffness, mass)


RNG = np.random.default_rng(9)
STIFFNESS, MASS = RNG.uniform(1, 9, 11), RNG.uniform(1, 4, 7)


def test_shares_sum_to_one() -> None:
    pencil = network(STIFFNESS, MASS)
    modes = find_modes(pencil)
    assert np.allclose(strain_shares(pencil, modes).sum(axis=0), 1, rtol=1e-14)
    assert np.allclose(kinetic_shares(pencil, modes).sum(axis=0), 1, rtol=1e-13)


def test_half_of_a_share_is_the_sensitivity() -> None:
    step = 1e-6
    pencil = network(STIFFNESS, MASS)
    modes = find_modes(pencil)
    strain, kinetic = strain_shares(pencil, modes), kinetic_shares(pencil, modes)
    for i in (0, 5, 10):
        stiffer = STIFFNESS.copy()
        stiffer[i] *= 1 + step
        moved = find_modes(network(stiffer, MASS)).frequency_hz
        assert np.allclose(np.log(moved / modes.frequency_hz) / step, strain[i] / 2, atol=1e-5)
    for j in (0, 6):
        heavier = MASS.copy()
        heavier[j] *= 1 + step
        moved = find_modes(network(STIFFNESS, heavier)).frequency_hz
        assert np.allclose(np.log(moved / modes.frequency_hz) / step, -kinetic[j] / 2, atol=1e-5)


def test_rigid_body_modes_strain_nothing() -> None:
    pencil = free_chain(np.full(5, 3.0), np.arange(1.0, 7))
    modes = find_modes(pencil)
    shares = strain_shares(pencil, modes)
    assert np.all(shares[:, 0] == 0)
    assert np.allclose(shares[:, 1:].sum(axis=0), 1)


def test_soft_spring_of_a_graded_model_keeps_its_share() -> None:
    """A rigid lump on a soft spring: the soft spring holds all the energy of the lowest mode."""
    n = 12
    stiffness = np.full(n, 1e14)
    stiffness[0] = 1.0
    rows = sp.csr_array(sp.eye_array(n) - sp.eye_array(n, k=-1))
    pencil = pencil_of_terms(rows, stiffness, np.ones(n))
    shares = strain_shares(pencil, find_modes(pencil))
    assert shares[0, 0] == pytest.approx(1, abs=1e-12)


def test_effective_masses_sum_to_the_mass_that_moves() -> None:
    pencil = free_chain(np.full(5, 3.0), np.arange(1.0, 7))
    modes = find_modes(pencil)
    directions = np.stack([np.ones(6), np.arange(6.0)], axis=1)
    factors, masses = participation(pencil, modes, directions)
    assert factors.shape == masses.shape == (6, 2)
    assert np.allclose(masses.sum(axis=0), np.diag(directions.T @ (pencil.M @ directions)), rtol=1e-13)
    assert masses[0, 0] == pytest.approx(21.0, rel=1e-13)
    assert np.allclose(masses[1:, 0], 0, atol=1e-24)


def test_modal_mass_of_a_lone_body_is_its_mass() -> None:
    pencil = pencil_of_terms(sp.csr_array(np.eye(2)), np.array([1.0, 9.0]), np.array([3.0, 4.0]))
    assert np.allclose(modal_mass(pencil, find_modes(pencil)), [3.0, 4.0], rtol=1e-14)


def test_modal_mass_compares_rotations_at_their_radius() -> None:
    pencil = pencil_of_terms(sp.csr_array(np.eye(1)), np.array([8.0]), np.array([2.0]), scale=np.array([0.5]))
    assert modal_mass(pencil, find_modes(pencil))[0] == pytest.approx(8.0)  # 2 kg m^2 / (0.5 m)^2


def test_bad_directions_name_the_shape() -> None:
    pencil = network(STIFFNESS, MASS)
    with pytest.raises(InputError, match=r"\(3, 1\).*7 coordinates"):
        participation(pencil, find_modes(pencil), np.ones((3, 1)))


def test_matrices_have_no_strain_shares() -> None:
    pencil = network(STIFFNESS, MASS)
    given = pencil_of_matrices(pencil.K, pencil.M)
    with pytest.raises(NumericalError, match="no terms"):
        strain_shares(given, find_modes(given))
