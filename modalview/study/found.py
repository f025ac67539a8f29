"""Modes as they are shown: names, shares, sensitivities, and what drives them."""

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.loads import unit_force
from modalview.eigen.modes import Modes
from modalview.eigen.shares import participation
from modalview.resonance.drive import mode_drives
from modalview.resonance.results import Check, ModeDrive
from modalview.study.completed import ELASTIC, RIGID, UNSTABLE
from modalview.study.names import mode_names
from modalview.study.results import FoundMode, Share
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


def found_modes(
    assembly: Assembly, raw: Modes, ranges: Array, numbers: Sequence[int] | None = None
) -> tuple[FoundMode, ...]:
    """Return modes as they are shown.

    Parameters
    ----------
    assembly : Assembly
    raw : Modes
    ranges : array (modes, 2)
        Hz, over all tolerances.
    numbers : sequence of int or None
        From 1; None where these are all modes. 0 stands for an undecided number.
    """
    model, number = assembly.model, numbers or range(1, raw.number + 1)
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
                number=number[i],
                name=names[i] if elastic else f"{kind}: {names[i]}",
                frequency_hz=float(raw.frequency_hz[i]),
                numerical_error_hz=float(raw.numerical_error_hz[i]),
                range_hz=(float(ranges[i, 0]), float(ranges[i, 1])),
                kind=kind,
                repeated_with=tuple(number[start:stop]) if elastic else (),
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


def drives_of(
    assembly: Assembly, check: Check, raw: Modes, numbers: Sequence[int], chosen: Sequence[int]
) -> tuple[ModeDrive, ...]:
    """Return how strongly a check's excitation drives the chosen ones of the modes of these numbers."""
    model = assembly.model
    machine = next(m for m in model.machines if m.id == check.band.machine)
    excitation = next(e for e in machine.excitations if e.id == check.band.excitation_id)
    drives = mode_drives(assembly.pencil(), raw, unit_force(assembly, excitation))
    return tuple(replace(drives[numbers.index(number)], mode=number) for number in chosen)
