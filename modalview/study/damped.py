"""Damped modes as they are shown: with the dashpots of a model, or with the damping given for all of it."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from time import perf_counter

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.dampedterms import DampedTerms, damped_terms, has_dashpots
from modalview.assembly.statematrix import LARGEST, state_matrix
from modalview.bounds.state import StateRegions, state_regions
from modalview.eigen.damped import find_damped_modes
from modalview.eigen.dampedmodes import DampedModes
from modalview.eigen.dampedratio import decrement_of_ratio, proportional_ratios
from modalview.errors import NumericalError
from modalview.model.parts import Model
from modalview.study.completed import ELASTIC, RIGID
from modalview.study.look import RAD_PER_HZ, look
from modalview.study.names import mode_names
from modalview.study.results import FoundMode, Outlook, Request, Solution
from modalview.study.shares import direction_shares
from modalview.study.solve import solve
from modalview.units.show import significant

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

OSCILLATING, OVERDAMPED, DECAY = "oscillating", "overdamped", "decay"
UNDAMPED_VERDICT = (
    "Verdicts use the undamped natural frequencies: they are the same with and without damping."
)


@dataclass(frozen=True, slots=True, eq=False)
class DampedMode:
    """One root, or one conjugate pair of roots, as it is shown.

    Parameters
    ----------
    number : int
        From 1, in the order of DampedModes; not the number of an undamped mode.
    name : str
        In words.
    kind : str
        "oscillating"; "overdamped": a real root, with ``partner`` the other root of the same mode;
        "decay": a real root of its own, from a massless joint or a part that only dashpots hold;
        "rigid-body": root 0.
    root : complex
        1/s; imaginary part not below 0.
    damped_hz : float
        0 where nothing oscillates.
    natural_hz, damping_ratio, log_decrement, time_constant_s : float or None
        None where they mean nothing; the ratio of an overdamped mode is above 1.
    decay_per_s : float
    error_per_s : float
        Estimate of the numerical error of the root; not a bound.
    partner : int or None
        Number of the other root of an overdamped mode.
    motion : complex array (bodies, 6)
        x, y, z, rx, ry, rz of every body: the motion is its real part times exp(root t); the largest is 1.
    """

    number: int
    name: str
    kind: str
    root: complex
    damped_hz: float
    natural_hz: float | None
    damping_ratio: float | None
    log_decrement: float | None
    time_constant_s: float | None
    decay_per_s: float
    error_per_s: float
    partner: int | None
    motion: ComplexArray

    @property
    def overdamped(self) -> bool:
        """Whether it dies away without oscillating."""
        return self.kind in (OVERDAMPED, DECAY)


@dataclass(frozen=True, slots=True, eq=False)
class DampedSolution:
    """Damped modes and where they come from.

    Parameters
    ----------
    outlook : Outlook
        Of the same model.
    source : str
        "dashpots", "model damping", or "none" (then there are no modes here).
    raw : DampedModes or None
        With dashpots only.
    modes : tuple of DampedMode
    evidence : tuple of str
    notes : tuple of str
        What was ignored, and what the verdicts use.
    seconds : float
    """

    outlook: Outlook
    source: str
    raw: DampedModes | None
    modes: tuple[DampedMode, ...]
    evidence: tuple[str, ...]
    notes: tuple[str, ...]
    seconds: float


def damped(request: Request, solution: Solution | None = None) -> DampedSolution:
    """Find the damped modes of a model.

    Parameters
    ----------
    request : Request
    solution : Solution or None
        Undamped, of the same model, if it is there already.

    Raises
    ------
    InputError
        The model cannot be analysed.
    CancelledError

    Notes
    -----
    With any dashpot its state matrix is solved and damping given for the whole model is ignored. Without
    one that damping gives every mode its ratio, in closed form. Of a model with too many roots, or with
    roots that cannot be computed, none is listed, and ``evidence`` says so: its undamped modes are no worse
    for it.
    """
    start = perf_counter()
    known = solution is not None and solution.outlook.request.model is request.model
    outlook = solution.outlook if solution is not None and known else look(request)
    raw, source = None, "none"
    modes: tuple[DampedMode, ...] = ()
    evidence: tuple[str, ...] = ()
    if has_dashpots(outlook.assembly):
        source = "dashpots"
        terms = damped_terms(outlook.assembly)
        if terms.roots > LARGEST:
            evidence = (f"{terms.roots} damped roots, none listed: they are found up to {LARGEST}",)
        else:
            try:
                raw = find_damped_modes(terms, cancelled=request.cancelled, progress=request.progress)
                modes, evidence = _with_dashpots(outlook.assembly, terms, raw), _evidence(raw)
            except NumericalError as error:
                evidence = (f"{terms.roots} damped roots, none listed: {error}",)
    elif request.model.damping is not None and not has_loss_factors(request.model):
        source = "model damping"
        found = solution if solution is not None and known else solve(request, outlook)
        modes = _with_model_damping(request.model, found.modes)
    return DampedSolution(
        outlook=outlook,
        source=source,
        raw=raw,
        modes=modes,
        evidence=evidence,
        notes=_notes(request.model, source),
        seconds=perf_counter() - start,
    )


def damped_regions(outlook: Outlook) -> StateRegions | None:
    """Return what is known of the damped roots before a solve; None without dashpots."""
    if not has_dashpots(outlook.assembly):
        return None
    return state_regions(state_matrix(damped_terms(outlook.assembly)))


def has_loss_factors(model: Model) -> bool:
    """Return whether any link has a loss factor above zero."""
    return any(link.loss_factor is not None and link.loss_factor.si > 0 for link in model.links)


def _notes(model: Model, source: str) -> tuple[str, ...]:
    said = []
    loss = has_loss_factors(model)
    if model.damping is not None and (source == "dashpots" or loss):
        why = "dashpots" if source == "dashpots" else "loss factors"
        said.append(f"The damping given for the whole model is ignored: the model has {why} of its own.")
    if loss:
        said.append("Loss factors are not in these roots: they act at the frequency of a steady excitation.")
    if source != "none":
        said.append(UNDAMPED_VERDICT)
    return tuple(said)


def _with_dashpots(assembly: Assembly, terms: DampedTerms, raw: DampedModes) -> tuple[DampedMode, ...]:
    motions = terms.body_motion(raw.shapes)
    names = _names(assembly, motions)
    return tuple(_dashpot_mode(raw, i, motions[i], names[i]) for i in range(raw.roots.size))


def _dashpot_mode(raw: DampedModes, i: int, motion: ComplexArray, name: str) -> DampedMode:
    motion.setflags(write=False)
    kind, partner = _kind(raw, i), int(raw.partner[i])
    decay = float(raw.decay_per_s[i])
    return DampedMode(
        number=i + 1,
        name=name if kind == OSCILLATING else f"{kind}: {name}",
        kind=kind,
        root=complex(raw.roots[i]),
        damped_hz=float(raw.damped_hz[i]),
        natural_hz=_known(raw.natural_hz[i]),
        damping_ratio=_known(raw.damping_ratio[i]),
        log_decrement=_known(raw.log_decrement[i]),
        time_constant_s=1 / decay if decay > 0 else None,
        decay_per_s=decay,
        error_per_s=float(raw.error_per_s[i]),
        partner=partner + 1 if partner >= 0 else None,
        motion=motion,
    )


def _kind(raw: DampedModes, i: int) -> str:
    if i < raw.free:
        return RIGID
    if i < raw.decays.start:
        return OSCILLATING
    return OVERDAMPED if raw.partner[i] >= 0 else DECAY


def _known(value: float) -> float | None:
    return None if math.isnan(value) else float(value)


def _names(assembly: Assembly, motions: ComplexArray) -> list[str]:
    """Name modes (m, bodies, 6) by their motion at the phase at which most of it shows."""
    phase = np.angle(np.sum(motions**2, axis=(1, 2))) / 2
    shown = np.real(motions * np.exp(-1j * phase)[:, None, None])
    return mode_names(assembly.model, shown, direction_shares(assembly, np.abs(motions)))


def _evidence(raw: DampedModes) -> tuple[str, ...]:
    worst = float(
        (raw.error_per_s / np.maximum(np.abs(raw.roots), np.finfo(float).tiny))[raw.free :].max(initial=0.0)
    )
    said = [f"{raw.number} roots, as many as the structure has"]
    if raw.zero_roots:
        said[0] += f"; {raw.zero_roots} of them at 0"
    if raw.undamped:
        plural = "oscillation is" if raw.undamped == 1 else "oscillations are"
        said.append(f"{raw.undamped} {plural} not damped by any dashpot")
    said.append(
        f"sum of all roots {significant(raw.rate_sum_found, 6)} 1/s, by the dashpots "
        f"{significant(raw.rate_sum_expected, 6)} 1/s"
    )
    said.append(f"numerical error estimated at {worst:.0e} of each root")
    return (*said, raw.method, *raw.warnings)


def _with_model_damping(model: Model, modes: Sequence[FoundMode]) -> tuple[DampedMode, ...]:
    return tuple(_proportional_mode(model, mode) for mode in modes if mode.kind == ELASTIC)


def modal_ratio(model: Model, frequency_hz: float) -> float:
    """Return the damping ratio that the damping given for the whole model gives a frequency above 0."""
    given = model.damping
    if given is None:
        return 0.0
    if given.ratio is not None:
        return given.ratio.si
    alpha, beta = (entry.si if entry is not None else 0.0 for entry in (given.alpha, given.beta))
    return float(proportional_ratios(alpha, beta, np.array([RAD_PER_HZ * frequency_hz]))[0])


def _proportional_mode(model: Model, mode: FoundMode) -> DampedMode:
    """Give a mode its ratio; one above 1 is told by its slower rate."""
    ratio, omega = modal_ratio(model, mode.frequency_hz), RAD_PER_HZ * mode.frequency_hz
    turning = ratio < 1
    across = math.sqrt(abs((1 - ratio) * (1 + ratio)))
    decay = ratio * omega if turning else omega / (ratio + across)
    return DampedMode(
        number=mode.number,
        name=mode.name if turning else f"{OVERDAMPED}: {mode.name}",
        kind=OSCILLATING if turning else OVERDAMPED,
        root=complex(-decay, omega * across if turning else 0.0),
        damped_hz=mode.frequency_hz * across if turning else 0.0,
        natural_hz=mode.frequency_hz,
        damping_ratio=ratio,
        log_decrement=decrement_of_ratio(ratio) if turning else None,
        time_constant_s=1 / decay if decay > 0 else None,
        decay_per_s=decay,
        error_per_s=RAD_PER_HZ * mode.numerical_error_hz,
        partner=None,
        motion=mode.motion.astype(complex),
    )
