"""What the program aims at, as ratios in one run, aim beside figure.

Ten modes near a speed with certificate have a table of their own (bench_near.py), as has accuracy
(bench_accuracy.py).

    python tests/benchmarks/bench_targets.py
"""

import os

os.environ["OPENBLAS_NUM_THREADS"] = "1"

import numpy as np
import scipy.linalg as la
import scipy.sparse as sp
from families import FAMILIES, chain, sketch
from sidebyside import in_turn

from modalview.assembly.pencil import Pencil, pencil_of_terms
from modalview.bounds.forms import forms_of
from modalview.bounds.highest import highest_bounds
from modalview.eigen.jacobi import singular_pairs
from modalview.eigen.near import find_near
from modalview.eigen.solve import find_modes
from modalview.eigen.standard import eigenvalues


def main() -> None:
    """Print the tables."""
    frequencies()
    graded_route()
    disc_bound()
    error_bounds()
    repeated()


def frequencies() -> None:
    """Time all frequencies by QR iteration without shapes against eigh."""
    for n in (50, 200, 500, 1000):
        S = sketch(n).standard.toarray()
        pair = in_turn(lambda: eigenvalues(S), lambda: la.eigh(S), rounds=15 if n < 500 else 5)
        line("all frequencies without shapes | eigh", f"n = {n}", str(pair), "0.45")


def graded_route() -> None:
    """Time one-sided Jacobi on the terms against eigh of S formed."""
    for n, aim in ((10, "1.5"), (20, "1.5"), (50, "2.6"), (200, "6")):
        pencil = chain(n)
        G, S = pencil.factor.toarray(), pencil.standard.toarray()
        pair = in_turn(lambda: singular_pairs(G), lambda: la.eigh(S), rounds=25)
        line("high-accuracy dense route | eigh", f"n = {n}", str(pair), aim)


def disc_bound() -> None:
    """Divide the best-scaled disc bound after 20 steps by the largest eigenvalue."""
    for name, family in FAMILIES.items():
        pencil = family(600)
        top = float(np.linalg.eigvalsh(pencil.standard.toarray())[-1])
        bound = highest_bounds(forms_of(pencil))[1]
        line("best-scaled disc bound / largest eigenvalue", name, f"{bound / top:.4f}", "1.05")


def error_bounds() -> None:
    """Take the median of the relative error bounds of all modes."""
    for name, family in FAMILIES.items():
        modes = find_modes(family(300))
        share = np.median((modes.numerical_error_hz / modes.frequency_hz)[modes.elastic])
        line("median error bound of a frequency", name, f"{share:.1e}", "1e-14")


def repeated() -> None:
    """Count modes that were missed without a word on spectra full of repeated frequencies."""
    missed = undecided = windows = 0
    for pencil in (net(14, 14), net(9, 18), copies(6, 20), copies(20, 9), carried(50), carried(120)):
        every = find_modes(pencil).eigenvalues
        for share in (0.01, 0.03, 0.1, 0.3, 0.6, 0.95):
            near = find_near(pencil, share * float(every[-1]), 5)
            low, high = near.certificate.low, near.certificate.high
            there = int(np.sum((every > low) & (every < high)))
            windows += 1
            undecided += near.modes.complete is None
            missed += (there - near.modes.number) * (near.modes.complete is True)
    line("modes missed silently, repeated spectra", f"{windows} windows, {undecided} undecided", missed, "0")


def net(nx: int, ny: int) -> Pencil:
    """Return a net of equal masses and springs, held along two sides."""
    along, across = (sp.csr_array(sp.eye_array(n) - sp.eye_array(n, k=-1)) for n in (nx, ny))
    rows = sp.csr_array(sp.vstack([sp.kron(along, sp.eye_array(ny)), sp.kron(sp.eye_array(nx), across)]))
    return pencil_of_terms(rows, np.full(rows.shape[0], 1e6), np.full(nx * ny, 10.0))


def copies(number: int, n: int) -> Pencil:
    """Return equal chains that nothing joins."""
    one = chain(n)
    rows = sp.csr_array(sp.block_diag([one.rows] * number))
    return pencil_of_terms(rows, np.tile(one.stiffness, number), np.tile(one.M.diagonal(), number))


def carried(number: int) -> Pencil:
    """Return equal masses on equal springs on one carrier: one frequency is there number - 1 times."""
    hung = sp.csr_array(sp.hstack([-np.ones((number, 1)), sp.eye_array(number)]))
    foot = sp.csr_array(([1.0], ([0], [0])), shape=(1, number + 1))
    stiffness = np.append(np.full(number, 1e6), 1e7)
    return pencil_of_terms(
        sp.csr_array(sp.vstack([hung, foot])), stiffness, np.append(500.0, np.full(number, 10.0))
    )


def line(what: str, where: str, figure: object, aim: str) -> None:
    """Print one line of the table."""
    print(f"{what:44} {where:28} {figure!s:>46}   aim {aim}", flush=True)


if __name__ == "__main__":
    main()
