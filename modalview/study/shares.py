"""Shares of a mode's energy by part, and what each typed value does to its frequency."""

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.assemble import Assembly
from modalview.assembly.kinematics import ROTATIONS
from modalview.assembly.locks import speed_ratios
from modalview.assembly.masses import ROTATION_ENTRIES
from modalview.assembly.parameters import Case, shown_name, values_at
from modalview.assembly.termsets import TermSet
from modalview.eigen.modes import Modes
from modalview.eigen.shares import strain_shares
from modalview.model.parts import FREEDOMS, Body, InertiaTensor, Link, Motion
from modalview.study.results import Share

Array = npt.NDArray[np.float64]

# So many of the largest shares and sensitivities of a mode are kept.
KEPT = 24


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


def by_part(terms: TermSet, shares: Array, labels: dict[str, str]) -> list[tuple[Share, ...]]:
    """Sum the shares of terms (t, modes) over the parts; the largest KEPT of every mode, largest first."""
    parts = list(dict.fromkeys(terms.part))
    place = {part: i for i, part in enumerate(parts)}
    total = _summed([place[part] for part in terms.part], len(parts), shares)
    return _largest(total, total, [(part, labels[part]) for part in parts])


def sensitivities(assembly: Assembly, strain: Array, kinetic: Array) -> list[tuple[Share, ...]]:
    """Return d(ln f) / d(ln value) for the KEPT typed values that matter most to every mode, largest first.

    Half the strain-energy share of the terms a stiffness enters, minus half the kinetic share of a mass.
    Lord Rayleigh (1894), The Theory of Sound, section 88 (from memory).
    """
    structure, count = assembly.structure, len(assembly.parameters) + 1
    slope = sum(
        sign * _summed(factor, count, shares)
        for terms, shares, sign in ((structure.stiffness, strain, 0.5), (structure.mass, kinetic, -0.5))
        for factor in terms.product_of.T
    )
    matter = [i for i, p in enumerate(assembly.parameters) if p.family != "damping"]
    slope = np.asarray(slope)[matter]
    return _largest(slope, np.abs(slope), [(p.id, p.label) for p in (assembly.parameters[i] for i in matter)])


def _summed(place: Sequence[int] | npt.NDArray[np.int64], count: int, shares: Array) -> Array:
    """Add up the rows of ``shares`` (t, modes) that have the same place: (count, modes)."""
    table = sp.csr_array((np.ones(len(place)), (place, np.arange(len(place)))), shape=(count, len(place)))
    return np.asarray(table @ shares)


def _largest(amounts: Array, size: Array, names: Sequence[tuple[str, str]]) -> list[tuple[Share, ...]]:
    ranked = np.argsort(-size, axis=0, kind="stable")[:KEPT]
    chosen = np.take_along_axis(amounts, ranked, axis=0)
    return [
        tuple(Share(names[i][0], names[i][1], amount) for i, amount in zip(rows, column, strict=True))
        for rows, column in zip(ranked.T.tolist(), chosen.T.tolist(), strict=True)
    ]


def labels(parts: Sequence[Body | Link]) -> dict[str, str]:
    """Return the shown name of every part by id."""
    return {part.id: shown_name(part) for part in parts}


def direction_shares(assembly: Assembly, motion: Array) -> Array:
    """Return the share of each mode's kinetic energy in x, y, z, rx, ry, rz (modes, 6), from body motion.

    ``motion`` is (modes, bodies, 6). Products of inertia are left aside: the shares only choose words.
    """
    inertia = [[_inertia(body, name) for name in FREEDOMS[Motion.SPACE]] for body in assembly.model.bodies]
    energy = np.einsum("bf,mbf->mf", np.array(inertia), motion**2)
    whole = energy.sum(axis=1, keepdims=True)
    shares: Array = np.divide(energy, whole, out=np.zeros_like(energy), where=whole > 0)
    return shares


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
