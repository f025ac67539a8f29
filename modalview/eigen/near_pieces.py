"""A model that falls apart is solved piece by piece, so that identical pieces do not mix."""

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.csgraph import connected_components

from modalview.assembly.pencil import Pencil

# With more pieces than this one search for all of them together is cheaper.
MOST_PIECES = 32
# Rows of rigid-body motions below this share of the largest are rounding.
NOTHING = 1e-9

Indices = npt.NDArray[np.intp]


def pieces(pencil: Pencil) -> list[tuple[Indices, Pencil]]:
    """Return the coordinates and the pencil of every piece that nothing joins to the others.

    One piece, the pencil itself, where all hangs together or there are more than 32 pieces. Coordinates
    without inertia that hang with nothing that has some belong to no piece.
    """
    number, label = connected_components(_joined(pencil), directed=False)
    if number == 1 or number > MOST_PIECES:
        return [(np.arange(pencil.n), pencil)]
    parts = [np.flatnonzero(label == one) for one in range(number)]
    return [(where, _piece(pencil, where)) for where in parts if not pencil.massless[where].all()]


def _joined(pencil: Pencil) -> sp.csc_array:
    """Return a matrix with an entry where two coordinates are joined: stored zeros join nothing."""
    if pencil.M.nnz == np.count_nonzero(pencil.M.diagonal()) and bool(np.all(pencil.K.data)):
        return pencil.K
    return sp.csc_array(abs(pencil.K) + abs(pencil.M))


def _piece(pencil: Pencil, where: Indices) -> Pencil:
    rows, stiffness = None, None
    if pencil.rows is not None and pencil.stiffness is not None:
        columns = sp.csr_array(sp.csc_array(pencil.rows)[:, where])
        own = np.flatnonzero(np.diff(columns.indptr))
        rows, stiffness = sp.csr_array(columns[own]), pencil.stiffness[own]
    return Pencil(
        K=sp.csc_array(pencil.K[where][:, where]),
        M=sp.csc_array(pencil.M[where][:, where]),
        massless=pencil.massless[where],
        scale=pencil.scale[where],
        rigid_body=_independent(pencil.rigid_body[where]),
        rows=rows,
        stiffness=stiffness,
        coordinates=tuple(pencil.coordinates[i] for i in where) if pencil.coordinates else (),
    )


def _independent(motions: npt.NDArray[np.float64]) -> npt.NDArray[np.float64]:
    """Return an orthonormal basis of the columns; rows of a motion of another piece are zero."""
    span, size, _ = np.linalg.svd(motions, full_matrices=False)
    return np.ascontiguousarray(span[:, size > NOTHING * max(float(size.max(initial=0.0)), NOTHING)])
