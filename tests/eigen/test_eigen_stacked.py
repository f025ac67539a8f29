"""A stack of models gives the frequencies of each alone."""

import numpy as np
import pytest

from modalview.assembly.assemble import assemble
from modalview.assembly.parameters import Case, values_at
from modalview.eigen.solve import find_modes
from modalview.eigen.stacked import Stack, standard_forms
from modalview.errors import InputError, NumericalError
from modalview.places import demo_models
from modalview.store import read_model

DEMOS = sorted(demo_models().glob("*/*.keepclear"))


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: path.stem)
def test_cases_of_the_demonstration_models(path):
    assembly = assemble(read_model(path))
    values = np.array([values_at(assembly.parameters, case) for case in Case])
    found = Stack.of(assembly).eigenvalues(values)
    for row, case in zip(found, Case, strict=True):
        alone = find_modes(assembly.pencil(case)).eigenvalues
        assert row == pytest.approx(alone, rel=1e-11, abs=1e-14 * alone[-1])


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: path.stem)
def test_shapes_are_orthonormal_to_the_mass(path):
    assembly = assemble(read_model(path))
    values = np.array([values_at(assembly.parameters, case) for case in Case])
    eigenvalues, shapes = Stack.of(assembly).modes_at(values)
    for row, columns, case in zip(eigenvalues, shapes, Case, strict=True):
        pencil = assembly.pencil(case)
        assert columns.T @ (pencil.M @ columns) == pytest.approx(np.eye(row.size), abs=1e-12)
        assert columns.T @ (pencil.K @ columns) == pytest.approx(np.diag(row), abs=1e-12 * row[-1])


def test_rigid_body_modes_are_exactly_zero():
    train = read_model(demo_models() / "3-air-compressor-train" / "as-built.keepclear")
    assembly = assemble(train)
    values = values_at(assembly.parameters, Case.NOMINAL)[None]
    assert Stack.of(assembly).eigenvalues(values)[0, 0] == 0.0


def test_massless_coordinates_are_condensed():
    """Two springs in series through a massless joint."""
    K = np.array([[[2.0, -2.0], [-2.0, 2.0 + 6.0]]])
    M = np.array([[[3.0, 0.0], [0.0, 0.0]]])
    assert standard_forms(K, M, np.array([False, True]))[0] == pytest.approx(np.array([[1.5 / 3]]))


def test_full_mass_matrix():
    rng = np.random.default_rng(1)
    root, half = rng.normal(size=(4, 3, 3)), rng.normal(size=(4, 3, 3))
    M = root @ root.transpose(0, 2, 1) + np.eye(3)
    K = half @ half.transpose(0, 2, 1)
    found = np.linalg.eigvalsh(standard_forms(K.copy(), M, np.zeros(3, dtype=bool)))
    for row, k, m in zip(found, K, M, strict=True):
        assert row == pytest.approx(np.sort(np.linalg.eigvals(np.linalg.solve(m, k)).real), abs=1e-10)


def test_mass_that_is_not_positive_is_told():
    M = np.array([[[1.0, 2.0], [2.0, 1.0]]])
    with pytest.raises(NumericalError, match="not positive definite"):
        standard_forms(np.eye(2)[None].copy(), M, np.zeros(2, dtype=bool))


def test_large_models_are_refused():
    class Large:
        n = 301

    with pytest.raises(InputError, match="301 degrees of freedom"):
        Stack.of(Large())
