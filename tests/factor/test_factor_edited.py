"""Counts after edits agree with counts made anew."""

import numpy as np
import pytest
import scipy.sparse as sp

from modalview.assembly.pencil import pencil_of_terms
from modalview.errors import NumericalError
from modalview.factor.edited import MOST_EDITS, edited_count


def ladder(seed, stiffness=None, mass=None, n=30):
    rng = np.random.default_rng(seed)
    i, j = rng.integers(0, n, 2 * n), rng.integers(0, n, 2 * n)
    rows = np.vstack([np.eye(n), (np.eye(n)[i] - np.eye(n)[j])[i != j]])
    own = 10 ** rng.uniform(2, 5, len(rows))
    heavy = 10 ** rng.uniform(-1, 1, n)
    return pencil_of_terms(
        sp.csr_array(rows), own if stiffness is None else stiffness, heavy if mass is None else mass
    )


@pytest.mark.parametrize("seed", range(6))
def test_random_edits_of_springs_and_masses_are_never_wrong(seed):
    rng = np.random.default_rng(100 + seed)
    before = ladder(seed)
    spectrum = np.linalg.eigvalsh(before.standard.toarray())
    for _ in range(12):
        sigma = float(np.exp(rng.uniform(*np.log(spectrum[[0, -1]]))))
        terms = rng.choice(before.stiffness.size, int(rng.integers(1, 5)), replace=False)
        heavier = rng.choice(before.n, int(rng.integers(0, 3)), replace=False)
        stiffness, mass = before.stiffness.copy(), before.M.diagonal()
        stiffness[terms] *= 10 ** rng.uniform(-2, 2, terms.size)
        mass[heavier] *= 10 ** rng.uniform(-1, 1, heavier.size)
        after = ladder(seed, stiffness, mass)
        directions = sp.csr_array(
            sp.vstack([before.rows[terms], sp.csr_array(np.eye(before.n)[heavier].reshape(-1, before.n))])
        )
        change = np.concatenate(
            [(stiffness - before.stiffness)[terms], -sigma * (mass - before.M.diagonal())[heavier]]
        )
        number = edited_count(before.shifted, before.shifted.factorize(sigma), directions).after(change)
        truth = np.linalg.eigvalsh(after.standard.toarray())
        assert number == np.count_nonzero(truth < sigma)


def test_an_edit_that_moves_a_mode_onto_the_shift_is_left_open():
    # one mass on a spring of 1: at sigma = 2 an added spring of 1 makes K - sigma M zero
    pencil = pencil_of_terms(sp.csr_array(np.eye(2)), np.array([1.0, 9.0]), np.ones(2))
    counted = edited_count(pencil.shifted, pencil.shifted.factorize(2.0), sp.csr_array(np.eye(2)[:1]))
    assert [counted.after(np.array([v])) for v in (0.0, 0.5, 1.0, 1.5)] == [1, 1, None, 0]


def test_a_drag_needs_no_new_solve_and_too_many_directions_are_refused():
    pencil = ladder(1)
    found = pencil.shifted.factorize(50.0)
    counted = edited_count(pencil.shifted, found, pencil.rows[:1])
    for factor in (0.5, 2.0, 8.0):
        stiffness = pencil.stiffness.copy()
        stiffness[0] *= factor
        truth = np.linalg.eigvalsh(ladder(1, stiffness).standard.toarray())
        assert counted.after(np.array([stiffness[0] - pencil.stiffness[0]])) == np.count_nonzero(truth < 50.0)
    with pytest.raises(NumericalError, match="11 edited directions"):
        edited_count(pencil.shifted, found, pencil.rows[: MOST_EDITS + 1])
