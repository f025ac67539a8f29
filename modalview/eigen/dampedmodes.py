"""What a damped solve gives: roots, rates, complex shapes and evidence."""

from dataclasses import dataclass
from typing import Self

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]


@dataclass(frozen=True, slots=True, eq=False)
class DampedModes:
    """Roots of M q'' + C q' + K q = 0, every conjugate pair once.

    In order: free motions (root 0), oscillations by ascending natural frequency, decays from slow to fast.

    Parameters
    ----------
    roots : complex array (m,)
        1/s; real part never above 0, imaginary part never below 0, rad/s.
    free, oscillating : int
        How many of each; the others decay without oscillating.
    damped_hz : array (m,)
        Im/(2 pi); 0 for decays.
    natural_hz : array (m,)
        |root|/(2 pi) of an oscillation; sqrt of the product of both rates over 2 pi for a decay with a
        partner; nan for a decay without one.
    damping_ratio : array (m,)
        Decay rate over |root|; 1 or more for decays with a partner; nan for those without and free motions.
    decay_per_s : array (m,)
        -Re.
    log_decrement : array (m,)
        Of oscillations; nan for the others.
    partner : int array (m,)
        Of a decay: the other real root of the same shape, which makes both one overdamped mode; -1 for none.
    error_per_s : array (m,)
        Estimate, not a bound, of |computed - true root|: backward error times condition; 0 for free motions.
    condition : array (m,)
        Of the root in the balanced state matrix: 1 at best, infinite where two coincide (critical damping).
    residual_per_s : array (m,)
        ||A x - root x|| / ||x||, computed.
    shapes : complex array (N, m)
        In the coordinates of DampedTerms; the largest entry, rotations in metres by their scale, is 1.
    zero_roots : int
        Known from structure: one for each free motion, another for each that nothing damps.
    number : int
        All roots, both of a pair and zero roots counted; equal to the number expected from structure.
    rate_sum_found, rate_sum_expected : float, 1/s
        Sum of all roots, and the trace of the state matrix that it must equal.
    undamped : int
        Oscillations whose decay cannot be told from zero.
    method : str
    warnings : tuple of str
    """

    roots: ComplexArray
    free: int
    oscillating: int
    damped_hz: Array
    natural_hz: Array
    damping_ratio: Array
    decay_per_s: Array
    log_decrement: Array
    partner: npt.NDArray[np.intp]
    error_per_s: Array
    condition: Array
    residual_per_s: Array
    shapes: ComplexArray
    zero_roots: int
    number: int
    rate_sum_found: float
    rate_sum_expected: float
    undamped: int
    method: str
    warnings: tuple[str, ...]

    def frozen(self) -> Self:
        """Make every array read-only; returns itself."""
        for name in self.__slots__:
            value = getattr(self, name)
            if isinstance(value, np.ndarray):
                value.setflags(write=False)
        return self

    @property
    def oscillations(self) -> slice:
        """The roots that oscillate."""
        return slice(self.free, self.free + self.oscillating)

    @property
    def decays(self) -> slice:
        """The real roots below zero."""
        return slice(self.free + self.oscillating, self.roots.size)
