"""Counts: after an edit against a new factorization, next to stiff parts, and without any rounding.

python tests/benchmarks/bench_counts.py
"""

import os

os.environ["OPENBLAS_NUM_THREADS"] = "1"

from fractions import Fraction
from itertools import count
from time import perf_counter

import numpy as np
import scipy.sparse as sp
from made import plane_model
from sidebyside import in_turn

from modalview.assembly.assemble import assemble
from modalview.assembly.exactly import ExactForms
from modalview.assembly.parameters import Case
from modalview.assembly.pencil import Pencil, pencil_of_terms
from modalview.bounds.exactly import squared_edge
from modalview.factor import exactly
from modalview.factor.edited import edited_count


def grid(side: int) -> Pencil:
    """Return a grounded square grid of scalar springs."""
    n = side * side
    i = np.arange(n)
    a, b = i[(i + 1) % side != 0], i[: n - side]
    first, second = np.r_[a, b], np.r_[a + 1, b + side]
    ties = first.size
    rows = sp.vstack(
        [
            sp.csr_array((np.ones(ties), (np.arange(ties), first)), shape=(ties, n))
            - sp.csr_array((np.ones(ties), (np.arange(ties), second)), shape=(ties, n)),
            sp.eye_array(n),
        ]
    )
    rng = np.random.default_rng(1)
    return pencil_of_terms(
        sp.csr_array(rows), np.r_[rng.uniform(1, 2, ties), np.full(n, 0.01)], rng.uniform(1, 2, n)
    )


def edits() -> None:
    """Print what a count costs after one edit of a spring."""
    print("proven count after one edit: new spring | same spring, new value, each against one factorization")
    for name, pencil in (
        ("plane 180", assemble(plane_model()).pencil()),
        ("grid 2500", grid(50)),
        ("grid 40000", grid(200)),
    ):
        shifted = pencil.shifted
        sigma = 0.01 * shifted.extents.top
        found = shifted.factorize(sigma)
        row = pencil.rows[3:4]
        counted = edited_count(shifted, found, row)
        values = count(1)
        first = in_turn(
            lambda: edited_count(shifted, found, row).proven(np.array([0.5])),
            lambda: shifted.factorize(sigma),
        )
        again = in_turn(
            lambda: counted.proven(np.array([0.01 * next(values)])), lambda: shifted.factorize(sigma)
        )
        relative = in_turn(lambda: shifted.relative.factorize(sigma), lambda: shifted.factorize(sigma))
        print(f"{name:12s} {first}\n{'':12s} {again}\n  relative   {relative}")


def exact() -> None:
    """Print what an exact count takes."""
    print("exact count, plane models, seconds: with gmpy2 if installed | with Python's integers")
    for bodies in (3, 10, 20, 34, 60):
        assembly = assemble(plane_model(bodies, links=int(2.5 * bodies)))
        pencil = ExactForms(assembly).pencil(Case.NOMINAL)
        sigma, _ = squared_edge(Fraction(20), 1)
        seconds = [_seconds(pencil, sigma)]
        found, exactly.find_spec = exactly.find_spec, lambda _name: None
        seconds.append(_seconds(pencil, sigma))
        exactly.find_spec = found
        print(f"{assembly.n:4d} degrees of freedom  {seconds[0]:8.4f}  {seconds[1]:8.4f}")


def _seconds(pencil, sigma) -> float:
    start = perf_counter()
    exactly.exact_negative(pencil.shifted(sigma), pencil.n)
    return perf_counter() - start


if __name__ == "__main__":
    edits()
    exact()
