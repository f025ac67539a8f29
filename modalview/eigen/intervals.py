"""Intervals that hold the eigenvalues: linear and quadratic residual bounds, for clusters as a whole."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.assembly.pencil import Pencil
from modalview.eigen.rayleigh import Rayleigh, gamma

Array = npt.NDArray[np.float64]
Groups = tuple[tuple[int, int], ...]


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


def enclose(pencil: Pencil, shapes: Array, found: Rayleigh, zeros: int) -> Intervals:
    """Enclose every eigenvalue of the pencil, from Rayleigh quotients in ascending order.

    Parameters
    ----------
    pencil : Pencil
    shapes : array (n, m)
        M-orthonormal to rounding.
    found : Rayleigh
        Of these shapes.
    zeros : int
        Rigid-body modes known from structure, not among the shapes; m + zeros are all modes.

    Notes
    -----
    1. A run of g shapes with residuals rho_j holds g eigenvalues within sqrt(sum rho_j^2)/s of its
       quotients, s the least singular value of the shapes (W. Kahan 1967; Z. H. Cao, J. J. Xie, R. C. Li
       1996, Linear Algebra Appl. 248). Runs are merged until no two intervals meet; as the number of
       shapes is the number of modes, each run then holds exactly its own.
    2. With the neighbours so enclosed, the quadratic bounds hold: T. Kato (1949), J. Phys. Soc. Japan 4,
       334 and G. Temple (1928) for single modes; R. Mathias (1998), SIAM J. Matrix Anal. Appl. 19, 541
       for runs.
    """
    runs = _separate_runs(pencil, shapes, found, zeros)
    size = found.quotient.size
    lower, upper = np.empty(size), np.empty(size)
    for index, run in enumerate(runs):
        below = runs[index - 1].high if index else (0.0 if zeros else -np.inf)
        above = runs[index + 1].low if index + 1 < len(runs) else np.inf
        if zeros and run.low < 0 < run.high:
            below = above = np.nan  # the known zeros are inside: no gap to use
        elif zeros and run.high < 0:
            above = min(above, 0.0)
            below = runs[index - 1].high if index else -np.inf
        where = slice(run.start, run.stop)
        lower[where], upper[where] = _tightened(found, run, below, above)
    separate = all(np.isfinite(run.radius) for run in runs)
    return Intervals(lower, upper, tuple((run.start, run.stop) for run in runs), separate)


@dataclass(frozen=True, slots=True)
class _Run:
    start: int
    stop: int
    low: float
    high: float
    radius: float
    defect: float


def _separate_runs(pencil: Pencil, shapes: Array, found: Rayleigh, zeros: int) -> list[_Run]:
    runs = [_single(found, j) for j in range(found.quotient.size)]
    while True:
        merged: list[_Run] = []
        changed = False
        for run in runs:
            if merged and run.low <= merged[-1].high:
                merged[-1] = _joined(merged[-1], run)
                changed = True
            else:
                merged.append(run)
        if not changed:
            return runs
        runs = [_measured(pencil, shapes, found, run) if run.stop - run.start > 1 else run for run in merged]


def _joined(first: _Run, second: _Run) -> _Run:
    low, high = min(first.low, second.low), max(first.high, second.high)
    return _Run(first.start, second.stop, low, high, np.inf, np.inf)


def _single(found: Rayleigh, j: int) -> _Run:
    theta, rho, error = found.quotient[j], found.residual[j], found.quotient_error[j]
    return _Run(j, j + 1, theta - rho, theta + rho, rho, error)


def _measured(pencil: Pencil, shapes: Array, found: Rayleigh, run: _Run) -> _Run:
    where = slice(run.start, run.stop)
    theta = found.quotient[where]
    gram, gram_error = _gram(pencil, shapes[:, where])
    off = float(np.linalg.norm(gram - np.eye(len(gram)))) + gram_error
    if off >= 0.5:
        return _Run(run.start, run.stop, -np.inf, np.inf, np.inf, np.inf)
    norms = np.linalg.norm(found.residual[where])
    radius = float(norms / (1 - off))
    low, high = float(theta.min()) - radius, float(theta.max()) + radius
    return _Run(run.start, run.stop, low, high, radius, off)


def _gram(pencil: Pencil, shapes: Array) -> tuple[Array, float]:
    weighted = pencil.M @ shapes
    gram = shapes.T @ weighted
    size = np.abs(shapes).T @ (abs(pencil.M) @ np.abs(shapes))
    return gram, gamma(shapes.shape[0] + 2) * float(np.linalg.norm(size))


def _tightened(found: Rayleigh, run: _Run, below: float, above: float) -> tuple[Array, Array]:
    where = slice(run.start, run.stop)
    theta = found.quotient[where]
    lower, upper = theta - run.radius, theta + run.radius
    if run.stop - run.start > 1:
        return lower, upper
    error, square = run.defect, run.radius**2
    if above > theta[0] + error:
        lower = np.maximum(lower, theta - error - square / (above - theta - error))
    if below < theta[0] - error:
        upper = np.minimum(upper, theta + error + square / (theta - error - below))
    return lower, upper
