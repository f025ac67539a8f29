"""Counts after edits agree with counts made anew."""

from copy import deepcopy
from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
import scipy.sparse as sp
from test_factor_hostile import exact_entries, models, truth

from modalview.assembly.pencil import pencil_of_terms
from modalview.errors import NumericalError
from modalview.factor import earlier as earlier_module
from modalview.factor import edited as edited_module
from modalview.factor.counts import count_at_most, count_below
from modalview.factor.earlier import Earlier
from modalview.factor.edited import METHOD, MOST_EDITS, count_at, edited_count


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


def edited(pencil, terms, change):
    stiffness = pencil.stiffness.copy()
    stiffness[terms] += change
    return pencil_of_terms(pencil.rows, stiffness, pencil.M.diagonal())


def hostile_changes(pencil, found, term):
    """Changes that bring a mode onto the shift, and that miss it by little; then any."""
    flexibility = edited_count(pencil.shifted, found, pencil.rows[[term]]).flexibility[0, 0]
    critical = -1 / flexibility
    for share in (0.0, 1e-14, -1e-14, 1e-9, -1e-9, 1e-4, -1e-4, 0.5, -0.5):
        if pencil.stiffness[term] + critical * (1 + share) > 0:
            yield critical * (1 + share)
    yield from (pencil.stiffness[term] * factor for factor in (-0.9, 0.5, 1e3))


def judged(pencil, terms, change, proven, entries=None):
    """Hold a proven count against exact counts of the edited model at both ends of its uncertainty."""
    entries = exact_entries(edited(pencil, terms, change)) if entries is None else entries
    at, delta = Fraction(proven.sigma), Fraction(proven.uncertainty)
    return truth(entries, at - delta) <= proven.negative <= truth(entries, at + delta)


def tally(every):
    """Prove counts of hostile edits at hostile shifts; return how many were proven and tried."""
    tried = proven = 0
    rng = np.random.default_rng(5)
    for pencil in models():
        spectrum = np.linalg.eigvalsh(pencil.standard.toarray())
        for lam in spectrum[spectrum > 1e-9 * spectrum[-1]][::every]:
            for sigma in (lam * (1 + 1e-13), lam * (1 + 1e-9), lam * (1 - 1e-5), lam * 1.07):
                found = pencil.shifted.factorize(float(sigma))
                if not found.uncertainty < sigma:
                    continue
                term = int(rng.integers(pencil.stiffness.size))
                counted = edited_count(pencil.shifted, found, pencil.rows[[term]])
                for change in hostile_changes(pencil, found, term):
                    result = counted.proven(np.array([change]))
                    tried += 1
                    if result.uncertainty < sigma:
                        proven += 1
                        assert judged(pencil, [term], change, result), (pencil.n, sigma, change)
    return proven, tried


def test_no_proven_count_of_a_hostile_edit_is_wrong():
    proven, tried = tally(every=150)
    assert tried > 100
    assert proven > tried / 3


@pytest.mark.slow
def test_no_proven_count_of_thousands_of_hostile_edits_is_wrong():
    proven, tried = tally(every=1)
    assert tried > 3000
    assert proven > tried / 3


@pytest.mark.parametrize("seed", range(3))
def test_several_edits_at_once_are_proven_and_as_sharp_as_the_factors(seed):
    rng = np.random.default_rng(seed)
    before = ladder(seed, n=12)
    spectrum = np.linalg.eigvalsh(before.standard.toarray())
    found = before.shifted.factorize(float(spectrum[4] + spectrum[5]) / 2)
    terms = rng.choice(before.stiffness.size, 4, replace=False)
    counted = edited_count(before.shifted, found, before.rows[terms])
    for _ in range(4):
        change = before.stiffness[terms] * rng.uniform(-0.9, 3, 4)
        proven = counted.proven(change)
        assert proven.uncertainty < 1e-9 * found.sigma
        assert judged(before, terms, change, proven)


def test_wrong_answers_of_the_solves_prove_nothing_or_less():
    before = ladder(2)
    found = before.shifted.factorize(50.0)
    counted = edited_count(before.shifted, found, before.rows[:1])
    honest = counted.proven(np.array([5.0]))

    class Careless(type(before.shifted)):
        def solve(self, found, right):
            return 1.3 * super().solve(found, right)

    careless = Careless(**{name: getattr(before.shifted, name) for name in before.shifted.__slots__})
    misled = edited_count(careless, found, before.rows[:1]).proven(np.array([5.0]))
    assert honest.uncertainty < 1e-8
    assert misled.uncertainty > 1e3 * honest.uncertainty


def test_massless_coordinates_leave_the_proof_open():
    mass = np.ones(30)
    mass[3] = 0
    pencil = ladder(1, mass=mass)
    counted = edited_count(pencil.shifted, pencil.shifted.factorize(50.0), pencil.rows[:1])
    assert counted.after(np.array([2.0])) is not None
    assert counted.proven(np.array([2.0])).uncertainty == np.inf


@pytest.fixture
def kept(monkeypatch):
    """Keep counts of models of any size."""
    monkeypatch.setattr(edited_module, "WORTH_KEEPING", 0)


def one_pattern(pencil, stiffness):
    """The shifted pencil of other values, on the pattern of a pencil."""
    shifted, other = pencil.shifted, edited(pencil, slice(None), stiffness - pencil.stiffness).shifted
    relative = replace(other.relative, rows=shifted.relative.rows)
    return replace(other, pattern=shifted.pattern, relative=relative)


@pytest.mark.usefixtures("kept")
@pytest.mark.parametrize("seed", range(4))
def test_counts_on_both_sides_after_a_row_of_edits_are_right_and_from_earlier_factors(seed):
    rng = np.random.default_rng(seed)
    pencil = ladder(seed, n=10)
    stiffness, from_earlier = pencil.stiffness.copy(), 0
    spectrum = np.linalg.eigvalsh(pencil.standard.toarray())
    edges = [float(edge) for edge in (1.02 * spectrum[2], spectrum[5], 0.97 * spectrum[8])]
    for _ in range(8):
        shifted = one_pattern(pencil, stiffness)
        entries = exact_entries(edited(pencil, slice(None), stiffness - pencil.stiffness))
        for lam in edges:
            upper, lower = count_at_most(shifted, lam), count_below(shifted, lam)
            far = Fraction(lam) / 10**6
            assert truth(entries, Fraction(lam)) <= upper.number <= truth(entries, Fraction(lam) + far)
            assert truth(entries, Fraction(lam) - far) <= lower.number <= truth(entries, Fraction(lam))
            from_earlier += (upper.method == METHOD) + (lower.method == METHOD)
        stiffness[rng.integers(stiffness.size)] *= 10 ** rng.uniform(-1, 1)
    assert from_earlier > 30


@pytest.mark.usefixtures("kept")
def test_an_earlier_count_serves_no_other_masses():
    first = ladder(1)
    count_at(first.shifted, 50.0)
    heavier = replace(first.shifted, inertia=1.5 * first.shifted.inertia)
    assert count_at(first.shifted, 50.0) is first.shifted.pattern.earlier.at(50.0)[0].found
    assert count_at(heavier, 50.0).method != METHOD
    assert count_at(heavier, 50.0).negative == heavier.factorize(50.0).negative


def test_what_is_kept_has_an_end_and_goes_to_no_other_process(monkeypatch):
    pencil = ladder(1)
    found, earlier = pencil.shifted.factorize(50.0), pencil.shifted.pattern.earlier
    monkeypatch.setattr(earlier_module, "MOST_ENTRIES", 4000)
    for entries, left in ((100, 40), (200, 0)):
        earlier = type(earlier)()
        for _ in range(50):
            earlier.keep(Earlier(pencil.shifted, found), entries)
        assert len(earlier.at(50.0)) == left
    pencil.shifted.pattern.earlier.keep(Earlier(pencil.shifted, found), 100)
    assert deepcopy(pencil.shifted).pattern.earlier.at(50.0) == []
