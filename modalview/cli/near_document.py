"""Modes near a frequency: what they have beside all modes, as JSON and text."""

import math
from typing import Any

from modalview.cli.table import table
from modalview.eigen.near import NearModes

RAD_PER_HZ = 2 * math.pi


def near_keys(near: NearModes) -> dict[str, Any]:
    """Return what modes near a frequency have beside all modes."""
    certificate = near.certificate
    low, high = (math.sqrt(max(end, 0.0)) / RAD_PER_HZ for end in (certificate.low, certificate.high))
    return {
        "near_hz": math.sqrt(near.sigma) / RAD_PER_HZ,
        "certificate": {
            "low_hz": low,
            "high_hz": high,
            "counted": certificate.counted,
            "found": certificate.found,
        },
        "residual_history": [
            {"solves": entry.solves, "found": entry.found, "relative_residual": entry.residual}
            for entry in near.history
        ],
    }


def history_text(near: NearModes) -> str:
    """Return how the residuals fell, one test of convergence a line."""
    head = ["solves", "found", "largest residual"]
    rows = [[str(entry.solves), str(entry.found), f"{entry.residual:.1e}"] for entry in near.history]
    return table([head, *rows], right=frozenset({0, 1, 2}))
