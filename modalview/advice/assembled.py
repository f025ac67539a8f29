"""The doubts that need the terms of a model, or the bounds of its modes."""

import math
from collections.abc import Iterator

import numpy as np
import numpy.typing as npt

from modalview.advice.doubt import Doubt, few, named
from modalview.advice.survey import carries
from modalview.assembly.assemble import Assembly
from modalview.assembly.parameters import Case, values_at
from modalview.bounds.before import Bounds
from modalview.model.parts import FREEDOMS, Motion
from modalview.units import quantities as q
from modalview.units.show import show, significant

Array = npt.NDArray[np.float64]

# m/s2, standard acceleration of free fall: 3rd CGPM (1901), resolution 2; ISO 80000-3:2019.
G = 9.80665
# Static deflection of machines, on rock or on the softest springs, m; common practice, no source.
LEAST_SAG, MOST_SAG = 1e-6, 1.0
# Lowest modes of machines and what carries them, Hz; common practice, no source.
LOWEST_HZ, HIGHEST_HZ = 0.2, 2000.0
# Beyond so many coordinates no system is solved for a hint.
LARGEST = 3000
# A share of the lowest eigenvalue: what it adds to K keeps motion that nothing resists regular, and moves
# a deflection by less than this share.
REGULAR = 1e-6
# Weight that does more work than this share on motion that nothing resists lets the model fall.
FALLING = 1e-9


def doubts_of(assembly: Assembly, bounds: Bounds) -> tuple[Doubt, ...]:
    """Return what an engineer would doubt about a model once its terms and bounds are known.

    Parameters
    ----------
    assembly : Assembly
    bounds : Bounds
        Of the same model.

    Notes
    -----
    Cost: one sparse factorization, to ``LARGEST`` coordinates.
    """
    found = (_idle(assembly), _lowest(bounds), _sags(assembly, bounds))
    return tuple(doubt for rule in found for doubt in few(list(rule)))


def _idle(assembly: Assembly) -> Iterator[Doubt]:
    """Yield links that no motion of the bodies stretches."""
    terms = assembly.structure.stiffness
    idle = set(terms.part) - terms.at_work
    for link in assembly.model.links:
        if link.id in idle and carries(link):
            text = f"{named(link)} acts on no motion: nothing the bodies can do stretches it."
            effect = "It does not enter the modes; check its direction, and what its ends are held by."
            yield Doubt("idle link", (link.id,), text, effect)


def _lowest(bounds: Bounds) -> Iterator[Doubt]:
    if bounds.lowest_hz is None:
        return
    low, high = bounds.lowest_hz
    if high < LOWEST_HZ:
        side, limit, why = (
            f"below {significant(high, 3)} Hz",
            LOWEST_HZ,
            "a spring too soft or a mass too heavy",
        )
    elif low > HIGHEST_HZ:
        side, limit, why = (
            f"above {significant(low, 3)} Hz",
            HIGHEST_HZ,
            "a spring too stiff or a mass too light",
        )
    else:
        return
    word = "below" if limit == LOWEST_HZ else "above"
    text = f"The lowest elastic mode lies {side}; machines rarely have it {word} {significant(limit, 1)} Hz."
    yield Doubt("lowest mode", (), text, f"All modes may be off together: {why}, or a unit mistaken.")


def _sags(assembly: Assembly, bounds: Bounds) -> Iterator[Doubt]:
    """Yield the body that its own weight deflects too far, or the one that it deflects most and hardly."""
    sag = sag_under_own_weight(assembly, bounds)
    if sag is None or not sag.size:
        return
    worst = int(np.argmax(np.abs(sag)))
    most = abs(float(sag[worst]))
    body = assembly.model.bodies[worst]
    if most > MOST_SAG:
        text = f"{named(body)} sags {show(most, q.LENGTH, digits=3)} under the model's own weight, at rest."
        effect = (
            "A spring is too soft or a mass too heavy by far, or the weight is not carried by these springs."
        )
    elif 0 < most < LEAST_SAG:
        text = (
            f"Nothing sags by more than {significant(1e6 * most, 3)} um under its own weight "
            f"({named(body)} the most)."
        )
        effect = "Springs are too stiff or masses too light by far, unless all this is to be rigid."
    else:
        return
    yield Doubt("static deflection", (body.id,), text, effect)


def sag_under_own_weight(assembly: Assembly, bounds: Bounds) -> Array | None:
    """Return how far every body moves up (+) or down (-) under the weight of all, m.

    Parameters
    ----------
    assembly : Assembly
        Static stiffnesses are taken, without dynamic ratios.
    bounds : Bounds

    Returns
    -------
    array (bodies,) or None
        None where no direction is vertical, the model is large, falls, or its lowest mode is unknown.
    """
    up = {Motion.SINGLE_AXIS: "y", Motion.PLANE: "y", Motion.SPACE: "z"}.get(assembly.model.motion)
    pencil, structure = assembly.pencil(), assembly.structure
    if up is None or pencil.n > LARGEST or bounds.lowest_hz is None:
        return None
    freedoms = FREEDOMS[assembly.model.motion]
    rows = np.arange(len(assembly.model.bodies)) * len(freedoms) + freedoms.index(up)
    moved = structure.coordinates.to_bodies[rows]
    weight = -G * np.array([body.mass.si if body.mass else 0.0 for body in assembly.model.bodies])
    load = moved.T @ weight
    work = np.abs(pencil.rigid_body.T @ load)
    if np.any(work > FALLING * (np.abs(pencil.rigid_body).T @ np.abs(load))):
        return None
    values = [
        1.0 if one.id.endswith(".dynamic_ratio") else value
        for one, value in zip(assembly.parameters, values_at(assembly.parameters, Case.NOMINAL), strict=True)
    ]
    stiffness = structure.stiffness.form.matrix(structure.stiffness.values(np.array(values)))
    pattern = structure.reused.pattern
    data = pattern.values(stiffness)
    if pencil.rigid_body.shape[1]:
        data = data + REGULAR * (2 * math.pi * bounds.lowest_hz[0]) ** 2 * pattern.values(pencil.M)
    try:
        factor = pattern.factorize(data)
    except RuntimeError:  # singular to rounding
        return None
    stored = np.empty(pencil.n)
    stored[pattern.stored] = load
    shape = factor.solve(stored)[pattern.stored]
    sag: Array = moved @ shape
    return sag if np.all(np.isfinite(sag)) else None
