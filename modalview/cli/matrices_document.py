"""The modes of matrices as JSON."""

from pathlib import Path
from typing import Any

import numpy as np
import numpy.typing as npt

from modalview.cli.documents import counts_document, matrices_head
from modalview.cli.near_document import near_keys
from modalview.eigen.modes import Modes
from modalview.eigen.near import NearModes
from modalview.study import FoundMode, MatrixSolution

# Shapes of larger matrices would fill the output: the number of entries grows with the square.
SHAPES_UP_TO = 500


def modes_document(path: Path, solution: MatrixSolution, raw: Modes) -> dict[str, Any]:
    """Return the modes and why they can be believed; ``shape`` is null beyond 500 coordinates."""
    return {
        **matrices_head(path, solution.outlook),
        "modes": [_mode(mode, raw.shapes[:, i], raw, i) for i, mode in enumerate(solution.modes)],
        "rigid_body_modes": raw.rigid_body_modes,
        "unstable_modes": raw.unstable,
        "complete": raw.complete,
        "counts": counts_document(raw),
        "method": raw.method,
        "warnings": list(raw.warnings),
        "notes": list(solution.outlook.notes),
    }


def near_document(path: Path, solution: MatrixSolution, near: NearModes) -> dict[str, Any]:
    """Return the modes near a frequency and what proves them complete."""
    return {**modes_document(path, solution, near.modes), **near_keys(near)}


def _mode(mode: FoundMode, shape: npt.NDArray[np.float64], raw: Modes, column: int) -> dict[str, Any]:
    return {
        "number": mode.number or None,
        "frequency_hz": mode.frequency_hz,
        "numerical_error_hz": mode.numerical_error_hz,
        "range_hz": list(mode.range_hz),
        "kind": mode.kind,
        "repeated_with": list(mode.repeated_with),
        "growth_rate_per_s": float(raw.growth_rate[column]),
        "shape": _largest_one(shape) if shape.size <= SHAPES_UP_TO else None,
    }


def _largest_one(shape: npt.NDArray[np.float64]) -> list[float]:
    """Return a shape by coordinate, scaled so that its largest entry is 1."""
    largest = shape[int(np.argmax(np.abs(shape)))]
    scaled: list[float] = (shape / largest).tolist()
    return scaled
