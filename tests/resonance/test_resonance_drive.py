"""Whether a force drives a mode."""

import numpy as np
import pytest
import scipy.sparse as sp
from oscillators import document, machine, solved

from modalview.assembly.pencil import pencil_of_terms
from modalview.eigen.solve import find_modes
from modalview.resonance.drive import mode_drives
from modalview.resonance.results import Drive


def chain(masses, stiffnesses):
    """Masses in a row, the first spring to ground."""
    n = len(masses)
    rows = np.eye(n) - np.eye(n, k=-1)
    return pencil_of_terms(
        sp.csr_array(rows), np.array(stiffnesses, dtype=float), np.array(masses, dtype=float)
    )


def drives(pencil, force):
    return mode_drives(pencil, find_modes(pencil), None if force is None else np.array(force, dtype=complex))


def test_shares_sum_to_one_and_follow_the_formula():
    pencil = chain([2, 3, 1], [100, 50, 20])
    modes = find_modes(pencil)
    force = np.array([1, -2j, 0.5])
    found = mode_drives(pencil, modes, force)
    whole = np.sum(np.abs(force) ** 2 / np.array([2, 3, 1]))
    for drive, shape in zip(found, modes.shapes.T, strict=True):
        assert drive.share == pytest.approx(abs(shape @ force) ** 2 / whole, rel=1e-12)
    assert sum(drive.share for drive in found) == pytest.approx(1, rel=1e-12)


def test_without_a_point_it_is_unknown():
    assert {(d.share, d.drive) for d in drives(chain([1, 1], [1, 1]), None)} == {(None, Drive.UNKNOWN)}


def test_a_force_on_nothing_that_moves():
    assert {(d.share, d.drive) for d in drives(chain([1, 1], [1, 1]), [0, 0])} == {(0.0, Drive.NOTHING)}


def test_a_force_at_a_node_hardly_drives():
    # Two equal masses between equal springs: in the second mode they move against each other.
    rows = np.array([[1.0, 0], [-1, 1], [0, 1]])
    pencil = pencil_of_terms(sp.csr_array(rows), np.ones(3), np.ones(2))
    first, second = drives(pencil, [1, 1])
    assert (first.drive, second.drive) == (Drive.EXCITED, Drive.HARDLY)
    assert (first.share, second.share) == (pytest.approx(1), pytest.approx(0, abs=1e-25))


def test_a_light_part_swings_hard_on_a_small_share():
    # 0.1 % of mass on a soft arm: its mode takes 0.1 % of the force's energy but moves 30 times as far.
    pencil = chain([1000, 1], [1e6, 300])
    light = drives(pencil, [1, 0])[0]
    assert light.share < 0.01
    assert light.drive is Drive.EXCITED


def test_a_repeated_frequency_is_one_subspace():
    # A mass free in two directions on equal springs: whichever shapes were chosen, the subspace is driven.
    pencil = pencil_of_terms(sp.csr_array(np.eye(3)), np.array([7.0, 7.0, 300.0]), np.ones(3))
    found = drives(pencil, [0.6, 0.8, 0])
    assert [d.drive for d in found] == [Drive.EXCITED, Drive.EXCITED, Drive.HARDLY]
    assert found[0].share + found[1].share == pytest.approx(1)


def test_a_rotating_force_drives_two_directions():
    pencil = pencil_of_terms(sp.csr_array(np.eye(2)), np.array([1.0, 9.0]), np.array([1.0, 1.0]))
    assert [d.share for d in drives(pencil, [1, -1j])] == pytest.approx([0.5, 0.5])


def test_force_on_a_massless_coordinate_reaches_the_masses():
    # Massless junction midway between two masses: half the force goes to each.
    rows = np.array([[1.0, 0, 0], [-1, 1, 0], [0, -1, 1]])
    pencil = pencil_of_terms(sp.csr_array(rows), np.array([1.0, 4.0, 4.0]), np.array([2.0, 0.0, 2.0]))
    junction, shared = (drives(pencil, force) for force in ([0, 1, 0], [0.5, 0, 0.5]))
    assert [d.share for d in junction] == pytest.approx([d.share for d in shared])


class TestThroughAModel:
    def plane(self, excitation):
        given = document([(10, None)], machine(excitations=[{"id": "1x", "order": 1, **excitation}]))
        given |= {"motion": "plane"}
        given["bodies"][0] |= {"position": ["0 m", "1 m"], "dof": ["y"]}
        given["supports"][0]["position"] = ["0 m", "0 m"]
        return solved(given).checks[0].drives

    def test_force_on_a_held_direction(self):
        assert [d.drive for d in self.plane({"at": {"body": "b0"}, "direction": "x"})] == [Drive.NOTHING]

    def test_force_along_the_free_direction(self):
        assert [d.drive for d in self.plane({"at": {"body": "b0"}, "direction": "y"})] == [Drive.EXCITED]
        assert [d.drive for d in self.plane({"at": {"body": "b0"}, "direction": "rotating"})] == [
            Drive.EXCITED
        ]

    def test_point_without_a_direction_is_unknown(self):
        assert [d.drive for d in self.plane({"at": {"body": "b0"}})] == [Drive.UNKNOWN]

    def test_motion_of_the_support(self):
        base = {"at": {"support": "ground"}, "direction": "y", "magnitude": {"motion": "1 mm"}}
        assert [d.share for d in self.plane(base)] == pytest.approx([1])

    def test_the_modes_in_reach_are_listed_else_the_nearest(self):
        excitation = {"id": "1x", "order": 1, "at": {"body": "b1"}}
        modes = [(10, None), (22, None), (35, "50 %"), (90, None)]
        (found,) = solved(document(modes, machine(excitations=[excitation]))).checks
        assert [d.mode for d in found.drives] == [2, 3]
        (alone,) = solved(document([(10, None), (90, None)], machine(excitations=[excitation]))).checks
        assert [d.mode for d in alone.drives] == [1]
