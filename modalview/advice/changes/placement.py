"""The one value that puts a chosen mode at a chosen frequency, exactly."""

import math

import numpy as np

from modalview.advice.changes.ceilings import Reach
from modalview.advice.changes.edges import Edge
from modalview.advice.changes.states import State
from modalview.advice.changes.values import Variable
from modalview.assembly.parameters import Case

RAD_PER_HZ = 2 * math.pi


def placing_factor(state: State, variable: Variable, mode: int, frequency_hz: float) -> float | None:
    """Return the factor of a variable at which a mode lies at a frequency; None where it never does.

    Parameters
    ----------
    state : State
    variable : Variable
    mode : int
        From 1, rigid-body modes included.
    frequency_hz : float
        Above zero.

    Notes
    -----
    At nominal values. The modes below the frequency fall (stiffness) or rise (mass) by one at each crossing;
    the mode wanted is there at the crossing that takes it away. One factorization.
    """
    flexible = Edge(state, Case.NOMINAL, RAD_PER_HZ * frequency_hz, +1).flexible((variable,))
    at = flexible.crossings()
    passed = int(np.searchsorted(at, 1.0))
    if variable.family == "mass":
        number = mode - 1 - (flexible.below - passed)
    else:
        number = flexible.below + passed - mode
    return float(at[number]) if 0 <= number < at.size else None


def reach_of(found: Reach | None, mode: int) -> tuple[float, float]:
    """Return the frequencies that a mode takes between a value gone and without bound, Hz, ascending."""
    if found is None:
        return 0.0, math.inf
    ends = (float(found.at_zero[mode - 1]), float(found.at_infinity[mode - 1]))
    return min(ends), max(ends)
