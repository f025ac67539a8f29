"""Random samples: a stack of small models against a loop over them, and two workers against one."""

import sys
from concurrent.futures import ThreadPoolExecutor
from dataclasses import replace
from pathlib import Path

import numpy as np
import scipy.linalg as la

sys.path.insert(0, str(Path(__file__).parent))
from made import chain_text, plane_model
from sidebyside import in_turn

from modalview.assembly.assemble import assemble
from modalview.eigen.stacked import Stack
from modalview.eigen.threads import one_blas_thread
from modalview.places import demo_models
from modalview.store import parse_model, read_model
from modalview.study.amplitudes import amplitudes_at, watchings
from modalview.study.sampling import sample
from modalview.study.vary_results import SampleRequest
from modalview.study.workers import local_workers

SAMPLES, LOOPED = 100_000, 2_000
MODELS = {"chain of 10": parse_model(chain_text(10)), "plane of 12": plane_model(4, 12)}


def _ranges(assembly):
    return (np.array([getattr(one, end) for one in assembly.parameters]) for end in ("low", "high"))


def against_a_loop():
    """Print the time of one sample against that of eigh of the same matrices, one after the other."""
    for name, model in MODELS.items():
        assembly = assemble(model)
        stack = Stack.of(assembly)
        low, high = _ranges(assembly)
        values = np.random.default_rng(0).uniform(low, high, (SAMPLES, low.size))
        K, M = stack.stiffness.at(values[:LOOPED]), stack.mass.at(values[:LOOPED])
        share = SAMPLES / LOOPED
        for what, options in (
            ("eigh(K, M), values only", {"eigvals_only": True}),
            ("eigh(K, M), with shapes", {}),
        ):
            pair = in_turn(
                lambda: stack.eigenvalues(values),
                lambda: [la.eigh(k, m, **options) for k, m in zip(K, M, strict=True)],
                rounds=7,
            )
            print(
                f"{name:12} {SAMPLES} samples {1e3 * pair.first:7.0f} ms; a loop of {what}: ratio "
                f"{pair.ratio / share:.3f} (quietest {pair.quietest / share:.3f})"
            )


def two_workers():
    """Print two threads and two processes, started before, against one after the other."""
    model = MODELS["chain of 10"]
    request = SampleRequest(model, samples=4 * SAMPLES)
    with ThreadPoolExecutor(2) as threads, local_workers(2) as processes:
        for name, executor in (("threads", threads), ("processes", processes)):
            beside = replace(request, executor=executor)
            print(f"two {name:10} {in_turn(lambda: sample(beside), lambda: sample(request), rounds=5)}")
        beam = read_model(demo_models() / "6-vacuum-pump-absorber" / "absorber-210kg-damped.keepclear")
        motion = SampleRequest(beam, samples=400, response=True)
        beside = replace(motion, executor=processes)
        print(f"two processes, dashpots {in_turn(lambda: sample(beside), lambda: sample(motion), rounds=3)}")


def motion():
    """Print the time of 10,000 samples of the motion in a stack, and of 100 one after the other."""
    pump = read_model(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")
    assembly = assemble(pump)
    watching = watchings(assembly)
    pair = in_turn(
        lambda: sample(SampleRequest(pump, samples=10_000, response=True)),
        lambda: [amplitudes_at(assembly, watching) for _ in range(100)],
        rounds=3,
    )
    print(f"motion of 10,000 samples {1e3 * pair.first:.0f} ms; one by one: ratio {pair.ratio / 100:.3f}")


if __name__ == "__main__":
    with one_blas_thread():
        against_a_loop()
        motion()
        two_workers()
