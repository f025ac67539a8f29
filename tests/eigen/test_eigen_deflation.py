import numpy as np
import pytest
import scipy.sparse as sp
from exact import random_rows

from modalview.assembly.pencil import Pencil, pencil_of_terms
from modalview.eigen.deflation import deflate, mass_orthonormal


def free_pieces(pieces: int) -> Pencil:
    rng = np.random.default_rng(pieces)
    rows = sp.csr_array(sp.block_diag([random_rows(rng, 6, 4, ground=False) for _ in range(pieces)]))
    rigid = np.kron(np.eye(pieces), np.ones((6, 1))) @ rng.standard_normal((pieces, pieces))
    mass = 10 ** rng.uniform(0, 4, 6 * pieces)
    return pencil_of_terms(rows, 10 ** rng.uniform(0, 4, rows.shape[0]), mass, rigid_body=rigid)


@pytest.mark.parametrize("pieces", [1, 2, 5])
def test_rest_is_orthonormal_and_keeps_the_spectrum(pieces: int) -> None:
    pencil = free_pieces(pieces)
    deflation = deflate(pencil)
    size = pencil.modes - pieces
    lifted = deflation.lift(np.eye(size))
    rigid = pencil.basis.T @ (pencil.M @ deflation.shapes)
    assert np.allclose(lifted.T @ lifted, np.eye(size), rtol=0, atol=1e-14 * size)
    assert np.allclose(rigid.T @ rigid, np.eye(pieces), rtol=0, atol=1e-14)
    assert np.allclose(rigid.T @ lifted, 0, rtol=0, atol=1e-14)
    factor = pencil.factor.toarray()
    top = np.linalg.norm(factor, 2)
    assert np.allclose(deflation.columns(factor), factor @ lifted, rtol=0, atol=1e-14 * top)
    standard = pencil.standard.toarray()
    expected = lifted.T @ standard @ lifted
    assert np.allclose(deflation.both_sides(standard), expected, rtol=0, atol=1e-13 * top**2)


def test_nothing_to_deflate() -> None:
    pencil = pencil_of_terms(sp.csr_array(np.eye(3)), np.ones(3), np.ones(3))
    deflation = deflate(pencil)
    assert deflation.reflections == ()
    assert np.array_equal(deflation.columns(np.eye(3)), np.eye(3))
    assert np.array_equal(deflation.both_sides(np.eye(3)), np.eye(3))
    assert np.array_equal(deflation.lift(np.eye(3)), np.eye(3))


def test_mass_orthonormal_keeps_the_span() -> None:
    pencil = free_pieces(2)
    given = np.array(pencil.rigid_body)
    found = mass_orthonormal(pencil, given)
    assert np.allclose(found.T @ (pencil.M @ found), np.eye(2), rtol=0, atol=1e-14)
    assert np.linalg.matrix_rank(np.hstack([given, found])) == 2
