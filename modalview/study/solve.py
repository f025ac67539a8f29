"""The modes of a model, their ranges over all tolerances, and what they add to the checks."""

from collections.abc import Sequence
from functools import partial
from time import perf_counter

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.loads import unit_force
from modalview.assembly.parameters import Case
from modalview.eigen.modes import Modes
from modalview.eigen.shares import modal_mass, participation
from modalview.eigen.solve import find_modes
from modalview.model.parts import Model
from modalview.resonance.drive import mode_drives
from modalview.resonance.results import Check, ModeDrive
from modalview.study.completed import ELASTIC, RIGID, UNSTABLE, completed
from modalview.study.look import RAD_PER_HZ, look
from modalview.study.names import mode_names
from modalview.study.results import FoundMode, Outlook, Request, Share, Solution
from modalview.study.sentence import sentence
from modalview.study.shares import (
    by_part,
    direction_shares,
    drive_directions,
    kinetic_energies,
    labels,
    sensitivities,
    strain_energies,
)

Array = npt.NDArray[np.float64]


def solve(request: Request, outlook: Outlook | None = None) -> Solution:
    """Find all modes of a model and complete its checks.

    Parameters
    ----------
    request : Request
    outlook : Outlook or None
        Of the same model, if it is there already.

    Raises
    ------
    InputError
        The model cannot be analysed, or is too large.
    CancelledError
    """
    start = perf_counter()
    if outlook is None or outlook.request.model is not request.model:
        outlook = look(request, outlook)
    assembly = outlook.assembly
    raw = _find(request, assembly, Case.NOMINAL, 0)
    ranges = _ranges(request, assembly, raw)
    modes = _found(assembly, raw, ranges)
    checks = tuple(
        completed(check, modes, partial(_drives, request.model, assembly, check, raw))
        for check in outlook.checks
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


def _found(assembly: Assembly, raw: Modes, ranges: Array) -> tuple[FoundMode, ...]:
    model = assembly.model
    strain, kinetic = strain_energies(assembly, raw), kinetic_energies(assembly, raw)
    motion = _motions(assembly, raw.shapes)
    names = mode_names(model, motion, direction_shares(assembly, motion))
    springs = by_part(assembly.structure.stiffness, strain, labels(model.links))
    masses = by_part(assembly.structure.mass, kinetic, labels(model.bodies))
    slopes = sensitivities(assembly, strain, kinetic)
    effective = _effective_masses(assembly, raw)
    repeated = {i: (start, stop) for start, stop in raw.repeated for i in range(start, stop)}
    found = []
    for i in range(raw.number):
        kind = _kind(raw, i)
        elastic = kind == ELASTIC
        start, stop = repeated.get(i, (0, 0))
        found.append(
            FoundMode(
                number=i + 1,
                name=names[i] if elastic else f"{kind}: {names[i]}",
                frequency_hz=float(raw.frequency_hz[i]),
                numerical_error_hz=float(raw.numerical_error_hz[i]),
                range_hz=(float(ranges[i, 0]), float(ranges[i, 1])),
                kind=kind,
                repeated_with=tuple(range(start + 1, stop + 1)) if elastic else (),
                strain=springs[i] if elastic else (),
                kinetic=masses[i],
                sensitivity=slopes[i] if elastic else (),
                effective_mass=effective[i],
                motion=motion[i],
            )
        )
    return tuple(found)


def _kind(raw: Modes, i: int) -> str:
    if i < raw.unstable:
        return UNSTABLE
    return RIGID if i < raw.unstable + raw.rigid_body_modes else ELASTIC


def _motions(assembly: Assembly, shapes: Array) -> Array:
    """Return the motion of every body in every mode (modes, bodies, 6), the largest scaled to 1.

    Rotations count by the model's scale; the sign is such that the largest motion is positive.
    """
    motion = assembly.body_motion(shapes)
    scaled = assembly.pencil().scale[:, None] * shapes
    for row, column in zip(motion, scaled.T, strict=True):
        largest = column[int(np.argmax(np.abs(column)))]
        if largest:
            np.divide(row, largest, out=row)
    motion.setflags(write=False)
    return motion


def _effective_masses(assembly: Assembly, raw: Modes) -> list[tuple[Share, ...]]:
    names, directions = drive_directions(assembly)
    pencil = assembly.pencil()
    _, masses = participation(pencil, raw, directions)
    whole = np.einsum("ik,ik->k", directions, np.asarray(pencil.M @ directions))
    shares = np.divide(masses, whole, out=np.zeros_like(masses), where=whole > 0)
    return [tuple(Share(name, name, float(s)) for name, s in zip(names, row, strict=True)) for row in shares]


def _drives(
    model: Model, assembly: Assembly, check: Check, raw: Modes, numbers: Sequence[int]
) -> tuple[ModeDrive, ...]:
    """Return how strongly a check's excitation drives the modes of these numbers."""
    machine = next(m for m in model.machines if m.id == check.band.machine)
    excitation = next(e for e in machine.excitations if e.id == check.band.excitation_id)
    drives = mode_drives(assembly.pencil(), raw, unit_force(assembly, excitation))
    return tuple(drives[number - 1] for number in numbers)


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
