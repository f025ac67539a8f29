"""All frequencies of plane chains and of random dense models against scipy.linalg.eigh.

Values only (tridiagonalisation and root-free QR iteration), then everything a solve gives: shapes,
polished frequencies, error bounds and counts.

    python tests/benchmarks/bench_frequencies.py
"""

import os

os.environ["OPENBLAS_NUM_THREADS"] = "1"

import numpy as np
import scipy.linalg as la
import scipy.sparse as sp
from sidebyside import in_turn

from modalview.assembly.pencil import Pencil, pencil_of_terms
from modalview.eigen.solve import all_eigenvalues, find_modes
from modalview.eigen.standard import eigenvalues


def sketch(n: int, seed: int = 3) -> Pencil:
    """Return n masses with about three springs each to near neighbours, some to ground."""
    rng = np.random.default_rng(seed)
    pairs = [(i, i + step) for step in (1, 2, 5) for i in range(n - step)]
    rows = sp.lil_array((len(pairs) + n // 5, n))
    for row, (a, b) in enumerate(pairs):
        rows[row, a], rows[row, b] = -1.0, 1.0
    for row in range(n // 5):
        rows[len(pairs) + row, 5 * row] = 1.0
    stiffness = 10 ** rng.uniform(5, 8, rows.shape[0])
    return pencil_of_terms(sp.csr_array(rows), stiffness, rng.uniform(10, 1000, n))


def main() -> None:
    """Print the table."""
    print("                                this       eigh")
    for n in (50, 200, 1000):
        pencil = sketch(n)
        S = pencil.standard.toarray()
        rounds = 15 if n < 1000 else 5
        runs = {
            "QR values alone": lambda: eigenvalues(S),
            "values of the pencil": lambda: all_eigenvalues(pencil),
            "modes and evidence": lambda: find_modes(pencil),
        }
        for name, run in runs.items():
            print(f"n = {n:5d}  {name:22}{in_turn(run, lambda: la.eigh(S), rounds)}")


if __name__ == "__main__":
    main()
