"""Steady motion of a large model: one sparse complex factorization per frequency."""

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.linalg import splu

from modalview.assembly.dampedterms import DampedTerms
from modalview.errors import NumericalError
from modalview.response.damping import NONE, RATIO, Damping
from modalview.response.load import Load
from modalview.response.motion import SteadyMotion

if TYPE_CHECKING:
    from scipy.sparse.linalg import SuperLU

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# Minimum degree on A + A^T, diagonal pivots unless they are this much smaller than the column's largest.
ORDER: Final = "MMD_AT_PLUS_A"
PIVOT = 1e-3
OPTIONS: dict[str, object] = {"SymmetricMode": True}
# Without damping: ||D|| ||q|| / ||f|| from which a resonance is hit as exactly as rounding tells.
BEYOND = 1e14
NUDGE = 4 * np.finfo(float).eps


@dataclass(frozen=True, slots=True, eq=False)
class BySparse:
    """D(w) = K + i K_loss + i w C - w^2 M on one fixed pattern.

    Parameters
    ----------
    stiff, loss, viscous, mass : array (nnz,)
        Entries of the four matrices on the pattern.
    indices, indptr : arrays
        The pattern, by columns.
    ratio, alpha, beta : float
        Of damping given for the whole model. A modal ratio zeta has no matrix here: see ``dynamic``.
    undamped : bool
        Nothing damps the model.
    """

    stiff: Array
    loss: Array
    viscous: Array
    mass: Array
    indices: npt.NDArray[np.int32]
    indptr: npt.NDArray[np.int32]
    ratio: float
    alpha: float
    beta: float
    undamped: bool

    @classmethod
    def of(cls, terms: DampedTerms, damping: Damping) -> "BySparse":
        """Form the four matrices."""
        a, d = terms.stretching, terms.resisting
        size = a.shape[1]
        stiff = sp.csc_array(a.T @ sp.diags_array(terms.stiffness) @ a)
        loss = sp.csc_array(a.T @ sp.diags_array(terms.stiffness * damping.losses) @ a)
        viscous = sp.csc_array(d.T @ sp.diags_array(damping.times * terms.damping) @ d)
        held = sp.csc_array((size - terms.inertial, size - terms.inertial))
        mass = sp.csc_array(sp.block_diag([terms.mass, held]))
        viscous = sp.csc_array(viscous + damping.alpha * mass + damping.beta * stiff)
        parts = (stiff, loss, viscous, mass)
        pattern = sp.csc_array(sum((_ones(one) for one in parts), sp.eye_array(size)))
        pattern.sort_indices()
        filled = [_filled(one, pattern) for one in parts]
        stiff_data, loss_data, viscous_data, mass_data = filled
        return cls(
            stiff=stiff_data,
            loss=loss_data,
            viscous=viscous_data,
            mass=mass_data,
            indices=pattern.indices,
            indptr=pattern.indptr,
            ratio=damping.ratio if damping.kind == RATIO else 0.0,
            alpha=damping.alpha,
            beta=damping.beta,
            undamped=damping.kind == NONE,
        )

    def dynamic(self, omega: float) -> sp.csc_array:
        """Return D (N, N) at one frequency, rad/s.

        Notes
        -----
        A ratio zeta for every mode, 2 i zeta w omega_j, needs all modes. With the mean of w^2 and omega_j^2
        instead of w omega_j it is i zeta (K + w^2 M): the same at resonance, and the response of every mode
        is within the share zeta of its own, as zeta (w - omega_j)^2 <= zeta |w^2 - omega_j^2|. Derived here.
        """
        return self._matrix(self._data(omega))

    def _data(self, omega: float) -> ComplexArray:
        zeta, squared = self.ratio, omega * omega
        data: ComplexArray = (1 + 1j * zeta) * self.stiff + 1j * self.loss + 1j * omega * self.viscous
        data += (1j * zeta - 1) * squared * self.mass
        return data

    def solve(self, omega: Array, load: Load) -> SteadyMotion:
        """Return the motion (N, w) at frequencies (w,), rad/s.

        Raises
        ------
        NumericalError
            D is singular though something damps the model.
        """
        found = np.empty((self.size, omega.size), dtype=complex)
        infinite = np.zeros((self.size, omega.size), dtype=complex) if self.undamped else None
        follows = self.follows(load)
        factor, of = None, np.nan
        for column, w in enumerate(omega.tolist()):
            if factor is None or of != w:
                factor, of = self._factored(w), w
            right = self._right(w, load, follows)
            found[:, column] = factor.solve(right)
            if infinite is not None and self._unbounded(w, found[:, column], right):
                infinite[:, column], found[:, column] = found[:, column], 0.0
        return SteadyMotion(found, infinite)

    def _factored(self, omega: float) -> "SuperLU":
        try:
            return _factored(self.dynamic(omega), omega)
        except NumericalError:
            if not self.undamped:
                raise
            # Exactly at a resonance: a few roundings beside it the motion is beyond all bounds, and told so.
            return _factored(self.dynamic(omega * (1 + NUDGE)), omega)

    def _unbounded(self, omega: float, found: ComplexArray, right: ComplexArray) -> bool:
        """Return whether a motion is beyond what rounding leaves of a nonsingular matrix."""
        entries = np.abs(self.stiff) + omega**2 * np.abs(self.mass)
        largest = float(np.bincount(self.indices, entries, minlength=self.size).max())
        return bool(np.linalg.norm(found) * largest > BEYOND * np.linalg.norm(right))

    @property
    def size(self) -> int:
        """Number N of coordinates."""
        return int(self.indptr.size - 1)

    def _matrix(self, data: ComplexArray) -> sp.csc_array:
        return sp.csc_array((data, self.indices, self.indptr), shape=(self.size, self.size))

    def follows(self, load: Load) -> ComplexArray | None:
        """Return q_s with K q_s = f: the slow answer to a base; None where no damping acts against it."""
        if not load.based or not (self.ratio or self.alpha or self.beta):
            return None
        factor = _factored(self._matrix(self.stiff.astype(complex)), 0.0)
        return np.asarray(factor.solve(load.steady))

    def _right(self, omega: float, load: Load, follows: ComplexArray | None) -> ComplexArray:
        """Return f, or for a moving base f + i w C q_s."""
        right = load.steady if load.rate is None else load.steady + 1j * omega * load.rate
        if follows is None:
            return np.asarray(right, dtype=complex)
        moved = self._matrix(self.mass.astype(complex)) @ follows
        on_stiffness = 1j * (self.ratio + omega * self.beta)
        on_mass = 1j * omega * (self.ratio * omega + self.alpha)
        return np.asarray(right + on_stiffness * load.steady + on_mass * moved, dtype=complex)


def _factored(matrix: sp.csc_array, omega: float) -> "SuperLU":
    try:
        return splu(matrix, permc_spec=ORDER, diag_pivot_thresh=PIVOT, options=OPTIONS)
    except RuntimeError as error:
        raise NumericalError(
            f"The equations of motion have no solution at {omega / (2 * np.pi):.6g} Hz: an undamped "
            "resonance is hit exactly, or a part is free. Give the model damping, or another speed."
        ) from error


def _ones(matrix: sp.csc_array) -> sp.csc_array:
    return sp.csc_array((np.ones(matrix.nnz), matrix.indices, matrix.indptr), shape=matrix.shape)


def _filled(matrix: sp.csc_array, pattern: sp.csc_array) -> Array:
    """Return the entries of a matrix on a wider pattern."""
    size = pattern.shape[0]
    wide = np.repeat(np.arange(size, dtype=np.int64), np.diff(pattern.indptr)) * size + pattern.indices
    own = np.repeat(np.arange(size, dtype=np.int64), np.diff(matrix.indptr)) * size + matrix.indices
    data = np.zeros(pattern.nnz)
    np.add.at(data, np.searchsorted(wide, own), matrix.data)
    return data
