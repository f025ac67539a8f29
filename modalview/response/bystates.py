"""Steady motion from first-order states: superposed roots where they are well apart, else solves."""

from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt
import scipy.linalg as la

from modalview.eigen.threads import one_blas_thread
from modalview.errors import NumericalError
from modalview.response.hessenberg import Hessenberg, reduced
from modalview.response.load import Load
from modalview.response.motion import SteadyMotion
from modalview.response.states import States

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# Superposition loses as many digits as the condition of the roots' vectors has; beyond, systems are solved.
WELL_APART = 1e3
# Roots err by the rounding of the whole matrix: they are superposed where that is so small against the lowest
# oscillation, as it is not beside very fast decays.
FINE = 1e-12
# A decay below this many roundings of the matrix is none.
UNDAMPED = 64.0
# A share of the load that an undamped root takes below this is rounding.
NOT_DRIVEN = 1e-12
# How far beside an undamped resonance its finite part is taken, where roots are not superposed.
BESIDE = 1e-8


@dataclass(frozen=True, slots=True, eq=False)
class ByStates:
    """Roots of the states, and how a system is solved at many frequencies.

    Parameters
    ----------
    states : States
    roots : complex array (n,)
        Eigenvalues of the matrix, 1/s.
    vectors : complex array (n, n)
        Normalised.
    factor : pair or None
        LU of the vectors where roots are superposed.
    hessenberg : Hessenberg or None
        Where they are not.
    rounding : float, 1/s
        A root is known to about so much, at best.
    """

    states: States
    roots: ComplexArray
    vectors: ComplexArray
    factor: tuple[ComplexArray, npt.NDArray[np.int32]] | None
    hessenberg: Hessenberg | None
    rounding: float

    @classmethod
    def of(cls, states: States) -> "ByStates":
        """Find the roots and decide."""
        matrix = states.matrix
        rounding = float(np.finfo(float).eps * np.linalg.norm(matrix))
        with one_blas_thread():
            try:
                roots, vectors = np.linalg.eig(matrix)
            except np.linalg.LinAlgError as error:
                raise NumericalError("QR iteration on the state matrix did not converge.") from error
            vectors = vectors.astype(complex)
            size = np.linalg.svd(vectors, compute_uv=False)
            turning = np.abs(roots[roots.imag > UNDAMPED * rounding])
            fine = rounding <= FINE * turning.min(initial=np.inf)
            if size.size == 0 or (fine and size[-1] * WELL_APART > size[0]):
                return cls(states, roots.astype(complex), vectors, la.lu_factor(vectors), None, rounding)
            return cls(states, roots.astype(complex), vectors, None, reduced(matrix), rounding)

    def unsuperposed(self) -> "ByStates":
        """Return the same with a system solved at each frequency."""
        with one_blas_thread():
            return replace(self, factor=None, hessenberg=reduced(self.states.matrix))

    @property
    def method(self) -> str:
        """In words."""
        if self.factor is not None:
            return "superposed damped roots"
        return "Hessenberg reduction, one solve per frequency"

    @property
    def undamped(self) -> npt.NDArray[np.bool_]:
        """Roots (n,) that oscillate and do not decay."""
        turning = self.roots.imag > UNDAMPED * self.rounding
        return np.asarray(turning & (-self.roots.real <= UNDAMPED * self.rounding))

    def solve(self, omega: Array, load: Load) -> SteadyMotion:
        """Return the motion (N, w) at frequencies (w,), rad/s."""
        force = np.repeat(load.steady[:, None], omega.size, axis=1)
        if load.rate is not None:
            force = force + 1j * omega * load.rate[:, None]
        resonant = self._resonant(omega)
        if self.factor is not None:
            found, poles = self._superposed(omega, load, resonant)
        else:
            right = np.asarray(self.states.drive @ force, dtype=complex)
            found, poles = self._solved(omega, right, resonant)
        coordinates = self.states.coordinates(omega, found, force)
        if not resonant.any():
            return SteadyMotion(coordinates)
        shape = self.states.coordinates(omega, poles, np.zeros_like(force))
        return SteadyMotion(coordinates, np.where(np.any(resonant, axis=0), shape, 0.0))

    def _resonant(self, omega: Array) -> npt.NDArray[np.bool_]:
        """Return which roots (n, w) are undamped and hit."""
        near = np.abs(omega - self.roots.imag[:, None]) <= UNDAMPED * self.rounding
        return np.asarray(self.undamped[:, None] & near)

    def _superposed(
        self, omega: Array, load: Load, resonant: npt.NDArray[np.bool_]
    ) -> tuple[ComplexArray, ComplexArray]:
        """Return the states (n, w), and the vectors (n, w) of what is infinite."""
        parts = [load.steady] if load.rate is None else [load.steady, load.rate]
        right = np.asarray(self.states.drive @ np.column_stack(parts), dtype=complex)
        if self.factor is None:
            raise NumericalError("The roots are not superposed here.")
        amounts = np.asarray(la.lu_solve(self.factor, right), dtype=complex)
        if not amounts.size:
            return np.zeros((0, omega.size), dtype=complex), np.zeros((0, omega.size), dtype=complex)
        noise = NOT_DRIVEN * np.abs(amounts).max(axis=0)
        whole = np.repeat(amounts[:, :1], omega.size, axis=1)
        driven = np.abs(amounts[:, 0]) > noise[0]
        if load.rate is not None:
            whole = whole + 1j * omega * amounts[:, 1:]
            driven |= np.abs(amounts[:, 1]) > noise[1]
        apart = 1j * omega - self.roots[:, None]
        found = self.vectors @ np.where(resonant, 0.0, whole / np.where(resonant, 1.0, apart))
        hit = resonant & driven[:, None]
        return found, self.vectors @ np.where(hit, whole, 0.0) if hit.any() else np.zeros_like(found)

    def _solved(
        self, omega: Array, right: ComplexArray, resonant: npt.NDArray[np.bool_]
    ) -> tuple[ComplexArray, ComplexArray]:
        if self.hessenberg is None:
            raise NumericalError("The states were neither superposed nor reduced.")
        found = self.hessenberg.solve(np.asarray(1j * omega, dtype=complex), right)
        poles = np.zeros_like(found)
        for column in np.flatnonzero(np.any(resonant, axis=0)):
            beside = np.array([1j * omega[column] * (1 + BESIDE)], dtype=complex)
            steady = self.hessenberg.solve(beside, np.asarray(right[:, column : column + 1], dtype=complex))
            grown = np.linalg.norm(found[:, column]) > 1e3 * np.linalg.norm(steady)
            if grown:
                poles[:, column] = found[:, column]
            found[:, column] = 0.0 if grown else steady[:, 0]
        return found, poles
