"""Counts on both sides of the modes found near a frequency: whether any between them is missing."""

from collections.abc import Sequence
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass

import numpy as np

from modalview.factor.shifted import ShiftedPencil

# An uncertainty up to this share of the gap is sharp enough: the ends stand clear of the modes beside it.
ENOUGH = 0.1
# With more entries in the factors than this both ends are counted at once, in two threads (factoring lets
# the interpreter go); with more than the second number memory counts for more than time.
WORTH_THREADS, TOO_LARGE = 15_000, 50_000_000
# Where in the gap the edges are tried; another place only where a pivot vanishes.
PLACES = (0.5, 0.35, 0.65)


@dataclass(frozen=True, slots=True)
class Certificate:
    """How many modes lie between two frequencies, and how many were found there.

    Parameters
    ----------
    low, high : float
        rad**2/s**2; drawn inward by the uncertainty of the counts. ``low`` is below zero where zero lies
        inside.
    counted : int or None
        Modes between them by counts, rigid-body modes left out; None where rounding leaves it undecided.
    found : int
        Modes found there.
    below : int or None
        Modes below ``low``; rigid-body modes are among them where ``low`` is above zero.
    """

    low: float
    high: float
    counted: int | None
    found: int
    below: int | None

    @property
    def complete(self) -> bool | None:
        """Whether none was missed; None is undecided."""
        return None if self.counted is None else self.counted == self.found


@dataclass(frozen=True, slots=True)
class Edge:
    """Eigenvalues below a value, summed over the pieces of a model."""

    sigma: float
    below: tuple[int, ...]
    uncertainty: float


@dataclass(frozen=True, slots=True)
class Edges:
    """Both ends of a window around a value."""

    radius: float
    low: Edge
    high: Edge

    @property
    def uncertainty(self) -> float:
        """The larger of both."""
        return max(self.low.uncertainty, self.high.uncertainty)

    def inside(self, rigid: Sequence[int]) -> list[int]:
        """Return the modes of every piece between the ends; ``rigid``: its rigid-body modes, left out."""
        zero = self.low.sigma <= 0 < self.high.sigma
        return [
            high - low - zero * known
            for high, low, known in zip(self.high.below, self.low.below, rigid, strict=True)
        ]

    def certificate(self, rigid: Sequence[int], found: int) -> Certificate:
        """Return the evidence that these counts give.

        Notes
        -----
        With uncertainties d, e at the ends a, b the counts differ by at least the number in [a + d, b - e]
        and at most that in [a - d, b + e]. If as many as they differ by were found in the inner interval,
        it holds no other, and exactly the lower count lies below it.
        """
        return Certificate(
            low=self.low.sigma + self.low.uncertainty,
            high=self.high.sigma - self.high.uncertainty,
            counted=sum(self.inside(rigid)),
            found=found,
            below=sum(self.low.below),
        )


def edges_in(pieces: Sequence[ShiftedPencil], asked: float, gap: tuple[float, float]) -> Edges:
    """Count on both sides of a value, at a distance within the gap (nearer, farther) of its modes.

    The uncertainty is that of the factorization itself; whether it fits into the gap is for the caller
    to see.
    """
    near, far = gap
    enough = ENOUGH * (far - near)
    for place in PLACES:
        radius = near + place * (far - near)
        low, high = _both(pieces, asked - radius, asked + radius, enough)
        found = Edges(radius, low, high)
        if np.isfinite(found.uncertainty):
            break
    return found


def _both(pieces: Sequence[ShiftedPencil], low: float, high: float, enough: float) -> list[Edge]:
    """Count at both ends."""

    def edge(sigma: float) -> Edge:
        return _edge(pieces, sigma, enough)

    entries = max(int(piece.pattern.terms.sum()) for piece in pieces)
    if not WORTH_THREADS < entries < TOO_LARGE:
        return [edge(low), edge(high)]
    with ThreadPoolExecutor(1) as beside:
        below = beside.submit(edge, low)
        above = edge(high)
        return [below.result(), above]


def _edge(pieces: Sequence[ShiftedPencil], sigma: float, enough: float) -> Edge:
    if sigma <= 0 and all(piece.definite for piece in pieces):
        return Edge(sigma, (0,) * len(pieces), 0.0)
    negative, uncertainty = [], 0.0
    for piece in pieces:
        count = piece.factorize(sigma, enough / abs(sigma) if sigma else np.inf)
        negative.append(count.negative)
        uncertainty = max(uncertainty, count.uncertainty)
    return Edge(sigma, tuple(negative), uncertainty)
