"""Modes near a frequency chosen from all modes, where the model is small enough for that."""

from dataclasses import replace
from itertools import pairwise

import numpy as np

from modalview.eigen.modes import Modes
from modalview.eigen.near_certificate import Certificate

# All modes of a model of this size are found in half a second.
SMALL = 500


def chosen(modes: Modes, sigma: float, count: int, tie: float) -> tuple[Modes, tuple[int, ...], Certificate]:
    """Choose the modes whose eigenvalues lie nearest to a value, rigid-body modes left out.

    Parameters
    ----------
    modes : Modes
        All of a pencil.
    sigma : float
        rad**2/s**2.
    count : int
        At least so many, never part of a tie.
    tie : float
        Relative difference of distances up to which they are a tie.

    Returns
    -------
    modes : Modes
        The chosen ones.
    numbers : tuple of int
        Their numbers among all, from 1.
    certificate : Certificate
        From the intervals of all modes, which hold one eigenvalue each where ``modes.complete``.
    """
    other = np.ones(modes.number, dtype=bool)
    other[modes.unstable : modes.unstable + modes.rigid_body_modes] = False
    places = np.flatnonzero(other)
    distance = np.abs(modes.eigenvalues[places] - sigma)
    last = float(np.sort(distance)[min(count, places.size) - 1])
    near = places[distance <= last * (1 + tie)]
    start, stop = int(near[0]), int(near[-1]) + 1
    picked = [start + i for i in np.flatnonzero(other[start:stop]).tolist()]
    low, high = float(modes.lower[start]), float(modes.upper[stop - 1])
    certificate = Certificate(low, high, len(picked) if modes.complete else None, len(picked), start)
    return _sliced(modes, picked), tuple(place + 1 for place in picked), certificate


def _sliced(modes: Modes, picked: list[int]) -> Modes:
    where = np.array(picked)
    arrays = {
        name: getattr(modes, name)[where]
        for name in (
            "eigenvalues", "lower", "upper", "frequency_hz", "numerical_error_hz", "growth_rate", "residuals",
        )
    }  # fmt: skip
    kept = [int(np.sum((where >= start) & (where < stop))) for start, stop in modes.groups]
    edges = np.cumsum([0, *(number for number in kept if number)]).tolist()
    return replace(
        modes,
        **arrays,
        shapes=modes.shapes[:, where],
        rigid_body_modes=0,
        unstable=int(np.sum(where < modes.unstable)),
        groups=tuple(pairwise(edges)),
    ).frozen()
