"""What the chart of speeds and its tables show, taken from the study: rpm and Hz."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from modalview.resonance.meetings import Meeting
from modalview.resonance.results import Verdict
from modalview.resonance.speedruns import State
from modalview.response.runup import Passage
from modalview.study.campbell import Campbell, ProvenRun, is_left
from modalview.units.show import significant

RPM = 2 * math.pi / 60
RAD_PER_HZ = 2 * math.pi
# The chart ends this far above the highest mode, where the orders go on.
ABOVE_MODES = 1.15


@dataclass(frozen=True, slots=True)
class SpeedsOrder:
    """One order as a line: ``hz_per_rpm`` times the speed, or a fixed frequency; margin below and above."""

    label: str
    hz_per_rpm: float
    fixed_hz: float
    margin: tuple[float, float]


@dataclass(frozen=True, slots=True)
class SpeedsMode:
    """One mode as a level line in its range over tolerances."""

    number: int
    hz: float
    low_hz: float
    high_hz: float


@dataclass(frozen=True, slots=True)
class SpeedsMeeting:
    """Where an order meets a mode.

    Parameters
    ----------
    rpm, hz : float
    text : str
        As it is named.
    inside : bool
        Whether the machine runs where it reaches.
    """

    rpm: float
    hz: float
    text: str
    inside: bool


@dataclass(frozen=True, slots=True)
class SpeedsRun:
    """A run of speeds and what becomes of it."""

    low: float
    high: float
    state: str
    proven: bool
    wording: str
    met: tuple[str, ...]

    @property
    def barred(self) -> bool:
        """Whether the user barred it."""
        return self.state == State.BARRED


@dataclass(frozen=True, slots=True)
class SpeedsPassage:
    """A mode that an order passes on run-up: cells of the table."""

    cells: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class SpeedsContent:
    """The chart of speeds of one machine.

    Parameters
    ----------
    machine, label : str
        Id and name.
    orders : tuple of SpeedsOrder
    modes : tuple of SpeedsMode
    meetings : tuple of SpeedsMeeting
        By speed.
    speeds_rpm : pair of float
        Both the same for a single speed.
    highest_rpm, highest_hz : float
        Where the chart ends.
    runs : tuple of SpeedsRun
    barred_rpm : tuple of pairs
        By the user.
    sentence : str
    passages : tuple of SpeedsPassage
    """

    machine: str
    label: str
    orders: tuple[SpeedsOrder, ...]
    modes: tuple[SpeedsMode, ...]
    meetings: tuple[SpeedsMeeting, ...]
    speeds_rpm: tuple[float, float]
    highest_rpm: float
    highest_hz: float
    runs: tuple[SpeedsRun, ...]
    barred_rpm: tuple[tuple[float, float], ...]
    sentence: str
    passages: tuple[SpeedsPassage, ...]


RUN_HEADINGS = ("from, rpm", "to, rpm", "", "what meets there")
PASSAGE_HEADINGS = ("order", "mode", "at, rpm", "over tolerance, rpm", "damping", "passed")


def speeds_content(found: Campbell, passed: Sequence[Passage] | None = None) -> SpeedsContent:
    """Take what the chart shows.

    Parameters
    ----------
    found : Campbell
    passed : sequence of Passage or None
        Of any machines; those of this one are taken.
    """
    machine = found.machine
    hz = {one.number: one.frequency_hz for one in found.modes}
    highest = _highest_hz(found)
    own = f"{machine.id}/"
    return SpeedsContent(
        machine=machine.id,
        label=machine.name or machine.id,
        orders=tuple(
            SpeedsOrder(one.label, one.rate / 60, one.fixed / RAD_PER_HZ, one.margin) for one in found.lines
        ),
        modes=tuple(
            SpeedsMode(one.number, one.frequency_hz, *one.range_hz)
            for one in found.modes
            if one.range_hz[0] <= highest
        ),
        meetings=tuple(
            _meeting(one, hz[one.mode], found.speeds_rpm) for one in found.meetings if one.mode in hz
        ),
        speeds_rpm=found.speeds_rpm,
        highest_rpm=found.highest_rpm,
        highest_hz=highest,
        runs=tuple(_run(one) for one in found.runs),
        barred_rpm=tuple((one.from_.si / RPM, one.to.si / RPM) for one in machine.barred_ranges),
        sentence=found.sentence,
        passages=tuple(_passage(one) for one in passed or () if one.check.startswith(own)),
    )


def _highest_hz(found: Campbell) -> float:
    lines = max(line.at(found.highest_rpm * RPM) for line in found.lines) / RAD_PER_HZ
    modes = [one.range_hz[1] for one in found.modes]
    once = found.highest_rpm / 60  # the speed itself is always in sight
    return min(lines, max(ABOVE_MODES * max(modes, default=lines), once))


def _meeting(one: Meeting, hz: float, running: tuple[float, float]) -> SpeedsMeeting:
    low, high = (edge / RPM for edge in one.reach)
    text = (
        f"{one.label} meets mode {one.mode} ({significant(hz, 4)} Hz) at {speed_text(one.speed / RPM)} rpm; "
        f"keep clear of {speed_text(low)} to {speed_text(high)} rpm (margin, over tolerance)"
    )
    return SpeedsMeeting(one.speed / RPM, hz, text, inside=low <= running[1] and high >= running[0])


def speed_text(rpm: float) -> str:
    """Write a speed to five figures.

    >>> speed_text(2950.0), speed_text(1230.456)
    ('2950', '1230.5')
    """
    return f"{float(f'{rpm:.5g}'):.10g}"


def _run(one: ProvenRun) -> SpeedsRun:
    run = one.run
    met = tuple(dict.fromkeys(f"{each.label} on mode {each.mode}" for each in run.meetings))
    return SpeedsRun(run.low, run.high, str(run.state), is_left(one), one.wording, met)


def run_cells(run: SpeedsRun) -> tuple[str, ...]:
    """Return a run as a line of the table."""
    word = run.wording if not run.proven else f"remains: {run.wording}"
    if run.wording == str(Verdict.IN_BAND):
        word = "meets a mode"
    elif run.wording == str(Verdict.NOMINAL_ONLY):
        word = "meets a mode within tolerance"
    return speed_text(run.low), speed_text(run.high), word, "; ".join(run.met)


def _passage(one: Passage) -> SpeedsPassage:
    low, high = (edge / RPM for edge in one.speeds)
    slow = {None: "no acceleration or damping given", True: "slow", False: "fast"}[one.quasi_steady]
    if one.seconds is not None:
        slow += f", {significant(one.seconds, 2)} s in its half-power band"
    ratio = "none" if one.damping_ratio is None else f"{significant(100 * one.damping_ratio, 2)} %"
    return SpeedsPassage(
        (
            one.label,
            f"{one.mode} at {significant(one.frequency / RAD_PER_HZ, 4)} Hz",
            speed_text(one.speed / RPM),
            f"{speed_text(low)} to {speed_text(high)}",
            ratio,
            slow,
        )
    )
