"""Relative errors of the lowest and of the worst frequency, against 60 digits, beside plain eigh of S.

Single axis: a chain on a soft ground, and springs and masses spread over the whole ratio. Plane: bodies with
rotation on mounts. Stiffness ratio 1e3 to 1e14; masses equal, or over 1e9.

    python tests/benchmarks/bench_accuracy.py [largest n, 16]
"""

import os

os.environ["OPENBLAS_NUM_THREADS"] = "1"

import sys

import mpmath
import numpy as np
import scipy.linalg as la
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil, pencil_of_terms
from modalview.eigen.solve import find_modes

DIGITS = 60


def main(largest: int) -> None:
    """Print the table."""
    print("                                           this                        eigh")
    print("model, n, stiffness ratio, mass ratio      lowest    worst    bound    lowest    worst")
    for n in (16, 60):
        if n > largest:
            continue
        for name, model in MODELS.items():
            for decades in (3, 6, 9, 12, 14):
                for mass_decades in (0, 9):
                    pencil = model(n, decades, mass_decades)
                    print(
                        f"{name:16} {n:3d}  1e{decades:<2d} 1e{mass_decades}         ",
                        *_errors(pencil),
                        flush=True,
                    )


def stiff_chain(n: int, decades: int, mass_decades: int) -> Pencil:
    """Return a stiff chain on a soft ground spring."""
    rows = sp.csr_array(sp.eye_array(n) - sp.eye_array(n, k=-1))
    stiffness = np.full(n, 10.0**decades)
    stiffness[0] = 1.0
    return pencil_of_terms(rows, stiffness, _masses(n, mass_decades))


def spread_chain(n: int, decades: int, mass_decades: int) -> Pencil:
    """Return a chain whose springs are spread over the whole ratio."""
    rng = np.random.default_rng(decades)
    rows = sp.csr_array(sp.eye_array(n) - sp.eye_array(n, k=-1))
    return pencil_of_terms(rows, 10 ** rng.uniform(0, decades, n), _masses(n, mass_decades))


def plane(n: int, decades: int, mass_decades: int) -> Pencil:
    """Return bodies in a row, x, y and rotation, on mounts of two directions beside their centres."""
    rng = np.random.default_rng(10 + decades)
    bodies = n // 3
    rows = []
    for i in range(bodies):
        for direction in (0, 1):
            for offset in (-0.3, 0.4):
                row = np.zeros(3 * bodies)
                row[3 * i + direction], row[3 * i + 2] = 1.0, offset
                if i:
                    row[3 * i - 3 + direction], row[3 * i - 1] = -1.0, 0.25 - offset
                rows.append(row)
    stiffness = 10 ** rng.uniform(0, decades, len(rows))
    mass = np.repeat(_masses(bodies, mass_decades), 3)
    mass[2::3] *= 0.2
    return pencil_of_terms(sp.csr_array(np.array(rows)), stiffness, mass)


MODELS = {"stiff chain": stiff_chain, "spread chain": spread_chain, "plane": plane}


def _masses(n: int, decades: int) -> np.ndarray:
    return 10 ** np.random.default_rng(7).uniform(-decades / 2, decades / 2, n) if decades else np.ones(n)


def _errors(pencil: Pencil) -> tuple[str, ...]:
    truth = _frequencies(pencil)
    modes = find_modes(pencil)
    plain = np.sqrt(np.abs(la.eigvalsh(pencil.standard.toarray())))
    own, other = (
        np.array([float(abs(mpmath.mpf(f) / t - 1)) for f, t in zip(found, truth, strict=True)])
        for found in (np.sqrt(modes.eigenvalues), np.sort(plain))
    )
    bound = float((modes.numerical_error_hz / modes.frequency_hz).max())
    return tuple(f"{figure:8.0e}" for figure in (own[0], own.max(), bound, other[0], other.max()))


def _frequencies(pencil: Pencil) -> list[mpmath.mpf]:
    """Every angular frequency as the stored numbers define it, ascending."""
    with mpmath.workdps(DIGITS):
        rows = pencil.rows.toarray()
        scaled = [
            [
                mpmath.mpf(entry) / mpmath.sqrt(mpmath.mpf(m))
                for entry, m in zip(row, pencil.M.diagonal(), strict=True)
            ]
            for row in rows
        ]
        G = mpmath.matrix(scaled)
        S = G.T * mpmath.diag([mpmath.mpf(float(k)) for k in pencil.stiffness]) * G
        return sorted(mpmath.sqrt(value) for value in mpmath.eigsy(S, eigvals_only=True))


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 16)
