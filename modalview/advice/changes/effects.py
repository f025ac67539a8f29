"""What a change does to every check, and what it costs elsewhere, solved anew for the changed model."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.advice.changes.results import Cost, Effect
from modalview.advice.changes.states import State
from modalview.assembly.parameters import Case
from modalview.eigen.solve import find_modes
from modalview.errors import InputError, NumericalError
from modalview.model.parts import FREEDOMS, Model
from modalview.resonance.results import Band, Check, Verdict
from modalview.resonance.separation import nearest
from modalview.response.weight import UP, settled
from modalview.units import quantities as q
from modalview.units.show import show

Array = npt.NDArray[np.float64]

RAD_PER_HZ = 2 * math.pi
# A cost that changes by less than this share is none.
NOTICED = 1e-3


@dataclass(frozen=True, slots=True, eq=False)
class Ranges:
    """The elastic modes of a state.

    Parameters
    ----------
    first : int
        Number of the first one, from 1.
    frequency_hz : array (m,)
    range_hz : array (m, 2)
        Over all tolerances.
    """

    first: int
    frequency_hz: Array
    range_hz: Array

    def within(self, band: Band) -> list[tuple[int, float]]:
        """Return number and frequency of the modes that reach a band at some values within tolerance."""
        low, high = (edge / RAD_PER_HZ for edge in band.tolerance)
        reach = (self.range_hz[:, 1] >= low) & (self.range_hz[:, 0] <= high)
        return [(self.first + int(i), float(self.frequency_hz[i])) for i in np.flatnonzero(reach)]


def ranges_of(state: State) -> Ranges:
    """Return the elastic modes of a state with their ranges; three solves."""
    assembly = state.assembly
    found = [find_modes(assembly.pencil(case)) for case in Case]
    nominal, soft, stiff = found if assembly.toleranced else (found[0], found[0], found[0])
    elastic = slice(nominal.unstable + nominal.rigid_body_modes, None)
    low = soft.lower if assembly.toleranced else soft.eigenvalues
    high = stiff.upper if assembly.toleranced else stiff.eigenvalues
    ends = np.column_stack([low, high])[elastic]
    ranges = np.sqrt(np.maximum(ends, 0.0)) / RAD_PER_HZ
    return Ranges(elastic.start + 1, nominal.frequency_hz[elastic], ranges)


def effects(
    states: Sequence[State], checks: Sequence[Sequence[Check]], before: Sequence[Sequence[Check]]
) -> tuple[Effect, ...]:
    """Return what every check of every state says after a change.

    Parameters
    ----------
    states : sequence of State
        After it.
    checks, before : sequence of sequence of Check
        After and before it, by state.
    """
    found = []
    for state, after, earlier in zip(states, checks, before, strict=True):
        ranges = ranges_of(state) if after else None
        for check, old in zip(after, earlier, strict=True):
            if ranges is not None:
                found.append(_effect(state, check, old.verdict, ranges))
    return tuple(found)


def _effect(state: State, check: Check, before: Verdict, ranges: Ranges) -> Effect:
    band = check.band
    low, high = (edge / RAD_PER_HZ for edge in band.tolerance)
    widened = (low / (1 - band.margin[0]), high / (1 + band.margin[1]))
    excitation = (band.excitation[0] / RAD_PER_HZ, band.excitation[1] / RAD_PER_HZ)
    every = [(ranges.first + i, (float(a), float(b))) for i, (a, b) in enumerate(ranges.range_hz)]
    reaching = [one for one in every if one[1][1] >= low and one[1][0] <= high]
    # With uneven margins the mode with the least room may not be the nearest one.
    rooms = [(room, number) for number, span in every if (room := _room(band, span, widened)) is not None]
    worst = nearest(reaching or every, widened)
    if not reaching and rooms:
        number = min(rooms)[1]
        worst = nearest([one for one in every if one[0] == number], widened)
    now = nearest(
        ((ranges.first + i, (float(f), float(f))) for i, f in enumerate(ranges.frequency_hz)), excitation
    )
    span = dict(every).get(worst[0]) if worst else None
    return Effect(
        check=band.check,
        case=state.case,
        label=band.label,
        verdict=check.verdict,
        wording=check.wording,
        before=before,
        nearest_mode=worst[0] if worst else None,
        nearest_hz=span,
        separation=now[1] if now else None,
        worst_separation=worst[1] if worst else None,
        room=_room(band, span, widened) if span else None,
    )


def _room(band: Band, span: tuple[float, float], widened: tuple[float, float]) -> float:
    """Return how much more than the margin wanted a mode keeps, as a share of the excitation frequency."""
    if span[1] < widened[0]:
        return (widened[0] - span[1]) / widened[0] - band.margin[0]
    if span[0] > widened[1]:
        return (span[0] - widened[1]) / widened[1] - band.margin[1]
    return -max(band.margin)


def costs(before: State, after: State) -> tuple[Cost, ...]:
    """Return what a change costs elsewhere: mass on the ground, and how far the weight settles the model."""
    model = before.assembly.model
    masses = _mass(model), _mass(after.assembly.model)
    rows = (
        ("mass of the whole model", q.MASS, *masses),
        ("most that a body settles under the weight at rest", q.LENGTH, _sag(before), _sag(after)),
    )
    system = model.units or "SI"
    return tuple(
        Cost(what, show(old, quantity, system), show(new, quantity, system), old, new)
        for what, quantity, old, new in rows
        if old and new and abs(new / old - 1) > NOTICED
    )


def _mass(model: Model) -> float:
    return sum(body.mass.si for body in model.bodies if body.mass is not None)


def _sag(state: State) -> float | None:
    """Return how far the body that settles most comes down, m; None where nothing bears weight."""
    model = state.assembly.model
    if model.motion not in UP:
        return None
    try:
        motion = settled(state.assembly).motion
    except (InputError, NumericalError):
        return None
    column = ("x", "y", "z").index(UP[model.motion])
    return (
        float((-motion[:, column]).max(initial=0.0)) if UP[model.motion] in FREEDOMS[model.motion] else None
    )
