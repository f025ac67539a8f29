"""The Campbell diagram of a machine as data: orders over modes, and the speeds left, proven by counts."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from modalview.eigen.solve import LARGEST
from modalview.eigen.span import ModeSpan
from modalview.errors import InputError
from modalview.model.parts import Machine, SpeedRange
from modalview.model.values import Entry
from modalview.resonance.bands import bands
from modalview.resonance.meetings import Meeting, OrderLine, meetings, order_lines
from modalview.resonance.results import Check, Verdict
from modalview.resonance.speedruns import RPM, Run, State, runs
from modalview.resonance.verdict import worst
from modalview.study.completed import ELASTIC
from modalview.study.look import RAD_PER_HZ, judge_bands
from modalview.study.results import FoundMode, Solution
from modalview.units.show import short

# Around a single speed this share of it is looked at, and the diagram goes on to this share of the highest
# speed. Chosen, no source.
BELOW, ABOVE, BEYOND = 0.5, 1.25, 1.25


@dataclass(frozen=True, slots=True, eq=False)
class ProvenRun:
    """A run of speeds with what was counted in it.

    Parameters
    ----------
    run : Run
    verdict : Verdict
        Over the run: clear only if counts prove it for every order at once; where an order meets a mode, or
        within the user's barred range, the worst there.
    wording : str
        As shown: "clear (2 values taken as exact)".
    checks : tuple of Check
        One for each order, its band over the whole run; empty where a meeting is known.
    """

    run: Run
    verdict: Verdict
    wording: str
    checks: tuple[Check, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Campbell:
    """The speeds of one machine against the modes.

    Parameters
    ----------
    machine : Machine
    lines : tuple of OrderLine
        Orders as rays, fixed frequencies as level lines; rad/s.
    modes : tuple of FoundMode
        Elastic modes that any line comes to within the diagram.
    speeds_rpm : pair of float
        The machine's own; both the same for a single speed.
    considered_rpm : pair of float
        What ``runs`` divide: the machine's range, or the surroundings of its single speed.
    highest_rpm : float
        Where the diagram ends.
    meetings : tuple of Meeting
        All within the diagram, by speed, those passed on run-up included; rad/s.
    runs : tuple of ProvenRun
        What is met, barred and left of ``considered_rpm``.
    fixed : tuple of Check
        Verdicts on fixed frequencies: they hold at every speed.
    verdict : Verdict or None
        The worst outside the user's barred ranges; None where there is nothing to check.
    sentence : str
    """

    machine: Machine
    lines: tuple[OrderLine, ...]
    modes: tuple[FoundMode, ...]
    speeds_rpm: tuple[float, float]
    considered_rpm: tuple[float, float]
    highest_rpm: float
    meetings: tuple[Meeting, ...]
    runs: tuple[ProvenRun, ...]
    fixed: tuple[Check, ...]
    verdict: Verdict | None
    sentence: str

    @property
    def left_rpm(self) -> float:
        """How many rpm of what is looked at are proven clear."""
        return sum(one.run.high - one.run.low for one in self.runs if is_left(one))


def is_left(one: ProvenRun) -> bool:
    """Return whether a run is left to the machine: proven clear and not barred."""
    return one.run.state is State.LEFT and one.verdict is Verdict.CLEAR


def campbell(solution: Solution) -> tuple[Campbell, ...]:
    """Return the diagram of every machine that has a speed.

    Parameters
    ----------
    solution : Solution
        With all modes.

    Raises
    ------
    InputError
        The model is too large for all of its modes, so that meetings would be missed.
    CancelledError
    """
    modes = solution.outlook.assembly.pencil().modes
    if modes > LARGEST:
        raise InputError(
            f"The model has {modes} modes; speeds are held against all of them, up to {LARGEST}. "
            "The check of each speed and order needs no such limit: keepclear check FILE."
        )
    machines = solution.outlook.request.model.machines
    return tuple(_diagram(solution, one) for one in machines if one.speed is not None and one.excitations)


def spans(modes: Sequence[FoundMode]) -> tuple[ModeSpan, ...]:
    """Return elastic modes as they are held against speeds, rad/s."""
    return tuple(
        ModeSpan(one.number, *(RAD_PER_HZ * f for f in (one.frequency_hz, *one.range_hz)))
        for one in modes
        if one.kind == ELASTIC
    )


def _diagram(solution: Solution, machine: Machine) -> Campbell:
    model = solution.outlook.request.model
    lines, own = order_lines(model, machine), speeds_of(machine)
    considered = own if own[0] < own[1] else (BELOW * own[0], ABOVE * own[1])
    highest = BEYOND * own[1]
    tolerance = machine.speed_tolerance.si if machine.speed_tolerance else 0.0
    found = meetings(lines, spans(solution.modes), highest * RPM, tolerance)
    barred = [(_rpm(one.from_), _rpm(one.to)) for one in machine.barred_ranges]
    proven = tuple(_proven(solution, machine, run) for run in runs(found, considered, barred))
    checks = [one for one in solution.checks if one.band.machine == machine.id]
    fixed = tuple(one for one in checks if one.band.order is None)
    verdict = worst(tuple(checks)) if own[0] == own[1] else _worst_outside(proven, fixed)
    top = max(line.at(highest * RPM) for line in lines) / RAD_PER_HZ
    return Campbell(
        machine=machine,
        lines=lines,
        modes=tuple(m for m in solution.modes if m.kind == ELASTIC and m.range_hz[0] <= top),
        speeds_rpm=own,
        considered_rpm=considered,
        highest_rpm=highest,
        meetings=found,
        runs=proven,
        fixed=fixed,
        verdict=verdict,
        sentence=_sentence(machine, own, proven, fixed),
    )


def speeds_of(machine: Machine) -> tuple[float, float]:
    """Return the lowest and the highest speed of a machine that has one, rpm."""
    speed = machine.speed
    if isinstance(speed, SpeedRange):
        return _rpm(speed.from_), _rpm(speed.to)
    if speed is None:
        raise InputError(f"machine {machine.name or machine.id} has no speed")
    return _rpm(speed), _rpm(speed)


def _rpm(speed: Entry) -> float:
    """Return a speed in rpm as typed: 1480, not 1480.0000000000002."""
    return float(f"{speed.si / RPM:.12g}")


def _proven(solution: Solution, machine: Machine, run: Run) -> ProvenRun:
    if run.state is not State.LEFT:
        verdict = _worst_met(run)
        wording = "barred by you" if run.state is State.BARRED else verdict.value
        return ProvenRun(run, verdict, wording, ())
    outlook = solution.outlook
    speed = SpeedRange(from_=_entry(run.low), to=_entry(run.high))
    orders = tuple(one for one in machine.excitations if one.order is not None)
    running = replace(machine, speed=speed, excitations=orders)
    model = replace(outlook.request.model, machines=(running,))
    checks = judge_bands(outlook.request, outlook.assembly, bands(model))
    verdict = worst(checks) or Verdict.CLEAR
    if verdict is not Verdict.CLEAR:
        return ProvenRun(run, verdict, "not proven clear: rounding leaves counts undecided", checks)
    return ProvenRun(run, verdict, _clear_wording(checks), checks)


def _entry(rpm: float) -> Entry:
    return Entry(f"{rpm!r} rpm", rpm * RPM)


def _clear_wording(checks: Sequence[Check]) -> str:
    """Return the most guarded of the words of checks that are all clear."""
    return max(
        (one.wording for one in checks), key=lambda text: ("in this model" in text, text), default="clear"
    )


def _worst_met(run: Run) -> Verdict:
    if not run.meetings:
        return Verdict.CLEAR
    low, high = run.low * RPM, run.high * RPM
    nominal = any(one.within_margin[0] <= high and one.within_margin[1] >= low for one in run.meetings)
    return Verdict.IN_BAND if nominal else Verdict.NOMINAL_ONLY


def _worst_outside(proven: Sequence[ProvenRun], fixed: Sequence[Check]) -> Verdict:
    order = list(Verdict)
    found = [one.verdict for one in proven if one.run.state is not State.BARRED]
    return max([*found, *(one.verdict for one in fixed), Verdict.CLEAR], key=order.index)


def _sentence(
    machine: Machine, own: tuple[float, float], proven: Sequence[ProvenRun], fixed: Sequence[Check]
) -> str:
    head = f"{machine.name or machine.id}: "
    said = _of_single(own[0], proven) if own[0] == own[1] else _of_range(own, proven)
    for check in fixed:
        if check.verdict is not Verdict.CLEAR:
            said += f" {check.band.label}: {check.verdict.value}, at every speed."
    return head + said


def _of_range(own: tuple[float, float], proven: Sequence[ProvenRun]) -> str:
    whole, left = own[1] - own[0], [one for one in proven if is_left(one)]
    span = f"{short(own[0])} to {short(own[1])} rpm"
    if not left:
        return f"nothing of {span} is clear of every order."
    if len(left) == len(proven):
        return f"all of {span} is clear of every order."
    rpm = sum(one.run.high - one.run.low for one in left)
    names = ", ".join(f"{short(one.run.low)} to {short(one.run.high)}" for one in left)
    return f"{short(rpm, 4)} of the {short(whole)} rpm from {span} are clear of every order: {names} rpm."


def _of_single(speed: float, proven: Sequence[ProvenRun]) -> str:
    here = next((one for one in proven if is_left(one) and one.run.low <= speed <= one.run.high), None)
    if here is not None:
        return (
            f"{short(speed)} rpm is clear of every order, as are the speeds from {short(here.run.low)} to "
            f"{short(here.run.high)} rpm."
        )
    below = max((one.run.high for one in proven if is_left(one) and one.run.high <= speed), default=None)
    above = min((one.run.low for one in proven if is_left(one) and one.run.low >= speed), default=None)
    ends = [
        text
        for text, end in ((f"up to {short(below or 0)} rpm", below), (f"from {short(above or 0)} rpm", above))
        if end
    ]
    told = f"the nearest clear speeds are {' and '.join(ends)}" if ends else "no speed near it is"
    return f"{short(speed)} rpm is not clear of every order; {told}."
