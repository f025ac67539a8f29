"""Modes that the orders of a machine pass on the way from standstill to its speed."""

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.parameters import Case, values_at
from modalview.eigen.modes import Modes
from modalview.eigen.span import ModeSpan

Array = npt.NDArray[np.float64]

# With so many cycles per Q = 1/(2 zeta) inside the half-power band the amplitude comes within about 5 % of
# the steady one: computed for one oscillator swept at a constant rate, 5.1 % at a damping ratio of 0.1, 4.0 %
# at 0.01 (tests). ISO 7626-2 allows swept tests somewhat more haste: 1.1 (from memory).
SWEPT_CYCLES_PER_Q = 1.5


@dataclass(frozen=True, slots=True)
class Swept:
    """One order as the machine runs up.

    Parameters
    ----------
    check, label : str
    rate : float
        Excitation frequency per machine speed.
    """

    check: str
    label: str
    rate: float


@dataclass(frozen=True, slots=True)
class Passage:
    """One mode that one order passes below the lowest speed.

    Parameters
    ----------
    check, label : str
        Of the order.
    mode : int
    frequency : float, rad/s
        Of the mode, at nominal values.
    speed : float, rad/s
        Machine speed at which the order is on it.
    speeds : pair of float, rad/s
        The same over all tolerances; may reach past the lowest speed.
    at_nominal : bool
        Whether it is passed at nominal values; else only at some within tolerance.
    damping_ratio : float or None
        Of the mode; None where nothing damps it or no acceleration is known.
    seconds, cycles : float or None
        Time and number of its own cycles while the order is within its half-power band; None without
        acceleration or damping.
    """

    check: str
    label: str
    mode: int
    frequency: float
    speed: float
    speeds: tuple[float, float]
    at_nominal: bool
    damping_ratio: float | None = None
    seconds: float | None = None
    cycles: float | None = None

    @property
    def quasi_steady(self) -> bool | None:
        """Whether it is passed slowly enough for the steady amplitude there; None where that is unknown."""
        if self.cycles is None or self.damping_ratio is None:
            return None
        return self.cycles >= SWEPT_CYCLES_PER_Q / (2 * self.damping_ratio)


def passages(
    orders: Iterable[Swept],
    modes: Sequence[ModeSpan],
    lowest: float,
    ratios: Sequence[float] | None = None,
    acceleration: float | None = None,
) -> tuple[Passage, ...]:
    """Return what each order passes between standstill and the lowest speed, at some values within tolerance.

    Parameters
    ----------
    orders : iterable of Swept
    modes : sequence of ModeSpan
        Elastic ones.
    lowest : float, rad/s
        Speed at which the run-up ends.
    ratios : sequence of float or None
        Damping ratio of each mode, 0 where nothing damps it.
    acceleration : float or None
        Of the machine speed, rad/s**2.

    Returns
    -------
    tuple of Passage
        By order as given, then by speed.
    """
    return tuple(
        _passage(order, mode, lowest, ratios[i] if ratios is not None else 0.0, acceleration)
        for order in orders
        for i, mode in enumerate(modes)
        if mode.low < order.rate * lowest
    )


def _passage(
    order: Swept, mode: ModeSpan, lowest: float, ratio: float, acceleration: float | None
) -> Passage:
    known = acceleration is not None and ratio > 0
    seconds = (
        half_power_seconds(mode.nominal, ratio, order.rate * acceleration) if known and acceleration else None
    )
    return Passage(
        check=order.check,
        label=order.label,
        mode=mode.number,
        frequency=mode.nominal,
        speed=mode.nominal / order.rate,
        speeds=(mode.low / order.rate, mode.high / order.rate),
        at_nominal=mode.nominal < order.rate * lowest,
        damping_ratio=ratio if ratio > 0 else None,
        seconds=seconds,
        cycles=None if seconds is None else seconds * mode.nominal / (2 * math.pi),
    )


def half_power_seconds(omega: float, ratio: float, sweep: float) -> float:
    """Return how long an excitation is within a mode's half-power band.

    Parameters
    ----------
    omega : float, rad/s
        Natural angular frequency.
    ratio : float
        Damping ratio, small against 1.
    sweep : float, rad/s**2
        How fast the excitation's angular frequency rises.

    Notes
    -----
    The band is 2 zeta omega wide (light damping).

    Examples
    --------
    >>> round(half_power_seconds(100.0, 0.02, 2.0), 12)
    2.0
    """
    return 2 * ratio * omega / sweep


def mode_ratios(assembly: Assembly, modes: Modes) -> Array:
    """Estimate the damping ratio of each mode (modes,) from dashpots and loss factors by its energies.

    Notes
    -----
    phi^T C phi / (2 omega) of the M-normalised undamped shape, plus half the loss factors weighted by their
    shares of the strain energy. Exact where damping does not couple the modes, an estimate otherwise.
    E. E. Ungar and E. M. Kerwin (1962), J. Acoust. Soc. Am. 34, 954-957 (from memory). 0 where nothing damps
    it, and for modes without a frequency.
    """
    pencil, structure = assembly.pencil(), assembly.structure
    omega = np.sqrt(np.maximum(modes.eigenvalues, 0.0))
    energy = structure.stiffness.values(values_at(assembly.parameters, Case.NOMINAL))
    stretched = np.asarray(structure.stiffness.rows @ modes.shapes) ** 2
    loss = {link.id: link.loss_factor.si for link in assembly.model.links if link.loss_factor is not None}
    factors = np.array([loss.get(part, 0.0) for part in structure.stiffness.part])
    lost = (factors * energy) @ stretched
    if pencil.C is not None:
        lost = lost + omega * np.einsum("ij,ij->j", modes.shapes, np.asarray(pencil.C @ modes.shapes))
    ratios: Array = np.divide(lost, 2 * omega**2, out=np.zeros_like(omega), where=omega > 0)
    return ratios
