"""What is left of a range of speeds without those that meet a mode and those barred by the user."""

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from enum import StrEnum
from itertools import pairwise

from modalview.resonance.meetings import Meeting

RPM = 2 * math.pi / 60
# Ends of a meeting are moved outward by this share before they are rounded to a speed that can be set: more
# than counts of modes may have to move their own edges, so that what is left can be proven.
OUTWARD = 2e-6
# The step of the speeds told: 1 rpm, less where the highest speed has fewer than four digits.
COARSEST, DIGITS = 0, 3


class State(StrEnum):
    """What becomes of a run of speeds."""

    LEFT = "left"
    MET = "met"
    BARRED = "barred"


@dataclass(frozen=True, slots=True)
class Run:
    """A run of machine speeds of one state.

    Parameters
    ----------
    low, high : float, rpm
        Speeds as set. Ends of what meets a mode are rounded outward, to whole rpm or finer.
    state : State
        Left: no order comes near a mode there. Barred: by the user, whatever meets there.
    meetings : tuple of Meeting
        Those that reach into it.
    """

    low: float
    high: float
    state: State
    meetings: tuple[Meeting, ...]


def runs(
    meetings: Sequence[Meeting], considered: tuple[float, float], barred: Iterable[tuple[float, float]] = ()
) -> tuple[Run, ...]:
    """Divide a range of speeds into runs, ascending and without gaps.

    Parameters
    ----------
    meetings : sequence of Meeting
    considered : pair of float, rpm
        The range divided; one speed (both the same) gives one run.
    barred : pairs of float, rpm
        Ranges that the user has barred.

    Returns
    -------
    tuple of Run
        Neighbours share an end and differ in state. The ends of a barred run belong to the user's range.
    """
    low, high = considered
    digits = _digits(high)
    reached = [(_outward(one, digits), one) for one in meetings]
    shut = [(a, b) for a, b in barred if b >= low and a <= high]
    ends = {low, high, *(e for r, _ in reached for e in r), *(e for r in shut for e in r)}
    edges = sorted(e for e in ends if low <= e <= high)
    parts = list(pairwise(edges)) or [(low, high)]
    found: list[Run] = []
    for a, b in parts:
        state = _state((a + b) / 2, [r for r, _ in reached], shut)
        start = found.pop().low if found and found[-1].state is state else a
        found.append(Run(start, b, state, ()))
    return tuple(
        Run(run.low, run.high, run.state, _inside(run, reached) if run.state is not State.LEFT else ())
        for run in found
    )


def _digits(highest: float) -> int:
    """Return how many decimals of an rpm are told."""
    return max(COARSEST, DIGITS - math.floor(math.log10(highest)))


def _outward(one: Meeting, digits: int) -> tuple[float, float]:
    low, high = (edge / RPM for edge in one.reach)
    scale = 10.0**digits
    return (
        math.floor(low * (1 - OUTWARD) * scale) / scale,
        math.ceil(high * (1 + OUTWARD) * scale) / scale,
    )


def _state(
    speed: float, reached: Iterable[tuple[float, float]], shut: Iterable[tuple[float, float]]
) -> State:
    if any(a <= speed <= b for a, b in shut):
        return State.BARRED
    return State.MET if any(a <= speed <= b for a, b in reached) else State.LEFT


def _inside(run: Run, reached: Iterable[tuple[tuple[float, float], Meeting]]) -> tuple[Meeting, ...]:
    """Return the meetings that reach into a run, not only to its end."""
    alone = run.low == run.high
    return tuple(
        one for (a, b), one in reached if (a < run.high and b > run.low) or (alone and a <= run.low <= b)
    )
