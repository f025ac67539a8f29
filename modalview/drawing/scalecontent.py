"""What the frequency scale shows, taken from the study's results; all Hz."""

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np

from modalview.bounds.discs import Discs
from modalview.drawing.primitives import Floats
from modalview.resonance.results import Check, Verdict
from modalview.study.results import Known, Solution

RAD_PER_HZ = 2 * np.pi


@dataclass(frozen=True, slots=True)
class ScaleBand:
    """An avoidance band.

    Parameters
    ----------
    label : str
        "1×", "7× vane pass".
    low, high : float
        Ends of the band.
    from_, to : float
        Lowest and highest excitation frequency; equal at a fixed speed.
    verdict : Verdict
    """

    label: str
    low: float
    high: float
    from_: float
    to: float
    verdict: Verdict


@dataclass(frozen=True, slots=True)
class ScaleCount:
    """Number of modes between two frequencies; ``number`` None is undecided."""

    low: float
    high: float
    number: int | None
    in_band: bool


@dataclass(frozen=True, slots=True)
class ScaleMode:
    """A found mode with its tolerance range."""

    number: int
    hz: float
    low: float
    high: float
    verdict: Verdict | None = None


def _none() -> Floats:
    return np.zeros((0, 3))


@dataclass(frozen=True, slots=True, eq=False)
class ScaleContent:
    """Everything the frequency scale shows.

    Parameters
    ----------
    bands : tuple of ScaleBand
    counts : tuple of ScaleCount
        Ascending.
    lowest, highest : pair of float or None
        Bounds of the lowest elastic and of the highest mode.
    discs : array (n, 3)
        Low, centre, high of the Gershgorin discs of S.
    modes : tuple of ScaleMode
        Elastic ones.
    foretold : tuple of ScaleMode
        What elastic modes found before an edit become by it; without ranges.
    before : tuple of ScaleMode
        Elastic modes before a change that was tried.
    rigid_body_modes : int
        Modes at 0, told below the axis.
    """

    bands: tuple[ScaleBand, ...] = ()
    counts: tuple[ScaleCount, ...] = ()
    lowest: tuple[float, float] | None = None
    highest: tuple[float, float] | None = None
    discs: Floats = field(default_factory=_none)
    modes: tuple[ScaleMode, ...] = ()
    foretold: tuple[ScaleMode, ...] = ()
    before: tuple[ScaleMode, ...] = ()
    rigid_body_modes: int = 0


def scale_content(
    outlook: Known,
    solution: Solution | None = None,
    *,
    foretold: Mapping[int, float] | None = None,
    before: Mapping[int, float] | None = None,
) -> ScaleContent:
    """Take what the scale shows from what is known of a model.

    Parameters
    ----------
    outlook : Known
    solution : Solution or None
        Of the same model, if there is one.
    foretold : mapping of float or None
        Frequencies in Hz by the numbers of modes found before the last edit.
    before : mapping of float or None
        Frequencies in Hz by the numbers of the modes before a change that was tried.
    """
    machines = outlook.request.model.machines
    names = {one.id: one.name or one.id for one in machines} if len(machines) > 1 else {}
    bands = tuple(_band(check, names.get(check.band.machine, "")) for check in outlook.checks)
    counts = tuple(
        ScaleCount(interval.low_hz, interval.high_hz, interval.number, interval.check is not None)
        for interval in outlook.intervals
    )
    bounds = outlook.bounds
    return ScaleContent(
        bands=bands,
        counts=counts,
        lowest=bounds.lowest_hz,
        highest=bounds.highest_hz,
        discs=_discs_hz(bounds.symmetric),
        modes=_modes(bands, solution),
        foretold=_ticks(foretold),
        before=_ticks(before),
        rigid_body_modes=bounds.rigid_body_modes or 0,
    )


def _ticks(found: Mapping[int, float] | None) -> tuple[ScaleMode, ...]:
    return tuple(ScaleMode(n, hz, hz, hz) for n, hz in (found or {}).items() if hz > 0)


def _band(check: Check, machine: str) -> ScaleBand:
    """Return a check's band; of several machines each is named."""
    low, high = (omega / RAD_PER_HZ for omega in check.band.nominal)
    from_, to = (omega / RAD_PER_HZ for omega in check.band.excitation)
    return ScaleBand(f"{check.band.label} {machine}".strip(), low, high, from_, to, check.verdict)


def _discs_hz(discs: Discs | None) -> Floats:
    """Return low, centre and high (n, 3) of discs in rad**2/s**2 as Hz; below zero counts as 0."""
    if discs is None:
        return _none()
    ends = np.stack([discs.centres - discs.radii, discs.centres, discs.centres + discs.radii], axis=1)
    hz: Floats = np.sqrt(np.maximum(ends, 0.0)) / RAD_PER_HZ
    return hz


def _modes(bands: tuple[ScaleBand, ...], solution: Solution | None) -> tuple[ScaleMode, ...]:
    """Return the elastic modes, each with the worst that a band makes of it."""
    modes = []
    for mode in solution.modes if solution is not None else ():
        if mode.kind != "elastic":
            continue
        low, high = mode.range_hz
        verdict = Verdict.CLEAR if bands else None
        if any(band.low <= high and low <= band.high for band in bands):
            verdict = Verdict.NOMINAL_ONLY
        if any(band.low <= mode.frequency_hz <= band.high for band in bands):
            verdict = Verdict.IN_BAND
        modes.append(ScaleMode(mode.number, mode.frequency_hz, low, high, verdict))
    return tuple(modes)
