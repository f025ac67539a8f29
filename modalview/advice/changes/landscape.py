"""Clear, hopeless or open: what the counts say of points and boxes of factors, many at once."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.advice.changes.edges import Flexible, Gate, Refactored
from modalview.advice.changes.values import Variable
from modalview.assembly.parameters import Case

Array = npt.NDArray[np.float64]
Bools = npt.NDArray[np.bool_]
Ints = npt.NDArray[np.int64]

OPEN = -1


@dataclass(frozen=True, eq=False)
class Landscape:
    """All checks of all states as functions of the factors of some variables.

    Parameters
    ----------
    variables : tuple of Variable
    gates : tuple of Gate
    counters : tuple of (upper, lower)
        Modes up to the band at soft-heavy values, below it at stiff-light values, for each gate.
    """

    variables: tuple[Variable, ...]
    gates: tuple[Gate, ...]
    counters: tuple[tuple[Flexible | Refactored, Flexible | Refactored], ...]

    @property
    def stiffness(self) -> Bools:
        """Which variables raise the frequencies."""
        return np.array([one.family == "stiffness" for one in self.variables])

    def clear(self, factors: Array) -> Bools:
        """Return whether every check is clear at each of some factors (m, variables)."""
        return self.clear_between(factors, factors)

    def clear_between(self, low: Array, high: Array) -> Bools:
        """Return whether every check is clear in the whole of each box (m, variables)."""
        softest, stiffest = self._corners(low, high)
        found = np.ones(len(low), dtype=bool)
        for upper, lower in self.counters:
            if not found.any():
                break
            rest = np.flatnonzero(found)
            most, sure = upper.counts(softest[rest])
            least, also = lower.counts(stiffest[rest])
            found[rest] = (most <= least) & sure & also
        return found

    def hopeless(self, low: Array, high: Array) -> Ints:
        """Return for each box (m, variables) a gate that nothing in it clears; ``OPEN`` where none is known.

        Notes
        -----
        With fewer modes below the band at the softest corner, stiff-light, than up to it at the stiffest
        corner, soft-heavy, some mode reaches the band at every point of the box.
        """
        softest, stiffest = self._corners(low, high)
        found = np.full(len(low), OPEN)
        for number, (upper, lower) in enumerate(self.counters):
            rest = np.flatnonzero(found == OPEN)
            if rest.size == 0:
                break
            least, sure = upper.counts(stiffest[rest])
            most, also = lower.counts(softest[rest])
            found[rest[(least > most) & sure & also]] = number
        return found

    def proven_hopeless(self, gate: int, low: Array, high: Array) -> bool:
        """Return whether counts with proven edges say so too of one box (variables,) and gate."""
        softest, stiffest = self._corners(low[None], high[None])
        one = self.gates[gate]
        state = one.state
        least = state.counter_with(Case.SOFT_HEAVY, self._by_parameter(stiffest[0])).below(one.upper.omega)
        most = state.counter_with(Case.STIFF_LIGHT, self._by_parameter(softest[0])).at_most(one.lower.omega)
        return least.number is not None and most.number is not None and least.number > most.number

    def _corners(self, low: Array, high: Array) -> tuple[Array, Array]:
        stiff = self.stiffness
        return np.where(stiff, low, high), np.where(stiff, high, low)

    def _by_parameter(self, factors: Array) -> dict[str, float]:
        pairs = zip(self.variables, factors.tolist(), strict=True)
        return {member: factor for one, factor in pairs for member in one.members}


def landscape(gates: Sequence[Gate], variables: Sequence[Variable]) -> Landscape:
    """Prepare the checks for the factors of some variables: one factorization for each edge."""
    counters = tuple((gate.upper.counter(variables), gate.lower.counter(variables)) for gate in gates)
    return Landscape(tuple(variables), tuple(gates), counters)
