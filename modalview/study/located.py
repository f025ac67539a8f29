"""Where modes of given numbers lie when all values are soft and heavy, or stiff and light."""

from collections.abc import Callable

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.parameters import Case, values_at
from modalview.assembly.pencil import Pencil
from modalview.eigen.near import MOST, NearModes, find_near
from modalview.errors import NumericalError

Array = npt.NDArray[np.float64]

RAD_PER_HZ = 2 * np.pi
# Windows tried until the numbers wanted are in one.
TRIES = 6
# Modes looked for beyond those wanted, since the guess is rough.
SPARE = 3


def ranges_by_number(assembly: Assembly, near: NearModes, cancelled: Callable[[], bool]) -> Array:
    """Return the lowest and highest frequency of each mode over all tolerances (modes, 2), Hz.

    The mode of the same number in either case is its end (Courant-Fischer). Where its number is undecided or
    it is not met, the frequency is scaled by the largest ratios of stiffness and mass instead: farther apart,
    never nearer.
    """
    if not assembly.toleranced:
        return np.column_stack([near.modes.frequency_hz, near.modes.frequency_hz])
    soft = _end(assembly, Case.SOFT_HEAVY, near, cancelled, -1.0)
    stiff = _end(assembly, Case.STIFF_LIGHT, near, cancelled, 1.0)
    ends: Array = np.sqrt(np.maximum(np.column_stack([soft, stiff]), 0.0)) / RAD_PER_HZ
    return ends


def _end(
    assembly: Assembly, case: Case, near: NearModes, cancelled: Callable[[], bool], side: float
) -> Array:
    found = None if near.numbers is None else _located(assembly.pencil(case), near, cancelled)
    if found is None or found.numbers is None or near.numbers is None:
        return _scaled(assembly, case, near, side)
    place = np.array(near.numbers) - found.numbers[0]
    ends: Array = (found.modes.lower if side < 0 else found.modes.upper)[place]
    return ends


def _located(case: Pencil, near: NearModes, cancelled: Callable[[], bool]) -> NearModes | None:
    """Find the modes of these numbers, from where their shapes would lie in this case."""
    first, last = (near.numbers or (1,))[0], (near.numbers or (1,))[-1]
    wanted = last - first + 1
    guess = float(np.mean(_quotients(case, near.modes.shapes)))
    for _ in range(TRIES):
        try:
            found = find_near(case, guess, min(wanted + SPARE, MOST), cancelled=cancelled)
        except NumericalError:
            return None
        if found.numbers is None:
            return None
        if found.numbers[0] <= first and last <= found.numbers[-1]:
            return found
        guess = _next_guess(found, (first + last) / 2, guess)
    return None


def _next_guess(found: NearModes, middle: float, guess: float) -> float:
    """Follow the density of modes seen to where the middle number would lie."""
    values, numbers = found.modes.eigenvalues, found.numbers or (1,)
    spacing = (values[-1] - values[0]) / (values.size - 1) if values.size > 1 else 0.1 * guess
    moved = float(np.mean(values)) + (middle - (numbers[0] + numbers[-1]) / 2) * float(spacing)
    return float(np.clip(moved, guess / 2, 2 * guess))


def _quotients(case: Pencil, shapes: Array) -> Array:
    elastic = np.sum(shapes * (case.K @ shapes), axis=0)
    quotients: Array = elastic / np.sum(shapes * (case.M @ shapes), axis=0)
    return quotients


def _scaled(assembly: Assembly, case: Case, near: NearModes, side: float) -> Array:
    """Scale eigenvalues by the most that any term changes: x.T K x and x.T M x change by no more."""
    structure, values = assembly.structure, assembly.parameters
    stiffness, mass = (
        terms.values(values_at(values, case)) / terms.values(values_at(values, Case.NOMINAL))
        for terms in (structure.stiffness, structure.mass)
    )
    if side < 0:
        return np.asarray(near.modes.lower * float(stiffness.min()) / float(mass.max()))
    return np.asarray(near.modes.upper * float(stiffness.max()) / float(mass.min()))
