"""Eigenvalues to many digits, and models to try the solve on."""

import mpmath
import numpy as np
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil, pencil_of_terms


def spectrum(pencil: Pencil, digits: int = 50) -> list[mpmath.mpf]:
    """Every eigenvalue of the pencil as its stored numbers define it, ascending."""
    with mpmath.workdps(digits):
        stiffness = exact_stiffness(pencil)
        kept, still = np.flatnonzero(~pencil.massless).tolist(), np.flatnonzero(pencil.massless).tolist()
        condensed = _pick(stiffness, kept, kept)
        if still:
            inner, across = _pick(stiffness, still, still), _pick(stiffness, still, kept)
            condensed -= _correction(inner, across)
        root = mpmath.cholesky(_pick(mpmath.matrix(pencil.M.toarray().tolist()), kept, kept))
        half = _solved(root, condensed)
        return sorted(mpmath.eigsy(_solved(root, half.T), eigvals_only=True))


def exact_stiffness(pencil: Pencil) -> mpmath.matrix:
    """K summed exactly from the terms, or as given."""
    if pencil.rows is None or pencil.stiffness is None:
        return mpmath.matrix(pencil.K.toarray().tolist())
    rows = mpmath.matrix(pencil.rows.toarray().tolist())
    return rows.T * mpmath.diag([mpmath.mpf(float(k)) for k in pencil.stiffness]) * rows


def _pick(matrix: mpmath.matrix, rows: list[int], columns: list[int]) -> mpmath.matrix:
    return mpmath.matrix([[matrix[i, j] for j in columns] for i in rows])


def _correction(inner: mpmath.matrix, across: mpmath.matrix) -> mpmath.matrix:
    return across.T * _solved(inner, across)


def _solved(matrix: mpmath.matrix, right: mpmath.matrix) -> mpmath.matrix:
    factors, order = mpmath.mp.LU_decomp(matrix)
    columns = [
        mpmath.mp.U_solve(factors, mpmath.mp.L_solve(factors, right[:, j], order)) for j in range(right.cols)
    ]
    return mpmath.matrix([[column[i] for column in columns] for i in range(matrix.rows)])


def chain_rows(n: int) -> sp.csr_array:
    """Spring 0 to the ground, spring i between masses i - 1 and i."""
    return sp.csr_array(sp.eye_array(n) - sp.eye_array(n, k=-1))


def free_chain(stiffness: np.ndarray, mass: np.ndarray) -> Pencil:
    """Chain that nothing holds."""
    rows = sp.csr_array(chain_rows(len(mass))[1:])
    return pencil_of_terms(rows, stiffness, mass, rigid_body=np.ones((len(mass), 1)))


def random_rows(rng: np.random.Generator, n: int, extra: int, *, ground: bool) -> sp.csr_array:
    """A connected network: a random tree, some extra springs, and one spring to ground or none."""
    rows = []
    for i in range(1, n):
        row = np.zeros(n)
        row[i], row[rng.integers(i)] = 1.0, -1.0
        rows.append(row)
    for _ in range(extra):
        row = np.zeros(n)
        i, j = rng.choice(n, 2, replace=False)
        row[i], row[j] = 1.0, -1.0
        rows.append(row)
    if ground:
        row = np.zeros(n)
        row[rng.integers(n)] = 1.0
        rows.append(row)
    return sp.csr_array(np.array(rows))


def held(pencil: Pencil, lower: np.ndarray, upper: np.ndarray, digits: int = 50) -> bool:
    """Whether every exact eigenvalue lies in its interval."""
    return all(
        float(low) <= value <= float(high)
        for low, value, high in zip(lower, spectrum(pencil, digits), upper, strict=True)
    )
