"""All windows of one value that clear every check over all tolerances, each proven by counts at its ends."""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
import numpy.typing as npt

from modalview.advice.changes.edges import Edge, Gate
from modalview.advice.changes.numbers import DOWN, UP, rounded
from modalview.advice.changes.results import Window
from modalview.advice.changes.values import Variable
from modalview.assembly.parameters import Case

Array = npt.NDArray[np.float64]

# Ends are shown with so few digits where the window is wide enough, else with more.
DIGITS = (4, 5, 6, 7)
# More digits are shown where fewer would leave less than this share of a window.
KEPT = 0.95
# The last digit steps inward so often where rounding leaves the count at an end open.
STEPS = 3
# An open end is proven so far beyond the other end, and beyond today's value; nearer where a mass all but
# gone, or a stiffness all but rigid, leaves counts undecided.
FAR = (1e4, 30.0)
YOUR_LIMIT = "your limit"
# No model has a value beyond these factors of today's.
SMALLEST, LARGEST = 1e-9, 1e9


@dataclass(frozen=True, slots=True)
class Span:
    """Factors between two crossings at which every check is clear, not yet rounded.

    Parameters
    ----------
    low, high : float
        0 and infinity where nothing ends it.
    bound_by : pair of str
    """

    low: float
    high: float
    bound_by: tuple[str, str]


@dataclass(frozen=True, eq=False)
class _Steps:
    """The count at one edge as a step function of one factor, falling (stiffness) or rising (mass)."""

    at: Array
    start: int
    rise: int

    def number(self, factor: float) -> int:
        return self.start + self.rise * int(np.searchsorted(self.at, factor))


def _profile(edge: Edge, variable: Variable) -> _Steps:
    flexible = edge.flexible((variable,))
    at = flexible.crossings()
    rise = 1 if variable.family == "mass" else -1
    passed = int(np.searchsorted(at, 1.0))
    return _Steps(at, flexible.below - rise * passed, rise)


def spans(gates: Sequence[Gate], variable: Variable) -> tuple[Span, ...]:
    """Return the factors of one variable that clear every check over all tolerances, ascending.

    Parameters
    ----------
    gates : sequence of Gate
    variable : Variable
        Its limits cut the spans.

    Notes
    -----
    A mode crosses an edge where K - sigma M is singular. The terms of the variable have few columns, so that
    all crossings are eigenvalues of one small matrix for each edge. Between crossings no count changes.
    """
    profiles = [(gate, _profile(gate.upper, variable), _profile(gate.lower, variable)) for gate in gates]
    every = [steps.at for _, upper, lower in profiles for steps in (upper, lower)]
    points = np.unique(np.concatenate([*every, np.zeros(0)]))
    points = points[(points > SMALLEST) & (points < LARGEST)]
    ends = [0.0, *points.tolist(), math.inf]
    found: list[Span] = []
    for low, high in pairwise(ends):
        middle = _middle(low, high)
        if any(upper.number(middle) > lower.number(middle) for _, upper, lower in profiles):
            continue
        if found and found[-1].high == low:
            found[-1] = Span(found[-1].low, high, found[-1].bound_by)
        else:
            found.append(Span(low, high, ("", "")))
    named = [Span(s.low, s.high, (_ended(profiles, s.low), _ended(profiles, s.high))) for s in found]
    cut = (_cut(one, variable.limits) for one in named)
    return tuple(one for one in cut if one is not None)


def _middle(low: float, high: float) -> float:
    if low == 0:
        return high / 2 if high < math.inf else 1.0
    return math.sqrt(low * high) if high < math.inf else 2 * low


def _ended(profiles: Sequence[tuple[Gate, _Steps, _Steps]], factor: float) -> str:
    """Return which check, at which tolerance case, changes at a factor."""
    if factor in (0.0, math.inf):
        return ""
    for gate, upper, lower in profiles:
        if factor in upper.at:
            return f"{gate.name}, {Case.SOFT_HEAVY}"
        if factor in lower.at:
            return f"{gate.name}, {Case.STIFF_LIGHT}"
    return ""


def _cut(span: Span, limits: tuple[float, float]) -> Span | None:
    low, high = max(span.low, limits[0]), min(span.high, limits[1])
    if low >= high and not (low == high == limits[0] == limits[1]):
        return None
    by = (
        YOUR_LIMIT if low > span.low else span.bound_by[0],
        YOUR_LIMIT if high < span.high else span.bound_by[1],
    )
    return Span(low, high, by)


@dataclass(frozen=True, slots=True)
class Shown:
    """How the ends of windows are shown.

    Parameters
    ----------
    nominal : float
        Today's value, SI; 1 for several that change by one factor.
    text_of : callable
        Text of a value at so many digits.
    spelled : callable
        Rounds a value to so many digits and to a side, in the unit it is shown in.
    """

    nominal: float
    text_of: Callable[[float, int], str]
    spelled: Callable[[float, int, int], float] = rounded


def windows(
    gates: Sequence[Gate], variable: Variable, shown: Shown, *, prove: bool = True
) -> tuple[Window, ...]:
    """Return the windows of a variable, their ends rounded inward and proven by counts.

    Parameters
    ----------
    gates : sequence of Gate
    variable : Variable
    shown : Shown
    prove : bool
        Two pencils and two counts of every check for each window.
    """
    found = (_window(gates, variable, span, shown, prove=prove) for span in spans(gates, variable))
    return tuple(one for one in found if one is not None)


def _window(
    gates: Sequence[Gate], variable: Variable, span: Span, shown: Shown, *, prove: bool
) -> Window | None:
    """Return a span with few digits, more where it is narrow or where counts leave an end open."""
    last = first = None
    for digits in DIGITS:
        for inward in range(STEPS):
            last = _rounded(span, shown, digits, inward) or last
            if last is None or (digits < DIGITS[-1] and not _keeps(last)):
                break
            if not prove:
                return last
            first = first or last
            if proves(gates, variable, last.low / shown.nominal, last.high / shown.nominal):
                return replace(last, proven=True)
    return first or last


def _keeps(window: Window) -> bool:
    """Return whether rounding leaves most of a window."""
    low, high = window.exact
    return high == math.inf or window.high - window.low >= KEPT * (high - low)


def _rounded(span: Span, shown: Shown, digits: int, inward: int) -> Window | None:
    """Return a span with ends of so many digits, some units of the last inward; None where none is left."""
    exact = (span.low * shown.nominal, span.high * shown.nominal)
    unit = inward * 10.0 ** (1 - digits)
    low, high = exact
    if low > 0:
        low = max(shown.spelled(low * (1 + unit), digits, UP), low)
    if high < math.inf:
        high = min(shown.spelled(high * (1 - unit), digits, DOWN), high)
    if low > high:
        return None
    texts = (
        shown.text_of(low, digits) if low > 0 else "",
        shown.text_of(high, digits) if high < math.inf else "",
    )
    return Window(low, high, *texts, exact, span.bound_by, proven=False)


def proves(gates: Sequence[Gate], variable: Variable, low: float, high: float) -> bool:
    """Return whether counts prove that every factor from ``low`` to ``high`` clears every check.

    Notes
    -----
    Ordered frequencies move one way with the factor (Courant-Fischer): with as many modes up to the band at
    the softest end, soft-heavy, as below it at the stiffest end, stiff-light, none lies in it anywhere
    between. An open end is counted at the first of ``FAR`` times the other one, or today's value, at which
    rounding leaves counts decided; beyond it no crossing is left.
    """
    name, both = {variable.id: variable}, low > 0 and high < math.inf
    for far in FAR[:1] if both else FAR:
        bottom = low if low > 0 else min(high, 1.0) / far
        top = high if high < math.inf else max(low, 1.0) * far
        if clear_between(gates, name, {variable.id: bottom}, {variable.id: top}):
            return True
    return False


def clear_between(
    gates: Sequence[Gate],
    variables: dict[str, Variable],
    low: dict[str, float],
    high: dict[str, float],
) -> bool:
    """Return whether counts prove every check clear at all factors from ``low`` to ``high``, by variable."""
    soft, stiff = corners(variables, low, high)
    states = {id(gate.state): gate.state for gate in gates}
    for key, state in states.items():
        below = state.counter_with(Case.SOFT_HEAVY, soft)
        above = state.counter_with(Case.STIFF_LIGHT, stiff)
        for gate in gates:
            if id(gate.state) != key:
                continue
            most = below.at_most(gate.upper.omega).number
            least = above.below(gate.lower.omega).number
            if most is None or least is None or most > least:
                return False
    return True


def corners(
    variables: dict[str, Variable], low: dict[str, float], high: dict[str, float]
) -> tuple[dict[str, float], dict[str, float]]:
    """Return the factors of all parameters at the softest and at the stiffest corner of a box."""
    soft, stiff = {}, {}
    for key, one in variables.items():
        ends = (low[key], high[key]) if one.family == "stiffness" else (high[key], low[key])
        for member in one.members:
            soft[member], stiff[member] = ends
    return soft, stiff
