"""Steady motion by undamped modes, where damping leaves them apart: a mode's own ratio, or none."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.linalg import splu

from modalview.assembly.assemble import Assembly
from modalview.assembly.dampedterms import DampedTerms
from modalview.eigen.modes import Modes
from modalview.response.damping import Damping
from modalview.response.load import Load
from modalview.response.motion import SteadyMotion

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# Rounding of a frequency as it is typed and turned into rad/s, in units of the last place.
ROUNDINGS = 8
# A modal force below this share of ||f|| ||phi|| is rounding: the mode is not driven.
NOT_DRIVEN = 1e-13


@dataclass(frozen=True, slots=True, eq=False)
class ByModes:
    """All modes of a model without dashpots, in the coordinates of DampedTerms.

    Parameters
    ----------
    modes : Modes
    shapes : array (N, m)
    inner : csc_array (s, s)
        K of the massless coordinates: what they give statically beside the modes.
    """

    modes: Modes
    shapes: Array
    inner: sp.csc_array

    @classmethod
    def of(cls, assembly: Assembly, terms: DampedTerms, modes: Modes) -> "ByModes":
        """Take the modes over; without dashpots the coordinates are those of the pencil, sorted."""
        massless = assembly.pencil().massless
        order = np.concatenate([np.flatnonzero(~massless), np.flatnonzero(massless)])
        static = terms.stretching[:, terms.inertial :]
        inner = sp.csc_array(static.T @ sp.diags_array(terms.stiffness) @ static)
        return cls(modes, modes.shapes[order], inner)

    def solve(self, omega: Array, load: Load, damping: Damping) -> SteadyMotion:
        """Return the motion (N, w) at frequencies (w,), rad/s.

        Notes
        -----
        p_j (lambda_j (1 + i eta) - w^2 + i w c_j) = phi_j^T f, and the massless coordinates' own static give.
        Damping of the whole model acts on motion relative to a moving base: with K q_s = f the right-hand
        side is f + i w C q_s, in modes phi_j^T f (1 + i w c_j / lambda_j).
        """
        values = self.modes.eigenvalues
        rates, loss = damping.modal_rates(values), damping.uniform_loss or 0.0
        pushed = self.shapes.T @ load.steady
        size = np.linalg.norm(load.steady) * np.linalg.norm(self.shapes, axis=0)
        pushed = np.where(np.abs(pushed) > NOT_DRIVEN * size, pushed, 0.0)
        whole = values[:, None] * (1 + 1j * loss) - omega**2 + 1j * omega * rates[:, None]
        resonant = self._resonant(omega, rates, loss)
        force = np.repeat(pushed[:, None], omega.size, axis=1)
        if load.based:
            relative = np.where(values > 0, rates / np.where(values > 0, values, 1.0), 0.0)
            force = force * (1 + 1j * omega * relative[:, None])
        amounts = np.where(resonant, 0.0, force / np.where(resonant, 1.0, whole))
        found = np.asarray(self.shapes @ amounts, dtype=complex)
        if self.inner.shape[0]:
            found[len(found) - self.inner.shape[0] :] += self._give(omega, load, damping, loss)
        if not resonant.any():
            return SteadyMotion(found)
        infinite = np.asarray(self.shapes @ np.where(resonant, force, 0.0), dtype=complex)
        return SteadyMotion(found, infinite)

    def follows(self, load: Load, loss: float) -> ComplexArray:
        """Return q_s with K (1 + i eta) q_s = f (N,): the static answer without rigid-body motion."""
        values, pushed = self.modes.eigenvalues, self.shapes.T @ load.steady
        elastic = values > 0
        amounts = np.where(elastic, pushed / np.where(elastic, values, 1.0), 0.0)
        found = np.asarray(self.shapes @ amounts, dtype=complex)
        if self.inner.shape[0]:
            found[len(found) - self.inner.shape[0] :] += self._statically(load)
        return found / (1 + 1j * loss)

    def _resonant(self, omega: Array, rates: Array, loss: float) -> npt.NDArray[np.bool_]:
        """Return which modes (m, w) are undamped and hit: their error and the rounding of w included."""
        values = self.modes.eigenvalues
        undamped = (rates == 0) & (loss == 0) & (values > 0)
        if not undamped.any():
            return np.zeros((values.size, omega.size), dtype=bool)
        slack = ROUNDINGS * np.finfo(float).eps * values
        low, high = self.modes.lower - slack, self.modes.upper + slack
        squared = omega**2
        inside = (squared >= low[:, None]) & (squared <= high[:, None])
        found: npt.NDArray[np.bool_] = undamped[:, None] & inside
        return found

    def _give(self, omega: Array, load: Load, damping: Damping, loss: float) -> ComplexArray:
        """Return the static give of the massless coordinates beside the modes (s, w)."""
        statically = self._statically(load)[:, None]
        if load.based:
            return np.asarray(np.repeat(statically / (1 + 1j * loss), omega.size, axis=1))
        return np.asarray(statically / (1 + 1j * (loss + omega * damping.beta)))

    def _statically(self, load: Load) -> ComplexArray:
        """Return the give of the massless coordinates (s,) with the others held."""
        light = load.steady[len(load.steady) - self.inner.shape[0] :]
        give = splu(self.inner).solve(np.column_stack([light.real, light.imag]))
        return np.asarray(give[:, 0] + 1j * give[:, 1])
