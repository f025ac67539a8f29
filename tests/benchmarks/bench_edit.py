"""One edit of a 60-body plane model (180 degrees of freedom, 150 links): bounds, counts and verdict.

Aim: under 16 ms. Beside it, for scale, one dense eigenvalue solve of the same size.

    python tests/benchmarks/bench_edit.py
"""

import os

os.environ["OPENBLAS_NUM_THREADS"] = "1"

from itertools import cycle

import numpy as np
import scipy.linalg as la
from made import plane_model
from sidebyside import in_turn

from modalview.model.edits import set_value_text
from modalview.study import Request, look


def main() -> None:
    """Print the table."""
    model = plane_model()
    address = ("links", "k3", "stiffness", "y")
    edits = cycle([set_value_text(model, address, f"{1 + 0.01 * i} MN/m").apply(model) for i in range(1, 40)])
    outlook = look(Request(model))
    S = outlook.assembly.pencil().standard.toarray()

    def edit() -> None:
        nonlocal outlook
        outlook = look(Request(next(edits)), outlook)

    pair = in_turn(edit, lambda: la.eigh(S), rounds=40)
    counted = {check.band.label: (check.inside, check.possible, check.certain) for check in outlook.checks}
    print(f"{len(model.bodies)} bodies, {len(model.links)} links, {outlook.assembly.n} degrees of freedom")
    print(f"bounds, counts and verdict of an edit | scipy.linalg.eigh: {pair}")
    print(
        f"modes inside, possible, certain: {counted}; lowest mode {np.round(outlook.bounds.lowest_hz, 3)} Hz"
    )


if __name__ == "__main__":
    main()
