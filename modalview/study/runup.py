"""Modes passed on run-up, as they are shown beside the checks: without a verdict."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from modalview.assembly.dampedterms import has_dashpots
from modalview.eigen.solve import LARGEST
from modalview.model.parts import Machine, SpeedRange
from modalview.resonance.meetings import order_lines
from modalview.resonance.speedruns import RPM
from modalview.response.runup import Passage, Swept, mode_ratios, passages
from modalview.study.campbell import spans
from modalview.study.completed import ELASTIC
from modalview.study.damped import has_loss_factors, modal_ratio
from modalview.study.matrices import MatrixOutlook, MatrixSolution
from modalview.study.response_results import QUANTITIES, Curve, MachineResponse
from modalview.study.results import Solution

QUASI_STEADY = (
    "slow: the amplitude there comes within about 5 % of the steady one (at least 1.5 cycles per Q in the "
    "half-power band; computed for one oscillator); fast: it stays below"
)


# A speed of the curves as near as this to that of a passage is the same.
NEXT = 1e-6


def passed_on_run_up(solution: Solution | MatrixSolution) -> tuple[Passage, ...] | None:
    """Return the modes that each order passes from standstill to the lowest speed of its machine.

    Returns
    -------
    tuple of Passage or None
        By machine and order, as in the file; None where not all modes are known. A fixed frequency passes
        none.
    """
    outlook = solution.outlook
    pencil = outlook.pencil if isinstance(outlook, MatrixOutlook) else outlook.assembly.pencil()
    if pencil.modes > LARGEST:
        return None
    machines = outlook.request.model.machines
    return tuple(one for machine in machines for one in _passed(solution, machine))


def _passed(solution: Solution | MatrixSolution, machine: Machine) -> tuple[Passage, ...]:
    if machine.speed is None:
        return ()
    lowest = machine.speed.from_.si if isinstance(machine.speed, SpeedRange) else machine.speed.si
    lines = order_lines(solution.outlook.request.model, machine)
    orders = [Swept(line.check, line.label, line.rate) for line in lines if line.order is not None]
    acceleration = machine.run_up.acceleration.si if machine.run_up else None
    ratios = None
    if isinstance(solution, Solution) and acceleration is not None:
        ratios = damping_ratios(solution)
    return passages(orders, spans(solution.modes), lowest, ratios, acceleration)


def damping_ratios(solution: Solution) -> Sequence[float]:
    """Return the damping ratio of each elastic mode, 0 where nothing damps it; estimated from energies.

    Dashpots and loss factors go before damping given for the whole model.
    """
    outlook, model = solution.outlook, solution.outlook.request.model
    elastic = [i for i, mode in enumerate(solution.modes) if mode.kind == ELASTIC]
    if has_dashpots(outlook.assembly) or has_loss_factors(model):
        found = mode_ratios(outlook.assembly, solution.raw)
        return [float(found[i]) for i in elastic]
    return [modal_ratio(model, solution.modes[i].frequency_hz) for i in elastic]


@dataclass(frozen=True, slots=True)
class PassedAmplitude:
    """Motion of one point where one order passes a mode, as if the machine stood there.

    Parameters
    ----------
    passage : Passage
    watch : str
        Id of a Watch.
    values : tuple of float
        In the order of QUANTITIES, SI: the largest within the half-power band; infinite where nothing damps
        the mode.
    """

    passage: Passage
    watch: str
    values: tuple[float, ...]


def amplitudes_passed(machine: MachineResponse, passed: Sequence[Passage]) -> tuple[PassedAmplitude, ...]:
    """Return the steady motion of every watch at every passage of a machine, from its curves.

    Left out are orders without a size and speeds below the curves.
    """
    return tuple(
        PassedAmplitude(one, curve.watch, values)
        for one in passed
        for curve in machine.curves
        if curve.excitation == one.check and (values := _largest_about(machine, curve, one))
    )


def _largest_about(machine: MachineResponse, curve: Curve, one: Passage) -> tuple[float, ...]:
    """Return the largest value of each quantity in the half-power band; empty beside the curves."""
    speeds, rpm = machine.speeds_rpm, one.speed / RPM
    if not one.at_nominal or not speeds.size or not speeds[0] <= rpm <= speeds[-1]:
        return ()
    width = (one.damping_ratio or 0.0) * rpm
    inside = np.abs(speeds - rpm) <= max(width, NEXT * rpm)
    inside[np.argmin(np.abs(speeds - rpm))] = True
    return tuple(float(curve.nominal.values(quantity)[inside].max()) for quantity in QUANTITIES)
