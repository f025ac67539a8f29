"""Factored Rayleigh-Ritz: frequencies and shapes refined from the terms, without cancellation."""

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

Array = npt.NDArray[np.float64]

# Eigenvalues nearer than this many units of rounding of the largest are mixed in the vectors of an
# eigenvalue solve and rotated together. What is mixed across 1e10 units, 1e-10 of a vector, counts
# squared.
MIXED = 1e10


def ritz(factor: sp.csr_array, values: Array, vectors: Array) -> tuple[Array, Array]:
    """Refine eigenpairs of S = G.T G from G itself.

    Parameters
    ----------
    factor : csr_array (t, n)
        G.
    values : array (m,)
        Approximate eigenvalues of S, ascending.
    vectors : array (n, m)
        Orthonormal approximate vectors.

    Returns
    -------
    values (m,), ascending, and vectors (n, m)
        Squares of the singular values of G V, run by run of eigenvalues that the solve could have mixed.

    Notes
    -----
    Runs are as long as the spectrum is crowded near the rounding level of the largest eigenvalue, so in
    graded models the soft modes form one run and are separated here.
    """
    largest = float(np.abs(values).max(initial=0.0))
    level = MIXED * np.finfo(float).eps * largest
    edges = np.flatnonzero(np.diff(values) > level) + 1
    starts = [0, *edges.tolist()]
    stops = [*edges.tolist(), values.size]
    vectors = vectors.copy()
    refined = np.empty_like(values)
    for start, stop in zip(starts, stops, strict=True):
        if stop == start:
            continue
        stretched = factor @ vectors[:, start:stop]
        if stop - start == 1:
            refined[start] = np.sum(stretched[:, 0] ** 2)
            continue
        sigma, turn = _right_singular(stretched)
        refined[start:stop] = sigma**2
        vectors[:, start:stop] = vectors[:, start:stop] @ turn
    order = np.argsort(refined, kind="stable")
    return refined[order], vectors[:, order]


def _right_singular(block: Array) -> tuple[Array, Array]:
    triangle = np.linalg.qr(block, mode="r")
    _, sigma, turned = np.linalg.svd(triangle)
    size = block.shape[1]
    full = np.zeros(size)
    full[: sigma.size] = sigma
    return full[::-1], turned.T[:, ::-1]
