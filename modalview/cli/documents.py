"""Results as JSON: stable keys, SI, the unit in each key."""

import math
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import numpy as np

from modalview.advice.doubt import Doubt
from modalview.bounds.discs import Discs, Group
from modalview.cli.speedtexts import run_up_document
from modalview.eigen.modes import Modes
from modalview.resonance.results import Check
from modalview.study import FoundMode, MatrixOutlook, MatrixSolution, Outlook, Share, Solution
from modalview.study.matrices import ABSENT
from modalview.study.runup import passed_on_run_up

RAD_PER_HZ = 2 * math.pi


def bounds_document(path: Path, outlook: Outlook | MatrixOutlook) -> dict[str, Any]:
    """Return what is known before a solve."""
    bounds = outlook.bounds
    return {
        **head(path, outlook),
        "lowest_hz": _pair(bounds.lowest_hz),
        "highest_hz": _pair(bounds.highest_hz),
        "rigid_body_modes": bounds.rigid_body_modes,
        "bands": [_band_document(check) for check in outlook.checks],
        "gershgorin": {
            "rows": _discs(bounds.rows),
            "columns": _discs(bounds.columns),
            "symmetric": _discs(bounds.symmetric),
            "separated": _groups(bounds.separated),
        },
        "norms_rad2_per_s2": {
            "one": bounds.norms.one,
            "infinity": bounds.norms.infinity,
            "frobenius": bounds.norms.frobenius,
        },
        "notes": [*outlook.notes, *bounds.notes],
        "doubts": [doubt_document(one) for one in outlook.doubts] if isinstance(outlook, Outlook) else [],
    }


def doubt_document(doubt: Doubt) -> dict[str, Any]:
    """Return one doubt about the model."""
    return {"rule": doubt.rule, "parts": list(doubt.parts), "text": doubt.text, "effect": doubt.effect}


def _band_document(check: Check) -> dict[str, Any]:
    low, high = check.band.nominal
    return {
        "check": check.band.check,
        "from_hz": low / RAD_PER_HZ,
        "to_hz": high / RAD_PER_HZ,
        "modes_inside": check.inside,
        "modes_possible": check.possible,
        "modes_certain": check.certain,
    }


def _discs(discs: Discs | None) -> dict[str, Any] | None:
    """Return discs in rad^2/s^2: intervals on the axis of lambda = omega^2, which may reach below zero."""
    if discs is None:
        return None
    return {
        "low_rad2_per_s2": (discs.centres - discs.radii).tolist(),
        "high_rad2_per_s2": (discs.centres + discs.radii).tolist(),
        "groups": _groups(discs.groups),
    }


def _groups(groups: Sequence[Group]) -> list[dict[str, Any]]:
    return [
        {"low_rad2_per_s2": group.low, "high_rad2_per_s2": group.high, "modes": group.number}
        for group in groups
    ]


def modes_document(path: Path, solution: Solution) -> dict[str, Any]:
    """Return the modes and why they can be believed."""
    raw = solution.raw
    return {
        **head(path, solution.outlook),
        "modes": [_mode_document(mode, i, solution) for i, mode in enumerate(solution.modes)],
        "rigid_body_modes": raw.rigid_body_modes,
        "unstable_modes": raw.unstable,
        "complete": raw.complete,
        "counts": counts_document(raw),
        "method": raw.method,
        "warnings": list(raw.warnings),
    }


def counts_document(raw: Modes) -> list[dict[str, Any]]:
    """Return the counts that confirm that no mode was missed."""
    return [
        {"at_hz": math.sqrt(max(c.sigma, 0.0)) / RAD_PER_HZ, "found": c.found, "counted": c.counted}
        for c in raw.counts
    ]


def _mode_document(mode: FoundMode, column: int, solution: Solution) -> dict[str, Any]:
    raw = solution.raw
    return {
        "number": mode.number or None,
        "frequency_hz": mode.frequency_hz,
        "numerical_error_hz": mode.numerical_error_hz,
        "range_hz": list(mode.range_hz),
        "name": mode.name,
        "kind": mode.kind,
        "repeated_with": list(mode.repeated_with),
        "growth_rate_per_s": float(raw.growth_rate[column]),
        "strain_energy": _shares(mode.strain, "share"),
        "kinetic_energy": _shares(mode.kinetic, "share"),
        "sensitivity": _shares(mode.sensitivity, "dlnf_dlnvalue"),
        "effective_mass": {share.id: share.fraction for share in mode.effective_mass},
        "modal_mass_kg": solution.modal_mass[column],
        "shape": _shape(mode, solution),
    }


def _shares(shares: Sequence[Share], key: str) -> list[dict[str, Any]]:
    return [{"id": share.id, "name": share.label, key: share.fraction} for share in shares]


def _shape(mode: FoundMode, solution: Solution) -> dict[str, list[float]]:
    """Return x, y, z (m) and rx, ry, rz (rad) of every body, the largest motion scaled to 1."""
    bodies = solution.outlook.request.model.bodies
    return {body.id: np.asarray(row).tolist() for body, row in zip(bodies, mode.motion, strict=True)}


def check_document(path: Path, solution: Solution | MatrixSolution) -> dict[str, Any]:
    """Return the verdicts."""
    outlook = solution.outlook
    return {
        **head(path, outlook),
        "verdict": outlook.verdict.value if outlook.verdict else None,
        "sentence": solution.sentence,
        "checks": [_check_document(check) for check in solution.checks],
        "run_up": run_up_document(passed_on_run_up(solution)),
        "not_checked": list(outlook.not_checked),
        "notes": list(outlook.notes),
    }


def _check_document(check: Check) -> dict[str, Any]:
    return {
        "check": check.band.check,
        "label": check.band.label,
        "verdict": check.verdict.value,
        "wording": check.wording,
        "reason": check.reason,
        "proven": check.proof,
        "excitation_hz": _hz(check.band.excitation),
        "band_hz": _hz(check.band.nominal),
        "tolerance_band_hz": _hz(check.band.tolerance),
        "margin_percent": [100 * side for side in check.band.margin],
        "modes_inside": check.inside,
        "modes_possible": check.possible,
        "modes_certain": check.certain,
        "nearest_mode": check.nearest_mode,
        "separation_percent": _percent(check.separation),
        "worst_separation_percent": _percent(check.worst_separation),
        "deciding_case": check.deciding_case,
        "undecided": list(check.undecided),
        "drives": [{"mode": d.mode, "share": d.share, "drive": d.drive.value} for d in check.drives],
    }


def head(path: Path, outlook: Outlook | MatrixOutlook) -> dict[str, Any]:
    """Return what every document begins with."""
    if isinstance(outlook, MatrixOutlook):
        return matrices_head(path, outlook)
    model = outlook.request.model
    return {"file": str(path), "title": model.title, "degrees_of_freedom": outlook.assembly.n}


def matrices_head(path: Path, outlook: MatrixOutlook) -> dict[str, Any]:
    """Return what was read and taken for granted; ``absent`` lists what matrices cannot tell."""
    request = outlook.request
    mass = request.pair.mass_file
    return {
        "file": str(path),
        "mass_file": None if mass is None else str(mass),
        "title": "",
        "degrees_of_freedom": outlook.pencil.n,
        "tolerance_k_percent": 100 * request.tolerance_k,
        "tolerance_m_percent": 100 * request.tolerance_m,
        "absent": list(ABSENT),
    }


def _hz(span: tuple[float, float]) -> list[float]:
    return [edge / RAD_PER_HZ for edge in span]


def _pair(span: tuple[float, float] | None) -> list[float] | None:
    return None if span is None else list(span)


def _percent(share: float | None) -> float | None:
    return None if share is None else 100 * share
