"""Values tuned to measured peaks: paired, identified, fitted within their ranges, proven by a new solve."""

import math
from collections.abc import Sequence
from contextlib import suppress
from dataclasses import dataclass, replace
from itertools import product
from time import perf_counter

import numpy as np
import numpy.typing as npt

from modalview.advice.identified import (
    NORMAL_95,
    carried_over,
    combinations,
    deviations,
    value_slopes,
)
from modalview.advice.measured import Pair, Peak, paired, peaks_of, readable
from modalview.advice.tuning import Fit, Follower, Target, fitted
from modalview.assembly.chosen import Chosen, chosen, typed_like, values_of
from modalview.errors import CancelledError, InputError, NotConvergedError
from modalview.model.addresses import look as stands_at
from modalview.model.addresses import put
from modalview.model.differences import Rewrite, checked_edit
from modalview.model.parts import Model
from modalview.model.values import Tolerance, Value
from modalview.study.results import Request, Solution
from modalview.study.solve import solve
from modalview.study.tune_results import (
    Alone,
    PeakFit,
    ToldCombination,
    TunedValue,
    TuneRequest,
    TuneResult,
)
from modalview.study.tune_words import beyond, refusal, sentence

Array = npt.NDArray[np.float64]

RAD_PER_HZ = 2 * math.pi
# Every evaluation finds all modes by a dense solve.
LARGEST_TUNED = 1500
# To tell where a value would go without its range: so many times its size to both sides.
FREE = 1000.0
# Where in their ranges two or three values are started from, too; answers nearer than this are one.
CORNERS, MOST_CORNERED, SAME = (0.1, 0.9), 3, 1e-6
# Misfits equal to so many decimals are equally good: the fit from the values as typed goes first.
MISFIT_DIGITS = 6
# Other pairings tried at most, and values tried alone.
MOST_OTHERWISE, MOST_ALONE = 6, 60
# Tuned values are rounded to so many digits that the last is worth less than this share of the interval.
ROUNDED, FEWEST_DIGITS, MOST_DIGITS = 0.05, 4, 10


@dataclass(frozen=True, slots=True, eq=False)
class _Task:
    """What is known before anything is fitted."""

    request: TuneRequest
    before: Solution
    peaks: tuple[Peak, ...]
    pairs: tuple[Pair, ...]
    values: tuple[Chosen, ...]

    @property
    def taken(self) -> list[tuple[Peak, int]]:
        """Peaks with the places of their modes, from 0."""
        return [
            (peak, pair.taken.mode - 1)
            for peak, pair in zip(self.peaks, self.pairs, strict=True)
            if pair.taken is not None
        ]

    def follower(self, values: Sequence[Chosen], taken: Sequence[tuple[Peak, int]] | None = None) -> Follower:
        found = self.taken if taken is None else taken
        targets = [Target(mode, peak.frequency, peak.uncertainty) for peak, mode in found]
        return Follower(self.before.outlook.assembly, values, targets, self.stop)

    def stop(self) -> None:
        if self.request.cancelled():
            raise CancelledError("Tuning was stopped.")

    def tell(self, what: str, share: float) -> None:
        if self.request.progress is not None:
            self.request.progress(what, share)


def tune(request: TuneRequest, solution: Solution | None = None) -> TuneResult:
    """Tune chosen values of a model to its measured peaks.

    Parameters
    ----------
    request : TuneRequest
    solution : Solution or None
        Of the same model, if it is there already.

    Returns
    -------
    TuneResult
        With ``refused`` where the peaks do not determine the values, or not within their ranges.

    Raises
    ------
    InputError
        No peaks, a name or a range that cannot be used, a value that moves no frequency, too many modes.
    CancelledError
    """
    start = perf_counter()
    task = _task(request, solution)
    found = _found(task)
    return replace(found, sentence=sentence(found), seconds=perf_counter() - start)


def _found(task: _Task) -> TuneResult:
    blank = TuneResult(
        request=task.request,
        peaks=tuple(_peak_fit(task, *both) for both in zip(task.peaks, task.pairs, strict=True)),
        before=task.before,
        notes=_notes(task),
    )
    if not task.taken:
        return replace(blank, refused="no measured peak could be paired with a mode")
    if not task.request.values:
        return replace(blank, alone=_alone(task))
    blank = replace(blank, combinations=_told(task))
    refused = refusal(task.values, [peak.id for peak, _ in task.taken], blank.combinations)
    if refused:
        return replace(blank, refused=refused)
    try:
        fit, more = _fits(task)
    except NotConvergedError as reason:
        return replace(blank, refused=str(reason))
    return _tuned(task, fit, replace(blank, otherwise=more))


def _fits(task: _Task) -> tuple[Fit, tuple[Alone, ...]]:
    """Return the best fit of several starts, and others that meet the peaks as well.

    Peaks can have more than one answer in several values: two frequencies are met by roots of a quadratic.
    """
    found = [fitted(task.follower(task.values))]
    if 1 < len(task.values) <= MOST_CORNERED:
        for number, corner in enumerate(product(CORNERS, repeat=len(task.values))):
            task.tell("other starts", number / len(CORNERS) ** len(task.values))
            with suppress(NotConvergedError):
                found.append(fitted(task.follower(task.values), corner))
    best = min(found, key=lambda one: round(one.misfit, MISFIT_DIGITS))
    more: list[Fit] = []
    for one in found:
        if _met(one) and all(_apart(one, other) for other in (best, *more)):
            more.append(one)
    return best, tuple(_as_alone("other values", task.values, one) for one in more)


def _met(fit: Fit) -> bool:
    return float(np.abs(fit.residuals).max()) <= NORMAL_95 and not any(fit.at_end)


def _apart(one: Fit, other: Fit) -> bool:
    """Tell whether two fits are different answers, not one within its interval."""
    spread = NORMAL_95 * np.maximum(deviations(one.weighted), SAME)
    return bool(np.any(np.abs(np.log(one.values / other.values)) > 2 * spread))


def _task(request: TuneRequest, solution: Solution | None) -> _Task:
    if not request.model.measured:
        raise InputError(
            "The model has no measured peaks. Put them under measured, each with id, frequency, uncertainty, "
            "at and direction."
        )
    if solution is None or solution.outlook.request.model is not request.model:
        solution = solve(Request(request.model, cancelled=request.cancelled, progress=request.progress))
    assembly, raw = solution.outlook.assembly, solution.raw
    if assembly.pencil().modes > LARGEST_TUNED or raw.number != assembly.pencil().modes:
        raise InputError(
            f"The model has {assembly.pencil().modes} modes; values are tuned in models of up to "
            f"{LARGEST_TUNED}. Hold directions that do not matter, or join bodies that move as one."
        )
    peaks = peaks_of(assembly)
    pairs = paired(assembly, raw, peaks, dict(request.pairs))
    known = values_of(request.model, assembly.parameters)
    wishes = tuple(chosen(known, wish) for wish in request.values)
    _check(wishes)
    if not request.values:
        wishes = tuple(one for one in known if one.family != "damping" and not one.exact)
    return _Task(request, solution, peaks, pairs, wishes)


def _check(values: Sequence[Chosen]) -> None:
    for number, one in enumerate(values):
        if any(other.name == one.name for other in values[:number]):
            raise InputError(f"{one.name} is chosen twice.")
        if one.family == "damping":
            raise InputError(
                f"{one.name}: damping does not move undamped natural frequencies; it is not tuned."
            )
        if one.nominal <= 0:
            raise InputError(f"{one.name} is zero; only values above zero are tuned.")
        if one.exact:
            raise InputError(
                f"{one.name} has no tolerance: give the range it may lie in, such as "
                f'"{one.name}={one.span(one.nominal / 2, 2 * one.nominal)}".'
            )


def _half_ranges(values: Sequence[Chosen]) -> Array:
    return np.array([math.log(one.high / one.low) / 2 for one in values])


def _told(task: _Task) -> tuple[ToldCombination, ...]:
    """Return what the peaks tell of the chosen values, at the values as typed."""
    taken, raw = task.taken, task.before.raw
    places = [mode for _, mode in taken]
    slopes = value_slopes(task.before.outlook.assembly, raw.eigenvalues[places], raw.shapes[:, places])
    known = np.array([peak.uncertainty for peak, _ in taken])
    weighted = (slopes * np.sqrt(raw.eigenvalues[places]) / known).T
    return _combined(task, weighted)


def _rows(task: _Task, values: Sequence[Chosen]) -> list[int]:
    index = {one.id: i for i, one in enumerate(task.before.outlook.assembly.parameters)}
    return [index[one.name] for one in values]


def _combined(task: _Task, weighted: Array) -> tuple[ToldCombination, ...]:
    """Return the combinations for sensitivities to every typed value (peaks, parameters)."""
    found = combinations(weighted[:, _rows(task, task.values)], _half_ranges(task.values))
    return tuple(
        ToldCombination(tuple((task.values[i].name, share) for i, share in one.parts), one.singular, one.told)
        for one in found
    )


def _tuned(task: _Task, fit: Fit, blank: TuneResult) -> TuneResult:
    frequencies = np.array([one.frequency for one in task.follower(task.values).targets])
    known = np.array([peak.uncertainty for peak, _ in task.taken])
    weighted = (fit.slopes * (1 + fit.residuals * known / frequencies) * frequencies / known).T
    told = _combined(task, weighted)
    refused = refusal(task.values, [peak.id for peak, _ in task.taken], told)
    if refused:
        return replace(blank, combinations=told, refused=refused)
    values, peaks = _values(task, fit, weighted), _fitted_peaks(task, fit, blank.peaks)
    found = replace(
        blank, combinations=told, values=values, peaks=peaks, otherwise=(*blank.otherwise, *_otherwise(task))
    )
    if any(one.at_end for one in values):
        return replace(found, refused=beyond(values, peaks, _free(task, task.values)))
    edit = _edit(task.request.model, values, [peak.id for peak, _ in task.taken])
    task.tell("the tuned model", 0.8)
    after = solve(Request(edit.apply(task.request.model), cancelled=task.request.cancelled))
    return replace(found, edit=edit, after=after, peaks=tuple(_proven(one, after) for one in peaks))


def _values(task: _Task, fit: Fit, weighted: Array) -> tuple[TunedValue, ...]:
    own = weighted[:, _rows(task, task.values)]
    spread = NORMAL_95 * deviations(own)
    moved = carried_over(own, *_others(task, weighted))
    return tuple(
        TunedValue(
            chosen=one,
            after=typed_like(si, one.entry, one.quantity, _digits(width)).si,
            interval=(si * math.exp(-width), si * math.exp(width)),
            with_others=(si * math.exp(-width - more), si * math.exp(width + more)),
            at_end=end,
        )
        for one, si, width, more, end in zip(
            task.values, fit.values.tolist(), spread.tolist(), moved.tolist(), fit.at_end, strict=True
        )
    )


def _others(task: _Task, weighted: Array) -> tuple[Array, Array]:
    """Return sensitivities to values that are not tuned (peaks, others) and their half ranges (others,)."""
    tuned = {one.name for one in task.values}
    parameters = task.before.outlook.assembly.parameters
    places = [
        i
        for i, one in enumerate(parameters)
        if not (one.exact or one.id in tuned or one.family == "damping") and one.low > 0
    ]
    half = [math.log(parameters[i].high / parameters[i].low) / 2 for i in places]
    return weighted[:, places], np.array(half)


def _digits(width: float) -> int:
    """Return how many digits a value needs whose logarithm is known to ``width``."""
    needed = math.ceil(-math.log10(max(2 * ROUNDED * width, 10.0**-MOST_DIGITS))) + 1
    return min(max(needed, FEWEST_DIGITS), MOST_DIGITS)


def _edit(model: Model, values: Sequence[TunedValue], peaks: Sequence[str]) -> Rewrite:
    """Return the edit that types the tuned values, each with its interval as its tolerance."""
    of = {one.id: one.frequency.text for one in model.measured}
    told = ", ".join(f"{name} at {of[name]}" for name in peaks)
    source = f"tuned to the measured {'peak' if len(peaks) == 1 else 'peaks'} {told}"
    after = model
    for one in values:
        old = stands_at(after, one.chosen.address)
        digits = _digits(math.log(one.interval[1] / one.interval[0]) / 2)
        entry, low, high = (
            typed_like(si, one.chosen.entry, one.chosen.quantity, digits) for si in (one.after, *_kept(one))
        )
        tolerance = Tolerance(low=low, high=high) if low.si <= entry.si <= high.si else None
        new = Value(entry, tolerance, source=source, status="measured")
        after = put(after, one.chosen.address, replace(old, **_as_fields(new)))
    names = " and ".join(one.chosen.label for one in values)
    return checked_edit(model, after, f"Tune {names} to {told}")


def _as_fields(new: Value) -> dict[str, object]:
    return {
        "entry": new.entry,
        "tolerance": new.tolerance,
        "source": new.source,
        "status": new.status,
        "by": None,
        "given": None,
    }


def _kept(one: TunedValue) -> tuple[float, float]:
    """Return the interval cut to the range that the value was known to lie in."""
    return max(one.interval[0], one.chosen.low), min(one.interval[1], one.chosen.high)


def _peak_fit(task: _Task, peak: Peak, pair: Pair) -> PeakFit:
    given = next(one for one in task.request.model.measured if one.id == peak.id)
    taken = pair.taken
    mode = task.before.modes[taken.mode - 1] if taken else None
    return PeakFit(
        id=peak.id,
        measured_hz=peak.frequency / RAD_PER_HZ,
        uncertainty_hz=peak.uncertainty / RAD_PER_HZ,
        assumed=peak.assumed,
        mode=taken.mode if taken else None,
        mode_name=mode.name if mode else "",
        before_hz=mode.frequency_hz if mode else None,
        likeness=taken.likeness if taken else None,
        others=tuple(one.mode for one in pair.others),
        wanted=pair.wanted,
        reason=pair.reason or readable(task.before.outlook.assembly, given),
    )


def _fitted_peaks(task: _Task, fit: Fit, peaks: Sequence[PeakFit]) -> tuple[PeakFit, ...]:
    place = {peak.id: i for i, (peak, _) in enumerate(task.taken)}
    return tuple(
        replace(
            one,
            tuned_mode=int(fit.places[place[one.id]]) + 1,
            after_hz=float(fit.frequencies[place[one.id]]) / RAD_PER_HZ,
            missed_by=float(fit.residuals[place[one.id]]),
        )
        if one.id in place
        else one
        for one in peaks
    )


def _proven(one: PeakFit, after: Solution) -> PeakFit:
    """Return a fitted peak with the frequency of the new solve, which counts prove."""
    if one.tuned_mode is None:
        return one
    found = after.modes[one.tuned_mode - 1].frequency_hz
    return replace(one, after_hz=found, missed_by=(found - one.measured_hz) / one.uncertainty_hz)


def _alone(task: _Task) -> tuple[Alone, ...]:
    """Return every value with a tolerance tuned by itself, the best first."""
    found = []
    for number, one in enumerate(task.values[:MOST_ALONE]):
        task.tell(f"{one.label} alone", number / len(task.values))
        if one.nominal > 0:
            found += [_needing(task, each) for each in _tried(one.label, task.follower([one]))]
    return tuple(sorted(found, key=lambda each: each.worst))


def _needing(task: _Task, alone: Alone) -> Alone:
    """Return a value tried alone with what it would have to be without its range, if that meets the peaks."""
    if alone.met and not alone.at_end:
        return replace(alone, needed=alone.values[0][1])
    free = _free(task, [alone.values[0][0]])
    return alone if free is None else replace(alone, needed=free.values[0][1])


def _otherwise(task: _Task) -> tuple[Alone, ...]:
    """Return the same tuning with one peak taken for another mode that may be meant."""
    found: list[Alone] = []
    for number, (peak, pair) in enumerate(zip(task.peaks, task.pairs, strict=True)):
        for other in pair.others:
            if len(found) == MOST_OTHERWISE:
                break
            taken = [(p, other.mode - 1 if p.id == peak.id else mode) for p, mode in task.taken]
            if len({mode for _, mode in taken}) == len(taken):
                task.tell("other pairings", number / len(task.peaks))
                found += _tried(f"{peak.id} as mode {other.mode}", task.follower(task.values, taken))
    return tuple(found)


def _free(task: _Task, values: Sequence[Chosen]) -> Alone | None:
    """Return where the values would go without their ranges; None where least squares does not settle."""
    free = [replace(one, low=one.nominal / FREE, high=one.nominal * FREE) for one in values]
    found = _tried("without their ranges", task.follower(free))
    return found[0] if found and found[0].met and not found[0].at_end else None


def _tried(label: str, follower: Follower) -> list[Alone]:
    try:
        fit = fitted(follower)
    except NotConvergedError:
        return []
    return [_as_alone(label, follower.chosen, fit)]


def _as_alone(label: str, chosen: Sequence[Chosen], fit: Fit) -> Alone:
    worst = float(np.abs(fit.residuals).max())
    values = tuple(zip(chosen, fit.values.tolist(), strict=True))
    return Alone(label, values, worst, worst <= NORMAL_95, any(fit.at_end))


def _notes(task: _Task) -> tuple[str, ...]:
    said = []
    assumed = [peak.id for peak in task.peaks if peak.assumed]
    if assumed:
        said.append(f"No uncertainty is given for {', '.join(assumed)}: 2 % of the frequency is taken.")
    said.append("An uncertainty is taken as one standard deviation, and peaks as independent of each other.")
    said.append(
        "Peaks are held against undamped natural frequencies; 5 % damping lowers a peak by 0.1 to 0.3 %."
    )
    left = len(task.values) - MOST_ALONE
    if not task.request.values and left > 0:
        said.append(f"The first {MOST_ALONE} values were tried; name others to try them.")
    return tuple(said)
