"""The largest motion of points over the running speeds of machines, at one set of values."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.errors import Fault, InputError, ModelFaultsError
from modalview.model.parts import Machine
from modalview.response.dynamic import Dynamics
from modalview.response.load import Push, push_of
from modalview.response.strength import running_speeds, strength
from modalview.study.response_curves import Sweeper
from modalview.study.response_results import ResponseRequest, Watch
from modalview.study.response_watches import watched_points

VELOCITY = 1


@dataclass(frozen=True, slots=True)
class Watching:
    """One point of one machine that is looked at.

    Parameters
    ----------
    machine : str
    label : str
        "motor, y".
    watch : Watch
    """

    machine: str
    label: str
    watch: Watch


def watchings(assembly: Assembly) -> tuple[Watching, ...]:
    """Return the points of all limits and excitations.

    Raises
    ------
    InputError
        No machine has a speed and an excitation whose size is known.
    """
    model, dynamics = assembly.model, Dynamics.of(assembly)
    found = []
    reasons: list[Fault] = []
    for machine in model.machines:
        if running_speeds(machine) is None or not pushes_of(dynamics, machine, reasons):
            continue
        points, _, _ = watched_points(ResponseRequest(model), assembly, dynamics.terms, machine)
        found += [Watching(machine.id, one.watch.label, one.watch) for one in points]
    if not found:
        if reasons:
            raise ModelFaultsError(tuple(reasons))
        raise InputError("No machine has both a speed and an excitation: there is no motion to compute.")
    return tuple(found)


def pushes_of(dynamics: Dynamics, machine: Machine, reasons: list[Fault]) -> list[Push]:
    """Return what pushes of a machine; why others cannot be computed is added to ``reasons``."""
    found: list[Push] = []
    for excitation in machine.excitations:
        try:
            size = strength(dynamics.assembly.model, machine, excitation)
            found.append(push_of(dynamics.assembly, dynamics.terms, excitation, size))
        except ModelFaultsError as faults:
            reasons += faults.faults
    return found


def _never() -> None:
    """Chunks are short: they are not stopped within."""


def amplitudes_at(assembly: Assembly, watching: Sequence[Watching]) -> list[float]:
    """Return the largest velocity, m/s rms, of each point over the running speeds: all excitations added.

    Peaks within the range of speeds are placed by the same sweep as the curves of a response.
    """
    dynamics = Dynamics.of(assembly)
    found: dict[Watching, float] = {}
    for machine in assembly.model.machines:
        own = [one for one in watching if one.machine == machine.id]
        speeds = running_speeds(machine)
        if not own or speeds is None:
            continue
        request = ResponseRequest(assembly.model, watches=tuple(one.watch for one in own))
        points, _, _ = watched_points(request, assembly, dynamics.terms, machine)
        sweeper = Sweeper(dynamics, pushes_of(dynamics, machine, []), points[: len(own)], _never)
        rows = _rows(sweeper, speeds)
        found |= {one: float(rows[i, -1, VELOCITY].max()) for i, one in enumerate(own)}
    return [found[one] for one in watching]


def _rows(sweeper: Sweeper, speeds: tuple[float, float]) -> npt.NDArray[np.float64]:
    if speeds[0] == speeds[1]:
        return sweeper.rows(np.array([speeds[1]]), 1.0)
    swept = sweeper.sweep(speeds, list(speeds))
    return swept.values.reshape(len(sweeper.points), len(sweeper.pushes) + 1, 3, swept.speeds.size)
