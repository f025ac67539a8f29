"""The tables beside the response chart: amplitudes where the machine runs, forces at its supports."""

from dataclasses import dataclass

import numpy as np

from modalview.drawing.primitives import Floats
from modalview.drawing.responsechartcontent import (
    FORCE,
    ResponseContent,
    Series,
    machine_of,
    unit_of,
)
from modalview.model.parts import Motion
from modalview.study.response_results import MachineResponse, ResponseResult, Steady
from modalview.units.show import significant

FIGURES = 3


@dataclass(frozen=True, slots=True)
class ResponseRow:
    """A line of the table.

    Parameters
    ----------
    label : str
        Excitation, support or link.
    detail : str
        Where its size comes from.
    cells : tuple of str
        Figures under the headings of the table.
    infinite : bool
        Whether it has no steady amplitude somewhere in it.
    """

    label: str
    detail: str
    cells: tuple[str, ...]
    infinite: bool = False


@dataclass(frozen=True, slots=True)
class ResponseTable:
    """Figures of one kind under headings."""

    headings: tuple[str, ...]
    rows: tuple[ResponseRow, ...]


NO_STEADY = "without bound"


def figure(value: float) -> str:
    """Write an amplitude; infinite is said, never a number.

    >>> figure(6.7123), figure(float("inf"))
    ('6.71', 'without bound')
    """
    return significant(value, FIGURES) if np.isfinite(value) else NO_STEADY


def amplitude_table(found: MachineResponse, content: ResponseContent) -> ResponseTable:
    """Return the amplitude at the running speed, or the worst over the speed range, of each excitation."""
    low, high = content.running_rpm
    details = {one.label: one.sentence for one in found.drivers}
    unit = content.unit
    if low == high:
        headings = ("excitation", f"at {rpm_figure(low)} rpm, {unit}", "half to double damping")
    else:
        headings = (
            "excitation",
            f"worst of {rpm_figure(low)} to {rpm_figure(high)} rpm, {unit}",
            "at rpm",
        )
    rows = []
    for one in content.series:
        worst, at = worst_of(content, one)
        cells = (figure(worst), _spread(content) if one.total else "")
        if low != high:
            cells = (figure(worst), rpm_figure(at))
        rows.append(ResponseRow(one.label, details.get(one.label, ""), cells, not np.isfinite(worst)))
    return ResponseTable(headings, tuple(rows))


def rpm_figure(rpm: float) -> str:
    """Write a speed to five figures.

    >>> rpm_figure(2950.0), rpm_figure(1230.456)
    ('2950', '1230.5')
    """
    return f"{float(f'{rpm:.5g}'):.10g}"


def _spread(content: ResponseContent) -> str:
    if content.band is None:
        return ""
    low = content.running_rpm[0]
    half, double = (at_speed(content.speeds_rpm, one, low) for one in content.band)
    return f"{figure(half)} to {figure(double)}"


def at_speed(speeds: Floats, values: Floats, rpm: float) -> float:
    """Return a curve's value at a speed; infinite only at the very speed of an undamped resonance."""
    at = int(np.searchsorted(speeds, rpm))
    for near in (at, at - 1):
        if 0 <= near < len(speeds) and abs(speeds[near] - rpm) <= 1e-9 * max(rpm, 1.0):
            return float(values[near])
    finite = np.isfinite(values)
    return float(np.interp(rpm, speeds[finite], values[finite])) if finite.any() else float("inf")


def worst_of(content: ResponseContent, one: Series) -> tuple[float, float]:
    """Return the largest value of a curve over the running speeds, and the speed of it, rpm."""
    low, high = content.running_rpm
    ends = [(at_speed(content.speeds_rpm, one.values, rpm), rpm) for rpm in (low, high)]
    inside = np.flatnonzero((content.speeds_rpm >= low) & (content.speeds_rpm <= high))
    if len(inside):
        top = int(inside[np.argmax(one.values[inside])])
        ends.append((float(one.values[top]), float(content.speeds_rpm[top])))
    if one.total:
        ends += [(peak.value, peak.rpm) for peak in content.peaks if low <= peak.rpm <= high]
    return max(ends)


def states_at(found: MachineResponse, rpm: float | None) -> tuple[Steady, ...]:
    """Return the steady states of a machine at a speed."""
    return tuple(one for one in found.states if _same(one.speed_rpm, rpm))


def _same(one: float | None, other: float | None) -> bool:
    if one is None or other is None:
        return one is other
    return abs(one - other) <= 1e-9 * max(abs(one), abs(other))


def support_table(result: ResponseResult, machine: str, rpm: float | None, system: str) -> ResponseTable:
    """Return the dynamic force at each support under each excitation at a speed."""
    found = machine_of(result, machine)
    states = states_at(found, rpm) if found is not None else ()
    labels = {one.id: one.label for one in found.drivers} if found is not None else {}
    model = result.request.model
    turning = model.motion is Motion.SHAFT_TRAIN
    per, unit = unit_of(model, FORCE, system, "N m" if turning else "N")
    place = f"at {rpm_figure(rpm)} rpm" if rpm is not None else "at its fixed frequency"
    headings = (f"support, {place}, {unit}", *(labels.get(one.excitation, "") for one in states))
    parts = {force.part: force.label for state in states for force in state.supports}
    rows = []
    for part, label in parts.items():
        cells = []
        for state in states:
            known = next((one for one in state.supports if one.part == part), None)
            value = None if known is None else (known.moment_nm if turning else known.force_n)
            cells.append(NO_STEADY if state.infinite else "" if value is None else figure(per * value))
        rows.append(ResponseRow(label, "", tuple(cells), NO_STEADY in cells))
    ratios = [
        NO_STEADY if one.infinite else "" if one.transmissibility is None else figure(one.transmissibility)
        for one in states
    ]
    if any(ratios):
        rows.append(
            ResponseRow("transmissibility", "force at the supports over force applied", tuple(ratios))
        )
    return ResponseTable(headings, tuple(rows))
