"""Groups that scaling sets apart hold as many eigenvalues as discs."""

from itertools import pairwise

import numpy as np
import pytest
import scipy.sparse as sp
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.assembly.pencil import pencil_of_terms
from modalview.bounds.before import before_solve
from modalview.bounds.forms import forms_of
from modalview.bounds.separated import separated_groups

QUIET = settings(derandomize=True, deadline=None, max_examples=30)


def star(coupling):
    """Six soft oscillators, each joined to one stiff one: all of the coupling meets in its row."""
    own = np.eye(7)
    stiffness = [1.0, 1.1, 1.2, 1.3, 1.4, 1.5, 100.0, *[coupling] * 6]
    return pencil_of_terms(
        sp.csr_array(np.array([*own, *(own[:6] - own[6])])), np.array(stiffness), np.ones(7)
    )


def eigenvalues(pencil):
    return np.linalg.eigvalsh(pencil.standard.toarray())


def assert_held(pencil, groups):
    lam = eigenvalues(pencil)
    noise = 1e-14 * lam[-1]  # of the reference
    assert sum(group.number for group in groups) == pencil.modes
    start = 0
    for group in groups:
        inside = lam[start : start + group.number]
        assert group.low <= inside.min() + noise
        assert inside.max() <= group.high + noise
        start += group.number
    for before, after in pairwise(groups):
        assert before.high < after.low


def test_clear_clusters_separate_though_plain_discs_overlap():
    pencil = star(60.0)
    bounds = before_solve(pencil)
    assert len(bounds.symmetric.groups) == 1
    assert [group.number for group in bounds.separated] == [6, 1]
    assert_held(pencil, bounds.separated)
    assert not any("overlap" in note for note in bounds.notes)


def test_what_no_scaling_separates_is_said():
    rows = sp.csr_array(np.eye(6) - np.eye(6, k=-1))
    bounds = before_solve(pencil_of_terms(rows, np.ones(6), np.linspace(1, 1.1, 6)))
    assert bounds.separated == ()
    assert any("overlap under every scaling" in note for note in bounds.notes)


@pytest.mark.parametrize("n", [1, 2, 250])
def test_every_size_and_kind_of_form(n):
    # 250: sparse forms
    stiffness = np.where(np.arange(n) < n // 2, 1.0, 1e4) * np.linspace(1, 2, n)
    rows = np.vstack([np.eye(n), np.diff(np.eye(n), axis=0)])
    pencil = pencil_of_terms(sp.csr_array(rows), np.append(stiffness, np.full(n - 1, 50.0)), np.ones(n))
    groups = separated_groups(forms_of(pencil))
    assert len(groups) == (0 if n < 2 else max(2, len(groups)))
    if groups:
        assert_held(pencil, groups)


@QUIET
@given(st.integers(0, 10**6))
def test_groups_hold_as_many_eigenvalues_as_discs(seed):
    rng = np.random.default_rng(seed)
    n = int(rng.integers(2, 12))
    i, j = rng.integers(0, n, 2 * n), rng.integers(0, n, 2 * n)
    rows = np.vstack([np.eye(n), (np.eye(n)[i] - np.eye(n)[j])[i != j]])
    stiffness = 10 ** np.concatenate([rng.uniform(0, 6, n), rng.uniform(-2, 3, len(rows) - n)])
    pencil = pencil_of_terms(sp.csr_array(rows), stiffness, 10 ** rng.uniform(-2, 2, n))
    groups = separated_groups(forms_of(pencil))
    assert groups == () or len(groups) >= 2
    if groups:
        assert_held(pencil, groups)
