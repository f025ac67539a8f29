"""The least change of several values that clears everything, by branch and bound on boxes of values."""

import heapq
import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field

import numpy as np
import numpy.typing as npt

from modalview.advice.changes.landscape import OPEN, Landscape
from modalview.advice.changes.results import Found
from modalview.errors import CancelledError

Array = npt.NDArray[np.float64]
Bools = npt.NDArray[np.bool_]

# Without limits of the user's a value is looked for within a hundredth and a hundred times today's.
WIDEST = 100.0
# Beyond so many values boxes are too many for a proof.
MOST_PROVEN = 4
# The change found is the least to this much of ln factor: 0.05 % of a value.
ENOUGH = 5e-4
# A change smaller than this in ln factor is tried without.
SMALL = 5e-3
# Boxes narrower than this in ln factor are not cut further: rounding decides there.
NARROWEST = 1e-7
# So many boxes are looked at, and so many at once.
MOST_BOXES, AT_ONCE = 100_000, 64
# So many boxes are counted anew to prove that nothing clears.
MOST_RECOUNTED = 10_000


@dataclass(frozen=True, slots=True)
class Search:
    """How to search.

    Parameters
    ----------
    weights : tuple of float
        Cost of a unit of |ln factor| of each variable, above zero.
    cancelled : callable
    progress : callable or None
        Told (what is done, share done 0..1).
    most_boxes : int
    below : float
        What costs as much or more is not wanted.
    """

    weights: tuple[float, ...]
    cancelled: Callable[[], bool] = field(default=lambda: False)
    progress: Callable[[str, float], None] | None = None
    most_boxes: int = MOST_BOXES
    below: float = math.inf


@dataclass(frozen=True, slots=True, eq=False)
class Least:
    """How a search ended.

    Parameters
    ----------
    status : Found
    factors : array (variables,) or None
        The cheapest point found.
    amount : float
        Its cost; infinity without one.
    bound : float
        Nothing cheaper clears everything, by the search.
    boxes : int
    limits : array (variables, 2)
        Factors searched.
    """

    status: Found
    factors: Array | None
    amount: float
    bound: float
    boxes: int
    limits: Array


def searched(landscape: Landscape) -> Array:
    """Return the factors (variables, 2) within which each variable is looked for."""
    limits = [one.limits for one in landscape.variables]
    return np.array([(max(low, 1 / WIDEST), min(high, WIDEST)) for low, high in limits])


def least_change(landscape: Landscape, search: Search) -> Least:
    """Find the factors that clear every check at the least weighted sum of |ln factor|.

    Parameters
    ----------
    landscape : Landscape
    search : Search

    Returns
    -------
    Least
        "None exists" only where every box is proven, by counts with proven edges, to hold some mode in some
        band; for up to ``MOST_PROVEN`` variables.

    Raises
    ------
    CancelledError

    Notes
    -----
    Boxes in ln factor, cheapest first (branch and bound; A. H. Land and A. G. Doig (1960), Econometrica 28,
    497, from memory). The sum of the |ln factor| asks for few changes and makes halving as dear as doubling.
    A box whose cheapest point is clear holds nothing cheaper; one in which some check is clear nowhere is
    dropped; any other is cut in two.
    """
    limits = searched(landscape)
    if np.any(limits[:, 0] > limits[:, 1]):
        return Least(Found.NONE_EXISTS, None, math.inf, math.inf, 0, limits)
    tree = _Tree(landscape, search, np.log(limits), best=search.below)
    tree.grow()
    return tree.result(limits)


@dataclass(slots=True)
class _Tree:
    """Boxes still open, the cheapest clear point, and the boxes dropped with what holds in them."""

    landscape: Landscape
    search: Search
    domain: Array
    heap: list[tuple[float, int, Array]] = field(default_factory=list)
    best: float = math.inf
    point: Array | None = None
    boxes: int = 0
    serial: int = 0
    stuck: float = math.inf
    dropped: list[tuple[int, Array]] = field(default_factory=list)

    def grow(self) -> None:
        self._push(self.domain[None])
        while self.heap and self.heap[0][0] < self.best - ENOUGH and self.boxes < self.search.most_boxes:
            if self.search.cancelled():
                raise CancelledError("Stopped by the user.")
            batch = self._popped()
            self.boxes += len(batch)
            self._tell()
            self._look_at(batch)

    def _popped(self) -> Array:
        batch: list[Array] = []
        while self.heap and len(batch) < AT_ONCE and self.heap[0][0] < self.best - ENOUGH:
            batch.append(heapq.heappop(self.heap)[2])
        return np.array(batch)

    def _look_at(self, batch: Array) -> None:
        near = np.clip(0.0, batch[:, :, 0], batch[:, :, 1])
        clear = self._try(near)
        rest = batch[~clear]
        if not len(rest):
            return
        gates = self.landscape.hopeless(np.exp(rest[:, :, 0]), np.exp(rest[:, :, 1]))
        self.dropped += [(int(gate), box) for gate, box in zip(gates, rest, strict=True) if gate != OPEN]
        rest = rest[gates == OPEN]
        # The dear ends of boxes that still matter are mostly clear: they close the gap from above.
        far = np.where(np.abs(rest[:, :, 0]) > np.abs(rest[:, :, 1]), rest[:, :, 0], rest[:, :, 1])
        self._try(far[self._cost(far) < self.best])
        self._cut(rest)

    def _try(self, points: Array) -> Bools:
        """Return which points are clear, and keep the cheapest."""
        clear = self.landscape.clear(np.exp(points)) if len(points) else np.zeros(0, dtype=bool)
        for point in points[clear]:
            cost = float(self._cost(point))
            if cost < self.best:
                self.best, self.point = cost, point
        return clear

    def _cut(self, boxes: Array) -> None:
        width = boxes[:, :, 1] - boxes[:, :, 0]
        cut = width.max(axis=1) > NARROWEST if len(boxes) else np.zeros(0, dtype=bool)
        for box in boxes[~cut]:
            self.stuck = min(self.stuck, float(self._cost(np.clip(0.0, box[:, 0], box[:, 1]))))
        boxes = boxes[cut]
        if not len(boxes):
            return
        which, every = width[cut].argmax(axis=1), np.arange(len(boxes))
        middle = boxes[every, which].mean(axis=1)
        lower, upper = boxes.copy(), boxes.copy()
        lower[every, which, 1] = middle
        upper[every, which, 0] = middle
        self._push(np.concatenate([lower, upper]))

    def _push(self, boxes: Array) -> None:
        costs = self._cost(np.clip(0.0, boxes[:, :, 0], boxes[:, :, 1]))
        for cost, box in zip(costs.tolist(), boxes, strict=True):
            self.serial += 1
            heapq.heappush(self.heap, (cost, self.serial, box))

    def _cost(self, point: Array) -> Array:
        found: Array = np.abs(point) @ np.array(self.search.weights)
        return found

    def _tell(self) -> None:
        if self.search.progress is not None:
            self.search.progress("looking for the least change", 0.5 * self.boxes / self.search.most_boxes)

    def result(self, limits: Array) -> Least:
        bound = min(self.stuck, self.heap[0][0] if self.heap else math.inf, self.best)
        if self.point is not None:
            status = Found.CLEAR_NOW if self.best == 0 else Found.FOUND
            return Least(status, np.exp(self.point), self.best, bound, self.boxes, limits)
        exhausted = not self.heap and self.stuck == math.inf and self.search.below == math.inf
        none = exhausted and len(limits) <= MOST_PROVEN and self._recounted()
        status = Found.NONE_EXISTS if none else Found.NONE_FOUND
        return Least(status, None, math.inf, bound, self.boxes, limits)

    def _recounted(self) -> bool:
        """Return whether counts with proven edges drop every box that was dropped."""
        if len(self.dropped) > MOST_RECOUNTED:
            return False
        for number, (gate, box) in enumerate(self.dropped):
            if self.search.cancelled():
                raise CancelledError("Stopped by the user.")
            if self.search.progress is not None:
                self.search.progress("proving that nothing clears", 0.5 + 0.5 * number / len(self.dropped))
            if not self.landscape.proven_hopeless(gate, np.exp(box[:, 0]), np.exp(box[:, 1])):
                return False
        return True


def rounded_points(
    factors: Array, spelled: Sequence[Callable[[float, int, int], float]], digits: int
) -> Array:
    """Return the points (m, variables) around one whose values have so many digits, or stay as they are.

    Parameters
    ----------
    factors : array (variables,)
    spelled : sequence of callable
        Rounds a factor so that the value it gives has so many digits, to a side.
    digits : int
    """
    ways = [
        sorted({*(spell(factor, digits, side) for side in (-1, 1)), *([1.0] if _is_small(factor) else [])})
        for factor, spell in zip(factors.tolist(), spelled, strict=True)
    ]
    grid = np.meshgrid(*ways, indexing="ij")
    return np.stack([axis.ravel() for axis in grid], axis=1)


def _is_small(factor: float) -> bool:
    return abs(math.log(factor)) < SMALL
