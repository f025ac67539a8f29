"""A forced response as plain text."""

import math
from collections.abc import Sequence

from modalview.cli.cautions import CAUTION
from modalview.cli.response_document import value_at, worst_of
from modalview.cli.speedtexts import MOST_PASSED, rpm_text
from modalview.cli.table import table, wrapped
from modalview.model.parts import Model, Motion
from modalview.response.quantities import larger_axis
from modalview.response.runup import Passage
from modalview.study.response_results import (
    ACCELERATION,
    DISPLACEMENT,
    PEAK_TO_PEAK,
    QUANTITIES,
    VELOCITY,
    Curve,
    LimitCheck,
    MachineResponse,
    Peak,
    ResponseResult,
    Steady,
)
from modalview.study.runup import QUASI_STEADY, PassedAmplitude, amplitudes_passed
from modalview.units import quantities as q
from modalview.units.show import short, show, significant

# Factor and unit of each quantity as it is shown: where bodies shift, and in a shaft train, where they turn.
_SHIFTS = {
    DISPLACEMENT: (1e6, "um"),
    PEAK_TO_PEAK: (1e6, "um"),
    VELOCITY: (1e3, "mm/s"),
    ACCELERATION: (1.0, "m/s2"),
}
_TURNS = {
    DISPLACEMENT: (1e3, "mrad"),
    PEAK_TO_PEAK: (1e3, "mrad"),
    VELOCITY: (1.0, "rad/s"),
    ACCELERATION: (1.0, "rad/s2"),
}
SUM = "all, summed"
# More resonance peaks than this are not listed one by one.
MOST_PEAKS = 12
INFINITE = "without bound"
_PACES = {True: "slow", False: "fast", None: "not told"}


def response_text(result: ResponseResult, passed: Sequence[Passage] = ()) -> str:
    """Return the response of every machine as tables, and what it rests on."""
    model = result.request.model
    parts = [f"{model.title or 'untitled'} ({model.motion})", wrapped(result.damping.sentence)]
    for machine in result.machines:
        parts += _machine_parts(machine, model, passed)
    left_out = dict.fromkeys([*result.left_out, *(one for m in result.machines for one in m.left_out)])
    if left_out:
        lines = (wrapped(f"  {one.id}: {one.reason}", "    ") for one in left_out)
        parts.append("Left out:\n" + "\n".join(lines))
    parts.append("\n".join(wrapped(line, "  ") for line in result.evidence))
    notes = [wrapped(f"Note: {note.rstrip('.')}.", "  ") for note in result.notes]
    return "\n\n".join([*parts, "\n".join([*notes, CAUTION])])


def _machine_parts(machine: MachineResponse, model: Model, passed: Sequence[Passage]) -> list[str]:
    units = _TURNS if model.motion is Motion.SHAFT_TRAIN else _SHIFTS
    parts = ["\n".join(wrapped(f"{d.label}: {d.sentence}", "  ") for d in machine.drivers)]
    labels = {driver.id: driver.label for driver in machine.drivers}
    running = machine.running_rpm
    if running is not None and running[0] < running[1]:
        span = f"{short(running[0])} to {short(running[1])} rpm"
        rows = [[*_names(machine, c, labels), *_worst_cells(machine, c, units)] for c in machine.curves]
        parts.append(f"{machine.label}, the worst over {span} (and at which rpm):\n{_motion_table(rows)}")
    for rpm in _speeds(machine):
        rows = [[*_names(machine, c, labels), *_cells(machine, c, rpm, units)] for c in machine.curves]
        parts.append(f"{machine.label} at {short(rpm)} rpm:\n{_motion_table(rows)}")
        parts += _forces_at(machine, rpm, labels)
    parts += _fixed_states(machine, model, labels) if running is None else []
    peaks = [(c, peak) for c in machine.curves for peak in c.peaks if peak.quantity == VELOCITY]
    parts += [_peaks_table(machine, peaks, labels, units)] if peaks else []
    parts.append(_run_up_table(machine, passed, units))
    parts += [_limits_table(machine.limits, units)] if machine.limits else []
    return [part for part in parts if part]


def _speeds(machine: MachineResponse) -> list[float]:
    return sorted({state.speed_rpm for state in machine.states if state.speed_rpm is not None})


def _names(machine: MachineResponse, curve: Curve, labels: dict[str, str]) -> list[str]:
    watch = next(one.label for one in machine.watches if one.id == curve.watch)
    return [watch, SUM if curve.excitation is None else labels[curve.excitation]]


def _motion_table(rows: Sequence[Sequence[str]]) -> str:
    head = ["point", "excitation", "peak", "peak-to-peak", "velocity rms", "acceleration rms"]
    return table([head, *rows], right=frozenset({2, 3, 4, 5}))


def _cells(
    machine: MachineResponse, curve: Curve, rpm: float, units: dict[str, tuple[float, str]]
) -> list[str]:
    return [_amount(value_at(machine, curve, name, rpm), units[name]) for name in QUANTITIES]


def _worst_cells(machine: MachineResponse, curve: Curve, units: dict[str, tuple[float, str]]) -> list[str]:
    found = [(name, *worst_of(machine, curve, name)) for name in QUANTITIES]
    return [f"{_amount(value, units[name])} ({short(rpm, 4)})" for name, value, rpm in found]


def _amount(value: float, unit: tuple[float, str]) -> str:
    factor, spelling = unit
    return f"{significant(factor * value, 3)} {spelling}" if math.isfinite(value) else INFINITE


def _forces_at(machine: MachineResponse, rpm: float, labels: dict[str, str]) -> list[str]:
    states = [state for state in machine.states if state.speed_rpm == rpm]
    rows = [row for state in states for row in _force_rows(state, labels[state.excitation])]
    parts = []
    if rows:
        parts.append(_force_table(rows))
    passed = [_passed(state, labels[state.excitation]) for state in states]
    return [*parts, "\n".join(text for text in passed if text)]


def _force_rows(state: Steady, label: str) -> list[list[str]]:
    if state.infinite:
        return [["supports", label, INFINITE, ""]]
    pressed = [one for one in state.supports if one.force_n or one.moment_nm]
    # A train without supports still has torques in its shafts.
    return [
        [one.label, label, _force(one.force_n, q.FORCE), _force(one.moment_nm, q.TORQUE)]
        for one in pressed or state.links
        if one.force_n or one.moment_nm
    ]


def _force(value: float | None, quantity: q.Quantity) -> str:
    return "" if not value else show(value, quantity, digits=3)


def _passed(state: Steady, label: str) -> str:
    if state.transmissibility is None:
        return ""
    ratio, share = significant(state.transmissibility, 3), state.isolation_percent
    told = "" if share is None else f", isolation {significant(share, 3)} %" if share > 0 else ", amplified"
    return f"{label}: transmissibility {ratio}{told}"


def _fixed_states(machine: MachineResponse, model: Model, labels: dict[str, str]) -> list[str]:
    """Return what is known of a machine without a speed: bodies and forces under its fixed frequencies."""
    rows = [["body, any direction", "excitation", "peak of its centre of gravity"]]
    for state in machine.states:
        moved = larger_axis(state.motion[:, :3].T)
        for body, size in zip(model.bodies, moved, strict=True):
            told = INFINITE if state.infinite else f"{significant(1e6 * float(size), 3)} um"
            rows.append([body.name or body.id, labels[state.excitation], told])
    forces = [row for state in machine.states for row in _force_rows(state, labels[state.excitation])]
    return [table(rows, right=frozenset({2})), *([_force_table(forces)] if forces else [])]


def _force_table(rows: Sequence[Sequence[str]]) -> str:
    head = ["support or link", "excitation", "force peak", "moment peak"]
    return table([head, *rows], right=frozenset({2, 3}))


def _run_up_table(
    machine: MachineResponse, passed: Sequence[Passage], units: dict[str, tuple[float, str]]
) -> str:
    """Return the motion where modes are passed, as if the machine stood there; empty where none is."""
    found = amplitudes_passed(machine, passed)
    if not found:
        return ""
    labels = {watch.id: watch.label for watch in machine.watches}
    rows = [["passed on run-up", "mode", "at", "point", "peak", "velocity rms", "cycles", "pace"]]
    rows += [
        [
            one.passage.label,
            str(one.passage.mode),
            f"{rpm_text(one.passage.speed)} rpm",
            labels[one.watch],
            *(_amount(one.values[QUANTITIES.index(name)], units[name]) for name in (DISPLACEMENT, VELOCITY)),
            "" if one.passage.cycles is None else significant(one.passage.cycles, 2),
            _PACES[one.passage.quasi_steady],
        ]
        for one in found[:MOST_PASSED]
    ]
    said = "Motion as if the machine stood at that speed: a fast run-up does not reach it in full."
    told = [table(rows, right=frozenset({1, 2, 4, 5, 6}))]
    if len(found) > MOST_PASSED:
        told.append(f"and {len(found) - MOST_PASSED} more: --json lists all.")
    return "\n".join([*told, wrapped(said, "  "), *_pace_rule(found)])


def _pace_rule(found: Sequence[PassedAmplitude]) -> list[str]:
    timed = any(one.passage.cycles is not None for one in found)
    return [wrapped(f"{QUASI_STEADY}.", "  ")] if timed else []


def _peaks_table(
    machine: MachineResponse,
    peaks: Sequence[tuple[Curve, Peak]],
    labels: dict[str, str],
    units: dict[str, tuple[float, str]],
) -> str:
    rows = [["peaks of velocity: point", "excitation", "at", "velocity rms", "half power"]]
    for curve, peak in peaks[:MOST_PEAKS]:
        low, high = ("?" if end is None else short(end, 4) for end in peak.half_power_rpm)
        rows.append(
            [
                *_names(machine, curve, labels),
                f"{significant(peak.speed_rpm, 4)} rpm",
                _amount(peak.value, units[VELOCITY]),
                "" if peak.half_power_rpm == (None, None) else f"{low} to {high} rpm",
            ]
        )
    more = f"\nand {len(peaks) - MOST_PEAKS} more: --json lists all." if len(peaks) > MOST_PEAKS else ""
    return table(rows, right=frozenset({2, 3})) + more


def _limits_table(limits: Sequence[LimitCheck], units: dict[str, tuple[float, str]]) -> str:
    rows = [["limit", "quantity", "allowed", "worst", "at", "half, double damping", ""]]
    rows += [
        [
            one.label,
            one.quantity,
            one.text,
            _amount(one.worst, units[one.quantity]),
            "" if one.worst_rpm is None else f"{short(one.worst_rpm, 4)} rpm",
            _band(one, units[one.quantity]),
            "EXCEEDED" if one.exceeded else "kept",
        ]
        for one in limits
    ]
    return table(rows, right=frozenset({2, 3, 4, 5}))


def _band(one: LimitCheck, unit: tuple[float, str]) -> str:
    ends = [_amount(value, unit) for value in (one.worst_half, one.worst_double) if value is not None]
    return ", ".join(ends)
