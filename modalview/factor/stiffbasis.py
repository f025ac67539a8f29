"""Coordinates relative over stiff terms, so that the soft information stays in the formed matrix."""

import math
from collections.abc import Iterable

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

Array = npt.NDArray[np.float64]

# A term is stiff beside the softest one beyond this ratio.
STIFF = 1e3

# What is left of a term's row after reduction counts as a direction of its own above this share.
INDEPENDENT = 1e-9

# A coordinate may be replaced where its entry is at least this share of the largest.
LARGE_ENOUGH = 0.5

# Splits a double into halves of 26 bits (T. J. Dekker (1971), Numer. Math. 18, 224).
SPLITTER = 2.0**27 + 1


def relative_basis(rows: sp.csr_array, stiffness: Array, scale: Array) -> sp.csr_array:
    """Return T (n, n), of determinant 1 or -1, with x = T z: z holds motion relative over stiff terms.

    Parameters
    ----------
    rows : csr_array (t, n)
    stiffness : array (t,)
    scale : array (n,)
        Metres per unit of each coordinate.

    Notes
    -----
    From the stiffest term down to 1e3 times the softest: its row, seen by the coordinates that are still
    free, replaces one of them, so that the term stretches relative coordinates only. Two masses on a stiff
    spring become x and x + z; K z = a.T k a z then holds the stiff value beside z and the soft ones beside
    x, where x and x + z held their sum, and with it only u times the stiff value of the soft ones. T may be
    rounded: it is what is stored, and any invertible T leaves every count as it is (Sylvester). Ordered by
    the time of replacement T is triangular with ones on the diagonal. Entries: about n log n in
    chains and trees.
    """
    scaled = sp.csr_array(rows @ sp.diags_array(1 / scale))
    weight = np.abs(stiffness) * np.asarray((scaled * scaled).sum(axis=1)).ravel()
    present = weight > 0
    softest = weight[present].min(initial=np.inf)
    stiff = np.flatnonzero(present & (weight > STIFF * softest))
    replaced = _Replaced(rows.shape[1])
    for term in stiff[np.argsort(-weight[stiff], kind="stable")]:
        inside = slice(scaled.indptr[term], scaled.indptr[term + 1])
        replaced.take(zip(scaled.indices[inside].tolist(), scaled.data[inside].tolist(), strict=True))
    turned = sp.csr_array(replaced.matrix())
    return sp.csr_array(sp.diags_array(1 / scale) @ turned @ sp.diags_array(scale)) if stiff.size else turned


class _Replaced:
    """x_j = z_j + a sum over free coordinates and others replaced later."""

    def __init__(self, n: int) -> None:
        self._n = n
        self._rest: dict[int, dict[int, float]] = {}
        self._users: dict[int, set[int]] = {}

    def take(self, row: Iterable[tuple[int, float]]) -> None:
        """Replace one free coordinate by the stretch of a row as the free coordinates see it."""
        seen: dict[int, float] = {}
        largest = 0.0
        for q, entry in row:
            largest = max(largest, abs(entry))
            for key, part in self._rest.get(q, {q: 1.0}).items():
                if key not in self._rest:
                    seen[key] = seen.get(key, 0.0) + entry * part
        top = max(map(abs, seen.values()), default=0.0)
        if top <= INDEPENDENT * largest:
            return
        large = [q for q, entry in seen.items() if abs(entry) >= LARGE_ENOUGH * top]
        pivot = min(large, key=lambda q: len(self._users.get(q, ())))
        rest = {
            q: -entry / seen[pivot]
            for q, entry in seen.items()
            if q != pivot and abs(entry) > INDEPENDENT * top
        }
        for user in self._users.pop(pivot, set()):
            theirs = self._rest[user]
            for q, entry in rest.items():
                theirs[q] = theirs.get(q, 0.0) + theirs[pivot] * entry
                self._users.setdefault(q, set()).add(user)
        self._rest[pivot] = rest
        for q in rest:
            self._users.setdefault(q, set()).add(pivot)

    def matrix(self) -> sp.coo_array:
        """Return T (n, n)."""
        found = [(j, q, entry) for j, rest in self._rest.items() for q, entry in rest.items() if entry]
        rows = [*range(self._n), *(j for j, _, _ in found)]
        cols = [*range(self._n), *(q for _, q, _ in found)]
        entries = [1.0] * self._n + [entry for _, _, entry in found]
        return sp.coo_array((entries, (rows, cols)), shape=(self._n, self._n))


def product(left: sp.csr_array, right: sp.csr_array) -> sp.csr_array:
    """Return left @ right, every entry correctly rounded however much cancels (relative error u).

    Products are split without error (Dekker) and summed exactly (math.fsum).
    """
    first = np.repeat(np.arange(left.shape[0]), np.diff(left.indptr))
    count = np.diff(right.indptr)[left.indices]
    starts = np.repeat(right.indptr[left.indices], count)
    within = np.arange(count.sum()) - np.repeat(np.cumsum(count) - count, count)
    a, b = np.repeat(left.data, count), right.data[starts + within]
    keys = np.repeat(first, count).astype(np.int64) * right.shape[1] + right.indices[starts + within]
    order = np.argsort(keys, kind="stable")
    keys, whole = keys[order], (a * b)[order]
    begin = np.flatnonzero(np.concatenate([[True], keys[1:] != keys[:-1]])) if keys.size else keys
    data = whole[begin]
    ends = np.append(begin[1:], keys.size)
    lost = _lost(a, b)[order]
    for at in np.flatnonzero(ends - begin > 1):
        inside = slice(begin[at], ends[at])
        data[at] = math.fsum([*whole[inside].tolist(), *lost[inside].tolist()])
    shape = (left.shape[0], right.shape[1])
    found = sp.csr_array((data, (keys[begin] // shape[1], keys[begin] % shape[1])), shape=shape)
    found.eliminate_zeros()
    found.sort_indices()
    return found


def _lost(a: Array, b: Array) -> Array:
    """Return a b - fl(a b), exactly."""
    a_high, b_high = _high(a), _high(b)
    a_low, b_low = a - a_high, b - b_high
    lost: Array = a_low * b_low - (((a * b - a_high * b_high) - a_low * b_high) - a_high * b_low)
    return lost


def _high(a: Array) -> Array:
    shifted = SPLITTER * a
    high: Array = shifted - (shifted - a)
    return high
