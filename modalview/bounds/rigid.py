"""Rigid-body modes as orthonormal directions of the standard form."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.assembly.pencil import Pencil
from modalview.factor.counts import count_negative, count_zero

Array = npt.NDArray[np.float64]

# Steps of inverse iteration that find the zero modes of matrices of others: each gains the ratio of
# lambda_1 to the shift, at least a hundred where the zero modes can be told apart at all.
STEPS = 6


@dataclass(frozen=True, slots=True, eq=False)
class RigidBody:
    """Zero modes in coordinates y of z = W y.

    Parameters
    ----------
    directions : array (modes, r)
        Orthonormal.
    number : int or None
        r; None when rounding leaves it undecided (matrices of others only).
    negative : int or None
        Eigenvalues proven below zero.
    reach : float
        rad**2/s**2: what lies nearer to zero was counted as zero; 0 where structure tells the number.
    """

    directions: Array
    number: int | None
    negative: int | None
    reach: float

    @property
    def exact(self) -> bool:
        """Whether structure tells the number, rather than counts."""
        return self.reach == 0.0


def rigid_body(pencil: Pencil) -> RigidBody:
    """Take the rigid-body modes from the pencil's structure, or find them by counts and inverse iteration."""
    known = pencil.rigid_body
    if known.shape[1] or pencil.rows is not None:
        directions = _orthonormal(pencil.basis.T @ (pencil.M @ known))
        return RigidBody(directions, known.shape[1], count_negative(pencil.shifted).number, reach=0.0)
    zero = count_zero(pencil.shifted)
    if not zero.number:
        return RigidBody(np.zeros((pencil.modes, 0)), zero.number, zero.below, zero.reach)
    return RigidBody(_sought(pencil, zero.number, zero.reach), zero.number, zero.below, zero.reach)


def _sought(pencil: Pencil, number: int, reach: float) -> Array:
    """Inverse iteration a little below zero from a fixed start."""
    shifted = pencil.shifted
    found = shifted.factorize(-4 * reach)
    block = np.random.default_rng(0).normal(size=(pencil.modes, number))
    for _ in range(STEPS):
        shape = shifted.solve(found, pencil.M @ (pencil.basis @ block))
        block = _orthonormal(pencil.basis.T @ (pencil.M @ shape))
    return block


def _orthonormal(block: Array) -> Array:
    return np.linalg.qr(block)[0]
