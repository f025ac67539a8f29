"""Models too large for all modes: those near each excitation, and the checks completed by them."""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import partial
from itertools import pairwise
from time import perf_counter

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.eigen.modes import Modes
from modalview.eigen.near import MOST, NearModes, find_near
from modalview.eigen.shares import modal_mass
from modalview.errors import InputError
from modalview.resonance.results import Check
from modalview.study.completed import completed
from modalview.study.found import drives_of, found_modes
from modalview.study.located import RAD_PER_HZ, ranges_by_number
from modalview.study.results import Outlook, Request, Solution
from modalview.study.sentence import sentence

Array = npt.NDArray[np.float64]

# Modes asked for around an excitation, doubled until one lies on either side of it.
ASKED = 3


@dataclass(frozen=True, slots=True, eq=False)
class _Window:
    """Modes near one frequency with their ranges (modes, 2) over all tolerances, Hz."""

    near: NearModes
    ranges: Array


def solve_large(request: Request, outlook: Outlook) -> Solution:
    """Find the modes around every excitation of a large model and complete its checks.

    Parameters
    ----------
    request : Request
    outlook : Outlook
        Of the same model.

    Returns
    -------
    Solution
        ``modes`` and ``raw`` hold the modes found, by their numbers among all.

    Raises
    ------
    InputError
        There is nothing to check, so no frequency to look near.
    CancelledError, NumericalError
    """
    start = perf_counter()
    assembly = outlook.assembly
    if not outlook.checks:
        raise InputError(
            f"The model has {assembly.pencil().modes} modes, too many to be found at once, and no machine "
            "whose excitations tell which matter. Ask for the modes near a frequency: --near."
        )
    of_checks = _windows(request, assembly, outlook.checks)
    windows = list({id(window): window for own in of_checks for window in own}.values())
    raw, ranges, numbers = _merged(windows)
    modes = found_modes(assembly, raw, ranges, numbers)
    checks = tuple(
        _completed(assembly, check, own) for check, own in zip(outlook.checks, of_checks, strict=True)
    )
    return Solution(
        outlook=outlook,
        raw=raw,
        modes=modes,
        modal_mass=tuple(map(float, modal_mass(assembly.pencil(), raw))),
        checks=checks,
        sentence=sentence(request.model, checks, modes),
        evidence=_evidence(assembly, raw, windows),
        seconds=outlook.seconds + perf_counter() - start,
    )


def _windows(request: Request, assembly: Assembly, checks: Sequence[Check]) -> list[tuple[_Window, ...]]:
    """Find the modes that complete each check.

    Those nearest to the middle of a range (in squares): if any lies in the range, the nearest does. Those
    nearest to its ends where none does.
    """
    found: dict[float, _Window] = {}
    of_checks: list[tuple[_Window, ...]] = []
    for place, check in enumerate(checks):
        low, high = check.band.excitation
        share = (place / len(checks), 1 / len(checks))
        middle = float(np.sqrt((low**2 + high**2) / 2))
        if check.inside and high > low:
            found[middle] = found.get(middle) or _window(request, assembly, middle, share)
            values = found[middle].near.modes.eigenvalues
            if bool(np.any((values >= low**2) & (values <= high**2))):
                of_checks.append((found[middle],))
                continue
        for omega in (low, high):
            found[omega] = found.get(omega) or _window(request, assembly, omega, share)
        of_checks.append(tuple(found[omega] for omega in dict.fromkeys((low, high))))
    return of_checks


def _completed(assembly: Assembly, check: Check, windows: Sequence[_Window]) -> Check:
    """Complete a check by its own windows; as it is where counts leave their modes' numbers open."""
    if any(window.near.numbers is None for window in windows):
        return check
    raw, ranges, numbers = _merged(windows)
    modes = found_modes(assembly, raw, ranges, numbers)
    return completed(check, modes, partial(drives_of, assembly, check, raw, numbers))


def _window(request: Request, assembly: Assembly, omega: float, progress: tuple[float, float]) -> _Window:
    """Find modes until one lies on either side of a frequency, then their ranges.

    ``progress``: the share done before, and the share that this takes.
    """
    done, whole = progress

    def told(what: str, share: float) -> None:
        if request.progress is not None:
            request.progress(what, done + 0.4 * share * whole)

    asked, pencil = ASKED, assembly.pencil()
    while True:
        near = find_near(pencil, omega**2, asked, cancelled=request.cancelled, progress=told)
        values = near.modes.eigenvalues
        below = values[0] <= omega**2 or near.certificate.low <= 0
        above = values[-1] >= omega**2 or (near.numbers or (0,))[-1] == pencil.modes
        if (below and above) or 2 * asked > MOST:
            break
        asked *= 2
    if request.progress is not None:
        request.progress("range over all tolerances", done + 0.5 * whole)
    return _Window(near, ranges_by_number(assembly, near, request.cancelled))


def _merged(windows: Sequence[_Window]) -> tuple[Modes, Array, tuple[int, ...]]:
    """Put the modes of all windows together, each once, ascending; undecided numbers are 0."""
    values = np.concatenate([window.near.modes.eigenvalues for window in windows])
    numbers = np.concatenate([window.near.numbers or (0,) * window.near.modes.number for window in windows])
    order = np.argsort(values, kind="stable")
    known = numbers[order]
    again = np.concatenate([[False], (np.diff(known) == 0) & (known[1:] > 0)])
    order = order[~again]
    first = windows[0].near.modes
    parts = {
        name: np.concatenate([getattr(window.near.modes, name) for window in windows])[order]
        for name in _PER_MODE
    }
    complete = [window.near.modes.complete for window in windows]
    raw = replace(
        first,
        **parts,
        shapes=np.hstack([window.near.modes.shapes for window in windows])[:, order],
        rigid_body_modes=0,
        unstable=0,
        groups=_groups(windows, numbers, order),
        counts=tuple(count for window in windows for count in window.near.modes.counts),
        complete=False if False in complete else None if None in complete else True,
        warnings=tuple(dict.fromkeys(text for window in windows for text in window.near.modes.warnings)),
    )
    ranges = np.vstack([window.ranges for window in windows])[order]
    return raw.frozen(), ranges, tuple(numbers[order].tolist())


_PER_MODE = (
    "eigenvalues",
    "lower",
    "upper",
    "frequency_hz",
    "numerical_error_hz",
    "growth_rate",
    "residuals",
)


def _groups(
    windows: Sequence[_Window], numbers: npt.NDArray[np.int64], order: npt.NDArray[np.intp]
) -> tuple[tuple[int, int], ...]:
    """Return the runs of one frequency in the merged order: those of each window, by its own members."""
    label = np.empty(numbers.size, dtype=int)
    place = made = 0
    for window in windows:
        for start, stop in window.near.modes.groups:
            label[place + start : place + stop] = made
            made += 1
        place += window.near.modes.number
    edges = [0, *(np.flatnonzero(np.diff(label[order])) + 1).tolist(), order.size]
    return tuple(pairwise(edges))


def _evidence(assembly: Assembly, raw: Modes, windows: Sequence[_Window]) -> tuple[str, ...]:
    proven = {
        True: "none missed between (proven by counts)",
        False: "counts disagree: do not rely on this",
        None: "counts undecided",
    }[raw.complete]
    spans = ", ".join(
        f"{window_text(window.near)}{'' if window.near.numbers else ' (undecided: numbers are not told)'}"
        for window in windows
    )
    worst = float((raw.numerical_error_hz / np.maximum(raw.frequency_hz, np.finfo(float).tiny)).max())
    return (
        f"{raw.number} of {assembly.pencil().modes} modes found, those nearest to the excitations: {proven}",
        f"windows counted: {spans}",
        f"computed to ±{worst:.0e} of each frequency",
        raw.method,
        *raw.warnings,
    )


def window_text(near: NearModes) -> str:
    """Return "24.1 to 25.3 Hz"."""
    ends = (near.certificate.low, near.certificate.high)
    low, high = (float(np.sqrt(max(end, 0.0))) / RAD_PER_HZ for end in ends)
    return f"{low:.6g} to {high:.6g} Hz"
