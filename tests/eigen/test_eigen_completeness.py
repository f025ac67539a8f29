import numpy as np
import pytest
from exact import chain_rows

from modalview.assembly.pencil import pencil_of_matrices, pencil_of_terms
from modalview.eigen.completeness import COUNTS, confirm, signs, verdict
from modalview.eigen.intervals import Intervals
from modalview.eigen.solve import find_modes

CHAIN = pencil_of_terms(chain_rows(20), np.full(20, 3.0), np.ones(20))


def test_counts_are_spread_and_agree() -> None:
    modes = find_modes(CHAIN)
    counts = confirm(CHAIN.shifted, modes.lower, modes.upper)
    assert 3 <= len(counts) <= COUNTS
    assert [count.found for count in counts] == sorted({count.found for count in counts})
    assert counts[-1].found == counts[-1].counted == 20
    assert verdict(Intervals(modes.lower, modes.upper, (), separate=True), counts) is True


@pytest.mark.parametrize("missing", [0, 7, 18])
def test_a_missing_mode_is_noticed(missing: int) -> None:
    modes = find_modes(CHAIN)
    lower, upper = np.delete(modes.lower, missing), np.delete(modes.upper, missing)
    counts = confirm(CHAIN.shifted, lower, upper)
    assert verdict(Intervals(lower, upper, (), separate=True), counts) is False


def test_undecided_is_neither() -> None:
    modes = find_modes(CHAIN)
    intervals = Intervals(modes.lower, modes.upper, (), separate=True)
    assert verdict(intervals, ()) is None
    unclear = Intervals(modes.lower, modes.upper, (), separate=False)
    assert verdict(unclear, confirm(CHAIN.shifted, modes.lower, modes.upper)) is None


def test_sum_of_positive_terms_has_no_hidden_zero() -> None:
    wide = Intervals(np.array([-1.0, 2.0]), np.array([1.0, 3.0]), (), separate=True)
    pencil = pencil_of_terms(chain_rows(2), np.array([1e-6, 1.0]), np.ones(2))
    assert signs(pencil.shifted, wide).zeros == 0


def test_counts_settle_what_intervals_leave_open() -> None:
    """One eigenvalue 1e-6, told from zero by a count though its interval holds zero."""
    pencil = pencil_of_terms(chain_rows(2), np.array([1e-6, 1.0]), np.ones(2))
    given = pencil_of_matrices(pencil.K, pencil.M)
    wide = Intervals(np.array([-1.0, 1.9]), np.array([1.0, 2.1]), (), separate=True)
    sign = signs(given.shifted, wide)
    assert (sign.unstable, sign.zeros, sign.warnings) == (0, 0, ())


def test_delta_of_a_zero_mode_is_told() -> None:
    K = chain_rows(3)[1:].T @ chain_rows(3)[1:]
    given = pencil_of_matrices(K, CHAIN.M[:3, :3])
    modes = find_modes(given)
    assert modes.rigid_body_modes == 1
    assert "within" in modes.warnings[0]
    assert "rad²/s²" in modes.warnings[0]
