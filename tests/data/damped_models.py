"""Models with dashpots for tests, as documents, and an independent judge of their roots."""

import json

import numpy as np
import scipy.linalg as la
import scipy.sparse as sp

from modalview.assembly.assemble import Assembly, assemble
from modalview.assembly.dampedterms import DampedTerms, damped_terms
from modalview.store import parse_model


def mass(name, kg):
    return {"id": name, "mass": f"{kg!r} kg"}


def spring(name, one, other, stiffness):
    return {"id": name, "kind": "spring", **_ends(one, other), "stiffness": f"{stiffness!r} N/m"}


def dashpot(name, one, other, damping):
    return {"id": name, "kind": "damper", **_ends(one, other), "damping": f"{damping!r} N s/m"}


def _ends(one, other):
    made = [{"support": "g"} if name == "g" else {"body": name} for name in (one, other)]
    return {"from": made[0], "to": made[1]}


def line(bodies, links, **more):
    """A single-axis model as text."""
    return json.dumps(
        {
            "format": "keepclear",
            "version": 1,
            "title": "line",
            "motion": "single axis",
            "bodies": bodies,
            "supports": [{"id": "g"}],
            "links": links,
            **more,
        }
    )


def assembled(text) -> Assembly:
    return assemble(parse_model(text))


def terms_of(text) -> DampedTerms:
    return damped_terms(assembled(text))


def matrices(terms: DampedTerms):
    """M, C, K (N, N) of the sorted coordinates, dense."""
    size = terms.stretching.shape[1]
    M = np.zeros((size, size))
    M[: terms.inertial, : terms.inertial] = terms.mass.toarray()
    C = (terms.resisting.T @ sp.diags_array(terms.damping) @ terms.resisting).toarray()
    K = (terms.stretching.T @ sp.diags_array(terms.stiffness) @ terms.stretching).toarray()
    return M, C, K


def judge(terms: DampedTerms):
    """Every finite root but zeros, by QZ on the plain companion pencil: less accurate, but independent."""
    M, C, K = matrices(terms)
    size = len(M)
    one, none = np.eye(size), np.zeros((size, size))
    left = np.block([[none, one], [-K, -C]])
    right = np.block([[one, none], [none, M]])
    alpha, beta = la.eig(left, right, right=False, homogeneous_eigvals=True)
    near = np.argsort(np.abs(beta) / (np.abs(alpha) + np.abs(beta) + 1e-300))
    finite = near[len(near) - terms.roots :]
    found = alpha[finite] / beta[finite]
    zeros = terms.free.shape[1] + terms.drifting
    return found[np.argsort(np.abs(found))][zeros:]


def every_root(modes):
    """All roots of a result but zeros, both of each pair."""
    oscillating, decays = modes.roots[modes.oscillations], modes.roots[modes.decays]
    return np.concatenate([oscillating, oscillating.conj(), decays])


def farthest(found, expected):
    """Largest distance of matched roots."""
    from scipy.optimize import linear_sum_assignment

    apart = np.abs(np.asarray(found)[:, None] - np.asarray(expected))
    return apart[linear_sum_assignment(apart)].max()


def random_line(rng, *, joints=0, free=False, size=5):
    """A random tree of masses and massless joints with springs and dashpots, on one axis."""
    names = [f"b{i}" for i in range(size)]
    light = set(rng.choice(size, min(joints, size - 1), replace=False).tolist()) if joints else set()
    bodies = [mass(name, 0.0 if i in light else float(rng.uniform(1, 5))) for i, name in enumerate(names)]
    links = []
    for i, name in enumerate(names):
        other = names[rng.integers(i)] if i else "g"
        if i == 0 and free:
            continue
        kind = rng.integers(3) if i else 0
        if kind in (0, 2):
            links.append(spring(f"k{i}", name, other, float(rng.uniform(50, 500))))
        if kind in (1, 2):
            links.append(dashpot(f"c{i}", name, other, float(rng.uniform(1, 60))))
    for i in range(3):
        one, other = rng.choice(names + ([] if free else ["g"]), 2, replace=False).tolist()
        one, other = (other, one) if one == "g" else (one, other)
        made = spring if i == 0 else dashpot
        links.append(made(f"e{i}", one, other, float(rng.uniform(5, 90))))
    return line(bodies, links)
