"""Invented pencils of a given size, for timing only: chains, plane and spatial lattices, sketches."""

from collections.abc import Callable

import numpy as np
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil, pencil_of_terms


def chain(n: int, seed: int = 1) -> Pencil:
    """Return n masses in a row, the first on the ground."""
    rng = np.random.default_rng(seed)
    rows = sp.csr_array(sp.eye_array(n) - sp.eye_array(n, k=-1))
    return pencil_of_terms(rows, 10 ** rng.uniform(5, 8, n), rng.uniform(10, 1000, n))


def planar(n: int, seed: int = 2) -> Pencil:
    """Return about n / 3 bodies in a square of rows, x, y and turning, sprung to their neighbours."""
    rng = np.random.default_rng(seed)
    side = max(2, round(np.sqrt(n / 3)))
    place = np.arange(side * side).reshape(side, side)
    right = np.stack([place[:, :-1].ravel(), place[:, 1:].ravel()])
    up = np.stack([place[:-1].ravel(), place[1:].ravel()])
    a, b = np.hstack([right, up])
    flat = np.arange(a.size) < right.shape[1]
    one, arm = np.ones(a.size), 0.6
    along = _rows((3 * a, 3 * a + 2, 3 * b, 3 * b + 2), (-one, arm * ~flat, one, arm * ~flat), 3 * side**2)
    across = _rows(
        (3 * a + 1, 3 * a + 2, 3 * b + 1, 3 * b + 2), (-one, -arm * flat, one, -arm * flat), 3 * side**2
    )
    feet = _feet((3 * place[0][:, None] + np.arange(3)).ravel(), 3 * side**2)
    mass = rng.uniform(50, 500, 3 * side**2)
    mass[2::3] *= 0.2
    return _pencil([along, across, feet], mass, rng)


def spatial(n: int, seed: int = 3) -> Pencil:
    """Return about n / 3 points in a cube, x, y and z, sprung to their neighbours along and across."""
    rng = np.random.default_rng(seed)
    side = max(2, round(np.cbrt(n / 3)))
    place = np.arange(side**3).reshape(side, side, side)
    parts = []
    for axis in range(3):
        a, b = np.delete(place, -1, axis).ravel(), np.delete(place, 0, axis).ravel()
        parts += [
            _rows((3 * a + d, 3 * b + d), (-np.ones(a.size), np.ones(a.size)), 3 * side**3) for d in range(3)
        ]
    parts.append(_feet((3 * place[0].ravel()[:, None] + np.arange(3)).ravel(), 3 * side**3))
    return _pencil(parts, rng.uniform(50, 500, 3 * side**3), rng)


def sketch(n: int, seed: int = 4) -> Pencil:
    """Return n masses with about three springs each to near neighbours, every fifth on the ground."""
    rng = np.random.default_rng(seed)
    first = np.concatenate([np.arange(n - step) for step in (1, 2, 5)])
    second = np.concatenate([np.arange(step, n) for step in (1, 2, 5)])
    between = _rows((first, second), (-np.ones(first.size), np.ones(first.size)), n)
    return _pencil([between, _feet(np.arange(0, n, 5), n)], rng.uniform(10, 1000, n), rng)


FAMILIES: dict[str, Callable[[int], Pencil]] = {
    "chain": chain,
    "planar": planar,
    "spatial": spatial,
    "sketch": sketch,
}


def _rows(columns: tuple[np.ndarray, ...], entries: tuple[np.ndarray, ...], n: int) -> sp.csr_array:
    term = np.repeat(np.arange(columns[0].size), len(columns))
    table = sp.csr_array(
        (np.stack(entries, 1).ravel(), (term, np.stack(columns, 1).ravel())), shape=(columns[0].size, n)
    )
    table.eliminate_zeros()
    return table


def _feet(where: np.ndarray, n: int) -> sp.csr_array:
    return sp.csr_array((np.ones(where.size), (np.arange(where.size), where)), shape=(where.size, n))


def _pencil(parts: list[sp.csr_array], mass: np.ndarray, rng: np.random.Generator) -> Pencil:
    rows = sp.csr_array(sp.vstack(parts))
    return pencil_of_terms(rows, 10 ** rng.uniform(5, 8, rows.shape[0]), mass)
