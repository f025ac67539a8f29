"""Damped modes as text and as JSON."""

from typing import Any

from modalview.cli.table import table
from modalview.cli.texts import wrapped_lines
from modalview.study.damped import DampedMode, DampedSolution
from modalview.units.show import shown_digits, significant


def damped_text(found: DampedSolution) -> str:
    """Return a table of the damped modes with its evidence; empty where nothing damps."""
    parts = [_table(found)] if found.modes else []
    parts += [wrapped_lines(texts) for texts in (found.evidence, found.notes) if texts]
    return "\n\n".join(parts)


def _table(found: DampedSolution) -> str:
    given = found.outlook.request.model.damping
    if found.source == "model damping" and given is not None and given.ratio is not None:
        return f"With the damping given for the whole model: {given.ratio.text} of critical in every mode."
    dashpots = found.source == "dashpots"
    title = "With the dashpots:" if dashpots else "With the damping given for the whole model:"
    head = ["root" if dashpots else "mode", "damped frequency", "ratio", "decay", "time constant", "name"]
    rows = [_row(mode) for mode in found.modes]
    return f"{title}\n{table([head, *rows], right=frozenset({0, 1, 2, 3, 4}))}"


def _row(mode: DampedMode) -> list[str]:
    digits = shown_digits(abs(mode.root), mode.error_per_s) if mode.root else 1
    turning = mode.damped_hz > 0
    return [
        str(mode.number),
        f"{significant(mode.damped_hz, digits)} Hz" if turning else "none",
        "" if mode.damping_ratio is None else _percent(mode.damping_ratio),
        f"{significant(mode.decay_per_s, min(digits, 4))} 1/s",
        "" if mode.time_constant_s is None else f"{significant(mode.time_constant_s, 3)} s",
        mode.name,
    ]


def _percent(ratio: float) -> str:
    return f"{significant(100 * ratio, 3)} %" if ratio >= 1e-8 else "0 %"


def damped_document(found: DampedSolution) -> dict[str, Any]:
    """Return the damped modes for JSON; an empty list where nothing damps."""
    raw = found.raw
    return {
        "damping_source": found.source,
        "damped_modes": [_mode(mode, found) for mode in found.modes],
        "damped_roots": None if raw is None else raw.number,
        "damped_zero_roots": None if raw is None else raw.zero_roots,
        "damped_evidence": list(found.evidence),
        "damped_notes": list(found.notes),
    }


def _mode(mode: DampedMode, found: DampedSolution) -> dict[str, Any]:
    bodies = found.outlook.request.model.bodies
    return {
        "number": mode.number,
        "name": mode.name,
        "kind": mode.kind,
        "root_real_per_s": mode.root.real,
        "root_imag_rad_per_s": mode.root.imag,
        "damped_hz": mode.damped_hz,
        "natural_hz": mode.natural_hz,
        "damping_ratio": mode.damping_ratio,
        "decay_per_s": mode.decay_per_s,
        "log_decrement": mode.log_decrement,
        "time_constant_s": mode.time_constant_s,
        "overdamped": mode.overdamped,
        "partner": mode.partner,
        "estimated_error_per_s": mode.error_per_s,
        "shape_real": {b.id: row.real.tolist() for b, row in zip(bodies, mode.motion, strict=True)},
        "shape_imag": {b.id: row.imag.tolist() for b, row in zip(bodies, mode.motion, strict=True)},
    }
