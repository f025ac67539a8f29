import numpy as np
import scipy.sparse as sp
from exact import chain_rows

from modalview.eigen.jacobi import singular_pairs
from modalview.eigen.polish import ritz


def graded(n: int, decades: float) -> sp.csr_array:
    stiffness = 10 ** np.random.default_rng(n).uniform(0, decades, n)
    return sp.csr_array(sp.diags_array(np.sqrt(stiffness)) @ chain_rows(n))


def test_digits_lost_in_s_come_back_from_g() -> None:
    factor = graded(40, 9)
    truth, _ = singular_pairs(factor.toarray())
    values, vectors = np.linalg.eigh((factor.T @ factor).toarray())
    lost = np.abs(values / truth - 1).max()
    polished, shapes = ritz(factor, values, vectors)
    quotients = np.sum((factor @ shapes) ** 2, axis=0)
    assert lost > 1e-9
    assert np.abs(quotients / truth - 1).max() <= 1e-14
    assert np.allclose(polished, quotients, rtol=1e-9)
    assert np.allclose(shapes.T @ shapes, np.eye(40), rtol=0, atol=1e-13)


def test_input_is_left_alone() -> None:
    factor = graded(6, 2)
    values, vectors = np.linalg.eigh((factor.T @ factor).toarray())
    before = vectors.copy()
    ritz(factor, values, vectors)
    assert np.array_equal(vectors, before)


def test_fewer_terms_than_modes() -> None:
    """One term, three coordinates: two zero eigenvalues stay zero."""
    factor = sp.csr_array(np.array([[1.0, -1.0, 0.0]]))
    values, vectors = np.linalg.eigh((factor.T @ factor).toarray())
    polished, shapes = ritz(factor, values, vectors)
    assert np.allclose(polished, [0, 0, 2], atol=1e-15)
    assert np.allclose(shapes.T @ shapes, np.eye(3), atol=1e-14)
