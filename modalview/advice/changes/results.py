"""What the search for changes finds: windows, ceilings, options with their edit, effect and cost."""

from dataclasses import dataclass
from enum import StrEnum

from modalview.model.differences import Rewrite
from modalview.resonance.results import Verdict


@dataclass(frozen=True, slots=True)
class Window:
    """Values of one thing that clear every check over all tolerances.

    Parameters
    ----------
    low, high : float
        SI, or a factor of today's values where several change together; 0 and infinity where it is open.
        Rounded inward, so that both ends themselves clear everything.
    low_text, high_text : str
        The same with unit; "" where it is open.
    exact : pair of float
        Before rounding.
    bound_by : pair of str
        What ends the window below and above: "machine/1x, soft-heavy" (with the load case, where there is
        one), "your limit", or "" where it is open.
    proven : bool
        By counts at both ends. Not tried where very many values are looked at together; what is proposed from
        a window is always proven itself.
    """

    low: float
    high: float
    low_text: str
    high_text: str
    exact: tuple[float, float]
    bound_by: tuple[str, str]
    proven: bool

    @property
    def text(self) -> str:
        """Return "up to 94 kN/mm", "from 271 kN/mm to 472 kN/mm", "from 4573 kN/mm upward" or "any value"."""
        if not self.low_text and not self.high_text:
            return "any value"
        if not self.low_text:
            return f"up to {self.high_text}"
        return f"from {self.low_text}" + (f" to {self.high_text}" if self.high_text else " upward")


@dataclass(frozen=True, slots=True)
class Ceiling:
    """How far a mode can be moved by one thing alone, at nominal values.

    Parameters
    ----------
    mode : int
        From 1, rigid-body modes included.
    now_hz : float
    at_zero_hz, at_infinity_hz : float
        With the value gone, and without bound; infinity where the mode leaves upward, 0 where it becomes
        motion that nothing resists.
    """

    mode: int
    now_hz: float
    at_zero_hz: float
    at_infinity_hz: float


@dataclass(frozen=True, slots=True)
class ValueWindows:
    """All windows of one value, or of several that change by one factor.

    Parameters
    ----------
    value : str
        Its id for requests: "k3.stiffness", "sole.stiffness", "k1.stiffness+k2.stiffness".
    label : str
        "stiffness of base support".
    nominal : float
        SI; 1 where several change together.
    text : str
        Today's value as typed; "" where several change together.
    unit : str
        Of low, high and nominal: "N/m"; "1" for a factor.
    clear_now : bool
        Whether today's value lies in a window.
    windows : tuple of Window
        Ascending; empty where no value of this alone clears everything.
    limits : pair of float
        Within which they were looked for; 0 and infinity without limits of the user's.
    ceilings : tuple of Ceiling
        Of the elastic modes that lie in or reach a band; empty in models too large.
    """

    value: str
    label: str
    nominal: float
    text: str
    unit: str
    clear_now: bool
    windows: tuple[Window, ...]
    limits: tuple[float, float]
    ceilings: tuple[Ceiling, ...]


@dataclass(frozen=True, slots=True)
class ValueChange:
    """One typed value before and after.

    Parameters
    ----------
    value : str
        Id: "k3.stiffness"; of a tolerance "k3.stiffness.tolerance".
    label : str
        "stiffness of base support".
    before, after : str
        As typed, with unit.
    before_si, after_si : float
        Tolerances: the larger share to either side.
    """

    value: str
    label: str
    before: str
    after: str
    before_si: float
    after_si: float

    @property
    def factor(self) -> float:
        """After over before."""
        return self.after_si / self.before_si


@dataclass(frozen=True, slots=True)
class Effect:
    """What one check says after the change.

    Parameters
    ----------
    check : str
        "machine id/excitation id".
    case : str
        Load case; "" for the model as it is.
    label : str
        "1×", "7× vane pass".
    verdict : Verdict
        By counts.
    wording : str
    before : Verdict
    nearest_mode : int or None
        The mode that comes nearest over all tolerances.
    nearest_hz : pair of float or None
        Its range over all tolerances.
    separation, worst_separation : float or None
        (fn - fe) / fe at nominal values (of the mode nearest then) and over all tolerances, signed.
    room : float or None
        Worst separation less the margin wanted on that side, as a share; below 0 it is missed.
    """

    check: str
    case: str
    label: str
    verdict: Verdict
    wording: str
    before: Verdict
    nearest_mode: int | None
    nearest_hz: tuple[float, float] | None
    separation: float | None
    worst_separation: float | None
    room: float | None


@dataclass(frozen=True, slots=True)
class Cost:
    """What a change costs elsewhere.

    Parameters
    ----------
    what : str
        "mass on the ground", "most a body settles under its weight (motor)".
    before, after : str
        With unit.
    before_si, after_si : float
    """

    what: str
    before: str
    after: str
    before_si: float
    after_si: float


class Kind(StrEnum):
    """What an option changes."""

    ONE_VALUE = "one value"
    SEVERAL = "several values"
    PLACED = "mode placed"
    TOLERANCE = "tolerance"
    GEOMETRY = "geometry"
    ABSORBER = "absorber"
    BARRED = "barred speeds"


@dataclass(frozen=True, slots=True)
class Option:
    """A change that can be tried with one undoable edit.

    Parameters
    ----------
    kind : Kind
    text : str
        What it does: "Raise stiffness of base support from 175 kN/mm to 271 kN/mm".
    edit : Rewrite
        From the model it was asked for.
    changes : tuple of ValueChange
    effects : tuple of Effect
        Of every check and load case, in order.
    clears : bool
        Whether every check is clear over all tolerances after it, proven by counts.
    amount : float
        Weighted sum of |ln factor|: what "least" means; for tolerances of the shares given up.
    costs : tuple of Cost
    cautions : tuple of str
    claim : str
        What it promises beside the checks: "mode 2 at 17.00 Hz"; "" for none.
    """

    kind: Kind
    text: str
    edit: Rewrite
    changes: tuple[ValueChange, ...]
    effects: tuple[Effect, ...]
    clears: bool
    amount: float
    costs: tuple[Cost, ...]
    cautions: tuple[str, ...] = ()
    claim: str = ""

    @property
    def worst(self) -> Effect | None:
        """The check with the least room left; None without checks."""
        known = [one for one in self.effects if one.room is not None]
        return min(known, key=lambda one: one.room or 0.0, default=None)


class Found(StrEnum):
    """How a search for the least change ended."""

    CLEAR_NOW = "clear already"
    FOUND = "found"
    NONE_EXISTS = "none exists"
    NONE_FOUND = "none found"


@dataclass(frozen=True, slots=True)
class LeastChange:
    """The least change of several values that clears everything.

    Parameters
    ----------
    values : tuple of str
        Ids of what was free to change.
    status : Found
        "None exists" only where counts prove for every combination within ``limits`` that some check is
        not clear; else "none found".
    limits : tuple of pair of float
        Factors of today's values within which each was free.
    factors : tuple of float
        Of today's values; empty where none was found.
    amount : float
        Weighted sum of |ln factor|, rounding of the new values included.
    least : float
        No change that clears everything has a smaller amount, by the search (floating point).
    boxes : int
        How many boxes of values were looked at.
    sentence : str
    option : Option or None
    """

    values: tuple[str, ...]
    status: Found
    limits: tuple[tuple[float, float], ...]
    factors: tuple[float, ...]
    amount: float
    least: float
    boxes: int
    sentence: str
    option: Option | None


@dataclass(frozen=True, slots=True)
class Narrowing:
    """Tolerances to narrow, so that checks that are clear at nominal only become clear.

    Parameters
    ----------
    checks : tuple of str
        The checks that are clear at nominal only ("machine/1x", with the load case in brackets).
    possible : bool
        Whether narrowing tolerances of values can prove them all.
    smallest : bool
        Whether no smaller set of tolerances does.
    options : tuple of Option
        Each proves all of ``checks``; the one that asks least first. Single ones all, else the best set.
    sentence : str
    """

    checks: tuple[str, ...]
    possible: bool
    smallest: bool
    options: tuple[Option, ...]
    sentence: str


@dataclass(frozen=True, slots=True)
class Placement:
    """A value that puts one mode at one frequency, at nominal values.

    Parameters
    ----------
    value, label : str
    mode : int
    wanted_hz : float
    reach_hz : pair of float
        Frequencies that the mode takes between the value gone and without bound.
    factor : float or None
        Of today's value; None where it cannot be reached.
    option : Option or None
    sentence : str
    """

    value: str
    label: str
    mode: int
    wanted_hz: float
    reach_hz: tuple[float, float]
    factor: float | None
    option: Option | None
    sentence: str
