"""Massless coordinates: G by projection instead of elimination, and what a misplacement can cost."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.linalg as la
import scipy.sparse as sp
from scipy.linalg import lapack

from modalview.assembly.massroot import mass_root_inverse
from modalview.assembly.pencil import Pencil
from modalview.eigen.sums import column_sums
from modalview.errors import NumericalError
from modalview.factor.rounding import UNIT

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


@dataclass(frozen=True, slots=True, eq=False)
class MasslessFloor:
    """Lower bound of the stiffness of massless coordinates against a misplacement.

    A shape whose massless coordinates are off by d has d.T K00 d too much energy; d is known only
    through the force that is left on them.

    Parameters
    ----------
    where : array (m,)
        The massless coordinates.
    scale : array (m,)
        1/sqrt of the diagonal of K00.
    least : float
        Lowest eigenvalue of K00 so scaled.
    """

    where: npt.NDArray[np.intp]
    scale: Array
    least: float

    def surplus_energy(self, pull: Array, rounding: Array) -> Array:
        """Bound the surplus (m,) from the forces (n, m) on the coordinates and their rounding."""
        left = (np.abs(pull[self.where]) + rounding[self.where]) * self.scale[:, None]
        surplus: Array = column_sums(left**2) / self.least
        return surplus


def massless_floor(pencil: Pencil) -> MasslessFloor | None:
    """Return the floor, or None where every coordinate has inertia."""
    where = np.flatnonzero(pencil.massless)
    if where.size == 0:
        return None
    scale = 1 / np.sqrt(pencil.K.diagonal()[where])
    # Held, but by how much is not proven: elimination went through, so its condition is below 1/u.
    return MasslessFloor(where, scale, max(pencil.shifted.extents.margin, UNIT))
