"""Values drawn at random within their tolerances, for what the two-case proof does not cover."""

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from time import perf_counter

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly, assemble
from modalview.assembly.chosen import GEOMETRY, Chosen, with_numbers
from modalview.assembly.parameters import Case, values_at
from modalview.eigen.solve import find_modes
from modalview.eigen.stacked import Stack
from modalview.errors import InputError
from modalview.model.parts import SpeedRange
from modalview.resonance.bands import bands
from modalview.resonance.results import Band
from modalview.study.amplitudes import Watching, amplitudes_at, watchings
from modalview.study.chunks import Errand, in_chunks
from modalview.study.look import RAD_PER_HZ
from modalview.study.stacked_motion import StackedMotion, stacked_motion
from modalview.study.vary import ranged, small_assembly
from modalview.study.vary_results import (
    SPREADS,
    TRIANGULAR,
    Amplitudes,
    InBand,
    SampleRequest,
    Samples,
)

Array = npt.NDArray[np.float64]

MOST_SAMPLES = 10_000_000
# Samples of one chunk: enough that sending it costs little, few enough that it can be stopped soon.
CHUNK, MOVING, FEW = 10_000, 1_000, 50


@dataclass(frozen=True, slots=True, eq=False)
class Spread:
    """Ranges that values are drawn from.

    Parameters
    ----------
    low, nominal, high : array (v,)
    triangular : bool
        Most frequent at the nominal value; otherwise every value as often.
    """

    low: Array
    nominal: Array
    high: Array
    triangular: bool

    def draw(self, generator: np.random.Generator, count: int) -> Array:
        """Return values (count, v), each within its range to the last bit."""
        found = np.tile(self.nominal, (count, 1))
        free = self.low < self.high
        low, peak, high = self.low[free], self.nominal[free], self.high[free]
        if self.triangular:
            drawn = generator.triangular(low, np.clip(peak, low, high), high, (count, low.size))
        else:
            drawn = generator.uniform(low, high, (count, low.size))
        # Rounding of low + (high - low) u may pass the end by a bit.
        found[:, free] = np.clip(drawn, low, high)
        return found


@dataclass(frozen=True, slots=True, eq=False)
class StackTask:
    """Samples of one structure: only sizes of values vary."""

    stack: Stack
    spread: Spread
    seed: np.random.SeedSequence
    count: int
    motion: StackedMotion | None = None


@dataclass(frozen=True, slots=True, eq=False)
class EachTask:
    """Samples that are assembled one by one: coordinates vary, or only so the motion can be found."""

    assembly: Assembly
    geometry: tuple[Chosen, ...]
    spread: Spread
    seed: np.random.SeedSequence
    count: int
    watchings: tuple[Watching, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Drawn:
    """What a chunk found: eigenvalues (s, modes), motion (s, watches).

    The values are not sent back: they are drawn again from the seed.
    """

    eigenvalues: Array
    motion: Array


def stacked(task: StackTask) -> Drawn:
    """Find all frequencies of a chunk at once; pure, and sent to any worker."""
    values = task.spread.draw(np.random.default_rng(task.seed), task.count)
    if task.motion is None:
        return Drawn(task.stack.eigenvalues(values), np.zeros((task.count, 0)))
    eigenvalues, shapes = task.stack.modes_at(values)
    return Drawn(eigenvalues, task.motion.at(eigenvalues, shapes))


def one_by_one(task: EachTask) -> Drawn:
    """Assemble every sample of a chunk; pure, and sent to any worker."""
    values = task.spread.draw(np.random.default_rng(task.seed), task.count)
    number = len(task.assembly.parameters)
    eigenvalues, motion = [], []
    for sample in values:
        assembly = _moved(task.assembly, task.geometry, sample[number:])
        eigenvalues.append(Stack.of(assembly).eigenvalues(sample[None, :number])[0])
        if task.watchings:
            motion.append(amplitudes_at(_at(assembly, sample[:number]), task.watchings))
    return Drawn(np.array(eigenvalues), np.array(motion).reshape(task.count, len(task.watchings)))


def _moved(assembly: Assembly, geometry: Sequence[Chosen], numbers: Array) -> Assembly:
    if not geometry:
        return assembly
    return assemble(with_numbers(assembly.model, zip(geometry, numbers.tolist(), strict=True)), assembly)


def _at(assembly: Assembly, values: Array) -> Assembly:
    """Return an assembly with other numbers as nominal ones; its model stays that of before."""
    moved = (replace(one, nominal=si) for one, si in zip(assembly.parameters, values.tolist(), strict=True))
    return replace(assembly, parameters=tuple(moved))


def sample(request: SampleRequest) -> Samples:
    """Draw values within their tolerances, and find the frequencies, and the motion, at each.

    Parameters
    ----------
    request : SampleRequest

    Returns
    -------
    Samples
        A sample proves nothing: it says how often, not whether. Frequencies by dense solves without proven
        error bounds, 1e-15 times the highest eigenvalue over that of the mode.

    Raises
    ------
    InputError
        Nothing has a range, a name or a range that cannot be used, more than 300 degrees of freedom.
    CancelledError
    """
    start = perf_counter()
    assembly = small_assembly(request.model)
    chosen = ranged(request.model, assembly, request.values)
    geometry = tuple(one for one in chosen if one.family == GEOMETRY)
    spread = _spread(request, assembly, chosen)
    watching = watchings(assembly) if request.response else ()
    errand = Errand("random samples", request.cancelled, request.progress, request.executor)
    motion = stacked_motion(assembly, watching) if watching else None
    size = FEW if geometry or (watching and motion is None) else MOVING if watching else CHUNK
    cut = _cut(request, size)
    if size == FEW:
        each = [EachTask(assembly, geometry, spread, seed, count, watching) for seed, count in cut]
        found = in_chunks(errand, one_by_one, each)
    else:
        stack = Stack.of(assembly)
        tasks = [StackTask(stack, spread, seed, count, motion) for seed, count in cut]
        found = in_chunks(errand, stacked, tasks)
    return _gathered(request, assembly, (chosen, spread, watching, size), found, start)


def _cut(request: SampleRequest, size: int) -> list[tuple[np.random.SeedSequence, int]]:
    """Return a seed and a number of samples for each chunk, whatever works on them."""
    counts = [min(size, request.samples - done) for done in range(0, request.samples, size)]
    return list(zip(np.random.SeedSequence(request.seed).spawn(len(counts)), counts, strict=True))


def _spread(request: SampleRequest, assembly: Assembly, chosen: Sequence[Chosen]) -> Spread:
    if not 1 <= request.samples <= MOST_SAMPLES:
        raise InputError(f"samples: 1 to {MOST_SAMPLES} are drawn; found {request.samples}.")
    if request.seed < 0:
        raise InputError(f"seed: a whole number from 0; found {request.seed}.")
    if request.spread not in SPREADS:
        raise InputError(f'spread is one of {", ".join(SPREADS)}; found "{request.spread}".')
    ranges = {one.name: one for one in chosen}
    rows = []
    for one in assembly.parameters:
        own = ranges.get(one.id)
        low, high = (own.low, own.high) if own else (one.low, one.high)
        matters = one.family != "damping" or request.response or own is not None
        rows.append((low, one.nominal, high) if matters else (one.nominal, one.nominal, one.nominal))
    rows += [(one.low, one.nominal, one.high) for one in chosen if one.family == GEOMETRY]
    low, nominal, high = np.array(rows).T
    if not np.any(low < high):
        raise InputError(
            'No value has a tolerance: there is nothing to draw. Give ranges, "k3=50 to 500 kN/mm".'
        )
    return Spread(low, nominal, high, request.spread == TRIANGULAR)


def _gathered(
    request: SampleRequest,
    assembly: Assembly,
    given: tuple[Sequence[Chosen], Spread, Sequence[Watching], int],
    found: Sequence[Drawn],
    start: float,
) -> Samples:
    chosen, spread, watching, size = given
    geometry = [one for one in chosen if one.family == GEOMETRY]
    names = [(one.id, f"{one.label} {one.id[len(one.part) + 1 :]}") for one in assembly.parameters]
    names += [(one.name, one.label) for one in geometry]
    free = np.flatnonzero(spread.low < spread.high)
    frequencies = np.sqrt(np.concatenate([one.eigenvalues for one in found])) / RAD_PER_HZ
    motion = np.concatenate([one.motion for one in found])
    nominal = Stack.of(assembly).eigenvalues(values_at(assembly.parameters, Case.NOMINAL)[None])[0]
    at_nominal = amplitudes_at(assembly, watching) if watching else []
    return Samples(
        request=request,
        drawn=tuple(names[i] for i in free),
        values=_fixed(_drawn_again(request, spread, free, size)),
        frequencies_hz=_fixed(frequencies),
        nominal_hz=_fixed(np.sqrt(nominal) / RAD_PER_HZ),
        proven_hz=None if geometry else proven_ranges(assembly, spread),
        in_band=tuple(_in_band(band, frequencies) for band in bands(request.model)),
        amplitudes=tuple(
            Amplitudes(one.machine, one.label, now, _fixed(motion[:, i]))
            for i, (one, now) in enumerate(zip(watching, at_nominal, strict=True))
        ),
        coordinates=assembly.n,
        notes=_notes(request, assembly, geometry),
        seconds=perf_counter() - start,
    )


def _drawn_again(request: SampleRequest, spread: Spread, free: npt.NDArray[np.int64], size: int) -> Array:
    """Return the values that every chunk drew (samples, free): drawing is quicker than sending."""
    found = np.empty((request.samples, free.size))
    done = 0
    for seed, count in _cut(request, size):
        found[done : done + count] = spread.draw(np.random.default_rng(seed), count)[:, free]
        done += count
    return found


def _fixed(values: Array) -> Array:
    values.setflags(write=False)
    return values


def proven_ranges(assembly: Assembly, spread: Spread) -> Array:
    """Return the lowest and highest frequency of each mode over the ranges (modes, 2), Hz: the two cases."""
    parameters = tuple(
        replace(one, low=low, high=high)
        for one, low, high in zip(
            assembly.parameters, spread.low.tolist(), spread.high.tolist(), strict=False
        )
    )
    ranging = replace(assembly, parameters=parameters)
    soft, stiff = (find_modes(ranging.pencil(case)) for case in (Case.SOFT_HEAVY, Case.STIFF_LIGHT))
    ends = np.column_stack([soft.lower, stiff.upper])
    ends[: assembly.structure.rigid_body.shape[1]] = 0.0
    return _fixed(np.sqrt(np.maximum(ends, 0.0)) / RAD_PER_HZ)


def _in_band(band: Band, frequencies: Array) -> InBand:
    low, high = (edge / RAD_PER_HZ for edge in band.nominal)
    # Rigid-body modes are left out of every band.
    inside = np.any((frequencies >= low) & (frequencies <= high) & (frequencies > 0), axis=1)
    number = int(inside.sum())
    return InBand(band.check, band.label, number, number / len(frequencies))


def _notes(request: SampleRequest, assembly: Assembly, geometry: Sequence[Chosen]) -> tuple[str, ...]:
    worst = math.sqrt(1 / request.samples)
    often = (
        f"A sample says how often, not whether: shares are known to about ±{100 * worst:.2g} %, and only if "
        f"values are spread as assumed ({request.spread}, independent of each other). Verdicts rest on the "
        "two cases, never on this."
    )
    said = [often]
    if geometry:
        said.append("Coordinates vary: the two cases do not cover them, so that no range is proven here.")
    if request.response and any(isinstance(one.speed, SpeedRange) for one in request.model.machines):
        said.append("Peaks within a range of speeds are as high as told to about the damping ratio squared.")
    if request.response and any(one.family == "damping" and one.exact for one in assembly.parameters):
        said.append("Dashpots without a tolerance are taken as exact; a damping ratio always is.")
    exact = [one for one in assembly.matter if one.exact]
    if exact:
        said.append(f"{len(exact)} values without a tolerance are taken as typed.")
    return tuple(said)
