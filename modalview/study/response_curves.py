"""Curves of one machine: every watch under every excitation, with half and double damping."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.model.parts import Machine
from modalview.response.damping import NONE
from modalview.response.dynamic import Damped, Dynamics
from modalview.response.load import Load, Push, load_of
from modalview.response.quantities import acceleration_rms, velocity_rms
from modalview.response.strength import RAD_PER_RPM, running_speeds
from modalview.response.sweep import Swept, starting_speeds, swept
from modalview.study.response_results import (
    ACCELERATION,
    DISPLACEMENT,
    VELOCITY,
    Curve,
    Peak,
    Traces,
)
from modalview.study.response_watches import Watched

Array = npt.NDArray[np.float64]

HALF, DOUBLE = 0.5, 2.0
SHARP = (DISPLACEMENT, VELOCITY, ACCELERATION)
# Even speeds to start from; fewer where every one takes a factorization.
POINTS, FEW_POINTS = 161, 61
# Residuals are looked at for so many speeds of a sweep at most.
LOOKED_AT = 48
RPM_DIGITS = 13


@dataclass(slots=True, eq=False)
class Sweeper:
    """Computes the rows of one machine at any speeds, rad/s.

    Parameters
    ----------
    dynamics : Dynamics
    pushes : sequence of Push
        One per excitation.
    points : sequence of Watched
    check : callable
        Raises CancelledError when the computation was stopped.
    worst_residual : float
        Largest backward error seen so far.
    """

    dynamics: Dynamics
    pushes: Sequence[Push]
    points: Sequence[Watched]
    check: Callable[[], None]
    worst_residual: float = 0.0

    def rows(self, speeds: Array, factor: float) -> Array:
        """Return displacement, velocity, acceleration: array (watches, excitations + 1, 3, s).

        The last excitation is the sum of the amplitudes of all others.
        """
        solver = self.dynamics.with_damping(factor)
        found = np.zeros((len(self.points), len(self.pushes) + 1, 3, speeds.size))
        for number, push in enumerate(self.pushes):
            load = load_of(self.dynamics.assembly, self.dynamics.terms, solver.damping, push)
            omega = push.strength.omega(speeds)
            moved = self._displacements(solver, push, load, omega)
            found[:, number, 0] = moved
            found[:, number, 1] = velocity_rms(moved, omega)
            found[:, number, 2] = acceleration_rms(moved, omega)
        found[:, -1] = found[:, :-1].sum(axis=1)
        return found

    def _displacements(self, solver: Damped, push: Push, load: Load, omega: Array) -> Array:
        """Return peak displacements (watches, s)."""
        single, back = np.unique(omega, return_inverse=True)
        found = np.zeros((len(self.points), single.size))
        for part in solver.batches(single.size):
            self.check()
            motion = solver.solve(single[part], load)
            size = push.strength.amplitude(single[part])
            for number, one in enumerate(self.points):
                found[number, part] = one.point.amplitude(motion, size)
        self._look(solver, load, single)
        return np.asarray(found[:, back], dtype=float)

    def _look(self, solver: Damped, load: Load, omega: Array) -> None:
        some = omega[:: max(1, omega.size // LOOKED_AT)][:LOOKED_AT]
        if solver.by_factors:
            some = some[:1]
        errors = solver.backward_error(some, load, solver.solve(some, load))
        self.worst_residual = max(self.worst_residual, float(errors.max(initial=0.0)))

    def sweep(self, span: tuple[float, float], wanted: Sequence[float]) -> Swept:
        """Return the rows with the damping as given over a span of speeds, peaks placed."""
        orders = {push.strength.ratio for push in self.pushes if push.strength.ratio > 0}
        resonances: list[tuple[float, float, bool]] = []
        for factor in self.factors:
            places = zip(*self.dynamics.with_damping(factor).resonances(), strict=True)
            for omega, width, undamped in places:
                # Of the other dampings the place alone: their peaks are not placed.
                share = width if factor == 1 else 0.0
                resonances += [(omega / one, share / one, bool(undamped)) for one in orders]
        points = FEW_POINTS if self.dynamics.with_damping().by_factors else POINTS
        start = starting_speeds(span, resonances, wanted, points)

        def evaluate(speeds: Array) -> Array:
            return self.rows(speeds, 1.0).reshape(-1, speeds.size)

        return swept(evaluate, start, rough=self.dynamics.with_damping().by_factors)

    @property
    def factors(self) -> tuple[float, ...]:
        """Dampings shown, as multiples of the one given; of a large model that one alone."""
        single = self.dynamics.damping.kind == NONE or self.dynamics.with_damping().by_factors
        return (1.0,) if single else (1.0, HALF, DOUBLE)


def curves_of(sweeper: Sweeper, found: Swept, names: Sequence[str]) -> tuple[Curve, ...]:
    """Return the curves of all watches, each excitation and then the sum where there are several."""
    shape = (len(sweeper.points), len(names) + 1, 3)
    nominal = found.values.reshape(*shape, found.speeds.size)
    band = {factor: sweeper.rows(found.speeds, factor) for factor in sweeper.factors if factor != 1}
    tops: dict[tuple[int, ...], list[Peak]] = {}
    for top in found.tops:
        watch, excitation, quantity = (int(i) for i in np.unravel_index(top.row, shape))
        low, high = (None if side is None else rpm_of(side) for side in top.half_power)
        peak = Peak(SHARP[quantity], rpm_of(top.speed), top.value, (low, high))
        tops.setdefault((watch, excitation), []).append(peak)
    several = len(names) > 1
    return tuple(
        Curve(
            watch=one.watch.id,
            excitation=names[e] if e < len(names) else None,
            nominal=_traces(nominal[w, e]),
            half=_traces(band[HALF][w, e]) if band else None,
            double=_traces(band[DOUBLE][w, e]) if band else None,
            peaks=tuple(sorted(tops.get((w, e), []), key=lambda peak: peak.speed_rpm)),
        )
        for w, one in enumerate(sweeper.points)
        for e in range(len(names) + several)
    )


def rpm_of(speed: float) -> float:
    """Return a speed in rad/s in rpm, without rounding of the change of unit."""
    return float(f"{speed / RAD_PER_RPM:.{RPM_DIGITS}g}")


def _traces(rows: Array) -> Traces:
    fixed = [np.array(row) for row in rows]
    for row in fixed:
        row.setflags(write=False)
    return Traces(*fixed)


def wanted_speeds(machine: Machine) -> list[float]:
    """Return speeds that every curve has a point at: the machine's, and edges of barred ranges; rad/s."""
    speeds = running_speeds(machine)
    edges = [edge.si for barred in machine.barred_ranges for edge in (barred.from_, barred.to)]
    return [*(speeds or ()), *edges]
