"""Steady motion at 2,000 speeds of 60 bodies, against a plain loop of dense complex solves; and at 1e4 DOF.

Aim: well below 0.5 of the loop. The loop is given its matrices; what is timed beside it is the whole of the
program's work on an assembled model: modes or states, one load, motion of every coordinate at every speed.
A large model is factored at each speed: the time beside that of `splu` alone on matrices already formed.

    python tests/benchmarks/bench_response.py
"""

import os

os.environ["OPENBLAS_NUM_THREADS"] = "1"

from dataclasses import replace

import numpy as np
import scipy.sparse as sp
from made import plane_model
from scipy.sparse.linalg import splu
from sidebyside import in_turn

from modalview.assembly.assemble import assemble
from modalview.model.parts import Damper, End, Model, ModelDamping, Mount
from modalview.model.values import Entry, Value
from modalview.response.dynamic import Dynamics
from modalview.response.load import Load
from modalview.units import quantities as q

SPEEDS = 2_000
OMEGA = np.linspace(10.0, 400.0, SPEEDS)


def with_ratio(model: Model) -> Model:
    """Return the model with one damping ratio."""
    return replace(model, damping=ModelDamping(ratio=Entry.typed("2 %", q.RATIO)))


def with_losses(model: Model) -> Model:
    """Return the model with loss factors that differ from mount to mount."""
    links = [
        replace(link, loss_factor=Entry.typed(f"{2 + n % 9} %", q.RATIO)) if isinstance(link, Mount) else link
        for n, link in enumerate(model.links)
    ]
    return replace(model, links=tuple(links))


def with_dashpots(model: Model, every: int = 1) -> Model:
    """Return the model with a dashpot beside every mount, or every so many."""
    damping = Value(Entry.typed("900 N s/m", q.DAMPING))
    added = [
        Damper(id=f"c{n}", from_=End(body=link.from_.body), to=link.to, damping=damping, direction="y")
        for n, link in enumerate(model.links)
        if n % every == 0
    ]
    return replace(model, links=(*model.links, *added))


def in_line(bodies: int = 60) -> Model:
    """Return the same number of bodies moving along one axis."""
    model = plane_model(bodies)
    upright = [
        replace(link, stiffness=replace(link.stiffness, x=None, rz=None))
        for link in model.links
        if isinstance(link, Mount) and link.stiffness is not None
    ]
    held = tuple(replace(body, dof=("y",)) for body in model.bodies)
    return replace(model, bodies=held, links=tuple(upright))


def main() -> None:
    """Print the tables."""
    small, plane = in_line(), plane_model()
    print(f"{SPEEDS} speeds, 60 bodies: whole response of the model | loop of numpy.linalg.solve")
    for name, model in (
        ("one axis, damping ratio", with_ratio(small)),
        ("one axis, loss factors", with_losses(small)),
        ("one axis, 3 dashpots", with_dashpots(small, 50)),
        ("one axis, 150 dashpots", with_dashpots(small)),
        ("plane, damping ratio", with_ratio(plane)),
        ("plane, loss factors", with_losses(plane)),
        ("plane, 3 dashpots", with_dashpots(plane, 50)),
        ("plane, 150 dashpots", with_dashpots(plane)),
    ):
        small_case(name, model)
    large_case(with_losses(plane_model(3334, 9000)))


def small_case(name: str, model: Model) -> None:
    """Print one line: the program beside the loop, and how far both are apart."""
    assembly = assemble(model)
    dynamics = Dynamics.of(assembly)
    load = Load(np.ones(dynamics.size, dtype=complex), None, based=False)
    K, C, M = (one.toarray() for one in matrices(dynamics))
    found = dynamics.with_damping().solve(OMEGA, load).coordinates

    def program() -> None:
        Dynamics.of(assembly).with_damping().solve(OMEGA, load)

    def loop() -> np.ndarray:
        return np.array([np.linalg.solve(K + 1j * w * C - w * w * M, load.steady) for w in OMEGA]).T

    # Damping given for the whole model is not in the loop's matrices.
    far = np.abs(loop() - found).max() / np.abs(found).max()
    apart = f"apart {far:.0e}" if dynamics.damping.own else 12 * " "
    pair = in_turn(program, loop, rounds=3)
    print(f"{name:25} {dynamics.size:4} coordinates {pair}  {apart}  {dynamics.with_damping().method}")


def matrices(dynamics: Dynamics) -> tuple[sp.csc_array, sp.csc_array, sp.csc_array]:
    """Return complex K, C and M over the coordinates."""
    terms, damping = dynamics.terms, dynamics.damping
    stiffness = terms.stiffness * (1 + 1j * damping.losses)
    K = sp.csc_array(terms.stretching.T @ sp.diags_array(stiffness) @ terms.stretching)
    C = sp.csc_array(terms.resisting.T @ sp.diags_array(terms.damping) @ terms.resisting)
    held = sp.csc_array((dynamics.size - terms.inertial,) * 2)
    return K, C, sp.csc_array(sp.block_diag([terms.mass, held]))


def large_case(model: Model) -> None:
    """Print the time per speed of a large model beside splu alone."""
    dynamics = Dynamics.of(assemble(model))
    load = Load(np.ones(dynamics.size, dtype=complex), None, based=False)
    solver = dynamics.with_damping()
    K, C, M = matrices(dynamics)
    omega = np.linspace(20.0, 200.0, 5)
    ready = [sp.csc_array(K + 1j * w * C - w * w * M) for w in omega]

    def alone() -> None:
        for matrix in ready:
            splu(matrix, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=1e-3, options={"SymmetricMode": True})

    pair = in_turn(lambda: solver.solve(omega, load), alone, rounds=5)
    print(f"{dynamics.size} coordinates, 5 speeds: whole solve | splu alone: {pair}")


if __name__ == "__main__":
    main()
