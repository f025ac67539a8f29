"""The forced response of a model: motion, forces and limits over the speeds of its machines."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from time import perf_counter

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import assemble
from modalview.errors import CancelledError, Fault, InputError, ModelFaultsError
from modalview.model.parts import End, Excitation, Machine, Motion
from modalview.resonance.bands import excitation_label
from modalview.response.bysparse import BySparse
from modalview.response.damping import NONE, RATIO, damping_sentence, modal_losses
from modalview.response.dynamic import LARGEST_BY_MODES, Dynamics
from modalview.response.energy import power_fed, power_lost
from modalview.response.load import Push, load_of, push_of
from modalview.response.strength import RAD_PER_RPM, running_speeds, strength
from modalview.study.response_curves import DOUBLE, HALF, Sweeper, curves_of, rpm_of, wanted_speeds
from modalview.study.response_forces import Pressing, forces_over, steady_at
from modalview.study.response_results import (
    QUANTITIES,
    Curve,
    DampingUsed,
    Driver,
    ForceCurve,
    LeftOut,
    LimitCheck,
    MachineResponse,
    ModeLoss,
    ResponseRequest,
    ResponseResult,
    Transmission,
)
from modalview.study.response_watches import Held, watched_points
from modalview.study.results import Solution
from modalview.units.show import significant

Array = npt.NDArray[np.float64]

# The curves run from this share of the lowest speed to this many times the highest.
SLOWEST, FASTEST = 0.1, 1.3
# From standstill they start at this share of the highest speed.
FROM_STANDSTILL = 0.02
# Errors are not told below this: rounding differs from one processor to the next.
LEAST_TOLD = 1e-14

SUM_NOTE = (
    "The sum adds the amplitudes of all excitations: phases between orders are not known, so it is never "
    "exceeded and reached only now and then."
)
BAND_NOTE = "Damping is never known well: the band shows half and double of it."
PARTS_NOTE = (
    "A damping ratio belongs to no part: forces in single links and supports are those of the springs; the "
    "transmissibility counts the damping too."
)


@dataclass(frozen=True, slots=True)
class _Taken:
    """One excitation that can be computed."""

    excitation: Excitation
    at: End
    push: Push


def respond(request: ResponseRequest, solution: Solution | None = None) -> ResponseResult:
    """Compute the steady response of a model to the excitations of its machines.

    Parameters
    ----------
    request : ResponseRequest
    solution : Solution or None
        Undamped modes of the same model, if they are there already.

    Raises
    ------
    InputError
        There is no machine or excitation; a speed asked for is not above zero; a machine is not there.
    ModelFaultsError
        The model cannot be analysed, or none of its excitations can be computed: the reason of each.
    CancelledError
    """
    start = perf_counter()
    machines = _machines(request)
    raw = solution.raw if solution is not None and solution.outlook.request.model is request.model else None
    assembly = (
        solution.outlook.assembly if solution is not None and raw is not None else assemble(request.model)
    )
    _stop_if(request)
    dynamics = Dynamics.of(
        assembly, raw if raw is not None and raw.number == assembly.pencil().modes else None
    )
    pressing = Pressing.of(dynamics)
    found, left_out, worst, evidence = [], [], 0.0, []
    for number, machine in enumerate(machines):
        if request.progress is not None:
            request.progress(machine.name or machine.id, number / len(machines))
        taken, reasons = _taken(dynamics, machine)
        left_out += reasons
        if not taken:
            continue
        response, residual = _machine_response(request, pressing, machine, (taken, reasons))
        found.append(response)
        worst = max(worst, residual)
        evidence += _balance(pressing, machine, taken)
    if not found:
        raise ModelFaultsError(tuple(Fault(one.id, one.reason) for one in left_out))
    method = dynamics.with_damping().method
    residual_text = f"backward error of the equations of motion at most {max(worst, LEAST_TOLD):.0e}"
    return ResponseResult(
        request=request,
        damping=_damping_used(dynamics),
        machines=tuple(found),
        left_out=tuple(left_out),
        evidence=(f"Steady motion by {method}", residual_text, *_worst_balance(evidence)),
        notes=_notes(dynamics, found),
        worst_residual=worst,
        seconds=perf_counter() - start,
    )


def _machines(request: ResponseRequest) -> list[Machine]:
    for speed in request.speeds_rpm:
        if not (math.isfinite(speed) and speed > 0):
            raise InputError(f"speeds_rpm: a steady response needs a speed above zero; found {speed:g} rpm.")
    if request.span_rpm is not None:
        low, high = request.span_rpm
        if not (math.isfinite(high) and 0 < low < high):
            raise InputError(f"span_rpm: speeds must rise from above zero; found {low:g} to {high:g} rpm.")
    machines = [one for one in request.model.machines if request.machine in (None, one.id)]
    if request.machine is not None and not machines:
        known = ", ".join(one.id for one in request.model.machines) or "none"
        raise InputError(f'machine: there is no machine "{request.machine}"; the model has: {known}.')
    if not any(one.excitations for one in machines):
        raise InputError(
            "Nothing excites the model: give a machine an excitation with a size and a point, such as an "
            "unbalance on a rotor."
        )
    return machines


def _stop_if(request: ResponseRequest) -> None:
    if request.cancelled():
        raise CancelledError("Computing the response was stopped.")


def _taken(dynamics: Dynamics, machine: Machine) -> tuple[list[_Taken], list[LeftOut]]:
    """Return the excitations that can be computed, and the others with their reasons."""
    taken, left_out = [], []
    model = dynamics.assembly.model
    for excitation in machine.excitations:
        try:
            size = strength(model, machine, excitation)
            push = push_of(dynamics.assembly, dynamics.terms, excitation, size)
        except ModelFaultsError as faults:
            left_out += [LeftOut(fault.path, fault.reason) for fault in faults.faults]
            continue
        if excitation.at is not None:
            taken.append(_Taken(excitation, excitation.at, push))
    return taken, left_out


def _machine_response(
    request: ResponseRequest, pressing: Pressing, machine: Machine, given: tuple[list[_Taken], list[LeftOut]]
) -> tuple[MachineResponse, float]:
    taken, left_out = given
    dynamics, pushes = pressing.solver.dynamics, [one.push for one in taken]
    points, held, limits_out = watched_points(request, dynamics.assembly, dynamics.terms, machine)
    sweeper = Sweeper(dynamics, pushes, points, lambda: _stop_if(request))
    names = [push.strength.id for push in pushes]
    running = running_speeds(machine)
    speeds = np.zeros(0)
    curves: tuple[Curve, ...] = ()
    transmissions: tuple[Transmission, ...] = ()
    forces: tuple[ForceCurve, ...] = ()
    if running is not None:
        asked = [rpm * RAD_PER_RPM for rpm in request.speeds_rpm]
        swept = sweeper.sweep(_span(request, running), [*wanted_speeds(machine), *asked])
        speeds = swept.speeds
        curves = curves_of(sweeper, swept, names)
        pairs = [(one.push, one.at) for one in taken]
        transmissions, forces = forces_over(pressing, pairs, speeds, points)
    _stop_if(request)
    states = [
        steady_at(pressing, one.push, one.at, speed)
        for speed in _state_speeds(request, running)
        for one in taken
    ]
    response = MachineResponse(
        machine=machine.id,
        label=machine.name or machine.id,
        running_rpm=None if running is None else (rpm_of(running[0]), rpm_of(running[1])),
        drivers=tuple(_driver(one) for one in taken),
        left_out=(*left_out, *limits_out),
        speeds_rpm=_fixed(np.array([rpm_of(speed) for speed in speeds])),
        watches=tuple(one.watch for one in points),
        curves=curves,
        transmissions=transmissions,
        forces=forces,
        limits=_limits(sweeper, held, running, speeds),
        states=tuple(states),
    )
    return response, sweeper.worst_residual


def _fixed(values: Array) -> Array:
    values.setflags(write=False)
    return values


def _span(request: ResponseRequest, running: tuple[float, float]) -> tuple[float, float]:
    if request.span_rpm is not None:
        return request.span_rpm[0] * RAD_PER_RPM, request.span_rpm[1] * RAD_PER_RPM
    low, high = running
    asked = [rpm * RAD_PER_RPM for rpm in request.speeds_rpm]
    return min([max(SLOWEST * low, FROM_STANDSTILL * high), *asked]), max([FASTEST * high, *asked])


def _state_speeds(request: ResponseRequest, running: tuple[float, float] | None) -> Sequence[float | None]:
    if running is None:
        return [None]
    asked = {speed * RAD_PER_RPM for speed in request.speeds_rpm}
    return sorted({speed for speed in running if speed > 0} | asked)


def _driver(taken: _Taken) -> Driver:
    size = taken.push.strength
    return Driver(
        id=size.id,
        label=excitation_label(taken.excitation),
        hz_per_rpm=size.ratio / 60,
        fixed_hz=None if size.fixed is None else size.fixed / (2 * math.pi),
        kind=size.kind,
        size=size.size,
        sentence=size.sentence,
    )


def _limits(
    sweeper: Sweeper,
    held: Sequence[Held],
    running: tuple[float, float] | None,
    speeds: Array,
) -> tuple[LimitCheck, ...]:
    """Hold every limit against the sum of all excitations over the speeds the machine runs at."""
    if not held:
        return ()
    if running is None or running[1] < speeds[0] or running[0] > speeds[-1]:
        at = np.array([1.0 if running is None else running[1]])
    else:
        at = speeds[(speeds >= running[0]) & (speeds <= running[1])]
    rows = {factor: sweeper.rows(at, factor) for factor in sweeper.factors}
    order = [one.watch.id for one in sweeper.points]
    found = []
    for one in held:
        place, quantity = order.index(one.watch), one.limit.quantity
        over = {factor: _quantity(row[place, -1], quantity) for factor, row in rows.items()}
        worst = int(np.argmax(over[1.0]))
        others = [float(over[f].max()) if f in over else None for f in (HALF, DOUBLE)]
        found.append(
            LimitCheck(
                limit=one.limit.id,
                label=one.limit.name or one.limit.id,
                watch=one.watch,
                quantity=quantity,
                value=one.value,
                text=one.limit.value,
                worst=float(over[1.0][worst]),
                worst_rpm=None if running is None else rpm_of(at[worst]),
                worst_half=others[0],
                worst_double=others[1],
                exceeded=bool(over[1.0][worst] > one.value),
            )
        )
    return tuple(found)


def _quantity(rows: Array, quantity: str) -> Array:
    """Return one of QUANTITIES from displacement, velocity, acceleration (3, s)."""
    place = QUANTITIES.index(quantity)
    doubled = 2.0 if place == 1 else 1.0
    found: Array = doubled * rows[max(place - 1, 0)]
    return found


def _damping_used(dynamics: Dynamics) -> DampingUsed:
    damping, assembly = dynamics.damping, dynamics.assembly
    losses: tuple[ModeLoss, ...] = ()
    if np.any(damping.losses > 0) and assembly.pencil().modes <= LARGEST_BY_MODES:
        modes = dynamics.undamped_modes
        of_modes = modal_losses(assembly.pencil(), modes, damping.losses)
        losses = tuple(
            ModeLoss(i + 1, float(modes.frequency_hz[i]), float(of_modes[i]), float(of_modes[i]) / 2)
            for i in range(*modes.elastic.indices(modes.number))
        )
    return DampingUsed(damping.kind, damping_sentence(assembly, damping), losses)


def _notes(dynamics: Dynamics, found: Sequence[MachineResponse]) -> tuple[str, ...]:
    said = []
    if any(len(one.drivers) > 1 for one in found):
        said.append(SUM_NOTE)
    if dynamics.damping.kind != NONE and not dynamics.with_damping().by_factors:
        said.append(BAND_NOTE)
    if dynamics.damping.kind == RATIO:
        said.append(PARTS_NOTE)
        if isinstance(dynamics.with_damping().route, BySparse):
            share = significant(100 * dynamics.damping.ratio, 2)
            said.append(
                f"The model is large: its damping ratio is taken as i zeta (K + w^2 M), exact at every "
                f"resonance and within {share} % of each mode's response between them."
            )
    if isinstance(dynamics.with_damping().route, BySparse):
        said.append(
            "The model is large: peaks narrower than the distance of the speeds may be missed, and neither "
            "half-power marks nor the band of half and double damping are computed."
        )
    if dynamics.assembly.model.motion is Motion.SHAFT_TRAIN:
        said.append("Motions are rotations: rad, rad/s and rad/s2.")
    return tuple(said)


def _balance(pressing: Pressing, machine: Machine, taken: Sequence[_Taken]) -> list[tuple[float, float]]:
    """Return power fed in and lost at the highest speed, per unit force, of every excitation by a force."""
    solver, terms = pressing.solver, pressing.force_map.terms
    running, found = running_speeds(machine), []
    for one in taken:
        if one.push.based:
            continue
        omega = one.push.strength.omega(np.array([running[1] if running else 1.0]))
        motion = solver.solve(omega, load_of(pressing.force_map.assembly, terms, solver.damping, one.push))
        if not motion.unbounded[0]:
            fed = power_fed(solver, one.push, omega, motion.coordinates)[0]
            lost = power_lost(solver, one.push, omega, motion.coordinates)[0]
            found.append((float(fed), float(lost)))
    return found


def _worst_balance(powers: Sequence[tuple[float, float]]) -> tuple[str, ...]:
    shares = [abs(fed - lost) / max(fed, lost) for fed, lost in powers if max(fed, lost) > 0 and lost > 0]
    if not shares:
        return ()
    return (f"power fed in equals power lost within {max(*shares, LEAST_TOLD):.0e} at the machine's speed",)
