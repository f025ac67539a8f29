"""How the energy of a mode is shared, and how much mass takes part in it."""

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil
from modalview.eigen.modes import Modes
from modalview.errors import InputError, NumericalError

Array = npt.NDArray[np.float64]

# Modes treated at a time, so that stretches of all terms need little memory.
CHUNK = 64


def strain_shares(pencil: Pencil, modes: Modes) -> Array:
    """Return each term's share of each mode's strain energy.

    Parameters
    ----------
    pencil : Pencil of t terms
    modes : Modes
        Of this pencil.

    Returns
    -------
    array (t, modes)
        k (a.T phi)^2 / lambda; the shares of an elastic mode sum to 1 and half of each is
        d(ln f)/d(ln k). Zero for rigid-body modes, which stretch nothing. From the stretches, without
        cancellation. In a repeated group only the mean over the group means something: it is the same
        for every choice of shapes.

    Raises
    ------
    NumericalError
        The pencil was given as matrices.

    References
    ----------
    Lord Rayleigh (1894), The Theory of Sound, section 88.
    """
    if pencil.rows is None or pencil.stiffness is None:
        raise NumericalError("This pencil was given as matrices: it has no terms that could share energy.")
    shares = np.zeros((pencil.rows.shape[0], modes.number))
    moving = np.flatnonzero(modes.eigenvalues)
    for start in range(0, moving.size, CHUNK):
        chunk = moving[start : start + CHUNK]
        energy = pencil.stiffness[:, None] * (pencil.rows @ modes.shapes[:, chunk]) ** 2
        shares[:, chunk] = energy / energy.sum(axis=0)
    return shares


def kinetic_shares(pencil: Pencil, modes: Modes) -> Array:
    """Return each coordinate's share of each mode's kinetic energy.

    Parameters
    ----------
    pencil : Pencil of n coordinates
    modes : Modes
        Of this pencil.

    Returns
    -------
    array (n, modes)
        phi_i (M phi)_i; columns sum to 1. Sum over a body's coordinates for the body: there the share is
        not negative and minus half of it is d(ln f)/d(ln m). One coordinate of a body whose M couples
        several may be negative. In a repeated group only the mean over the group means something.
    """
    shares: Array = modes.shapes * (pencil.M @ modes.shapes)
    return shares


def modal_mass(pencil: Pencil, modes: Modes) -> Array:
    """Return the mass (modes,) that each mode moves when its largest scaled motion is 1 m; kg.

    Coordinates are compared after multiplying rotations by their ``scale``. Shapes are M-orthonormal, so
    this is 1 over the largest squared. Massless coordinates count too.
    """
    if pencil.n == 0:
        raise InputError("The model has no coordinate.")
    largest = np.abs(pencil.scale[:, None] * modes.shapes).max(axis=0)
    mass: Array = 1 / largest**2
    return mass


def participation(pencil: Pencil, modes: Modes, directions: Array) -> tuple[Array, Array]:
    """Return participation factors and effective modal masses for uniform motions.

    Parameters
    ----------
    pencil : Pencil of n coordinates
    modes : Modes
        Of this pencil.
    directions : array (n, k)
        Motion of every coordinate in each direction, for instance 1 on all x.

    Returns
    -------
    factors : array (modes, k)
        Gamma = phi.T M d, sqrt(kg).
    masses : array (modes, k)
        Gamma^2, kg; each column sums to d.T M d, the mass that can move in that direction. In a repeated
        group only the sum over the group means something.

    Raises
    ------
    InputError
        ``directions`` has not one row per coordinate.

    References
    ----------
    R. W. Clough, J. Penzien (1975), Dynamics of Structures, chapter 27 (from memory).
    """
    directions = np.asarray(directions, dtype=float)
    if directions.ndim != 2 or directions.shape[0] != pencil.n:
        raise InputError(
            f"directions has shape {directions.shape}; it needs a row for each of the {pencil.n} coordinates."
        )
    factors: Array = modes.shapes.T @ (sp.csr_array(pencil.M) @ directions)
    return factors, factors**2
