"""Eigenvalues, intervals and shapes put together as modes: unstable, rigid-body, elastic."""

from itertools import pairwise

import numpy as np
import numpy.typing as npt

from modalview.eigen.completeness import Signs
from modalview.eigen.intervals import Groups, Intervals
from modalview.eigen.modes import Modes
from modalview.eigen.rayleigh import Rayleigh

Array = npt.NDArray[np.float64]

# Relative distance of eigenvalues up to which they are one repeated frequency.
REPEATED = 1e-9


def ascending(shapes: Array, found: Rayleigh) -> tuple[Array, Rayleigh]:
    """Sort shapes and their quotients by the quotients."""
    order = np.argsort(found.quotient, kind="stable")
    sorted_ = Rayleigh(found.quotient[order], found.quotient_error[order], found.residual[order])
    return shapes[:, order], sorted_


def gathered(rigid_body: Array, shapes: Array, found: Rayleigh, intervals: Intervals, sign: Signs) -> Modes:
    """Put the known rigid-body modes (n, r) between unstable and elastic ones; counts are added later."""
    known, start = rigid_body.shape[1], sign.unstable
    zeros, rigid = np.zeros(known), known + sign.zeros

    def place(elastic: Array) -> Array:
        return np.concatenate([elastic[:start], zeros, elastic[start:]])

    lower, upper = place(intervals.lower), place(intervals.upper)
    upper[:start] = np.minimum(upper[:start], 0.0)
    lower[start + rigid :] = np.maximum(lower[start + rigid :], 0.0)
    values = np.clip(place(found.quotient), lower, upper)
    values[start : start + rigid] = 0.0
    frequency = np.sqrt(np.maximum(values, 0.0)) / (2 * np.pi)
    return Modes(
        eigenvalues=values,
        lower=lower,
        upper=upper,
        frequency_hz=frequency,
        numerical_error_hz=_frequency_error(frequency, lower, upper),
        growth_rate=np.sqrt(np.maximum(-values, 0.0)),
        shapes=np.concatenate([shapes[:, :start], rigid_body, shapes[:, start:]], axis=1),
        rigid_body_modes=rigid,
        unstable=start,
        groups=_groups(values, intervals, sign, known),
        residuals=place(found.residual),
        counts=(),
        complete=None,
        method="",
        warnings=sign.warnings,
    )


def _frequency_error(frequency: Array, lower: Array, upper: Array) -> Array:
    low, high = (np.sqrt(np.maximum(end, 0.0)) / (2 * np.pi) for end in (lower, upper))
    # The conversions above round too: a few units, outward; nothing where zero is exact.
    rounding = 4 * np.finfo(float).eps * np.maximum(frequency, high)
    error: Array = np.maximum(np.maximum(high - frequency, frequency - low), 0.0) + rounding
    return error


def _groups(values: Array, intervals: Intervals, sign: Signs, known: int) -> Groups:
    """Return runs of one frequency: rigid-body modes, clusters that overlap, values REPEATED apart."""
    start, rigid = sign.unstable, known + sign.zeros
    joined = np.diff(values) <= REPEATED * np.abs(values[1:])
    for first, last in intervals.clusters:
        shift = known if first >= start else 0
        joined[first + shift : last + shift - 1] = True
    if rigid:
        joined[start : start + rigid - 1] = True
        joined[[edge for edge in (start - 1, start + rigid - 1) if 0 <= edge < joined.size]] = False
    edges = [0, *(np.flatnonzero(~joined) + 1).tolist(), values.size]
    return tuple(pairwise(edges))
