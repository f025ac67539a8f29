"""Many shifted systems (sigma I - A) x = b of one matrix, after one reduction to Hessenberg form."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.linalg as la

from modalview.eigen.threads import one_blas_thread

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# Numbers in one working array: three of them stay in the cache.
WORKING = 40_000


@dataclass(frozen=True, slots=True, eq=False)
class Hessenberg:
    """A = Q H Q^H with H zero below its first subdiagonal.

    Parameters
    ----------
    h : array (n, n)
        Column-major; real where A is.
    q : array (n, n)
        Unitary.
    """

    h: npt.NDArray[np.inexact]
    q: npt.NDArray[np.inexact]

    def solve(self, shifts: ComplexArray, right: ComplexArray) -> ComplexArray:
        """Solve (shift I - A) x = b for each shift (w,) and its own column of b (n, w).

        Notes
        -----
        Columns are combined from the last to the first by plane rotations, which turns H - shift I into an
        upper triangle whose columns are used as they come: n^2 operations a shift, no matrix stored, all
        shifts at once. Backward stable, as the rotations are unitary.

        References
        ----------
        A. J. Laub (1981), IEEE Trans. Automatic Control 26, 407-408 (the reduction); G. Henry (1994), The
        shifted Hessenberg system solve computation (columns as they come; from memory).
        """
        n = len(self.h)
        turned = self.q.conj().T @ right
        found = np.empty((n, shifts.size), dtype=complex)
        step = max(16, WORKING // max(n, 1))
        for start in range(0, shifts.size, step):
            part = slice(start, start + step)
            found[:, part] = _solved(self.h, shifts[part], np.array(turned[:, part], dtype=complex))
        return np.asarray(self.q @ found, dtype=complex)


def reduced(matrix: npt.NDArray[np.inexact]) -> Hessenberg:
    """Reduce a matrix (n, n) to Hessenberg form; about 10 n^3 / 3 operations, once."""
    with one_blas_thread():
        h, q = la.hessenberg(matrix, calc_q=True)
    return Hessenberg(np.asfortranarray(h), q)


def _solved(h: npt.NDArray[np.inexact], shifts: ComplexArray, b: ComplexArray) -> ComplexArray:
    """Solve (shift I - H) z = b by combining columns; overwrites b."""
    n = len(h)
    y = np.empty((n, shifts.size), dtype=complex)
    cosine = np.empty((n, shifts.size), dtype=complex)
    sine = np.empty((n, shifts.size), dtype=h.dtype)
    v: ComplexArray = np.repeat(h[:, n - 1 : n].astype(complex), shifts.size, axis=1)
    v[n - 1] -= shifts
    b *= -1
    for k in range(n - 1, 0, -1):
        entry = h[k, k - 1]
        size = np.sqrt(v[k].real ** 2 + v[k].imag ** 2 + abs(entry) ** 2)
        size[size == 0] = np.finfo(float).tiny
        c, s = v[k] / size, entry / size
        cosine[k], sine[k] = c, s
        column = h[:k, k - 1 : k]
        y[k] = b[k] / size
        upper: ComplexArray = v[:k]
        # Column k of the triangle, and what it takes from the right-hand side.
        triangle: ComplexArray = np.conj(c) * upper
        triangle += column * np.conj(s)
        triangle[k - 1] -= np.conj(s) * shifts
        triangle *= y[k]
        b[:k] -= triangle
        # Column k - 1, turned so that its entry in row k is gone.
        upper *= -s
        upper += column * c
        upper[k - 1] -= c * shifts
        v = upper
    v[0][v[0] == 0] = np.finfo(float).tiny
    y[0] = b[0] / v[0]
    for k in range(1, n):
        low = y[k - 1].copy()
        y[k - 1] = cosine[k] * low + np.conj(sine[k]) * y[k]
        y[k] = np.conj(cosine[k]) * y[k] - sine[k] * low
    return y
