"""Ten modes near a speed, proven complete by counts, against scipy's eigsh at the same shift.

The other side is eigsh (shift and invert, unproven) on S, its factorization included; this side factors
three times, because it counts, twice side by side where there are two cores. What a pencil prepares once for
all shifts is ready on both sides. BLAS has one thread.

    python tests/benchmarks/bench_near.py [largest size, 1e4] [picture.svg]
"""

import os

os.environ["OPENBLAS_NUM_THREADS"] = "1"

import sys
from pathlib import Path

import numpy as np
from families import FAMILIES
from growth import draw
from scipy.sparse.linalg import eigsh
from sidebyside import in_turn

from modalview.eigen.near import find_near

COUNT = 10


def main(largest: float, picture: Path | None) -> None:
    """Print the table and draw the growth."""
    series: dict[str, list[tuple[int, float, float]]] = {}
    print("                            this         eigsh                            solves  complete")
    for name, family in FAMILIES.items():
        for size in (100, 1_000, 10_000, 100_000):
            if size > largest:
                continue
            pencil = family(size)
            S, top = pencil.standard, pencil.shifted.extents.top
            sigma = float(np.sqrt(top * 1e-2) * 3) ** 2
            found = find_near(pencil, sigma, COUNT)
            pair = in_turn(
                lambda: find_near(pencil, sigma, COUNT),
                lambda: eigsh(S, COUNT, sigma=sigma, which="LM"),
                rounds=15 if size <= 1000 else 7 if size <= 10_000 else 3 if name != "spatial" else 1,
            )
            series.setdefault(name, []).append((pencil.n, pair.first, pair.second))
            solves = found.history[-1].solves
            print(f"{name:8} n = {pencil.n:6d}  {pair}  {solves:4d}  {found.modes.complete}", flush=True)
    if picture is not None:
        draw(picture, "Ten modes near a speed, with certificate", series)


if __name__ == "__main__":
    main(float(sys.argv[1]) if len(sys.argv) > 1 else 1e4, Path(sys.argv[2]) if len(sys.argv) > 2 else None)
