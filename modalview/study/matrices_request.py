"""What is asked of matrices of others, and their modes as they are shown."""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from modalview.eigen.modes import Modes
from modalview.factor.rounding import gamma
from modalview.model.parts import Machine, Model, Motion
from modalview.resonance.results import ModeDrive
from modalview.store.matrices import MatrixPair
from modalview.study.completed import ELASTIC, RAD_PER_HZ, RIGID, UNSTABLE
from modalview.study.results import FoundMode, never


@dataclass(frozen=True, slots=True, eq=False)
class MatrixRequest:
    """Matrices to be studied, and what must stay clear of their modes.

    Parameters
    ----------
    pair : MatrixPair
    machines : tuple of Machine
        Speeds, orders, margins.
    tolerance_k, tolerance_m : float
        Share, 0 to below 1, by which the whole of K and the whole of M may lie off to either side.
    cancelled : callable
        Asked between steps.
    progress : callable or None
        Told (what is done, share done 0..1).
    """

    pair: MatrixPair
    machines: tuple[Machine, ...] = ()
    tolerance_k: float = 0.0
    tolerance_m: float = 0.0
    cancelled: Callable[[], bool] = never
    progress: Callable[[str, float], None] | None = None

    @property
    def model(self) -> Model:
        """A model of no part, which carries the machines."""
        return Model(motion=Motion.SPACE, machines=self.machines)

    @property
    def toleranced(self) -> bool:
        """Whether any value may lie off."""
        return self.tolerance_k > 0 or self.tolerance_m > 0

    @property
    def factors(self) -> tuple[float, float]:
        """Eigenvalues at the soft-heavy and at the stiff-light case over nominal ones, rounded outward."""
        low = (1 - self.tolerance_k) / (1 + self.tolerance_m)
        high = (1 + self.tolerance_k) / (1 - self.tolerance_m)
        return (low * (1 - gamma(4)), high * (1 + gamma(4))) if self.toleranced else (1.0, 1.0)


def found_modes(
    raw: Modes, factors: tuple[float, float], numbers: Sequence[int] | None = None
) -> tuple[FoundMode, ...]:
    """Return modes as they are shown, without what needs parts.

    Parameters
    ----------
    raw : Modes
    factors : pair of float
        Of `MatrixRequest.factors`.
    numbers : sequence of int or None
        Of each mode among all; None counts from 1.
    """
    number = list(numbers or range(1, raw.number + 1))
    repeated = {i: (start, stop) for start, stop in raw.repeated for i in range(start, stop)}
    nothing = np.zeros((0, 6))
    nothing.setflags(write=False)
    found = []
    for i in range(raw.number):
        kind = _kind(raw, i)
        start, stop = repeated.get(i, (0, 0))
        found.append(
            FoundMode(
                number=number[i],
                name="" if kind == ELASTIC else kind,
                frequency_hz=float(raw.frequency_hz[i]),
                numerical_error_hz=float(raw.numerical_error_hz[i]),
                range_hz=_range(raw, i, factors) if kind == ELASTIC else (0.0, 0.0),
                kind=kind,
                repeated_with=tuple(number[start:stop]) if kind == ELASTIC else (),
                strain=(),
                kinetic=(),
                sensitivity=(),
                effective_mass=(),
                motion=nothing,
            )
        )
    return tuple(found)


def _range(raw: Modes, i: int, factors: tuple[float, float]) -> tuple[float, float]:
    """Return the frequencies at the two cases: the eigenvalue scaled, its numerical interval included."""
    if factors == (1.0, 1.0):
        return float(raw.frequency_hz[i]), float(raw.frequency_hz[i])
    low = math.sqrt(max(float(raw.lower[i]), 0.0) * factors[0]) * (1 - gamma(3))
    high = math.sqrt(max(float(raw.upper[i]), 0.0) * factors[1]) * (1 + gamma(3))
    return low / RAD_PER_HZ, high / RAD_PER_HZ


def _kind(raw: Modes, i: int) -> str:
    if i < raw.unstable:
        return UNSTABLE
    return RIGID if i < raw.unstable + raw.rigid_body_modes else ELASTIC


def unknown_drives(numbers: Sequence[int]) -> tuple[ModeDrive, ...]:
    """Return no drive: matrices do not say where a force acts."""
    del numbers
    return ()
