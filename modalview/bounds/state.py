"""Where the roots of a model with dashpots lie in the complex plane, before any solve."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

from modalview.assembly.statematrix import StateMatrix
from modalview.factor.rounding import SLACK, gamma

Array = npt.NDArray[np.float64]
Kind = Literal["rows", "columns", "scaled"]

# Power steps on the scaling, and its smallest entry against the largest: smaller ones blow up rounding.
STEPS = 20
FLOOR = 1e-6
# Operations behind a singular value, per row and column of the matrix.
SVD_STEPS = 12


@dataclass(frozen=True, slots=True, eq=False)
class StateDiscs:
    """Discs around points of the real axis; every root but the zero ones lies in their union.

    Parameters
    ----------
    centres, radii : arrays (states,)
        1/s; radii cover rounding.
    kind : str
        By "rows" or "columns" of the balanced state matrix, or by rows "scaled" to bring the farthest
        disc in.
    """

    centres: Array
    radii: Array
    kind: Kind

    def hold(self, roots: npt.NDArray[np.complex128]) -> npt.NDArray[np.bool_]:
        """Return which roots (m,) lie in some disc."""
        near = np.abs(roots[:, None] - self.centres) <= self.radii
        return np.asarray(near.any(axis=1))

    @property
    def reach(self) -> float:
        """Farthest point of any disc from the origin, 1/s."""
        return float((np.abs(self.centres) + self.radii).max(initial=0.0))


@dataclass(frozen=True, slots=True)
class Rectangle:
    """Bendixson's rectangle: -decay <= Re <= 0 and |Im| <= frequency, for every root.

    Parameters
    ----------
    decay : float, 1/s
        Largest rate at which the dashpots alone could take a motion down.
    frequency : float, rad/s
        Largest singular value of the undamped part.
    """

    decay: float
    frequency: float

    def hold(self, roots: npt.NDArray[np.complex128]) -> npt.NDArray[np.bool_]:
        """Return which roots (m,) lie inside."""
        inside = (-self.decay <= roots.real) & (roots.real <= 0) & (np.abs(roots.imag) <= self.frequency)
        return np.asarray(inside)


@dataclass(frozen=True, slots=True, eq=False)
class StateRegions:
    """Regions that hold the roots, each rounded outward.

    Parameters
    ----------
    rows, columns, scaled : StateDiscs
    rectangle : Rectangle
    one, infinity, frobenius : float, 1/s
        Norms of the state matrix: no root is farther from the origin.
    zero_roots : int
        Roots at 0 known from structure; the discs need not hold them.
    """

    rows: StateDiscs
    columns: StateDiscs
    scaled: StateDiscs
    rectangle: Rectangle
    one: float
    infinity: float
    frobenius: float
    zero_roots: int

    @property
    def circle(self) -> float:
        """The smallest of the norms, 1/s."""
        return min(self.one, self.infinity, self.frobenius)


def state_regions(state: StateMatrix) -> StateRegions:
    """Enclose the roots of the balanced state matrix [[-E E^T, F], [-F^T, -H^T H]].

    Notes
    -----
    Discs by rows, by columns, and of D^-1 A D with a positive diagonal D from power steps. The rectangle:
    real parts lie between the extreme eigenvalues of the symmetric part, -diag(E E^T, H^T H), and imaginary
    parts within the norm of the skew part, ||F||. Cost: two singular value decompositions of half the size.

    References
    ----------
    S. Gershgorin (1931), Izv. Akad. Nauk SSSR 6, 749-754. I. Bendixson (1902), Acta Mathematica 25, 359-365.
    R. A. Horn, C. R. Johnson (2013), Matrix Analysis, 2nd ed., section 5.6 (norms).
    """
    matrix, off = state.matrix, state.rounding
    scaled = _discs(matrix, _scaling(matrix), off, "scaled")
    ones = np.ones(len(matrix))
    rows, columns = _discs(matrix, ones, off, "rows"), _discs(matrix.T, ones, off, "columns")
    total = float(np.linalg.norm(matrix)) * (1 + gamma(matrix.size + 4))
    return StateRegions(
        rows=rows,
        columns=columns,
        scaled=scaled,
        rectangle=_rectangle(state),
        one=_up(columns.reach),
        infinity=_up(rows.reach),
        frobenius=_up(total + SLACK * np.sqrt(len(matrix)) * off),
        zero_roots=state.zero_roots,
    )


def _rectangle(state: StateMatrix) -> Rectangle:
    growth = 1 + gamma(SVD_STEPS * (state.stretch.size + state.relax.size + state.resist.size + 1))
    decay = max(_norm(state.relax), _norm(state.resist)) ** 2
    frequency = _norm(state.stretch)
    return Rectangle(
        decay=_up(decay * growth**2 + SLACK * state.rounding),
        frequency=_up(frequency * growth + SLACK * state.rounding),
    )


def _norm(block: Array) -> float:
    return float(np.linalg.norm(block, 2)) if block.size else 0.0


def _up(value: float) -> float:
    return float(np.nextafter(value * (1 + gamma(4)), np.inf))


def _scaling(matrix: Array) -> Array:
    """Return positive d (n,) after power steps with |A|, shifted so that they settle.

    |A| couples forces with velocities only, so that plain steps would swing between two vectors.
    """
    size = np.abs(matrix)
    shift = float(size.sum(axis=1).max(initial=0.0)) / 2
    scaling = np.ones(len(matrix))
    for _ in range(STEPS):
        raised = size @ scaling + shift * scaling
        largest = float(raised.max(initial=0.0))
        if largest == 0:
            break
        scaling = np.maximum(raised / largest, FLOOR)
    return scaling


def _discs(matrix: Array, scaling: Array, off: float, kind: Kind) -> StateDiscs:
    """Return the discs of D^-1 A D by rows; an error of norm ``off`` adds off ||d||/d_i to a radius."""
    centres = matrix.diagonal().copy()
    reach = np.abs(matrix) @ scaling / scaling
    radii = np.maximum(reach - np.abs(centres), 0.0) + gamma(centres.size + 8) * reach
    radii = np.nextafter(radii + SLACK * off * float(np.linalg.norm(scaling)) / scaling, np.inf)
    for array in (centres, radii):
        array.setflags(write=False)
    return StateDiscs(centres, radii, kind)
