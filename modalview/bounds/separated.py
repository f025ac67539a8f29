"""Groups of discs that a scaling of their own sets apart, each with the number of modes it proves."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.bounds.discs import Group
from modalview.bounds.forms import Forms, Matrix, magnitude
from modalview.factor.rounding import gamma

Array = npt.NDArray[np.float64]

# Divisions tried: where the centres, in ascending order, are farthest apart relative to their size.
CANDIDATES = 32

# Scalings tried between a division's lower and upper discs: the best one is within a few per cent of these.
SCALINGS = np.geomspace(1e-4, 1e4, 49)


@dataclass(frozen=True, slots=True)
class _Gap:
    """A gap between the discs of the lowest ``number`` centres and all others, 1/s**2.

    ``least`` and ``most`` are the ends of all discs under the scaling that opens it.
    """

    number: int
    low: float
    high: float
    least: float
    most: float


def separated_groups(forms: Forms) -> tuple[Group, ...]:
    """Return the groups of discs of S that scalings set apart, ascending; empty where none does.

    Parameters
    ----------
    forms : Forms

    Returns
    -------
    tuple of Group
        Together they hold every mode; ``number`` eigenvalues lie between ``low`` and ``high``. At least two,
        or none at all.

    Notes
    -----
    For a division into the discs of the p lowest centres and the others, D^-1 S D with d = t on the lower
    ones and 1 on the others divides what couples the two by t in the rows below and multiplies it by t in
    the rows above, and leaves the eigenvalues alone. Where some t opens a gap between both unions, exactly p
    eigenvalues lie below it. The width of the gap is concave in t; what the best t proves is then evaluated
    with its rounding. One t for each division: another scaling of single rows may separate what this does
    not.

    References
    ----------
    R. S. Varga (2004), Gersgorin and His Circles, sections 1.1 and 1.2.
    """
    if forms.modes < 2:
        return ()
    size = magnitude(forms.S)
    centres = np.asarray(forms.S.diagonal(), dtype=float)
    order = np.argsort(centres, kind="stable")
    found = [
        gap
        for number, lower, scaling in _promising(size, centres, order)
        if (gap := _proven(forms, centres, lower, scaling, number)) is not None
    ]
    found.sort(key=lambda gap: gap.number)
    if not found:
        return ()
    lows = [found[0].least, *(gap.high for gap in found)]
    highs = [*(gap.low for gap in found), found[-1].most]
    numbers = np.diff([0, *(gap.number for gap in found), forms.modes])
    return tuple(Group(low, high, int(n)) for low, high, n in zip(lows, highs, numbers, strict=True))


def _promising(
    size: Matrix, centres: Array, order: npt.NDArray[np.intp]
) -> Iterator[tuple[int, npt.NDArray[np.bool_], float]]:
    """Yield number, lower discs and scaling of the divisions that seem to open, rounding left aside."""
    sorted_centres = centres[order]
    step = np.diff(sorted_centres) / np.maximum(np.abs(sorted_centres[1:]), np.finfo(float).tiny)
    numbers = np.sort(np.argsort(-step, kind="stable")[:CANDIDATES]) + 1
    rank = np.empty(centres.size, dtype=np.intp)
    rank[order] = np.arange(centres.size)
    lower = rank[:, None] < numbers
    toward = size @ lower.astype(float)
    total = np.asarray(size @ np.ones(centres.size), dtype=float)[:, None]
    own = np.where(lower, toward, total - toward) - np.abs(centres)[:, None]
    across = np.where(lower, total - toward, toward)
    high = np.where(lower, centres[:, None] + own, -np.inf).max(axis=0)
    low = np.where(lower, np.inf, centres[:, None] - own).min(axis=0)
    for at in np.flatnonzero(high < low):
        below = lower[:, at]
        top = (centres + own[:, at])[below, None] + across[below, at, None] / SCALINGS
        bottom = (centres - own[:, at])[~below, None] - across[~below, at, None] * SCALINGS
        width = bottom.min(axis=0) - top.max(axis=0)
        best = int(np.argmax(width))
        if width[best] > 0:
            yield int(numbers[at]), below, float(SCALINGS[best])


def _proven(
    forms: Forms, centres: Array, lower: npt.NDArray[np.bool_], scaling: float, number: int
) -> _Gap | None:
    """Evaluate the discs of a scaling, their rounding included."""
    d = np.where(lower, scaling, 1.0)
    reach = (magnitude(forms.S) @ d) / d
    radii = np.maximum(reach - np.abs(centres), 0.0) + gamma(centres.size + 8) * reach + forms.rounding(d) / d
    bottom, top = np.nextafter(centres - radii, -np.inf), np.nextafter(centres + radii, np.inf)
    low, high = float(top[lower].max()), float(bottom[~lower].min())
    if low >= high:
        return None
    return _Gap(number, low, high, float(bottom.min()), float(top.max()))
