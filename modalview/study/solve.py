"""The modes of a model, their ranges over all tolerances, and what they add to the checks."""

from collections.abc import Sequence
from functools import partial
from time import perf_counter

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.parameters import Case
from modalview.eigen.modes import Modes
from modalview.eigen.shares import modal_mass
from modalview.eigen.solve import LARGEST, find_modes
from modalview.study.completed import completed
from modalview.study.found import drives_of, found_modes
from modalview.study.large import solve_large
from modalview.study.look import RAD_PER_HZ, look
from modalview.study.results import FoundMode, Outlook, Request, Solution
from modalview.study.sentence import sentence

Array = npt.NDArray[np.float64]


def solve(request: Request, outlook: Outlook | None = None) -> Solution:
    """Find all modes of a model, or those near the excitations of a large one, and complete its checks.

    Parameters
    ----------
    request : Request
    outlook : Outlook or None
        Of the same model, if it is there already.

    Raises
    ------
    InputError
        The model cannot be analysed, or is large and has nothing to check.
    CancelledError
    """
    start = perf_counter()
    if outlook is None or outlook.request.model is not request.model:
        outlook = look(request, outlook)
    assembly = outlook.assembly
    if assembly.pencil().modes > LARGEST:
        return solve_large(request, outlook)
    raw = _find(request, assembly, Case.NOMINAL, 0)
    ranges = _ranges(request, assembly, raw)
    modes = found_modes(assembly, raw, ranges)
    numbers = range(1, raw.number + 1)
    checks = tuple(
        completed(check, modes, partial(drives_of, assembly, check, raw, numbers)) for check in outlook.checks
    )
    return Solution(
        outlook=outlook,
        raw=raw,
        modes=modes,
        modal_mass=tuple(map(float, modal_mass(assembly.pencil(), raw))),
        checks=checks,
        sentence=sentence(request.model, checks, modes),
        evidence=evidence(raw, modes),
        seconds=perf_counter() - start,
    )


def _find(request: Request, assembly: Assembly, case: Case, step: int) -> Modes:
    """Find the modes of one case, telling progress as a share of all cases."""
    steps = len(Case) if assembly.toleranced else 1

    def told(what: str, share: float) -> None:
        if request.progress is not None:
            request.progress(f"{case}: {what}", (step + share) / steps)

    return find_modes(assembly.pencil(case), cancelled=request.cancelled, progress=told)


def _ranges(request: Request, assembly: Assembly, raw: Modes) -> Array:
    """Return the lowest and highest frequency of every mode over all tolerances (modes, 2), Hz."""
    if not assembly.toleranced:
        return np.column_stack([raw.frequency_hz, raw.frequency_hz])
    soft = _find(request, assembly, Case.SOFT_HEAVY, 1)
    stiff = _find(request, assembly, Case.STIFF_LIGHT, 2)
    ends = np.column_stack([soft.lower, stiff.upper])
    ends[raw.unstable : raw.unstable + raw.rigid_body_modes] = 0.0
    found: Array = np.sqrt(np.maximum(ends, 0.0)) / RAD_PER_HZ
    return found


def evidence(raw: Modes, modes: Sequence[FoundMode]) -> tuple[str, ...]:
    """Say why the modes can be believed."""
    number = len(modes)
    proven = {
        True: "none missed (proven by counts)",
        False: "counts disagree: do not rely on this",
        None: "counts undecided",
    }[raw.complete]
    frequency = np.maximum(raw.frequency_hz, np.finfo(float).tiny)
    worst = float((raw.numerical_error_hz / frequency)[raw.elastic].max(initial=0.0))
    return (
        f"{number} of {number} found, {proven}",
        f"computed to ±{worst:.0e} of each frequency",
        raw.method,
        *raw.warnings,
    )
