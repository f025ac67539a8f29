"""Varied values as JSON and as rows of a table: SI, with the unit in each key or heading."""

import math
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import Any

import numpy as np
import numpy.typing as npt

from modalview.model.parts import Motion
from modalview.study.vary_results import Amplitudes, Grid, Meet, Samples

Array = npt.NDArray[np.float64]

# Ends and middle of what is shown of a sample, in per cent.
LOWER, MIDDLE, UPPER = 2.5, 50.0, 97.5


def grid_points(grid: Grid) -> Iterator[tuple[tuple[float, ...], Array]]:
    """Yield every point with its frequencies, Hz; the last value runs fastest."""
    modes = grid.frequencies_hz.shape[-1]
    axes = [numbers for _, numbers in grid.axes]
    points = np.stack(np.meshgrid(*axes, indexing="ij"), axis=-1).reshape(-1, len(axes))
    for point, hertz in zip(points, grid.frequencies_hz.reshape(-1, modes), strict=True):
        yield tuple(point.tolist()), hertz


def grid_document(path: Path, grid: Grid) -> dict[str, Any]:
    """Return a grid for JSON."""
    verdicts: Sequence[tuple[str, ...]] = grid.verdicts
    return {
        "file": str(path),
        "title": grid.request.model.title,
        "degrees_of_freedom": grid.coordinates,
        "values": [
            {"value": one.name, "label": one.label, "unit": one.quantity.si_unit, "as_typed": one.nominal}
            for one, _ in grid.axes
        ],
        "checks": [{"check": check, "label": label} for check, label in grid.checks],
        "points": [
            {
                "at": list(at),
                "frequencies_hz": hertz.tolist(),
                "verdicts": list(verdicts[number]),
                "verdict": grid.worst[number] if grid.worst else None,
            }
            for number, (at, hertz) in enumerate(grid_points(grid))
        ],
        "meets": [_meet(one) for one in grid.meets],
        "clear": [list(ends) for ends in grid.clear],
        "notes": list(grid.notes),
    }


def _meet(one: Meet) -> dict[str, Any]:
    return {
        "modes": list(one.lines),
        "at": one.value,
        "frequency_hz": one.frequency_hz,
        "gap_hz": one.gap_hz,
        "crossing": one.crossing,
    }


def samples_document(path: Path, drawn: Samples) -> dict[str, Any]:
    """Return a sample for JSON."""
    request = drawn.request
    return {
        "file": str(path),
        "title": request.model.title,
        "degrees_of_freedom": drawn.coordinates,
        "samples": request.samples,
        "seed": request.seed,
        "spread": request.spread,
        "drawn": [{"value": name, "label": label} for name, label in drawn.drawn],
        "modes": [_mode(drawn, number) for number in range(drawn.nominal_hz.size)],
        "in_band": [
            {"check": one.check, "label": one.label, "samples": one.samples, "share": one.share}
            for one in drawn.in_band
        ],
        "motion": [_motion(one, motion_unit(drawn)) for one in drawn.amplitudes],
        "notes": list(drawn.notes),
    }


def _mode(drawn: Samples, number: int) -> dict[str, Any]:
    hertz = drawn.frequencies_hz[:, number]
    lower, middle, upper = np.percentile(hertz, (LOWER, MIDDLE, UPPER)).tolist()
    return {
        "number": number + 1,
        "frequency_hz": float(drawn.nominal_hz[number]),
        "sampled_hz": [float(hertz.min()), float(hertz.max())],
        "middle_95_hz": [lower, upper],
        "median_hz": middle,
        "range_hz": None if drawn.proven_hz is None else drawn.proven_hz[number].tolist(),
    }


def motion_unit(drawn: Samples) -> str:
    """Return the unit of the motion of a sample."""
    return "rad/s" if drawn.request.model.motion is Motion.SHAFT_TRAIN else "m/s"


def upper_and_middle(values: Array) -> tuple[float, float]:
    """Return the median and the 97.5th of a hundred, without interpolation: some motions have no bound."""
    middle, upper = np.percentile(values, (MIDDLE, UPPER), method="inverted_cdf").tolist()
    return middle, upper


def _motion(one: Amplitudes, unit: str) -> dict[str, Any]:
    middle, upper = upper_and_middle(one.sampled)
    return {
        "machine": one.machine,
        "point": one.watch,
        "unit": f"{unit} rms",
        "as_typed": _finite(one.nominal),
        "median": _finite(middle),
        "upper_97_5": _finite(upper),
        "highest": _finite(float(one.sampled.max())),
    }


def _finite(value: float) -> float | None:
    return value if math.isfinite(value) else None


def grid_rows(grid: Grid) -> Iterator[list[object]]:
    """Yield a grid as rows of a table, headings first."""
    modes = grid.frequencies_hz.shape[-1]
    heads: list[object] = [f"{one.name} [{one.quantity.si_unit}]" for one, _ in grid.axes]
    yield [*heads, *(f"mode {n + 1} [Hz]" for n in range(modes)), *(check for check, _ in grid.checks)]
    for number, (at, hertz) in enumerate(grid_points(grid)):
        yield [*at, *hertz.tolist(), *grid.verdicts[number]]


def sample_rows(drawn: Samples) -> Iterator[list[object]]:
    """Yield a sample as rows of a table, headings first."""
    unit = motion_unit(drawn)
    heads: list[object] = [f"{name} [SI]" for name, _ in drawn.drawn]
    heads += [f"mode {n + 1} [Hz]" for n in range(drawn.nominal_hz.size)]
    yield [*heads, *(f"{one.watch} [{unit} rms]" for one in drawn.amplitudes)]
    motion = [one.sampled for one in drawn.amplitudes]
    for number, (values, hertz) in enumerate(zip(drawn.values, drawn.frequencies_hz, strict=True)):
        yield [*values.tolist(), *hertz.tolist(), *(float(one[number]) for one in motion)]
