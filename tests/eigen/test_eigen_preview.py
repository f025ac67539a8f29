"""Previews of an edit against a new solve."""

import numpy as np
import pytest
import scipy.sparse as sp

from modalview.assembly.pencil import pencil_of_terms
from modalview.eigen.preview import OLD_MODES, preview_modes
from modalview.eigen.solve import find_modes

N = 60


def lattice():
    """Rows, stiffness and mass of a chain of 60 with ties to ground and across."""
    rng = np.random.default_rng(5)
    eye = np.eye(N)
    rows = sp.csr_array(np.vstack([eye, eye[1:] - eye[:-1], eye[7:] - eye[:-7]]))
    stiffness = 10 ** np.concatenate([rng.uniform(3, 4, N), rng.uniform(5, 6, rows.shape[0] - N)])
    return rows, stiffness, rng.uniform(1, 5, N)


def edited(stiffness=(), mass=()):
    rows, k, m = lattice()
    k2, m2 = k.copy(), m.copy()
    for term, factor in stiffness:
        k2[term] *= factor
    for at, factor in mass:
        m2[at] *= factor
    old = pencil_of_terms(rows, k, m)
    new = pencil_of_terms(rows, k2, m2)
    object.__setattr__(new, "rows", old.rows)  # one structure, as an assembly gives it
    return old, new


@pytest.mark.parametrize(("factor", "error"), [(1.05, 1e-7), (1.5, 5e-6), (5.0, 3e-5)])
@pytest.mark.parametrize("term", [3, N + 10, 2 * N + 5])
def test_one_spring_is_foretold_closely_and_from_above(factor, error, term):
    old, new = edited([(term, factor)])
    found = preview_modes(find_modes(old), old, new)
    truth = find_modes(new).frequency_hz[:OLD_MODES]
    apart = found.frequency_hz / truth - 1
    assert np.all(apart > -1e-13)
    assert apart[:-1].max() < error
    assert found.complete is True
    assert found.numbers == tuple(range(1, OLD_MODES + 1))


def test_a_mass_is_foretold():
    old, new = edited(mass=[(10, 1.5)])
    found = preview_modes(find_modes(old), old, new)
    assert found.frequency_hz[:15] == pytest.approx(find_modes(new).frequency_hz[:15], rel=1e-6)
    assert found.complete is True


def test_rigid_body_modes_stay_zero_and_small_models_are_exact():
    rows = sp.csr_array(np.diff(np.eye(4), axis=0))
    mass, ones = np.array([1.0, 2.0, 0.5, 1.0]), np.ones((4, 1))
    old = pencil_of_terms(rows, np.array([1.0, 2.0, 3.0]), mass, rigid_body=ones)
    new = pencil_of_terms(rows, np.array([1.0, 9.0, 3.0]), mass, rigid_body=ones)
    object.__setattr__(new, "rows", old.rows)
    found = preview_modes(find_modes(old), old, new)
    assert found.frequency_hz[0] == 0
    assert found.frequency_hz[1:] == pytest.approx(find_modes(new).frequency_hz[1:], rel=1e-12)


def test_no_edit_or_too_many_give_no_preview():
    old, same = edited()
    assert preview_modes(find_modes(old), old, same) is None
    _, other = edited([(term, 1.1) for term in range(11)])
    object.__setattr__(other, "rows", old.rows)
    assert preview_modes(find_modes(old), old, other) is None
