"""Intervals that hold the eigenvalues: linear and quadratic residual bounds, for clusters as a whole."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.eigen.rayleigh import Energy, Rayleigh

Array = npt.NDArray[np.float64]
Groups = tuple[tuple[int, int], ...]

# Shapes farther than this from orthonormal prove nothing about the number of eigenvalues near them.
UNUSABLE = 0.5


@dataclass(frozen=True, slots=True, eq=False)
class Intervals:
    """Intervals of all eigenvalues.

    Parameters
    ----------
    lower, upper : array (m,)
    clusters : tuple of (start, stop)
        Runs whose linear intervals overlap no other run's: each run holds exactly as many eigenvalues.
    separate : bool
        False where a cluster's shapes are too far from orthonormal for that conclusion.
    """

    lower: Array
    upper: Array
    clusters: Groups
    separate: bool


def enclose(
    energy: Energy,
    shapes: Array,
    found: Rayleigh,
    zeros: int,
    *,
    outside: tuple[float, float] = (-np.inf, np.inf),
) -> Intervals:
    """Enclose every eigenvalue of the pencil, from Rayleigh quotients in ascending order.

    Parameters
    ----------
    energy : Energy
        Of the pencil.
    shapes : array (n, m)
        M-orthonormal to rounding.
    found : Rayleigh
        Of these shapes.
    zeros : int
        Rigid-body modes known from structure, not among the shapes; m + zeros are all modes.
    outside : (low, high)
        Or all that lie between these, proven by counts: no other eigenvalue does. Where an interval reaches
        beyond them they prove nothing, the linear intervals stand, and nothing is ``separate``.

    Notes
    -----
    1. A run of g shapes with residuals rho_j holds g eigenvalues within sqrt(sum rho_j^2)/s of its
       quotients, s the least singular value of the shapes (W. Kahan 1967; Z. H. Cao, J. J. Xie, R. C. Li
       1996, Linear Algebra Appl. 248). Runs are merged until no two intervals meet; as the number of
       shapes is the number of modes, each run then holds exactly its own.
    2. With the neighbours so enclosed, the quadratic bounds hold: T. Kato (1949), J. Phys. Soc. Japan 4,
       334 and G. Temple (1928), Proc. R. Soc. A 119, 276 for single modes; R. Mathias (1998), SIAM J.
       Matrix Anal. Appl. 19, 541 for runs.
    """
    runs = _separate_runs(energy, shapes, found)
    lower, upper = np.empty(found.quotient.size), np.empty(found.quotient.size)
    inside = all(outside[0] <= run.low and run.high <= outside[1] for run in runs)
    for index, run in enumerate(runs):
        below = runs[index - 1].high if index else outside[0]
        above = runs[index + 1].low if index + 1 < len(runs) else outside[1]
        if zeros:
            below, above = _beside_zero(run, below, above)
        where = slice(run.start, run.stop)
        if not inside:
            below, above = run.high, run.low  # no gap is known
        lower[where], upper[where] = _tightened(found, run, below, above)
    separate = inside and all(np.isfinite(run.radius) for run in runs)
    return Intervals(lower, upper, tuple((run.start, run.stop) for run in runs), separate)


@dataclass(frozen=True, slots=True)
class _Run:
    start: int
    stop: int
    low: float
    high: float
    radius: float
    defect: float

    @property
    def size(self) -> int:
        return self.stop - self.start


def _separate_runs(energy: Energy, shapes: Array, found: Rayleigh) -> list[_Run]:
    runs = [_single(found, j) for j in range(found.quotient.size)]
    while True:
        merged: list[_Run] = []
        for run in runs:
            if merged and run.low <= merged[-1].high:
                merged[-1] = _joined(merged[-1], run)
            else:
                merged.append(run)
        if len(merged) == len(runs):
            return runs
        kept = set(runs)
        runs = [run if run in kept else _measured(energy, shapes, found, run) for run in merged]


def _single(found: Rayleigh, j: int) -> _Run:
    theta, rho, error = (float(part[j]) for part in (found.quotient, found.residual, found.quotient_error))
    return _Run(j, j + 1, theta - rho, theta + rho, rho, error)


def _joined(first: _Run, second: _Run) -> _Run:
    low, high = min(first.low, second.low), max(first.high, second.high)
    return _Run(first.start, second.stop, low, high, np.inf, np.inf)


def _measured(energy: Energy, shapes: Array, found: Rayleigh, run: _Run) -> _Run:
    """Fill in the radius and the defect of a joined run."""
    where = slice(run.start, run.stop)
    theta, block = found.quotient[where], np.ascontiguousarray(shapes[:, where])
    gram = energy.gram_defect(block)
    if gram >= UNUSABLE:
        return _Run(run.start, run.stop, -np.inf, np.inf, np.inf, np.inf)
    radius = float(np.linalg.norm(found.residual[where])) / (1 - gram)
    defect = energy.ritz_defect(block, theta, gram)
    return _Run(run.start, run.stop, float(theta[0]) - radius, float(theta[-1]) + radius, radius, defect)


def _beside_zero(run: _Run, below: float, above: float) -> tuple[float, float]:
    """Let the known zero eigenvalues end the gap of their neighbours."""
    if run.low > 0:
        return max(below, 0.0), above
    if run.high < 0:
        return below, min(above, 0.0)
    return run.high, run.low  # zero is inside: no gap


def _tightened(found: Rayleigh, run: _Run, below: float, above: float) -> tuple[Array, Array]:
    """Intersect the linear interval with the quadratic one, given the nearest other eigenvalues."""
    theta = found.quotient[run.start : run.stop]
    lower, upper = theta - run.radius, theta + run.radius
    if not np.isfinite(run.radius):
        return lower, upper
    square = run.radius**2
    # Beside a run the rest of the spectrum is known only to within the run's own radius.
    blur = run.defect + (run.radius if run.size > 1 else 0.0)
    right, left = above - theta[-1] - blur, theta[0] - below - blur
    if run.size > 1:
        right = left = min(right, left)
    if right > 0:
        lower = np.maximum(lower, theta - run.defect - square / right)
    if left > 0:
        upper = np.minimum(upper, theta + run.defect + square / left)
    return lower, upper
