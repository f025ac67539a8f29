"""What a solve gives: frequencies, shapes, error bounds and evidence."""

from dataclasses import dataclass
from typing import Self

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Count:
    """One count used as evidence.

    Parameters
    ----------
    sigma : float, rad^2/s^2
        Where it was counted.
    found : int
        Eigenvalues found below.
    counted : int or None
        Eigenvalues below by the signs of pivots; None where rounding leaves it undecided.
    """

    sigma: float
    found: int
    counted: int | None


@dataclass(frozen=True, slots=True, eq=False)
class Modes:
    """Modes of a pencil, ascending: unstable ones first, then rigid-body modes, then elastic ones.

    Parameters
    ----------
    eigenvalues : array (modes,)
        lambda, rad^2/s^2; exactly 0 for rigid-body modes, negative for unstable ones.
    lower, upper : array (modes,)
        Interval of each eigenvalue, rounding included; the truth for the stored K and M lies inside.
    frequency_hz : array (modes,)
        sqrt(lambda)/(2 pi); 0 where lambda <= 0.
    numerical_error_hz : array (modes,)
        The true frequency is nearer than this; 0 for rigid-body modes known from structure.
    growth_rate : array (modes,)
        sqrt(-lambda), 1/s, of unstable modes: they grow as exp(growth_rate t); 0 for all others.
    shapes : array (n, modes)
        M-orthonormal, massless coordinates recovered.
    rigid_body_modes : int
        Their number; they follow the unstable ones.
    unstable : int
        Number of negative eigenvalues.
    groups : tuple of (start, stop)
        Every mode is in exactly one, in order. A group longer than one is a repeated frequency (or one
        that cannot be told apart): a single subspace, in which single shapes mean nothing.
    residuals : array (modes,)
        Bound of ||M^(-1/2) (K x - lambda M x)|| for the M-normalised shape x, rad^2/s^2.
    counts : tuple of Count
        Counts that confirm that none was missed.
    complete : bool or None
        True: as many modes as coordinates with inertia, each in an interval of its own, and every
        count agrees. None: some intervals or counts were undecided. False: a count disagrees.
    method : str
        In words.
    warnings : tuple of str
        What a person should know before relying on the result.
    """

    eigenvalues: Array
    lower: Array
    upper: Array
    frequency_hz: Array
    numerical_error_hz: Array
    growth_rate: Array
    shapes: Array
    rigid_body_modes: int
    unstable: int
    groups: tuple[tuple[int, int], ...]
    residuals: Array
    counts: tuple[Count, ...]
    complete: bool | None
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
    def number(self) -> int:
        """How many modes there are."""
        return int(self.eigenvalues.size)

    @property
    def elastic(self) -> slice:
        """The modes that are neither unstable nor rigid-body."""
        return slice(self.unstable + self.rigid_body_modes, self.number)

    @property
    def repeated(self) -> tuple[tuple[int, int], ...]:
        """Groups of more than one mode."""
        return tuple((start, stop) for start, stop in self.groups if stop - start > 1)
