"""Gershgorin discs and the groups they form."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil
from modalview.bounds.forms import Forms, Matrix, magnitude, mass_is_diagonal, row_sums, scaled
from modalview.factor.rounding import SLACK, gamma

Array = npt.NDArray[np.float64]
Kind = Literal["rows", "columns", "symmetric"]


@dataclass(frozen=True, slots=True)
class Group:
    """Discs that overlap: an interval apart from all others.

    Parameters
    ----------
    low, high : float
        rad**2/s**2, rounded outward; ``low`` may be below zero.
    number : int
        Discs, and so eigenvalues, inside.
    """

    low: float
    high: float
    number: int


@dataclass(frozen=True, slots=True, eq=False)
class Discs:
    """One disc for each coordinate with inertia; every eigenvalue lies in their union.

    Parameters
    ----------
    centres, radii : arrays (modes,)
        rad**2/s**2, in the order of the coordinates (massless ones left out); radii cover rounding.
    kind : str
        "rows" or "columns" of the scaled M^-1 K, or "symmetric": of S.
    groups : tuple of Group
        Ascending. A group apart holds as many eigenvalues as discs.
    """

    centres: Array
    radii: Array
    kind: Kind
    groups: tuple[Group, ...]


def have_discs(pencil: Pencil) -> bool:
    """Whether discs mean something: not where a full M of others couples everything to everything."""
    return bool(pencil.coordinates) or mass_is_diagonal(pencil)


def discs_of(pencil: Pencil, forms: Forms) -> tuple[Discs, Discs, Discs] | None:
    """Return the discs by rows, by columns and of S, or None for a full M of others.

    Notes
    -----
    M^-1 K of the condensed coordinates is V S V^T M with V the rows of W that carry inertia (V V^T = M^-1),
    taken in coordinates of one unit (``Pencil.scale``), so that metres or millimetres give the same discs.
    Every eigenvalue lies in the union of the discs; a group of discs apart from the others holds as many
    eigenvalues as discs. All eigenvalues are real here, so discs are intervals.

    References
    ----------
    S. Gershgorin (1931), Izv. Akad. Nauk SSSR 6, 749-754. G. H. Golub, C. F. Van Loan (1996), Matrix
    Computations, 3rd ed., section 7.2.
    """
    if not have_discs(pencil):
        return None
    by_rows, by_columns = _sums_of_ratio(pencil, forms)
    ones = np.ones(forms.modes)
    own = _Sums(np.array(forms.S.diagonal()), row_sums(forms.S), forms.rounding(ones))
    return _discs(by_rows, "rows"), _discs(by_columns, "columns"), _discs(own, "symmetric")


@dataclass(frozen=True, slots=True, eq=False)
class _Sums:
    """Diagonal of a matrix, sums of |entries| of its rows, and a bound of the rounding in each."""

    centres: Array
    reach: Array
    rounding: Array


def _sums_of_ratio(pencil: Pencil, forms: Forms) -> tuple[_Sums, _Sums]:
    """Return the sums of the scaled M^-1 K by rows and by columns."""
    if not mass_is_diagonal(pencil):
        ratio, rounding = _scaled_ratio(pencil, forms)
        centres = np.array(ratio.diagonal())
        return (
            _Sums(centres, row_sums(ratio), row_sums(rounding)),
            _Sums(centres, row_sums(ratio.T), row_sums(rounding.T)),
        )
    # D^-1 S D with D = sqrt(m) / scale: products with |S| give the sums without forming it
    massy = ~pencil.massless
    right = np.sqrt(pencil.M.diagonal()[massy]) / pencil.scale[massy]
    size, centres = magnitude(forms.S), np.array(forms.S.diagonal())
    share = SLACK * (forms.share + gamma(8))
    found = tuple(_Sums(centres, (size @ d) / d, share * (forms.spread @ d) / d) for d in (right, 1 / right))
    return found[0], found[1]


def _scaled_ratio(pencil: Pencil, forms: Forms) -> tuple[Matrix, Matrix]:
    """Return the scaled M^-1 K (modes, modes) and a bound of its rounding, entry by entry; 1/s**2."""
    massy = ~pencil.massless
    scale = pencil.scale[massy]
    root = sp.csr_array(pencil.basis)[massy]
    width = int(np.diff(root.indptr).max(initial=1))
    block = sp.csr_array(pencil.M)[massy][:, massy]
    share = SLACK * (forms.share + gamma(6 * width + 10))
    ratio = root @ forms.S @ (root.T @ block)
    rounding = abs(root) @ forms.spread @ (abs(root).T @ abs(block))
    return scaled(ratio, scale, 1 / scale), scaled(rounding, share * scale, 1 / scale)


def _discs(sums: _Sums, kind: Kind) -> Discs:
    centres = sums.centres.copy()
    radii = np.maximum(sums.reach - np.abs(centres), 0.0) + gamma(centres.size + 8) * sums.reach
    radii = np.nextafter(radii + sums.rounding, np.inf)
    for array in (centres, radii):
        array.setflags(write=False)
    return Discs(centres, radii, kind, groups_of(centres, radii))


def groups_of(centres: Array, radii: Array) -> tuple[Group, ...]:
    """Merge overlapping intervals [centre - radius, centre + radius] into groups, ascending.

    Examples
    --------
    >>> [(g.low < 1, g.high > 3, g.number) for g in groups_of(np.array([1.5, 2.5]), np.array([0.6, 0.6]))]
    [(True, True, 2)]
    """
    low, high = np.nextafter(centres - radii, -np.inf), np.nextafter(centres + radii, np.inf)
    order = np.argsort(low, kind="stable")
    low, reached = low[order], np.maximum.accumulate(high[order])
    starts = np.flatnonzero(np.concatenate([[True], low[1:] > reached[:-1]]))
    ends = np.append(starts[1:], low.size)
    return tuple(
        Group(float(low[start]), float(reached[end - 1]), int(end - start))
        for start, end in zip(starts, ends, strict=True)
        if end > start
    )
