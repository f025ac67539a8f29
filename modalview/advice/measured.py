"""Measured peaks and the modes they belong to: by frequency, direction and shape."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from scipy.optimize import linear_sum_assignment

from modalview.assembly.assemble import Assembly
from modalview.assembly.loads import unit_force
from modalview.eigen.modes import Modes
from modalview.errors import InputError, UnitError
from modalview.model.parts import End, Excitation, MeasuredPeak, Motion

Array = npt.NDArray[np.float64]

# Without an uncertainty of its own a peak is taken as known to this share of its frequency (common practice:
# 0.25 to 0.5 Hz at 10 to 35 Hz, no source).
ASSUMED = 0.02
# A mode less like the measured shape than this is none of its candidates; above SAME it is clearly it
# (common practice, no source).
UNLIKE, SAME = 0.3, 0.9
# Another mode is told as possible where it lies no farther, as a ratio of frequencies, than this many times
# the distance of the mode taken, or NEAR (chosen: a tenth of the frequency).
AS_GOOD, NEAR = 1.5, math.log(1.1)
# A mode that moves less at a point than this share of its largest motion shows no peak there (chosen).
STILL = 0.02
# What no assignment chooses while another is left.
NEVER = 1e6


@dataclass(frozen=True, slots=True, eq=False)
class Peak:
    """A measured peak, ready to be held against modes.

    Parameters
    ----------
    id : str
    frequency, uncertainty : float
        rad/s; the uncertainty is taken as one standard deviation.
    assumed : bool
        Whether the uncertainty was not given.
    point : array (n,) or None
        Motion at its point along its direction per unit of each coordinate; None where it has none.
    rows, amplitudes : array (p, n), array (p,)
        The same for the points of its shape, and what was measured there; empty without two points.
    """

    id: str
    frequency: float
    uncertainty: float
    assumed: bool
    point: Array | None
    rows: Array
    amplitudes: Array


@dataclass(frozen=True, slots=True)
class Candidate:
    """A mode that a peak may belong to.

    Parameters
    ----------
    mode : int
        Its number from 1, rigid-body modes included.
    distance : float
        ln(measured / natural frequency).
    likeness : float or None
        MAC with the measured shape; None without one.
    """

    mode: int
    distance: float
    likeness: float | None

    @property
    def cost(self) -> float:
        """What the assignment adds up: distance, and how unlike the shapes are."""
        return abs(self.distance) + (0.0 if self.likeness is None else 1 - self.likeness)


@dataclass(frozen=True, slots=True)
class Pair:
    """A peak and the mode it is taken for.

    Parameters
    ----------
    peak : str
    taken : Candidate or None
        None where no mode fits; ``reason`` says why.
    others : tuple of Candidate
        Modes it may belong to as well, best first.
    ruled_out : tuple of int
        Modes that hardly move at its point along its direction, or that its shape does not fit.
    wanted : bool
        Whether the person chose the mode.
    reason : str
        Why it is not paired; empty where it is.
    """

    peak: str
    taken: Candidate | None
    others: tuple[Candidate, ...]
    ruled_out: tuple[int, ...]
    wanted: bool = False
    reason: str = ""


def peaks_of(assembly: Assembly) -> tuple[Peak, ...]:
    """Return the measured peaks of a model over its independent coordinates."""
    return tuple(_peak(assembly, one) for one in assembly.model.measured)


def _peak(assembly: Assembly, given: MeasuredPeak) -> Peak:
    rows, amplitudes = [], []
    for point in given.shape:
        row = motion_at(assembly, point.at, point.direction)
        if row is not None:
            rows.append(row)
            amplitudes.append(point.amplitude)
    if len(rows) < 2 or not any(amplitudes):
        rows, amplitudes = [], []
    known = given.uncertainty.si if given.uncertainty is not None else 0.0
    return Peak(
        id=given.id,
        frequency=given.frequency.si,
        uncertainty=known or ASSUMED * given.frequency.si,
        assumed=not known,
        point=motion_at(assembly, given.at, given.direction),
        rows=np.array(rows).reshape(len(rows), assembly.n),
        amplitudes=np.array(amplitudes),
    )


def motion_at(assembly: Assembly, at: End | None, direction: object) -> Array | None:
    """Return the motion (n,) of a point along a direction; None where either is missing or it is on ground.

    By reciprocity it is the force vector of a unit force there.
    """
    if at is None or at.body is None:
        return None
    told = direction if isinstance(direction, str | tuple) else None
    if assembly.model.motion is Motion.SHAFT_TRAIN:
        told = None
    force = unit_force(assembly, Excitation(id="measured", at=at, direction=told))
    return None if force is None else np.asarray(force.real)


def shape_likeness(peak: Peak, shapes: Array) -> Array | None:
    """Return the MAC of every mode (modes,) with a measured shape; None without two measured points.

    References
    ----------
    R. J. Allemang, D. L. Brown (1982), A correlation coefficient for modal vector analysis, Proc. 1st IMAC
    (from memory).
    """
    if not peak.amplitudes.size:
        return None
    there = peak.rows @ shapes
    size = np.sum(peak.amplitudes**2) * np.sum(there**2, axis=0)
    found: Array = (peak.amplitudes @ there) ** 2 / np.maximum(size, np.finfo(float).tiny)
    return found


def paired(
    assembly: Assembly, modes: Modes, peaks: Sequence[Peak], wanted: Mapping[str, int] | None = None
) -> tuple[Pair, ...]:
    """Pair measured peaks with modes.

    Parameters
    ----------
    assembly : Assembly
    modes : Modes
        All of them, at nominal values.
    peaks : sequence of Peak
    wanted : mapping or None
        Numbers of the modes that the person chose, by peak.

    Returns
    -------
    tuple of Pair
        One for each peak, in order. A mode is a candidate where it moves at the point along the direction and
        is not unlike the shape. Among these the sum of |ln of the ratio of frequencies| + 1 - MAC is least,
        each mode taken once.

    Raises
    ------
    InputError
        A mode that was chosen does not exist, or was chosen twice.
    """
    wanted = wanted or {}
    _check(modes, peaks, wanted)
    found = [_candidates(assembly, modes, peak) for peak in peaks]
    cost = np.full((len(peaks), modes.number), NEVER)
    for row, peak, (candidates, _) in zip(cost, peaks, found, strict=True):
        for one in candidates:
            row[one.mode - 1] = one.cost
        if peak.id in wanted:
            row[:] = NEVER
            row[wanted[peak.id] - 1] = -NEVER
    rows, columns = linear_sum_assignment(cost)
    mode_of = {int(i): int(j) + 1 for i, j in zip(rows, columns, strict=True) if cost[i, j] < NEVER}
    return tuple(
        _pair(modes, peak, found[i], mode_of.get(i), chosen=peak.id in wanted) for i, peak in enumerate(peaks)
    )


def _check(modes: Modes, peaks: Sequence[Peak], wanted: Mapping[str, int]) -> None:
    known = {peak.id for peak in peaks}
    for name, mode in wanted.items():
        if name not in known:
            raise InputError(f'There is no measured peak "{name}". There are {", ".join(sorted(known))}.')
        first = modes.elastic.start + 1
        if not first <= mode <= modes.number:
            raise InputError(f"{name}: mode {mode} is none of the elastic modes {first} to {modes.number}.")
        if list(wanted.values()).count(mode) > 1:
            raise InputError(f"Mode {mode} is given to two peaks; a peak belongs to one mode.")


def _candidates(assembly: Assembly, modes: Modes, peak: Peak) -> tuple[list[Candidate], list[int]]:
    """Return the modes a peak may belong to, best first, and those that are ruled out."""
    alike = shape_likeness(peak, modes.shapes)
    moved = _moved(assembly, modes, peak)
    found, out = [], []
    for i in range(*modes.elastic.indices(modes.number)):
        likeness = None if alike is None else float(alike[i])
        if moved[i] < STILL or (likeness is not None and likeness < UNLIKE):
            out.append(i + 1)
            continue
        distance = math.log(peak.frequency / math.sqrt(modes.eigenvalues[i]))
        found.append(Candidate(i + 1, distance, likeness))
    return sorted(found, key=lambda one: one.cost), out


def _moved(assembly: Assembly, modes: Modes, peak: Peak) -> Array:
    """Return how far each mode moves at a peak's point along its direction, of its largest motion (modes,).

    Of a repeated frequency the whole subspace counts, any shape of which may have been excited.
    """
    if peak.point is None:
        return np.ones(modes.number)
    largest = np.abs(assembly.pencil().scale[:, None] * modes.shapes).max(axis=0)
    there: Array = np.abs(peak.point @ modes.shapes) / np.maximum(largest, np.finfo(float).tiny)
    for start, stop in modes.repeated:
        there[start:stop] = np.linalg.norm(there[start:stop])
    return there


def _pair(
    modes: Modes, peak: Peak, found: tuple[list[Candidate], list[int]], mode: int | None, *, chosen: bool
) -> Pair:
    candidates, out = found
    if mode is None:
        reason = "every mode that fits is taken by another peak"
        if not candidates:
            reason = "no mode moves at its point along its direction, and is like its shape"
        return Pair(peak.id, None, (), tuple(out), reason=reason)
    taken = next((one for one in candidates if one.mode == mode), None)
    if taken is None:
        alike = shape_likeness(peak, modes.shapes)
        distance = math.log(peak.frequency / math.sqrt(modes.eigenvalues[mode - 1]))
        taken = Candidate(mode, distance, None if alike is None else float(alike[mode - 1]))
    if chosen:
        return Pair(peak.id, taken, (), tuple(out), wanted=True)
    others = tuple(one for one in candidates if one.mode != mode and _as_good(one, taken))
    return Pair(peak.id, taken, others, tuple(out))


def _as_good(other: Candidate, taken: Candidate) -> bool:
    """Tell whether another mode may be meant as well."""
    if taken.likeness is not None and other.likeness is not None:
        return other.likeness > SAME or (taken.likeness < SAME and other.likeness > taken.likeness / AS_GOOD)
    return abs(other.distance) <= max(AS_GOOD * abs(taken.distance), NEAR)


def readable(assembly: Assembly, given: MeasuredPeak) -> str:
    """Return what of a measured peak could not be used, in words; empty where all was."""
    try:
        peak = _peak(assembly, given)
    except UnitError as reason:
        return str(reason)
    told = []
    if peak.point is None:
        told.append("has no point and direction, so that any mode may be meant")
    if given.shape and not peak.amplitudes.size:
        told.append("its shape has fewer than two points that move, and says nothing")
    return "; ".join(told)
