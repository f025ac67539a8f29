"""G of a model with massless coordinates, by projection instead of elimination."""

import numpy as np
import numpy.typing as npt
import scipy.linalg as la
import scipy.sparse as sp
from scipy.linalg import lapack

from modalview.assembly.massroot import mass_root_inverse
from modalview.assembly.pencil import Pencil
from modalview.errors import NumericalError

Array = npt.NDArray[np.float64]


def dense_factor(pencil: Pencil) -> Array:
    """Return a dense G with the singular values of ``pencil.factor``, for models of every grading.

    The part of G that massless coordinates can relax is projected away by QR with column pivoting and
    rows sorted by size, which is stable row by row: springs of very unlike stiffness keep their
    relative accuracy, where eliminating from K loses it. Rows: terms less massless coordinates.

    References
    ----------
    A. J. Cox, N. J. Higham (1998), Stability of Householder QR factorization for weighted least squares
    problems, in Numerical Analysis 1997 (Pitman), 57-73.
    """
    if pencil.rows is None or pencil.stiffness is None:
        raise NumericalError("This pencil was given as matrices and has no terms to factor.")
    scaled = sp.csc_array(sp.diags_array(np.sqrt(pencil.stiffness)) @ pencil.rows)
    moving: Array = (scaled @ mass_root_inverse(pencil.M, ~pencil.massless)).toarray()
    if not pencil.massless.any():
        return moving
    free = scaled[:, np.flatnonzero(pencil.massless)].toarray()
    order = np.argsort(-np.abs(free).max(axis=1), kind="stable")
    (reflectors, tau), _, _ = la.qr(free[order], mode="raw", pivoting=True)
    work = 64 * moving.shape[1]
    turned, _, fault = lapack.dormqr("L", "T", reflectors, tau, moving[order], work)
    if fault:
        raise NumericalError(f"Projection of the massless coordinates failed with code {fault}.")
    return np.asarray(turned)[free.shape[1] :]
