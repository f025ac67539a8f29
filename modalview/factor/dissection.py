"""Nested dissection: an order for large nets that minimum degree fills too much."""

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.csgraph import breadth_first_order, connected_components, reverse_cuthill_mckee

Indices = npt.NDArray[np.intp]

# Pieces up to this size are not cut any more.
LEAF = 60
# The cut is the thinnest level between these shares of a piece.
FROM, TO = 0.4, 0.6
# Searches for an end of a piece from which levels are thin (N. E. Gibbs, W. G. Poole, P. K. Stockmeyer
# (1976), SIAM J. Numer. Anal. 13, 236).
WALKS = 2


def dissection(matrix: sp.csc_array) -> Indices:
    """Return an order of a symmetric pattern: both sides of a thin cut first, then the cut, again and again.

    Parameters
    ----------
    matrix : csc_array (n, n)
        Both triangles stored; values do not matter.

    Returns
    -------
    array (n,)
        Coordinate that comes at each place.

    Notes
    -----
    Cuts are levels of a breadth-first search, taken from graph and not from geometry. On plane lattices of
    1e4 and 1e5 the factors have three quarters and six tenths of the entries that minimum degree leaves, and
    are made in two thirds and half of the time; on chains and other narrow nets they are larger.

    References
    ----------
    A. George (1973), SIAM J. Numer. Anal. 10, 345.
    """
    graph = sp.csr_array(matrix)
    order = np.empty(graph.shape[0], dtype=np.intp)
    open_ = [(np.arange(graph.shape[0]), 0)]
    while open_:
        members, start = open_.pop()
        piece = sp.csr_array(graph[members][:, members])
        if members.size <= LEAF:
            inner = reverse_cuthill_mckee(piece, symmetric_mode=True)
            order[start : start + members.size] = members[inner]
            continue
        parts, cut = _parted(piece)
        for part in filter(len, parts):
            open_.append((members[part], start))
            start += part.size
        order[start : start + cut.size] = members[cut]
    return order


def _parted(piece: sp.csr_array) -> tuple[list[Indices], Indices]:
    """Return parts that touch each other only through the cut, and the cut."""
    number, label = connected_components(piece, directed=False)
    if number > 1:
        return [np.flatnonzero(label == one) for one in range(number)], np.zeros(0, dtype=np.intp)
    visited, level = _levels(piece, 0)
    for _ in range(WALKS):
        visited, level = _levels(piece, int(visited[-1]))
    size = np.bincount(level)
    reached = np.cumsum(size)
    first = int(np.searchsorted(reached, FROM * visited.size))
    last = max(first + 1, int(np.searchsorted(reached, TO * visited.size)) + 1)
    thin = first + int(np.argmin(size[first:last]))
    return [visited[level < thin], visited[level > thin]], visited[level == thin]


def _levels(piece: sp.csr_array, root: int) -> tuple[Indices, Indices]:
    """Return the vertices in the order of a breadth-first search, and the distance of each from the root."""
    visited, before = breadth_first_order(piece, root, directed=False)
    place = np.empty(visited.size, dtype=np.intp)
    place[visited] = np.arange(visited.size)
    parent = place[before[visited[1:]]]  # ascending, as vertices queue up
    level = np.zeros(visited.size, dtype=np.intp)
    end = 1
    while end < visited.size:
        following = int(np.searchsorted(parent, end)) + 1  # children of all before ``end``
        level[end:following] = level[end - 1] + 1
        end = following
    return np.asarray(visited, dtype=np.intp), level
