"""Shares of a mode's energy by part, and what each typed value does to its frequency."""

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly, TermSet
from modalview.assembly.kinematics import ROTATIONS
from modalview.assembly.locks import speed_ratios
from modalview.assembly.masses import ROTATION_ENTRIES
from modalview.assembly.parameters import Case, shown_name, values_at
from modalview.eigen.modes import Modes
from modalview.eigen.shares import strain_shares
from modalview.model.parts import FREEDOMS, Body, InertiaTensor, Link, Motion
from modalview.study.results import Share

Array = npt.NDArray[np.float64]


def strain_energies(assembly: Assembly, modes: Modes) -> Array:
    """Return the strain-energy share of every stiffness term (t, modes); zero for rigid-body modes."""
    return _averaged(strain_shares(assembly.pencil(), modes), modes)


def kinetic_energies(assembly: Assembly, modes: Modes) -> Array:
    """Return the kinetic-energy share of every mass term (t, modes)."""
    terms = assembly.structure.mass
    values = terms.values(values_at(assembly.parameters, Case.NOMINAL))
    # The shapes are M-orthonormal, so that these sum to 1.
    return _averaged(values[:, None] * np.asarray(terms.rows @ modes.shapes) ** 2, modes)


def _averaged(shares: Array, modes: Modes) -> Array:
    """Take the mean over every repeated group: the same for every choice of its shapes."""
    for start, stop in modes.repeated:
        shares[:, start:stop] = shares[:, start:stop].mean(axis=1, keepdims=True)
    return shares


def by_part(terms: TermSet, column: Array, labels: dict[str, str]) -> tuple[Share, ...]:
    """Sum one mode's shares over the parts, largest first."""
    total: dict[str, float] = {}
    for part, share in zip(terms.part, column, strict=True):
        total[part] = total.get(part, 0.0) + float(share)
    ranked = sorted(total.items(), key=lambda item: -item[1])
    return tuple(Share(part, labels[part], fraction) for part, fraction in ranked)


def sensitivities(assembly: Assembly, strain: Array, kinetic: Array) -> tuple[Share, ...]:
    """Return d(ln f) / d(ln value) of one mode for every typed value, largest first.

    Half the strain-energy share of the terms a stiffness enters, minus half the kinetic share of a mass.
    Lord Rayleigh (1894), The Theory of Sound, section 88 (from memory).
    """
    slope = np.zeros(len(assembly.parameters) + 1)
    structure = assembly.structure
    for terms, column, sign in ((structure.stiffness, strain, 0.5), (structure.mass, kinetic, -0.5)):
        for factor in terms.product_of.T:
            np.add.at(slope, factor, sign * column)
    ranked = np.argsort(-np.abs(slope[:-1]), kind="stable")
    found = ((assembly.parameters[i], float(slope[i])) for i in map(int, ranked))
    return tuple(Share(p.id, p.label, amount) for p, amount in found if p.family != "damping")


def labels(parts: Sequence[Body | Link]) -> dict[str, str]:
    """Return the shown name of every part by id."""
    return {part.id: shown_name(part) for part in parts}


def direction_shares(assembly: Assembly, motion: Array) -> dict[str, float]:
    """Return the share of the kinetic energy of one mode in each freedom, from body motion (bodies, 6).

    Products of inertia are left aside: the shares only choose words.
    """
    total = dict.fromkeys(FREEDOMS[assembly.model.motion], 0.0)
    for body, row in zip(assembly.model.bodies, motion, strict=True):
        for column, name in enumerate(FREEDOMS[Motion.SPACE]):
            if name in total:
                total[name] += _inertia(body, name) * float(row[column]) ** 2
    whole = sum(total.values())
    return {name: energy / whole for name, energy in total.items()} if whole else total


def _inertia(body: Body, name: str) -> float:
    if name not in ROTATIONS:
        return body.mass.si if body.mass else 0.0
    if isinstance(body.inertia, InertiaTensor):
        return float(getattr(body.inertia, ROTATION_ENTRIES[ROTATIONS.index(name)]).si)
    return body.inertia.si if body.inertia else 0.0


def drive_directions(assembly: Assembly) -> tuple[tuple[str, ...], Array]:
    """Return the directions of participation with the rigid motion (n, k) along each.

    Translations of the whole model; in a shaft train its rotation, every shaft at its own speed.
    """
    coordinates, model = assembly.structure.coordinates, assembly.model
    roots = set(coordinates.cluster_of.values())
    if model.motion is Motion.SHAFT_TRAIN:
        ratios = speed_ratios(model)
        turning = {(root, "rz"): float(ratios[root][1]) for root in roots}
        return ("rz",), coordinates.of_motion(turning)[:, None]
    names = tuple(name for name in FREEDOMS[model.motion] if name not in ROTATIONS)
    columns = [coordinates.of_motion({(root, name): 1.0 for root in roots}) for name in names]
    return names, np.array(columns).T
