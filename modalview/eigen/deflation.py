"""Known rigid-body modes are taken out exactly, by reflections that keep the grading of G."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.linalg as la

from modalview.assembly.pencil import Pencil

Array = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Deflation:
    """Orthonormal coordinates for the complement of the rigid-body modes.

    Each reflection H = I - tau v v.T sends one rigid-body mode to a coordinate, which is then dropped.

    Parameters
    ----------
    reflections : tuple of (pivot, v, tau)
        In the order of reduction; ``pivot`` counts the coordinates still there.
    shapes : array (n, r)
        M-orthonormal rigid-body modes in the pencil's coordinates.
    """

    reflections: tuple[tuple[int, Array, float], ...]
    shapes: Array

    def columns(self, factor: Array) -> Array:
        """Return G Q (t, modes - r) of G (t, modes), for a G that stretches no rigid-body mode.

        G v is exactly plus or minus one column of G, so every row keeps its scale and a heavy pivot
        adds only small entries: relative accuracy survives.
        """
        for pivot, v, tau in self.reflections:
            moved = np.outer(factor[:, pivot], v * (tau * np.sign(v[pivot])))
            factor = np.delete(factor - moved, pivot, axis=1)
        return factor

    def both_sides(self, standard: Array) -> Array:
        """Return Q.T S Q (modes - r, modes - r) of the symmetric S (modes, modes)."""
        for pivot, v, tau in self.reflections:
            moved = standard[:, pivot] * np.sign(v[pivot])
            step = tau * moved - (tau * tau / 2 * float(moved @ v)) * v
            standard = standard - np.outer(step, v) - np.outer(v, step)
            standard = np.delete(np.delete(standard, pivot, axis=0), pivot, axis=1)
        return standard

    def lift(self, vectors: Array) -> Array:
        """Return Q Y (modes, m) of Y (modes - r, m): orthogonal to every rigid-body mode."""
        for pivot, v, tau in reversed(self.reflections):
            vectors = np.insert(vectors, pivot, 0.0, axis=0)
            vectors = vectors - np.outer(v * tau, v @ vectors)
        return vectors


def deflate(pencil: Pencil) -> Deflation:
    """Prepare the reflections for the pencil's rigid-body modes (none: an empty tuple).

    The pivot of each step is the coordinate that moves most in M-orthonormal terms, usually the
    heaviest. Reflection: A. S. Householder (1958), J. ACM 5, 339.
    """
    rigid = np.asarray(pencil.rigid_body, dtype=float)
    if rigid.shape[1] == 0:
        return Deflation((), np.zeros((pencil.n, 0)))
    shapes = mass_orthonormal(pencil, rigid)
    left = np.asarray(pencil.basis.T @ (pencil.M @ shapes))
    reflections = []
    while left.shape[1]:
        pivot = int(np.argmax(np.sum(left * left, axis=1)))
        turn = _first_along(left[pivot])
        left = left @ turn
        mode = left[:, 0] / np.linalg.norm(left[:, 0])
        v = mode.copy()
        v[pivot] += np.copysign(1.0, mode[pivot])
        tau = 1.0 / abs(v[pivot])
        reflections.append((pivot, v, tau))
        rest = left[:, 1:] - np.outer(v * tau, v @ left[:, 1:])
        left = np.delete(rest, pivot, axis=0)
        if left.shape[1]:
            left = np.linalg.qr(left)[0]
    return Deflation(tuple(reflections), shapes)


def mass_orthonormal(pencil: Pencil, vectors: Array) -> Array:
    """Return the span of ``vectors`` (n, m), M-orthonormal; rows of massless coordinates follow along."""
    for _ in range(2):
        inertial = np.asarray(pencil.basis.T @ (pencil.M @ vectors))
        triangle: Array = np.linalg.qr(inertial)[1]
        vectors = la.solve_triangular(triangle.T, vectors.T, lower=True).T
    return vectors


def _first_along(row: Array) -> Array:
    """Orthogonal (r, r) whose first column lies along ``row``."""
    size = row.size
    direction = row / np.linalg.norm(row)
    reflected = direction.copy()
    reflected[0] += np.copysign(1.0, direction[0])
    tau = 1.0 / abs(reflected[0])
    turn: Array = np.eye(size) - tau * np.outer(reflected, reflected)
    return turn
