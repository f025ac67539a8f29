"""What else clears a model: an absorber, mounts that stand elsewhere, speeds that are barred."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from time import perf_counter

from modalview.advice.absorber import (
    FATIGUE,
    MASS_RATIO,
    Absorber,
    Tuning,
    absorber_edit,
    directions,
    own_mass,
    tuning,
)
from modalview.advice.changes.options import Base, Told, base_of, option_of, tried
from modalview.advice.changes.results import Kind, Option, ValueChange
from modalview.advice.geometry import Moved, every_feet, moves_that_clear
from modalview.errors import CancelledError, InputError
from modalview.model.differences import Rewrite, checked_edit
from modalview.model.loadcases import in_load_case
from modalview.model.parts import Excitation, Machine, Model, SpeedRange
from modalview.model.values import Entry
from modalview.resonance.results import Check, Verdict
from modalview.resonance.speedruns import RPM, State
from modalview.study.campbell import campbell, is_left, speeds_of
from modalview.study.look import RAD_PER_HZ
from modalview.study.results import FoundMode, Request, Solution
from modalview.study.solve import solve
from modalview.units.show import short, significant

COLUMNS = ("x", "y", "z", "rx", "ry", "rz")
# A mode whose motion of a body is below this share of its largest motion has nothing to do with it here.
NOTICED = 0.05
NO_DAMPER_IN_VERDICT = (
    "Verdicts take natural frequencies without damping: what the damper is worth shows in the response."
)
RATIO_GOES = "With a dashpot in the model its damping ratio no longer acts: give the dampers of the rest."
DRIVE = (
    "A barred range belongs in the drive, under change control; the check of the whole range stays as it is."
)
PLINTHS = "What the mounts then stand on is taken as stiff as before; check stability and clearances."


@dataclass(frozen=True, slots=True)
class RemediesRequest:
    """What is to be looked for.

    Parameters
    ----------
    request : Request
    absorbers : tuple of Absorber
        Shown whether they clear everything or not. Empty: one where a single speed excites a body.
    geometry : bool
        Whether to try mounts that stand elsewhere.
    """

    request: Request
    absorbers: tuple[Absorber, ...] = ()
    geometry: bool = True


@dataclass(frozen=True, slots=True)
class BarredSpeeds:
    """Speed ranges of one machine that must be barred, and what is left.

    Parameters
    ----------
    machine, label : str
    bar_rpm, left_rpm : tuple of pair of float
        Ascending; empty ``bar_rpm`` for a single speed, whose ``left_rpm`` are the clear speeds near it.
    whole_rpm : pair of float
        What was divided.
    edit : Rewrite or None
        Bars them; None where there is nothing to bar or nothing would be left.
    sentence : str
    """

    machine: str
    label: str
    bar_rpm: tuple[tuple[float, float], ...]
    left_rpm: tuple[tuple[float, float], ...]
    whole_rpm: tuple[float, float]
    edit: Rewrite | None
    sentence: str


@dataclass(frozen=True, slots=True)
class Remedies:
    """What was found.

    Parameters
    ----------
    asked : RemediesRequest
    options : tuple of Option
        Absorbers, then mounts that stand elsewhere.
    speeds : tuple of BarredSpeeds
        Of machines that are not clear.
    notes : tuple of str
        What was tried without success.
    seconds : float
    """

    asked: RemediesRequest
    options: tuple[Option, ...]
    speeds: tuple[BarredSpeeds, ...]
    notes: tuple[str, ...]
    seconds: float


def remedies(asked: RemediesRequest) -> Remedies:
    """Look for what clears a model without changing a value of it.

    Raises
    ------
    InputError
        An absorber that was asked for cannot be, or the model is too large.
    ModelFaultsError
    CancelledError
    """
    start = perf_counter()
    request = asked.request
    base = base_of(request.model)
    options: list[Option] = []
    notes: list[str] = []
    if not base.clear or asked.absorbers:
        solution = solve(replace(request, progress=None))
        _tell(request, "absorbers", 0.1)
        for one in asked.absorbers or _fitting_absorbers(solution):
            _absorb(base, solution, one, options, notes, wanted=bool(asked.absorbers))
    if not base.clear and asked.geometry:
        options += _moves(request, base, notes)
    _tell(request, "speeds", 0.9)
    speeds = () if base.clear else _speeds(request)
    return Remedies(asked, tuple(options), speeds, tuple(notes), perf_counter() - start)


def _tell(request: Request, what: str, share: float) -> None:
    if request.cancelled():
        raise CancelledError("Stopped by the user.")
    if request.progress is not None:
        request.progress(what, share)


# Absorbers


def absorber_frequency(checks: Sequence[Check]) -> float:
    """Return what an absorber is tuned to where nobody says: the first single excitation that is not clear.

    Parameters
    ----------
    checks : sequence of Check
        Where all are clear, or none has a single frequency, the first single one, or the middle of the first
        range, counts; Hz.

    Raises
    ------
    InputError
        There is no check.
    """
    if not checks:
        raise InputError("an absorber is tuned to an excitation: give a machine its speed and its orders")
    single = [one for one in checks if one.band.excitation[0] == one.band.excitation[1]]
    bad = [one for one in single if one.verdict is not Verdict.CLEAR]
    low, high = (bad or single or list(checks))[0].band.excitation
    return (low + high) / 2 / RAD_PER_HZ


def _fitting_absorbers(solution: Solution) -> Iterator[Absorber]:
    """Yield an absorber for every single excitation frequency that meets a mode, where it acts."""
    model = solution.outlook.request.model
    for check in solution.checks:
        low, high = check.band.excitation
        machine = next(one for one in model.machines if one.id == check.band.machine)
        excitation = next(one for one in machine.excitations if one.id == check.band.excitation_id)
        body = excitation.at.body if excitation.at is not None else None
        if check.verdict is Verdict.CLEAR or low != high or body is None:
            continue
        mode = next((one for one in solution.modes if one.number == check.worst_mode), None)
        direction = _way(model, excitation, body, mode)
        asked = Absorber(body, direction, low / RAD_PER_HZ, MASS_RATIO)
        try:
            own_mass(model, asked)
        except InputError:  # a body that is massless or held still there
            continue
        yield asked


def _way(model: Model, excitation: Excitation, body: str, mode: FoundMode | None) -> str:
    """Return the direction of an excitation, or where it is no axis, that of the body in a mode."""
    allowed = directions(model)
    said = excitation.direction.lstrip("-") if isinstance(excitation.direction, str) else ""
    if said in allowed or len(allowed) == 1 or mode is None:
        return said if said in allowed else allowed[0]
    row = next(i for i, one in enumerate(model.bodies) if one.id == body)
    return max(allowed, key=lambda one: abs(float(mode.motion[row, COLUMNS.index(one)])))


def _absorb(
    base: Base,
    solution: Solution,
    asked: Absorber,
    options: list[Option],
    notes: list[str],
    *,
    wanted: bool,
) -> None:
    """Add an absorber to the options, or to the notes where nobody asked for it and it does not clear."""
    found = with_absorber(base, solution, asked)
    if found.clears or wanted:
        options.append(found)
    else:
        notes.append(f"{found.text}: not clear ({found.claim})")


def with_absorber(base: Base, solution: Solution, asked: Absorber) -> Option:
    """Return an absorber as an option, with the two frequencies that it makes of one.

    Parameters
    ----------
    base : Base
    solution : Solution
        Of the model without it.
    asked : Absorber

    Raises
    ------
    InputError
        It cannot be put there.
    """
    model = base.model
    works_on = own_mass(model, asked)
    mode = _mode_near(solution, asked)
    if asked.damped:
        if mode is None:
            raise InputError("no mode moves that body that way: there is nothing for a damper to hold down")
        works_on = _equivalent_mass(solution, mode, asked)
        asked = replace(asked, frequency_hz=mode.frequency_hz)
    tuned = tuning(asked.mass_ratio, works_on, asked.frequency_hz, damped=asked.damped)
    after = absorber_edit(model, asked, tuned, model.units or "SI").apply(model)
    told = Told(
        Kind.ABSORBER,
        _absorber_text(after, asked, model),
        changes=(),
        amount=asked.mass_ratio,
        claim=_split(solve(Request(after)), model, asked, tuned),
        cautions=_cautions(model, asked),
    )
    return _option(base, after, told)


def _option(base: Base, after: Model, told: Told) -> Option:
    judged = tried(base, after)
    if judged is None:
        raise InputError(f"{told.text}: this breaks a rule of models")
    return option_of(base, judged, told)


def _absorber_text(after: Model, asked: Absorber, model: Model) -> str:
    body = next(one for one in model.bodies if one.id == asked.body)
    values = ", ".join(_new_values(after, model))
    kind = "a damped absorber" if asked.damped else "an absorber"
    return f"Add {kind} to {body.name or body.id} along {asked.direction}: {values}"


def _new_values(after: Model, before: Model) -> Iterator[str]:
    """Yield the text of every value that an absorber brings along."""
    for part in (*after.bodies[len(before.bodies) :], *after.links[len(before.links) :]):
        for key in ("mass", "inertia", "stiffness", "damping"):
            value = getattr(part, key, None)
            if value is not None:
                yield value.text


def _cautions(model: Model, asked: Absorber) -> tuple[str, ...]:
    if not asked.damped:
        return (FATIGUE,)
    goes = (RATIO_GOES,) if model.damping is not None and model.damping.ratio is not None else ()
    return (FATIGUE, NO_DAMPER_IN_VERDICT, *goes)


def _column(asked: Absorber) -> int:
    return COLUMNS.index(asked.direction)


def _mode_near(solution: Solution, asked: Absorber) -> FoundMode | None:
    """Return the mode nearest in frequency that moves the body noticeably."""
    model = solution.outlook.request.model
    row = next(i for i, one in enumerate(model.bodies) if one.id == asked.body)
    moving = [
        one
        for one in solution.modes
        if one.kind == "elastic" and abs(one.motion[row, _column(asked)]) > NOTICED
    ]
    return min(moving, key=lambda one: abs(one.frequency_hz - asked.frequency_hz), default=None)


def _equivalent_mass(solution: Solution, mode: FoundMode, asked: Absorber) -> float:
    """Return the mass that a mode moves at the place of an absorber: 1 / phi**2, phi M-normalised."""
    model = solution.outlook.request.model
    row = next(i for i, one in enumerate(model.bodies) if one.id == asked.body)
    motion = float(mode.motion[row, _column(asked)])
    return solution.modal_mass[mode.number - 1] / motion**2


def _split(after: Solution, before: Model, asked: Absorber, tuned: Tuning) -> str:
    """Say the two frequencies that the absorber makes, with their ranges over all tolerances."""
    modes = [one for one in after.modes if one.kind == "elastic"]
    row, column = len(before.bodies), _column(asked)
    stirred = [one for one in modes if abs(one.motion[row, column]) > NOTICED]
    two = [
        *[one for one in stirred if one.frequency_hz <= asked.frequency_hz][-1:],
        *[one for one in stirred if one.frequency_hz > asked.frequency_hz][:1],
    ]
    said = " and ".join(
        f"{significant(one.frequency_hz, 4)} Hz ({significant(one.range_hz[0], 3)} to "
        f"{significant(one.range_hz[1], 3)} over tolerance)"
        for one in two
    )
    head = f"tuned to {significant(asked.frequency_hz, 4)} Hz: modes at {said}"
    if tuned.largest_response is None:
        return head
    return (
        f"{head}; damping ratio {tuned.ratio:.3f}, largest response "
        f"{tuned.largest_response:.3g} times the static one at any speed, of this mode alone"
    )


# Mounts that stand elsewhere


def _moves(request: Request, base: Base, notes: list[str]) -> list[Option]:
    model = base.model
    found: list[Option] = []
    every = every_feet(model)

    def clears(one: Model) -> bool:
        if request.cancelled():
            raise CancelledError("Stopped by the user.")
        judged = tried(base, one)
        return judged is not None and judged.clear

    for number, feet in enumerate(every):
        _tell(request, feet.what, 0.2 + 0.7 * number / len(every))
        moved = list(moves_that_clear(model, feet, clears, model.units or "SI"))
        found += [_moved_option(base, one) for one in moved]
        if not moved:
            notes.append(f"No {feet.what} of those tried clears everything")
    return found


def _moved_option(base: Base, moved: Moved) -> Option:
    feet = moved.feet
    place = f"{feet.body}.feet.{feet.kind}"
    change = ValueChange(place, feet.what, moved.before, moved.after, feet.now, moved.to)
    amount = abs(moved.to - feet.now) / abs(feet.now)
    told = Told(Kind.GEOMETRY, moved.text, (), amount, cautions=(PLINTHS,))
    return replace(_option(base, moved.model, told), changes=(change,))


# Speeds


def _speeds(request: Request) -> tuple[BarredSpeeds, ...]:
    model = request.model
    met: dict[str, list[tuple[float, float]]] = {}
    left: dict[str, list[list[tuple[float, float]]]] = {}
    whole: dict[str, tuple[float, float]] = {}
    bad: set[str] = set()
    every = (model, *(in_load_case(model, case) for case in model.load_cases))
    for one in every:
        for diagram in campbell(solve(replace(request, model=one, progress=None))):
            name = diagram.machine.id
            whole[name] = diagram.considered_rpm
            met.setdefault(name, []).extend(
                (p.run.low, p.run.high) for p in diagram.runs if not is_left(p) and p.run.state is State.MET
            )
            left.setdefault(name, []).append([(p.run.low, p.run.high) for p in diagram.runs if is_left(p)])
            if diagram.verdict is not Verdict.CLEAR:
                bad.add(name)
    machines = [one for one in model.machines if one.id in bad]
    return tuple(
        _barred(model, one, _united(met[one.id]), _common(left[one.id]), whole[one.id]) for one in machines
    )


def _united(ranges: Sequence[tuple[float, float]]) -> tuple[tuple[float, float], ...]:
    """Return ranges with those that touch made one.

    >>> _united([(5.0, 7.0), (1.0, 2.0), (6.0, 9.0)])
    ((1.0, 2.0), (5.0, 9.0))
    """
    found: list[tuple[float, float]] = []
    for low, high in sorted(ranges):
        if found and low <= found[-1][1]:
            found[-1] = (found[-1][0], max(high, found[-1][1]))
        else:
            found.append((low, high))
    return tuple(found)


def _common(lists: Sequence[Sequence[tuple[float, float]]]) -> tuple[tuple[float, float], ...]:
    """Return what ranges of several lists have in common.

    >>> _common([[(0.0, 4.0), (6.0, 9.0)], [(3.0, 7.0)]])
    ((3.0, 4.0), (6.0, 7.0))
    """
    shared = list(lists[0])
    for others in lists[1:]:
        cut = [(max(a, c), min(b, d)) for a, b in shared for c, d in others]
        shared = [(low, high) for low, high in cut if low < high]
    return tuple(shared)


def _barred(
    model: Model,
    machine: Machine,
    met: tuple[tuple[float, float], ...],
    left: tuple[tuple[float, float], ...],
    whole: tuple[float, float],
) -> BarredSpeeds:
    label = machine.name or machine.id
    own = speeds_of(machine)
    ranged = own[0] < own[1]
    bar = met if ranged else ()
    edit = _barring_edit(model, machine, bar) if bar and left else None
    if not left:
        near = "" if ranged else " near its speed"
        said = f"{label}: no speed{near} is clear of every order; barring speeds is no way out."
    elif ranged:
        rpm = sum(high - low for low, high in left)
        size = f"{short(rpm, 4)} of {short(whole[1] - whole[0], 4)} rpm"
        said = f"{label}: bar {_ranges(bar)} rpm; {_ranges(left)} rpm are left, {size}."
    else:
        said = f"{label}: clear speeds near {short(own[0])} rpm are {_ranges(left)} rpm."
    return BarredSpeeds(machine.id, label, bar, left, whole, edit, said)


def _ranges(found: Sequence[tuple[float, float]]) -> str:
    return ", ".join(f"{short(low)} to {short(high)}" for low, high in found)


def _barring_edit(model: Model, machine: Machine, bar: Sequence[tuple[float, float]]) -> Rewrite:
    known = [(one.from_.si / RPM, one.to.si / RPM) for one in machine.barred_ranges]
    ranges = tuple(
        SpeedRange(from_=_rpm(low), to=_rpm(high)) for low, high in _united([*known, *bar]) if low < high
    )
    machines = tuple(
        replace(one, barred_ranges=ranges) if one.id == machine.id else one for one in model.machines
    )
    return checked_edit(
        model, replace(model, machines=machines), f"Bar speeds of {machine.name or machine.id}"
    )


def _rpm(rpm: float) -> Entry:
    return Entry(f"{short(rpm, 12)} rpm", float(f"{rpm:.12g}") * RPM)
