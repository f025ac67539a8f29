"""How many modes a band holds: now, at some values within tolerance, at every one."""

from dataclasses import dataclass

from modalview.assembly.pencil import Pencil
from modalview.factor.counts import count_at_most, count_below

SOFT_HEAVY, STIFF_LIGHT = "soft-heavy", "stiff-light"

Span = tuple[float, float]


@dataclass(frozen=True, slots=True)
class BandCount:
    """Numbers of modes in a closed band, rigid-body modes left out; None is undecided.

    Parameters
    ----------
    inside : int or None
        N(hi) - N(lo) at nominal values; N(hi) counts <= hi, N(lo) counts < lo.
    possible : int or None
        N_soft(hi) - N_stiff(lo): no combination of values within tolerance has more in the band.
    certain : int or None
        max(0, N_stiff(hi) - N_soft(lo)): no combination has fewer.
    modes : int
        Of the whole model.
    below_everywhere : bool
        Every mode lies below the band at any value within tolerance.
    deciding_case : str or None
        "soft-heavy" or "stiff-light", whichever brings a mode into the band that is not there at nominal
        values; None when neither does (only the speed tolerance reaches a mode, or none is reached).
    undecided : tuple of str
        Cases whose counts rounding leaves open.
    """

    inside: int | None
    possible: int | None
    certain: int | None
    modes: int
    below_everywhere: bool
    deciding_case: str | None
    undecided: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class _Edges:
    """Modes up to the upper edge and below the lower edge, of one pencil; None is undecided."""

    upto: int | None
    below: int | None

    @property
    def between(self) -> int | None:
        return _less(self.upto, self.below)


def count_band(
    nominal: Pencil, soft: Pencil, stiff: Pencil, band: Span, widened: Span | None = None
) -> BandCount:
    """Count the modes in a band at nominal values and over all tolerances.

    Parameters
    ----------
    nominal, soft, stiff : Pencil
        The three cases; the same object three times without tolerances (then counted once).
    band : pair of float
        Closed band at nominal speed, rad/s.
    widened : pair of float or None
        The band with the speed tolerance, for the tolerance cases; the same as ``band`` when None.

    Notes
    -----
    Ordered eigenvalues only rise with any stiffness and only fall with any mass, so that N_stiff(lambda)
    <= N(lambda) <= N_soft(lambda) for all values within tolerance (Courant-Fischer: R. Courant, D. Hilbert,
    Methods of Mathematical Physics I, chapter 1, from memory). Counts are one-sided and lie outward.
    """
    wide = band if widened is None else widened
    here = _edges(nominal, band)
    there = here if wide == band else _edges(nominal, wide)
    low = there if soft is nominal else _edges(soft, wide)
    high = there if stiff is nominal else _edges(stiff, wide)
    certain = _less(high.upto, low.below)
    return BandCount(
        inside=here.between,
        possible=_less(low.upto, high.below),
        certain=None if certain is None else max(0, certain),
        modes=nominal.modes,
        below_everywhere=high.below == nominal.modes,
        deciding_case=_deciding(there, low, high),
        undecided=_undecided(here, low, high),
    )


def _edges(pencil: Pencil, band: Span) -> _Edges:
    shifted = pencil.shifted
    return _Edges(count_at_most(shifted, band[1] ** 2).number, count_below(shifted, band[0] ** 2).number)


def _less(upper: int | None, lower: int | None) -> int | None:
    return None if upper is None or lower is None else upper - lower


def _deciding(there: _Edges, low: _Edges, high: _Edges) -> str | None:
    """Return which case moves a mode into the band, the one that moves more if both do."""
    fallen = (low.upto or 0) - (there.upto or 0)
    risen = (there.below or 0) - (high.below or 0)
    if None in (low.upto, there.upto, there.below, high.below) or max(fallen, risen) <= 0:
        return None
    return SOFT_HEAVY if fallen >= risen else STIFF_LIGHT


def _undecided(here: _Edges, low: _Edges, high: _Edges) -> tuple[str, ...]:
    named = (("nominal", here.between), (SOFT_HEAVY, low.upto), (STIFF_LIGHT, high.below))
    return tuple(name for name, number in named if number is None)
