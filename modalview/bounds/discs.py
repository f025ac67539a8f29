"""Gershgorin discs and the groups they form."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil
from modalview.bounds.forms import Forms, Matrix, mass_is_diagonal, row_sums, scaled
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
    ratio, rounding = scaled_ratio(pencil, forms)
    return (
        _discs(ratio, row_sums(rounding), "rows"),
        _discs(ratio.T, row_sums(rounding.T), "columns"),
        _discs(forms.S, forms.rounding(np.ones(forms.modes)), "symmetric"),
    )


def scaled_ratio(pencil: Pencil, forms: Forms) -> tuple[Matrix, Matrix]:
    """Return the scaled M^-1 K (modes, modes) and a bound of its rounding, entry by entry; 1/s**2."""
    massy = ~pencil.massless
    scale = pencil.scale[massy]
    if mass_is_diagonal(pencil):
        mass = pencil.M.diagonal()[massy]
        left, right = scale / np.sqrt(mass), np.sqrt(mass) / scale
        share = SLACK * (forms.share + gamma(8))
        return scaled(forms.S, left, right), scaled(forms.spread, share * left, right)
    root = sp.csr_array(pencil.basis)[massy]
    width = int(np.diff(root.indptr).max(initial=1))
    block = sp.csr_array(pencil.M)[massy][:, massy]
    share = SLACK * (forms.share + gamma(6 * width + 10))
    ratio = root @ forms.S @ (root.T @ block)
    rounding = abs(root) @ forms.spread @ (abs(root).T @ abs(block))
    return scaled(ratio, scale, 1 / scale), scaled(rounding, share * scale, 1 / scale)


def _discs(matrix: Matrix, rounding: Array, kind: Kind) -> Discs:
    centres = np.array(matrix.diagonal())
    reach = row_sums(matrix)
    radii = np.maximum(reach - np.abs(centres), 0.0) + gamma(centres.size + 4) * reach
    radii = np.nextafter(radii + rounding, np.inf)
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
