"""The largest motion of points at many values at once, by superposed modes of a stack of models."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.model.parts import Machine
from modalview.response.damping import NONE, Damping
from modalview.response.dynamic import Dynamics
from modalview.response.load import load_of
from modalview.response.quantities import larger_axis, velocity_rms
from modalview.response.strength import Strength, running_speeds
from modalview.study.amplitudes import Watching, pushes_of
from modalview.study.response_results import ResponseRequest
from modalview.study.response_watches import watched_points

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# Even speeds over a machine's range, to which every speed that meets a natural frequency is added.
EVEN_SPEEDS = 61
# Complex numbers held at once.
HELD = 400_000


@dataclass(frozen=True, slots=True, eq=False)
class _Driven:
    """One machine: its speeds, what pushes, and the rows of the points looked at."""

    speeds: tuple[float, float]
    pushes: tuple[tuple[Strength, ComplexArray], ...]
    points: tuple[Array, ...]
    places: tuple[int, ...]


@dataclass(frozen=True, slots=True, eq=False)
class StackedMotion:
    """What gives the motion of all points from the modes of a stack; plain data, quick to send.

    Parameters
    ----------
    machines : tuple
    damping : Damping
        Of the whole model, or one loss factor for all springs.
    watched : int
        Number of points.
    """

    machines: tuple[_Driven, ...]
    damping: Damping
    watched: int

    def at(self, eigenvalues: Array, shapes: Array) -> Array:
        """Return the largest velocity, m/s rms, over the running speeds (s, watched): all excitations added.

        Parameters
        ----------
        eigenvalues : array (s, modes)
        shapes : array (s, n, modes)
            M-orthonormal.

        Notes
        -----
        p_j (lambda_j (1 + i eta) - w^2 + i w c_j) = phi_j^T f. Peaks within a range of speeds are taken at
        even speeds and where an order meets a natural frequency: within about zeta^2 of their height.
        """
        found = np.zeros((len(eigenvalues), self.watched))
        for machine in self.machines:
            speeds = EVEN_SPEEDS + len(machine.pushes) * eigenvalues.shape[1]
            step = max(1, HELD // (speeds * eigenvalues.shape[1]))
            for start in range(0, len(eigenvalues), step):
                part = slice(start, start + step)
                found[part, list(machine.places)] = self._of(machine, eigenvalues[part], shapes[part])
        return found

    def _of(self, machine: _Driven, eigenvalues: Array, shapes: Array) -> Array:
        speeds = _speeds(machine, eigenvalues)
        total = np.zeros((len(machine.points), *speeds.shape))
        for strength, force in machine.pushes:
            omega = strength.omega(speeds)
            amounts = self._amounts(eigenvalues, shapes, force, omega)
            size = strength.amplitude(omega)
            for number, rows in enumerate(machine.points):
                # (r, s, w): every component of the point's motion.
                moved = np.einsum("rn,snm,smw->rsw", rows, shapes, amounts, optimize=True)
                total[number] += velocity_rms(_axis(moved) * size, omega)
        return np.asarray(total.max(axis=2).T)

    def _amounts(self, eigenvalues: Array, shapes: Array, force: ComplexArray, omega: Array) -> ComplexArray:
        rates, loss = self.damping.modal_rates(eigenvalues), self.damping.uniform_loss or 0.0
        pushed = np.einsum("snm,n->sm", shapes, force)
        whole = eigenvalues[:, :, None] * (1 + 1j * loss) - omega[:, None] ** 2
        whole = whole + 1j * omega[:, None] * rates[:, :, None]
        return np.asarray(pushed[:, :, None] / whole)


def _axis(moved: ComplexArray) -> Array:
    flat = larger_axis(moved.reshape(len(moved), -1))
    return flat.reshape(moved.shape[1:])


def _speeds(machine: _Driven, eigenvalues: Array) -> Array:
    """Return the speeds (s, w) that each sample is looked at, rad/s."""
    low, high = machine.speeds
    if low == high:
        return np.full((len(eigenvalues), 1), high)
    even = np.tile(np.linspace(low, high, EVEN_SPEEDS), (len(eigenvalues), 1))
    ratios = sorted({strength.ratio for strength, _ in machine.pushes if strength.ratio > 0})
    meeting = [np.clip(np.sqrt(eigenvalues) / ratio, low, high) for ratio in ratios]
    return np.concatenate([even, *meeting], axis=1)


def stacked_motion(assembly: Assembly, watching: Sequence[Watching]) -> StackedMotion | None:
    """Return what gives the motion of a stack, or None where only one model at a time does.

    That is so with dashpots, loss factors that differ, no damping at all, massless joints, or a support that
    moves.
    """
    dynamics = Dynamics.of(assembly)
    damping = dynamics.damping
    if (
        damping.kind == NONE
        or damping.viscous
        or damping.uniform_loss is None
        or assembly.pencil().massless.any()
    ):
        return None
    found = []
    for machine in assembly.model.machines:
        places = [i for i, one in enumerate(watching) if one.machine == machine.id]
        speeds = running_speeds(machine)
        if not places or speeds is None:
            continue
        pushes = pushes_of(dynamics, machine, [])
        if any(push.based for push in pushes):
            return None
        loads = [load_of(assembly, dynamics.terms, damping, push) for push in pushes]
        pushing = tuple((push.strength, load.steady) for push, load in zip(pushes, loads, strict=True))
        points = _points(dynamics, machine, [watching[i] for i in places])
        found.append(_Driven(speeds, pushing, points, tuple(places)))
    return StackedMotion(tuple(found), damping, len(watching))


def _points(dynamics: Dynamics, machine: Machine, watching: Sequence[Watching]) -> tuple[Array, ...]:
    assembly = dynamics.assembly
    request = ResponseRequest(assembly.model, watches=tuple(one.watch for one in watching))
    points, _, _ = watched_points(request, assembly, dynamics.terms, machine)
    return tuple(one.point.rows for one in points[: len(watching)])
