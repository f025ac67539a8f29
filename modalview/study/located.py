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
# Steps towards a number by pivots, and how near to it is near enough to look for its mode.
TRIES, CLOSE = 12, 2
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
    numbers = near.numbers or (1,)
    first, last = numbers[0], numbers[-1]
    density = (last - first + 2) / max(near.certificate.high - near.certificate.low, np.finfo(float).tiny)
    guess = float(np.mean(_quotients(case, near.modes.shapes)))
    guess = _centred(case, (first + last) / 2, guess, density)
    wanted = last - first + 1 + SPARE
    while wanted <= MOST:
        try:
            found = find_near(case, guess, wanted, cancelled=cancelled)
        except NumericalError:
            return None
        if found.numbers is None or (found.numbers[0] <= first and last <= found.numbers[-1]):
            return found
        wanted *= 2
    return None


def _centred(case: Pencil, middle: float, guess: float, density: float) -> float:
    """Return an eigenvalue near that of the middle number, by pivots alone: proof comes with the modes."""
    low, high = 0.0, np.inf
    behind = middle - case.shifted.factorize(guess).negative
    for _ in range(TRIES):
        if abs(behind) <= CLOSE:
            break
        low, high = (guess, high) if behind > 0 else (low, guess)
        moved = guess + behind / density
        if not low < moved < high:
            moved = 2 * guess if high == np.inf else (low + high) / 2
        left = middle - case.shifted.factorize(moved).negative
        if left != behind:
            density = (behind - left) / (moved - guess)
        guess, behind = moved, left
    return guess


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
