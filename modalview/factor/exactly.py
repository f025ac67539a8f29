"""Inertia of a symmetric matrix of fractions: integers only, no rounding anywhere."""

import heapq
import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from importlib import import_module
from importlib.util import find_spec
from typing import Any

Entries = Mapping[tuple[int, int], Fraction]

# Coordinates up to which an exact count takes a second or four: with Python's own integers, and with those
# of gmpy2.
PLAIN_LIMIT, FAST_LIMIT = 120, 300


def exact_limit() -> int:
    """Return the number of coordinates up to which matrices are counted exactly on this installation."""
    return FAST_LIMIT if find_spec("gmpy2") else PLAIN_LIMIT


def _integer() -> Callable[[int], Any]:
    """Return what makes fast integers: gmpy2's where it is installed."""
    return import_module("gmpy2").mpz if find_spec("gmpy2") else int


@dataclass(slots=True)
class _Update:
    """What eliminated coordinates leave on the others: entries over scale, part of a Schur complement."""

    scale: Any
    border: tuple[int, ...]
    entries: dict[tuple[int, int], Any]


@dataclass(slots=True)
class _Front:
    """Updates waiting for one coordinate."""

    updates: list[_Update] = field(default_factory=list)


def exact_negative(entries: Entries, n: int, *, step: Callable[[float], None] | None = None) -> int | None:
    """Count the negative eigenvalues of a nonsingular symmetric matrix exactly.

    Parameters
    ----------
    entries : mapping
        Fractions by (row, column), rows >= columns; what is not there is zero.
    n : int
    step : callable or None
        Told the share done, 0..1, after every coordinate; may raise to stop.

    Returns
    -------
    int or None
        None when a pivot is exactly zero: the matrix is singular, or one of its leading blocks is.

    Notes
    -----
    Signs of the pivots (Sylvester's law of inertia). The matrix is made integer by one factor and eliminated
    in a sparse order, front by front. With T the coordinates eliminated below one, what they leave is kept
    as integers over the determinant of the matrix restricted to T (a minor, by Jacobi's theorem), so that
    every division is without remainder and numbers grow with the size of T only. Cost about n**5 for a full
    matrix, far less for a sparse one.

    References
    ----------
    E. H. Bareiss (1968), Math. Comp. 22, 565. I. S. Duff, J. K. Reid (1983), ACM Trans. Math. Softw. 9, 302
    (fronts).

    Examples
    --------
    >>> one = Fraction(1)
    >>> exact_negative({(0, 0): one, (1, 0): 2 * one, (1, 1): one}, 2)
    1
    """
    own, neighbours = _integers(entries, n)
    order = _least_degree(neighbours)
    place = {coordinate: at for at, coordinate in enumerate(order)}
    fronts = [_Front() for _ in range(n)]
    negative = 0
    for done, pivot in enumerate(order, 1):
        scale, border, front = _gathered(pivot, own, fronts[pivot].updates, place)
        head = front[pivot, pivot]
        if head == 0:
            return None
        negative += (head < 0) != (scale < 0)
        if border:
            fronts[border[0]].updates.append(_eliminated(pivot, scale, border, front))
        fronts[pivot].updates = []
        if step is not None:
            step(done / n)
    return negative


def _integers(entries: Entries, n: int) -> tuple[list[dict[int, Any]], list[set[int]]]:
    """Return the rows of the matrix times a common denominator, and which coordinates meet."""
    make = _integer()
    common = math.lcm(*(entry.denominator for entry in entries.values()), 1)
    own: list[dict[int, Any]] = [{} for _ in range(n)]
    for (i, j), entry in entries.items():
        whole = make(entry.numerator * (common // entry.denominator))
        if whole:
            own[i][j] = own[j][i] = whole
    return own, [{j for j in row if j != i} for i, row in enumerate(own)]


def _least_degree(neighbours: Sequence[set[int]]) -> list[int]:
    """Order by minimum degree (H. M. Markowitz (1957), Management Science 3, 255)."""
    graph = [set(near) for near in neighbours]
    heap = [(len(near), i) for i, near in enumerate(graph)]
    heapq.heapify(heap)
    order: list[int] = []
    taken: set[int] = set()
    while heap:
        degree, i = heapq.heappop(heap)
        if i in taken or degree != len(graph[i]):
            continue
        taken.add(i)
        order.append(i)
        for j in graph[i]:
            graph[j] |= graph[i]
            graph[j] -= {i, j}
            heapq.heappush(heap, (len(graph[j]), j))
    return order


def _gathered(
    pivot: int, own: Sequence[Mapping[int, Any]], updates: Sequence[_Update], place: Mapping[int, int]
) -> tuple[Any, tuple[int, ...], dict[tuple[int, int], Any]]:
    """Sum a coordinate's own entries and the updates that wait for it, over their common scale."""
    scale = math.prod((update.scale for update in updates), start=_integer()(1))
    later = {j for j in own[pivot] if place[j] > place[pivot]}
    later.update(*(update.border for update in updates))
    border = tuple(sorted(later - {pivot}, key=place.__getitem__))
    front = {(i, j): 0 for at, i in enumerate(border) for j in border[at:]}
    front.update({(pivot, j): scale * own[pivot].get(j, 0) for j in border})
    front[pivot, pivot] = scale * own[pivot].get(pivot, 0)
    for update in updates:
        factor = scale // update.scale
        for key, entry in update.entries.items():
            front[key] += factor * entry
    return scale, border, front


def _eliminated(
    pivot: int, scale: Any, border: tuple[int, ...], front: Mapping[tuple[int, int], Any]
) -> _Update:
    head = front[pivot, pivot]
    column = [front[pivot, i] for i in border]
    entries = {}
    for at, i in enumerate(border):
        left = column[at]
        for j, right in zip(border[at:], column[at:], strict=True):
            whole = head * front[i, j] - left * right
            entries[i, j] = whole if scale == 1 else whole // scale
    return _Update(head, border, entries)
