"""A forced response as JSON and as a table for a spreadsheet."""

import csv
import io
import math
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import Any

import numpy as np

from modalview.cli.speedtexts import passage_document
from modalview.model.parts import Motion
from modalview.response.runup import Passage
from modalview.study.response_results import (
    QUANTITIES,
    Curve,
    Driver,
    LimitCheck,
    MachineResponse,
    PartForce,
    ResponseResult,
    Steady,
)
from modalview.study.runup import PassedAmplitude, amplitudes_passed

# Suffix of each quantity's key: bodies shift, in a shaft train they turn.
_SHIFTS = ("m", "m", "m_per_s", "m_per_s2")
_TURNS = ("rad", "rad", "rad_per_s", "rad_per_s2")


def quantity_keys(motion: Motion) -> tuple[str, ...]:
    """Return the keys of QUANTITIES: "displacement_peak_m", "velocity_rms_m_per_s"."""
    units = _TURNS if motion is Motion.SHAFT_TRAIN else _SHIFTS
    return tuple(
        f"{name.replace(' ', '_').replace('-', '_')}_{unit}"
        for name, unit in zip(QUANTITIES, units, strict=True)
    )


def response_document(
    path: Path, result: ResponseResult, passed: Sequence[Passage], coordinates: int
) -> dict[str, Any]:
    """Return a forced response for JSON; null stands for what is infinite."""
    model, damping = result.request.model, result.damping
    return {
        "file": str(path),
        "title": model.title,
        "degrees_of_freedom": coordinates,
        "damping": {
            "kind": damping.kind,
            "sentence": damping.sentence,
            "losses": [
                {
                    "mode": one.mode,
                    "frequency_hz": one.frequency_hz,
                    "loss_factor": one.loss_factor,
                    "damping_ratio": one.ratio,
                }
                for one in damping.losses
            ],
        },
        "machines": [_machine(one, result, passed) for one in result.machines],
        "left_out": [{"id": one.id, "reason": one.reason} for one in result.left_out],
        "evidence": list(result.evidence),
        "worst_residual": result.worst_residual,
        "notes": list(result.notes),
    }


def _machine(one: MachineResponse, result: ResponseResult, passed: Sequence[Passage]) -> dict[str, Any]:
    keys = quantity_keys(result.request.model.motion)
    bodies = [body.id for body in result.request.model.bodies]
    speeds = sorted({state.speed_rpm for state in one.states if state.speed_rpm is not None})
    return {
        "machine": one.machine,
        "speed_rpm": None if one.running_rpm is None else list(one.running_rpm),
        "drivers": [_driver(driver) for driver in one.drivers],
        "watches": [{"id": watch.id, "label": watch.label} for watch in one.watches],
        "motion": [_at(one, curve, rpm, keys) for curve in one.curves for rpm in speeds],
        "worst": [_worst(one, curve, keys) for curve in one.curves if one.running_rpm is not None],
        "peaks": [peak for curve in one.curves for peak in _peaks(curve, keys)],
        "run_up": [_passed(each, keys) for each in amplitudes_passed(one, passed)],
        "states": [_state(state, bodies) for state in one.states],
        "limits": [_limit(limit) for limit in one.limits],
        "left_out": [{"id": left.id, "reason": left.reason} for left in one.left_out],
    }


def _driver(driver: Driver) -> dict[str, Any]:
    return {
        "check": driver.id,
        "label": driver.label,
        "hz_per_rpm": driver.hz_per_rpm,
        "frequency_hz": driver.fixed_hz,
        "kind": driver.kind,
        "size_si": driver.size,
        "sentence": driver.sentence,
    }


def value_at(machine: MachineResponse, curve: Curve, quantity: str, rpm: float) -> float:
    """Return a quantity at a speed, which is one of the curve's or lies between two."""
    speeds, values = machine.speeds_rpm, curve.nominal.values(quantity)
    near = int(np.argmin(np.abs(speeds - rpm)))
    if abs(speeds[near] - rpm) <= 1e-9 * rpm:
        return float(values[near])
    return float(np.interp(rpm, speeds, values))


def worst_of(machine: MachineResponse, curve: Curve, quantity: str) -> tuple[float, float]:
    """Return the largest of a quantity over the speeds of a machine, and at which rpm."""
    low, high = machine.running_rpm or (0.0, math.inf)
    inside = (machine.speeds_rpm >= low * (1 - 1e-12)) & (machine.speeds_rpm <= high * (1 + 1e-12))
    values = np.where(inside, curve.nominal.values(quantity), -1.0)
    place = int(np.argmax(values))
    return float(values[place]), float(machine.speeds_rpm[place])


def _known(value: float | None) -> float | None:
    return value if value is not None and math.isfinite(value) else None


def _at(machine: MachineResponse, curve: Curve, rpm: float, keys: tuple[str, ...]) -> dict[str, Any]:
    values = {
        key: _known(value_at(machine, curve, quantity, rpm))
        for key, quantity in zip(keys, QUANTITIES, strict=True)
    }
    return {"watch": curve.watch, "check": curve.excitation, "at_rpm": rpm, **values}


def _worst(machine: MachineResponse, curve: Curve, keys: tuple[str, ...]) -> dict[str, Any]:
    found: dict[str, Any] = {"watch": curve.watch, "check": curve.excitation}
    for key, quantity in zip(keys, QUANTITIES, strict=True):
        value, rpm = worst_of(machine, curve, quantity)
        found[key] = {"value": _known(value), "at_rpm": rpm}
    return found


def _peaks(curve: Curve, keys: tuple[str, ...]) -> Iterator[dict[str, Any]]:
    names = dict(zip(QUANTITIES, keys, strict=True))
    for peak in curve.peaks:
        yield {
            "watch": curve.watch,
            "check": curve.excitation,
            "at_rpm": peak.speed_rpm,
            names[peak.quantity]: _known(peak.value),
            "half_power_rpm": list(peak.half_power_rpm),
        }


def _passed(one: PassedAmplitude, keys: tuple[str, ...]) -> dict[str, Any]:
    told = passage_document(one.passage)
    values = {key: _known(value) for key, value in zip(keys, one.values, strict=True)}
    return {**told, "watch": one.watch, **values}


def _state(state: Steady, bodies: Sequence[str]) -> dict[str, Any]:
    return {
        "check": state.excitation,
        "at_rpm": state.speed_rpm,
        "frequency_hz": state.frequency_hz,
        "infinite": state.infinite,
        "applied_si": state.applied,
        "motion_real": dict(zip(bodies, state.motion.real.tolist(), strict=True)),
        "motion_imag": dict(zip(bodies, state.motion.imag.tolist(), strict=True)),
        "supports": [_force(one) for one in state.supports],
        "links": [_force(one) for one in state.links],
        "transmissibility": _known(state.transmissibility),
        "isolation_percent": _known(state.isolation_percent),
    }


def _force(one: PartForce) -> dict[str, Any]:
    return {
        "id": one.part,
        "name": one.label,
        "force_n": _known(one.force_n),
        "moment_n_m": _known(one.moment_nm),
    }


def _limit(limit: LimitCheck) -> dict[str, Any]:
    return {
        "id": limit.limit,
        "name": limit.label,
        "quantity": limit.quantity,
        "limit_si": limit.value,
        "worst_si": _known(limit.worst),
        "at_rpm": limit.worst_rpm,
        "worst_half_damping_si": _known(limit.worst_half),
        "worst_double_damping_si": _known(limit.worst_double),
        "exceeded": limit.exceeded,
    }


def curves_table(result: ResponseResult) -> str:
    """Return all curves over speed as comma-separated values with one line of headings."""
    keys = quantity_keys(result.request.model.motion)
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(["machine", "watch", "check", "speed_rpm", *keys])
    for machine in result.machines:
        labels = {watch.id: watch.label for watch in machine.watches}
        for curve in machine.curves:
            columns = [curve.nominal.values(quantity) for quantity in QUANTITIES]
            head = [machine.machine, labels[curve.watch], curve.excitation or "sum of amplitudes"]
            for i, rpm in enumerate(machine.speeds_rpm):
                row = [float(column[i]) for column in columns]
                writer.writerow(
                    [*head, repr(float(rpm)), *(repr(v) if math.isfinite(v) else "" for v in row)]
                )
    return out.getvalue()
