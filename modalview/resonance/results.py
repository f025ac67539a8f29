"""What a check of one excitation against the modes says."""

from dataclasses import dataclass
from enum import StrEnum

from modalview.bounds.bands import EdgeCount


class Verdict(StrEnum):
    """The three answers, from best to worst."""

    CLEAR = "clear"
    NOMINAL_ONLY = "clear at nominal only"
    IN_BAND = "mode in band"


class Drive(StrEnum):
    """Whether an excitation drives a mode; it never changes the verdict."""

    EXCITED = "excited"
    HARDLY = "hardly excited"
    UNKNOWN = "unknown"
    NOTHING = "acts on nothing that moves"


@dataclass(frozen=True, slots=True)
class Band:
    """Frequencies to be kept clear around one excitation; all rad/s.

    Parameters
    ----------
    check : str
        "machine id/excitation id".
    label : str
        Short, for scale and lists: "1×", "7× vane pass", "100 Hz line".
    order : float or None
        Times the speed; None for a fixed frequency.
    excitation : pair of float
        Lowest and highest excitation frequency at nominal speed.
    nominal : pair of float
        Avoidance band at nominal speed: excitation widened by the margins.
    tolerance : pair of float
        The same with the speed tolerance; equal to ``nominal`` without one.
    margin : pair of float
        Margin below and above, as a share of the excitation frequency.
    """

    check: str
    machine: str
    excitation_id: str
    label: str
    order: float | None
    excitation: tuple[float, float]
    nominal: tuple[float, float]
    tolerance: tuple[float, float]
    margin: tuple[float, float]


@dataclass(frozen=True, slots=True)
class ModeDrive:
    """How strongly one excitation drives one mode (or one repeated subspace).

    Parameters
    ----------
    mode : int
        Number of the mode, from 1, rigid-body modes included.
    share : float or None
        |phi^T f|**2 / (f^H M^-1 f); sums to 1 over all modes. None when no point is given.
    drive : Drive
        The word for it.
    """

    mode: int
    share: float | None
    drive: Drive


@dataclass(frozen=True, slots=True)
class Check:
    """One excitation against the modes.

    Parameters
    ----------
    band : Band
    verdict : Verdict
    wording : str
        The verdict as shown: "clear (2 values taken as exact)", "clear in this model".
    reason : str
        One sentence: which count, which case, which mode.
    inside, possible, certain : int or None
        Modes in the band now, at some values within tolerance, at every value; None is undecided.
    below, upto : int or None
        Modes of the whole model below the band and up to its upper edge, at nominal values.
    deciding_case : str or None
        "soft-heavy" or "stiff-light", whichever reaches the band.
    undecided : tuple of str
        Which counts rounding left open.
    nearest_mode : int or None
        From 1; None before the solve.
    separation, worst_separation : float or None
        (fn - fe) / fe to the nearest excitation frequency, signed, at nominal and over tolerance
        (0 once the range overlaps the excitation).
    worst_mode : int or None
        The mode of ``worst_separation``: one that can lie in the band, if any can.
    drives : tuple of ModeDrive
        For the modes in or nearest to the band; empty before the solve.
    proof : str
        What proves the verdict: "by counts" (floating point, with outward edges) or "exactly" (integers).
    evidence : tuple of EdgeCount
        Every count the verdict rests on, in the order made.
    """

    band: Band
    verdict: Verdict
    wording: str
    reason: str
    inside: int | None
    possible: int | None
    certain: int | None
    below: int | None
    upto: int | None
    deciding_case: str | None
    undecided: tuple[str, ...] = ()
    nearest_mode: int | None = None
    separation: float | None = None
    worst_separation: float | None = None
    worst_mode: int | None = None
    drives: tuple[ModeDrive, ...] = ()
    proof: str = "by counts"
    evidence: tuple[EdgeCount, ...] = ()
