"""What peaks tell: singular vectors, deviations and what other values carry over, by closed forms."""

import numpy as np
import pytest

from modalview.advice.identified import carried_over, combinations, deviations, value_slopes
from modalview.assembly.assemble import assemble
from modalview.eigen.solve import find_modes
from modalview.places import demo_models
from modalview.store import read_model
from modalview.study import Request, solve

DEMOS = sorted(demo_models().glob("*/*.keepclear"))


def test_one_peak_of_two_values_tells_their_quotient():
    """f of a mass on a spring: d(ln f) = (d(ln k) - d(ln m)) / 2."""
    first, second = combinations(np.array([[50.0, -50.0]]), np.array([0.1, 0.1]))
    assert first.told == "determined"
    assert first.singular == pytest.approx(50 * 0.1 * np.sqrt(2))
    assert sorted(i for i, _ in second.parts) == [0, 1]
    assert second.told == "not determined"
    assert np.sign([share for _, share in second.parts]).tolist() == [1, 1]


def test_peaks_that_say_less_than_the_range_are_told():
    (only,) = combinations(np.array([[10.0]]), np.array([0.1]))
    assert (only.singular, only.told) == (1.0, "hardly determined")


def test_deviation_of_one_value_from_two_peaks():
    assert deviations(np.array([[3.0], [4.0]])) == pytest.approx([0.2])


def test_deviations_are_the_roots_of_the_covariance():
    weighted = np.random.default_rng(5).normal(size=(6, 3))
    covariance = np.linalg.inv(weighted.T @ weighted)
    assert deviations(weighted) == pytest.approx(np.sqrt(np.diag(covariance)), rel=1e-12)


def test_what_others_carry_over():
    """The mass is off by at most 5 %: the spring found is off by as much."""
    assert carried_over(np.array([[7.0]]), np.array([[-7.0]]), [0.05]) == pytest.approx([0.05])


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: path.stem)
def test_slopes_are_those_that_are_shown_with_the_modes(path):
    solution = solve(Request(read_model(path)))
    assembly, raw = solution.outlook.assembly, solution.raw
    elastic = raw.elastic
    slopes = value_slopes(assembly, raw.eigenvalues[elastic], raw.shapes[:, elastic])
    index = {one.id: i for i, one in enumerate(assembly.parameters)}
    for mode, column in zip(solution.modes[elastic], slopes.T, strict=True):
        for share in mode.sensitivity:
            assert column[index[share.id]] == pytest.approx(share.fraction, abs=1e-9)


def test_slopes_against_differences():
    model = read_model(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")
    assembly = assemble(model)
    raw = find_modes(assembly.pencil())
    found = value_slopes(assembly, raw.eigenvalues, raw.shapes)
    pencil = assembly.pencil()
    K = pencil.K.toarray()
    row = np.zeros(3)
    row[list(assembly.structure.coordinates.free).index(("base", "y"))] = 1.0
    step = 1e-6
    K_more = K + step * 1.75e8 * np.outer(row, row)
    root = 1 / np.sqrt(pencil.M.diagonal())
    moved = np.sqrt(np.linalg.eigvalsh(K_more * np.outer(root, root)) / raw.eigenvalues)
    place = [one.id for one in assembly.parameters].index("k3.stiffness")
    assert found[place] == pytest.approx(np.log(moved) / step, abs=1e-5)
