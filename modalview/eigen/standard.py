"""Dense symmetric eigenvalue problems, by tridiagonalisation."""

from functools import lru_cache

import numpy as np
import numpy.typing as npt
from scipy.linalg import lapack

from modalview.errors import NumericalError

Array = npt.NDArray[np.float64]

# Below this the wrapper around LAPACK costs more than the computation (measured: half at n = 10,
# an eighth at 50); above it numpy's path does not hold the interpreter lock.
SMALL = 50


def eigenvalues(standard: Array) -> Array:
    """Return all eigenvalues, ascending, of a dense symmetric matrix (n, n).

    Householder tridiagonalisation and root-free QR iteration (LAPACK dsytrd, dsterf). Absolute error
    about n u ||S||. Cost about 0.3 of values with vectors.

    References
    ----------
    B. N. Parlett (1980), The Symmetric Eigenvalue Problem, section 8.15 (the Pal-Walker-Kahan variant).

    Examples
    --------
    >>> eigenvalues(np.array([[2.0, -1.0], [-1.0, 2.0]])).round(12).tolist()
    [1.0, 3.0]
    """
    size = len(standard)
    if size < 2:
        return standard.diagonal().copy()
    if size >= SMALL:
        return np.asarray(np.linalg.eigvalsh(standard), dtype=float)
    _, diagonal, beside, _, fault = lapack.dsytrd(standard, lower=1, lwork=_tridiagonal_work(size))
    if fault == 0:
        values, fault = lapack.dsterf(diagonal, beside)
    if fault:
        raise NumericalError(f"QR iteration on the tridiagonal matrix stopped at row {fault}.")
    return np.asarray(values)


def eigenpairs(standard: Array) -> tuple[Array, Array]:
    """Return all eigenvalues, ascending, and orthonormal vectors as columns, of (n, n) symmetric.

    Divide and conquer on the tridiagonal matrix, QR iteration below n = 26 (LAPACK dsyevd): for every
    vector at once it beats inverse iteration at each size measured (0.5-0.9 of eigh against 0.5-1.8).

    Raises
    ------
    NumericalError
        Entries are not finite, or the iteration did not converge.
    """
    size = len(standard)
    if size == 0:
        return np.zeros(0), np.zeros((0, 0))
    if not np.isfinite(standard).all():
        raise NumericalError(
            "A stiffness divided by a mass is beyond the range of numbers; check their units."
        )
    if size >= SMALL:
        try:
            values, vectors = np.linalg.eigh(standard)
        except np.linalg.LinAlgError as error:
            raise NumericalError("Divide and conquer on the tridiagonal matrix did not converge.") from error
        return values, vectors
    work, integer_work = _vector_work(size)
    values, vectors, fault = lapack.dsyevd(standard, lower=1, lwork=work, liwork=integer_work)
    if fault:
        raise NumericalError(f"The tridiagonal iteration stopped with code {fault}.")
    return np.asarray(values), np.asarray(vectors)


@lru_cache(maxsize=SMALL)
def _tridiagonal_work(size: int) -> int:
    return int(lapack.dsytrd_lwork(size, lower=1)[0])


@lru_cache(maxsize=SMALL)
def _vector_work(size: int) -> tuple[int, int]:
    work, integer_work, _ = lapack.dsyevd_lwork(size, lower=1)
    return int(work), int(integer_work)
