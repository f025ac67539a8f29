"""Shifted inverse iteration with Krylov acceleration: the subspace that one factorization spans."""

from collections.abc import Callable
from dataclasses import dataclass, field
from math import sqrt

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

# Orthogonalised again where less than this share of a vector is kept (W. Kahan's rule "twice is enough",
# after B. N. Parlett (1980), The Symmetric Eigenvalue Problem, section 6.9).
KEPT, PASSES = 0.7, 3
# What is left of a vector below this share lies in the span already.
DEPENDENT = 1e-11
# Residual of the inverse, relative to its eigenvalue, at which a mode is found.
FOUND = 1e-12
# The mode after the last wanted one only tells how far the gap reaches.
FORESEEN = 1e-4
# Dimensions between two tests of convergence, and before the rate is known.
LEAST_STEP, MOST_STEP = 2, 8
# Columns by which storage grows: most searches need no more, and copying costs as much as ten of them.
GROWTH = 64


@dataclass(slots=True)
class Ritz:
    """Approximations from a subspace, the nearest first.

    Attributes
    ----------
    distance : array (m,)
        |lambda - sigma| from the frequency asked for.
    value : array (m,)
        lambda, rad**2/s**2.
    residual : array (m,)
        Of the inverse, relative to its eigenvalue.
    turn : array (m, m)
        Coefficients in the basis, as columns.
    strength : array (m,)
        |1 / (lambda - shift)|.
    """

    distance: Array
    value: Array
    residual: Array
    turn: Array
    strength: Array

    @property
    def found(self) -> npt.NDArray[np.intp]:
        """Which are found."""
        return np.flatnonzero(self.residual <= FOUND)

    def worst(self, wanted: int) -> float:
        """Return how far the first ``wanted``, and the one after, are from being found (1 or less: found)."""
        own = float((self.residual[:wanted] / FOUND).max(initial=0.0))
        next_ = float((self.residual[wanted : wanted + 1] / FORESEEN).max(initial=0.0))
        return max(own, next_)


@dataclass(slots=True, eq=False)
class Krylov:
    """The span of starting vectors and their images under a symmetric operator, kept orthonormal.

    Every vector is orthogonalised against the whole basis and against what is kept out. Vectors queue to be
    multiplied, so that one or several starting vectors make no difference (band Lanczos with deflation of
    dependent vectors: A. Ruhe (1979), Math. Comp. 33, 680).

    Parameters
    ----------
    operator : callable
        y -> (S - shift)^-1 y, (modes,) or (modes, k).
    shift, asked : float
        Shift of the operator, and the value that distances are measured from; rad**2/s**2.
    kept_out : array (modes, r)
        Orthonormal: rigid-body modes and modes found before.
    """

    operator: Callable[[Array], Array]
    shift: float
    asked: float
    kept_out: Array
    basis: Array = field(init=False)
    images: Array = field(init=False)
    size: int = 0
    multiplied: int = 0
    starts: int = 0

    def __post_init__(self) -> None:
        self.basis = np.empty((self.kept_out.shape[0], GROWTH), order="F")
        self.images = np.zeros((GROWTH, GROWTH))

    @property
    def exhausted(self) -> bool:
        """Whether the operator leads nowhere new."""
        return self.multiplied == self.size

    def start(self, vectors: Array) -> None:
        """Queue starting vectors (modes, p)."""
        for vector in vectors.T:
            self._append(vector.copy())
        self.starts = self.size

    def extend(self, dimension: int, step: Callable[[], None]) -> None:
        """Multiply until the subspace has this dimension, or nothing new comes."""
        while self.multiplied < dimension and not self.exhausted:
            step()
            column = self.multiplied
            entries = self._append(self.operator(self.basis[:, column]), max(0, column - self.starts))
            self.images[: entries.size, column] = entries
            self.multiplied += 1

    def fill(self) -> None:
        """Span all that is not kept out at once: in a small model faster than vector by vector."""
        kept = self.kept_out.shape[1]
        whole = np.linalg.qr(self.kept_out, mode="complete")[0] if kept else np.eye(len(self.kept_out))
        self.basis = np.asfortranarray(whole[:, kept:])
        self.images = self.basis.T @ self.operator(self.basis)
        self.starts = self.size = self.multiplied = self.basis.shape[1]

    def ritz(self, dimension: int | None = None) -> Ritz:
        """Return the Ritz approximations from the first vectors of the basis, all by default."""
        m = dimension or self.multiplied
        square = self.images[:m, :m]
        theta, turn = np.linalg.eigh((square + square.T) / 2)
        left = np.linalg.norm(self.images[m : self.size, :m] @ turn, axis=0)
        safe = np.where(theta == 0, np.finfo(float).tiny, theta)
        with np.errstate(over="ignore"):
            value = self.shift + 1 / safe
        distance = np.abs(value - self.asked)
        order = np.argsort(distance, kind="stable")
        strength = np.abs(safe)
        return Ritz(distance[order], value[order], (left / strength)[order], turn[:, order], strength[order])

    def vectors(self, ritz: Ritz, chosen: npt.NDArray[np.intp]) -> Array:
        """Return Ritz vectors (modes, k) of the whole subspace."""
        vectors: Array = self.basis[:, : self.multiplied] @ ritz.turn[:, chosen]
        return vectors

    def _append(self, vector: Array, since: int = 0) -> Array:
        """Orthogonalise a vector and queue what is left; return its entries in the basis.

        Only basis vectors ``since`` some place can make up more than rounding of it, so these go first: one
        pass over the whole basis is then enough.
        """
        whole = sqrt(vector @ vector)
        entries = np.zeros(self.size + 1)
        self._subtract(vector, entries, since)
        left = sqrt(vector @ vector)
        for _ in range(PASSES):
            before = left
            self._subtract(vector, entries, 0)
            left = sqrt(vector @ vector)
            if left > KEPT * before or left <= DEPENDENT * whole:
                break
        if left <= DEPENDENT * whole:
            return entries[:-1]
        self._reserve()
        self.basis[:, self.size] = vector / left
        self.size += 1
        entries[-1] = left
        return entries

    def _subtract(self, vector: Array, entries: Array, since: int) -> None:
        if self.kept_out.shape[1]:
            vector -= self.kept_out @ (self.kept_out.T @ vector)
        span = self.basis[:, since : self.size]
        part = span.T @ vector
        vector -= span @ part
        entries[since : self.size] += part

    def _reserve(self) -> None:
        room = self.basis.shape[1]
        if self.size < room:
            return
        basis = np.empty((self.basis.shape[0], room + GROWTH), order="F")
        basis[:, :room] = self.basis
        images = np.zeros((room + GROWTH, room + GROWTH))
        images[:room, :room] = self.images
        self.basis, self.images = basis, images


def next_test(space: Krylov, worst: float, wanted: int) -> int:
    """Return the dimension at which the wanted modes are likely found, from the rate seen so far."""
    earlier = space.multiplied - min(8, space.multiplied // 3)
    if earlier < 1:
        return space.multiplied + MOST_STEP
    before = space.ritz(earlier).worst(wanted)
    gained = np.log(before / worst) / (space.multiplied - earlier) if before > worst > 0 else 0.0
    lacking = np.log(max(worst, 1.0)) / gained if gained > 0 else MOST_STEP
    return space.multiplied + int(np.clip(np.ceil(lacking), LEAST_STEP, MOST_STEP))
