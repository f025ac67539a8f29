"""How many modes lie in a band: now, at some values within tolerance, at all of them."""

from collections.abc import Callable
from concurrent.futures import Executor
from dataclasses import dataclass, field
from fractions import Fraction
from functools import partial
from typing import Protocol

import numpy as np

from modalview.factor.counts import LARGEST_SHARE, Count, count_at_most, count_below
from modalview.factor.shifted import ShiftedPencil
from modalview.units.show import short

# An edge of a band: rad/s, or turns per second as a fraction where counts are exact.
Edge = float | Fraction


class Counter(Protocol):
    """Counts the modes of one case on either side of an edge."""

    def at_most(self, edge: Edge) -> Count:
        """Count the modes at or below an edge: never fewer than there are."""

    def below(self, edge: Edge) -> Count:
        """Count the modes below an edge, rigid-body modes at least: never more than there are."""


@dataclass(frozen=True, slots=True, eq=False)
class Cases:
    """One model at three sets of values; the same object thrice where nothing has a tolerance.

    Parameters
    ----------
    nominal : ShiftedPencil
    soft_heavy : ShiftedPencil
        Every stiffness at its least and every mass at its largest: no frequency is lower at other values
        within tolerance (Courant-Fischer).
    stiff_light : ShiftedPencil
        The reverse: no frequency is higher.
    """

    nominal: ShiftedPencil
    soft_heavy: ShiftedPencil
    stiff_light: ShiftedPencil

    def counters(self) -> "Counters":
        """Return what counts each case in floating point."""
        found = {
            id(shifted): Floating(shifted) for shifted in (self.nominal, self.soft_heavy, self.stiff_light)
        }
        return Counters(*(found[id(s)] for s in (self.nominal, self.soft_heavy, self.stiff_light)))


@dataclass(frozen=True, slots=True, eq=False)
class Counters:
    """What counts the three cases; the same object thrice where nothing has a tolerance.

    Both counts of a pair are made at once where ``beside`` is given.
    """

    nominal: Counter
    soft_heavy: Counter
    stiff_light: Counter
    beside: Executor | None = field(default=None, kw_only=True)


@dataclass(frozen=True, slots=True, eq=False)
class Floating:
    """Counts by floating-point factors with a proven uncertainty; edges in rad/s.

    Parameters
    ----------
    shifted : ShiftedPencil
    share : float
        An edge may move outward by this share of its square, its uncertainty included.
    """

    shifted: ShiftedPencil
    share: float = LARGEST_SHARE
    _made: dict[tuple[Edge, str], Count] = field(default_factory=dict)

    def at_most(self, edge: Edge) -> Count:
        """Count upward of the square, which is rounded."""
        return self._once(edge, "at most", lambda: count_at_most(self.shifted, _above(edge), self.share))

    def below(self, edge: Edge) -> Count:
        """Count downward of the square; that of zero stays zero: nothing below it lies in any band."""
        return self._once(edge, "below", lambda: count_below(self.shifted, _under(edge), self.share))

    def _once(self, edge: Edge, side: str, count: Callable[[], Count]) -> Count:
        found = self._made.get((edge, side))
        if found is None:
            found = self._made[edge, side] = count()
        return found


def _above(edge: Edge) -> float:
    return float(np.nextafter(float(edge) ** 2, np.inf))


def _under(edge: Edge) -> float:
    return max(0.0, float(np.nextafter(float(edge) ** 2, -np.inf)))


@dataclass(frozen=True, slots=True, eq=False)
class Sharpened:
    """Counts as ``Floating`` does, and takes what a rougher one has counted where that is sharp enough."""

    rough: Floating
    share: float = LARGEST_SHARE

    def at_most(self, edge: Edge) -> Count:
        """Count upward of the square."""
        found, lam = self.rough.at_most(edge), _above(edge)
        return found if self._sharp(found, lam) else count_at_most(self.rough.shifted, lam, self.share)

    def below(self, edge: Edge) -> Count:
        """Count downward of the square."""
        found, lam = self.rough.below(edge), _under(edge)
        return found if self._sharp(found, lam) else count_below(self.rough.shifted, lam, self.share)

    def _sharp(self, found: Count, lam: float) -> bool:
        return found.number is not None and abs(found.edge - lam) + found.uncertainty <= self.share * lam


@dataclass(frozen=True, slots=True)
class EdgeCount:
    """One count that a band rests on.

    Parameters
    ----------
    case : str
        "nominal", "soft-heavy" or "stiff-light".
    side : str
        "at most" or "below".
    edge : float or Fraction
        Edge asked for, as the counter takes it.
    count : Count
        With the edge used, rad**2/s**2, and its uncertainty.
    """

    case: str
    side: str
    edge: Edge
    count: Count


@dataclass(frozen=True, slots=True)
class BandCount:
    """Modes in a band, rigid-body modes left out.

    Parameters
    ----------
    inside : int or None
        At nominal values; never fewer than there are; None is undecided.
    possible : int or None
        At some values within tolerance: never fewer than can be.
    certain : int or None
        At every value within tolerance: never more than there are; without tolerances the same as
        ``inside``.
    evidence : tuple of EdgeCount
        Every count made, in order.
    """

    inside: int | None
    possible: int | None
    certain: int | None
    evidence: tuple[EdgeCount, ...]

    @property
    def below(self) -> int | None:
        """Modes below the band at nominal values; never more than there are."""
        return self._nominal("below")

    @property
    def upto(self) -> int | None:
        """Modes up to its upper end at nominal values; never fewer than there are."""
        return self._nominal("at most")

    def _nominal(self, side: str) -> int | None:
        # Where no mode is possible, N_stiff(lo) <= N(lo) <= N(hi) <= N_soft(hi) are all one number. The last
        # nominal count is that of the nominal band; one before it may be of the tolerance band.
        same = [e.count.number for e in self.evidence if e.side == side]
        own = [e.count.number for e in self.evidence if e.side == side and e.case == "nominal"]
        return (own or same)[-1]

    @property
    def undecided(self) -> tuple[str, ...]:
        """The counts that rounding left open, in words."""
        return tuple(
            f"{edge.case}, {edge.side} {short(float(edge.edge))} rad/s"
            for edge in self.evidence
            if edge.count.number is None
        )


def count_band(
    cases: Cases, nominal_band: tuple[float, float], tolerance_band: tuple[float, float] | None = None
) -> BandCount:
    """Count the modes in a band in floating point; see ``count_band_by``. Edges in rad/s."""
    return count_band_by(cases.counters(), nominal_band, tolerance_band or nominal_band)


def count_band_by(
    counters: Counters, nominal_band: tuple[Edge, Edge], tolerance_band: tuple[Edge, Edge]
) -> BandCount:
    """Count the modes in a band at nominal values, at some and at all values within tolerance.

    Parameters
    ----------
    counters : Counters
    nominal_band : (lo, hi)
        Ends included.
    tolerance_band : (lo, hi)
        The same widened by the speed's tolerance, for ``possible``.

    Returns
    -------
    BandCount
        inside = N(hi) - N(lo) nominal; possible = N_soft(hi) - N_stiff(lo) in the tolerance band, both with
        edges outward, so that a mode on the edge is in; certain = max(0, N_stiff(hi) - N_soft(lo)) in the
        nominal band with edges inward, so that a mode on the edge is not called certain. N(hi) counts
        <= hi, N(lo) counts < lo and at least the rigid-body modes.

    Notes
    -----
    At most six counts; two where none is possible, since then none is inside and none certain, and two
    where nothing has a tolerance.
    """
    lo, hi = nominal_band
    low, high = tolerance_band
    tally, nominal = _Tally(counters.beside), ("nominal", counters.nominal)
    exact = counters.soft_heavy is counters.nominal and counters.stiff_light is counters.nominal
    if exact and (low, high) == (lo, hi):
        inside = tally.between((*nominal, hi), (*nominal, lo))
        return BandCount(inside, inside, inside, tuple(tally.evidence))
    names = ("nominal", "nominal") if exact else ("soft-heavy", "stiff-light")
    soft, stiff = (names[0], counters.soft_heavy), (names[1], counters.stiff_light)
    possible = tally.between((*soft, high), (*stiff, low))
    if possible == 0 and low <= lo <= hi <= high:
        return BandCount(0, 0, 0, tuple(tally.evidence))
    inside = tally.between((*nominal, hi), (*nominal, lo))
    if inside == 0:
        return BandCount(0, possible, 0, tuple(tally.evidence))
    certain = inside if exact else tally.surely_between((*stiff, hi), (*soft, lo))
    return BandCount(inside, possible, certain, tuple(tally.evidence))


# Case, what counts it, edge.
_Asked = tuple[str, Counter, Edge]


@dataclass(slots=True)
class _Tally:
    """Counts made so far, in pairs that may be made at once."""

    beside: Executor | None
    evidence: list[EdgeCount] = field(default_factory=list)

    def between(self, upper: _Asked, lower: _Asked) -> int | None:
        """Return how many are at most the upper edge and not below the lower one; None is undecided."""
        return self._difference(partial(_at_most, upper), partial(_below, lower))

    def surely_between(self, upper: _Asked, lower: _Asked) -> int | None:
        """Return how many are below the upper edge and not at most the lower one; None is undecided."""
        return self._difference(partial(_below, upper), partial(_at_most, lower))

    def _difference(self, upper: Callable[[], EdgeCount], lower: Callable[[], EdgeCount]) -> int | None:
        if self.beside is None:
            found = (upper(), lower())
        else:
            waiting = self.beside.submit(lower)
            found = (upper(), waiting.result())
        self.evidence += found
        high, low = (one.count.number for one in found)
        return None if high is None or low is None else max(0, high - low)


def _at_most(asked: _Asked) -> EdgeCount:
    case, counter, edge = asked
    return EdgeCount(case, "at most", edge, counter.at_most(edge))


def _below(asked: _Asked) -> EdgeCount:
    case, counter, edge = asked
    return EdgeCount(case, "below", edge, counter.below(edge))
