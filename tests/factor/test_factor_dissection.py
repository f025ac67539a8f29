"""Orders by nested dissection."""

import numpy as np
import pytest
import scipy.sparse as sp
from scipy.sparse.linalg import splu

from modalview.factor import pattern as pattern_module
from modalview.factor.dissection import dissection
from modalview.factor.pattern import union_pattern


def net(nx: int, ny: int) -> sp.csc_array:
    def path(n):
        return sp.diags_array(
            [np.full(n, 4.0), np.full(n - 1, -1.0), np.full(n - 1, -1.0)], offsets=[0, 1, -1]
        )

    return sp.csc_array(sp.kron(path(nx), sp.eye_array(ny)) + sp.kron(sp.eye_array(nx), path(ny)))


@pytest.mark.parametrize(
    "matrix",
    [
        net(40, 40),
        net(1, 700),
        sp.csc_array(sp.eye_array(500)),
        sp.csc_array(sp.block_diag([net(20, 20), net(3, 3), net(25, 12)])),
    ],
    ids=["square", "path", "nothing joined", "pieces"],
)
def test_every_coordinate_once(matrix):
    order = dissection(matrix)
    assert np.array_equal(np.sort(order), np.arange(matrix.shape[0]))
    assert np.array_equal(order, dissection(matrix))


def test_fills_far_less_than_the_order_given():
    matrix = net(60, 60)
    order = dissection(matrix)
    turned = sp.csc_array(sp.csr_array(matrix)[order][:, order])
    given, dissected = (
        splu(m, permc_spec="NATURAL", diag_pivot_thresh=0.0, options={"SymmetricMode": True}).nnz
        for m in (matrix, turned)
    )
    assert dissected < given / 2


def test_a_pattern_takes_the_order_that_fills_less(monkeypatch):
    matrix, mass = net(50, 50), sp.csc_array(sp.eye_array(2500))
    usual = union_pattern(matrix, mass)
    monkeypatch.setattr(pattern_module, "LARGE", 100)
    monkeypatch.setattr(pattern_module, "HEAVY", 1)
    tried = union_pattern(matrix, mass)
    assert tried.factors is not None
    assert tried.factors.columns.size <= usual.factors.columns.size
    for pattern in (usual, tried):
        lu = pattern.factorize(pattern.values(matrix))
        right = np.arange(2500.0)
        turned = np.empty_like(right)
        turned[pattern.stored] = right
        assert np.abs(matrix @ lu.solve(turned)[pattern.stored] - right).max() < 1e-9
