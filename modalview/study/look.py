"""What is known before any solve: bounds, counts and the proven verdict."""

import math
from collections.abc import Sequence
from concurrent.futures import Executor, ThreadPoolExecutor
from contextlib import ExitStack
from dataclasses import replace
from time import perf_counter

from modalview.assembly.assemble import Assembly, assemble
from modalview.assembly.dampedterms import has_dashpots
from modalview.assembly.parameters import Case
from modalview.bounds.bands import Cases, Counters, Floating, Sharpened
from modalview.bounds.before import before_solve
from modalview.eigen.near_count import GapCounter
from modalview.eigen.solve import LARGEST
from modalview.errors import CancelledError
from modalview.factor.counts import LARGEST_SHARE
from modalview.resonance.bands import bands
from modalview.resonance.exactly import judge_exactly
from modalview.resonance.results import Band, Check, Verdict
from modalview.resonance.unchecked import not_checked
from modalview.resonance.verdict import BY_COUNTS, Exactness, Question, answer, worst
from modalview.study.intervals import scale_intervals
from modalview.study.results import Outlook, Request
from modalview.study.sentence import sentence

RAD_PER_HZ = 2 * math.pi
# Edges of bands of a large model may first move outward by this share: that can only make a verdict stricter;
# where fewer modes than this are inside, the edges are then counted sharply.
ROUGHLY, MANY = 1e-3, 100
# From so many modes on an edge may first move by this share: rounding seldom reaches so far, while beyond
# 1e-6 of the edge counts in relative coordinates would be due, which cost ten times as much.
SEVERAL, NEARLY = 1000, 3e-5
# From so many modes on two counts are made at once: the factorizations let go of the interpreter.
AT_ONCE = 500


def look(request: Request, previous: Outlook | None = None) -> Outlook:
    """Tell what is known of a model before any solve.

    Parameters
    ----------
    request : Request
    previous : Outlook or None
        Of an earlier state of the model: what only depends on its structure is taken over.

    Raises
    ------
    ModelFaultsError
        The model cannot be analysed; names the part.
    InputError
        Exact counts are asked for and the model is too large for them.
    CancelledError
    """
    start = perf_counter()
    model = request.model
    assembly = assemble(model, previous.assembly if previous else None)
    _stop_if(request)
    bounds = before_solve(assembly.pencil())
    _stop_if(request)
    checks, proof_notes = _checks(request, assembly)
    return Outlook(
        request=request,
        assembly=assembly,
        bounds=bounds,
        checks=checks,
        verdict=worst(checks),
        sentence=sentence(model, checks),
        intervals=scale_intervals(assembly.pencil(), checks),
        not_checked=not_checked(model),
        notes=(*_notes(assembly), *proof_notes),
        coordinates=assembly.pencil().n,
        toleranced=bool(assembly.toleranced),
        dashpots=has_dashpots(assembly),
        seconds=perf_counter() - start,
    )


def _checks(request: Request, assembly: Assembly) -> tuple[tuple[Check, ...], tuple[str, ...]]:
    """Return the checks, and what a reader must know of their proof."""
    if request.exact:
        exactness = Exactness(len(assembly.exact_values), len(assembly.matter))
        return _exact_checks(request, assembly, exactness)
    return judge_bands(request, assembly, bands(request.model)), ()


def judge_bands(request: Request, assembly: Assembly, wanted: Sequence[Band]) -> tuple[Check, ...]:
    """Return the verdict on each band, by counts in floating point.

    Raises
    ------
    CancelledError
    """
    exactness = Exactness(len(assembly.exact_values), len(assembly.matter))
    modes = assembly.pencil().modes
    with ExitStack() as stack:
        beside = stack.enter_context(ThreadPoolExecutor(1)) if AT_ONCE <= modes <= LARGEST else None
        rough, sharp = _counters(request, assembly, beside)
        found = []
        for band in wanted:
            _stop_if(request)
            check = answer(Question(band, band.nominal, band.tolerance, rough, modes, BY_COUNTS), exactness)
            if rough is not sharp and check.verdict is not Verdict.CLEAR and (check.inside or 0) < MANY:
                check = answer(
                    Question(band, band.nominal, band.tolerance, sharp, modes, BY_COUNTS), exactness
                )
            found.append(check)
        return tuple(found)


def _counters(request: Request, assembly: Assembly, beside: Executor | None) -> tuple[Counters, Counters]:
    """Return what counts the three cases: roughly, and sharply for bands where that may matter.

    Of small models one and the same. Edges of large ones may first move outward farther, which can only add
    modes to a band; where pivots do not decide, counts are made in the gaps between modes.
    """
    pencils = [assembly.pencil(case) for case in Case]
    if pencils[0].modes < SEVERAL:
        cases = Cases(*(pencil.shifted for pencil in pencils)).counters()
        only = replace(cases, beside=beside)
        return only, only
    if pencils[0].modes <= LARGEST:
        nearly = {id(pencil): Floating(pencil.shifted, NEARLY) for pencil in pencils}
        sharpened = {key: Sharpened(one) for key, one in nearly.items()}
        return (
            Counters(*(nearly[id(pencil)] for pencil in pencils), beside=beside),
            Counters(*(sharpened[id(pencil)] for pencil in pencils), beside=beside),
        )
    rough, sharp = (
        {id(pencil): GapCounter(pencil, request.cancelled, share) for pencil in pencils}
        for share in (ROUGHLY, LARGEST_SHARE)
    )
    return (
        Counters(*(rough[id(pencil)] for pencil in pencils)),
        Counters(*(sharp[id(pencil)] for pencil in pencils)),
    )


def _exact_checks(
    request: Request, assembly: Assembly, exactness: Exactness
) -> tuple[tuple[Check, ...], tuple[str, ...]]:
    def step(what: str, share: float) -> None:
        _stop_if(request)
        if request.progress is not None:
            request.progress(what, share)

    found = judge_exactly(assembly, exactness, step)
    notes = ["counts proven exactly: integers, from the values as typed, edges rounded outward by 1e-19"]
    if found.rounded:
        notes.append(
            f"taken as the nearest double, as angles and roots are no fractions: {', '.join(found.rounded)}"
        )
    return found.checks, tuple(notes) if found.checks else ()


def _stop_if(request: Request) -> None:
    if request.cancelled():
        raise CancelledError("Stopped by the user.")


def _notes(assembly: Assembly) -> tuple[str, ...]:
    return (*assembly.notes, *_free_motion(assembly), *_taken_as_exact(assembly))


def _free_motion(assembly: Assembly) -> list[str]:
    number = assembly.structure.rigid_body.shape[1]
    if number == 0:
        return []
    modes = "1 rigid-body mode" if number == 1 else f"{number} rigid-body modes"
    return [f"{modes} at 0 Hz: motion that nothing resists; left out of every band"]


def _taken_as_exact(assembly: Assembly) -> list[str]:
    exact = assembly.exact_values
    if not exact or not assembly.toleranced:
        return []
    names = ", ".join(f"{p.label} {p.id.rpartition('.')[2]}" for p in exact)
    return [f"taken as exact, without tolerance: {names}"]
