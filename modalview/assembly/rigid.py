"""Rigid-body motions: what moves without stretching anything, their number exact."""

from collections.abc import Callable, Sequence
from collections.abc import Set as AbstractSet
from fractions import Fraction

import numpy as np
import numpy.typing as npt
import scipy.linalg as la
import scipy.sparse as sp
from scipy.sparse.csgraph import connected_components
from scipy.sparse.linalg import splu

from modalview.assembly.coordinates import Coordinates
from modalview.assembly.groups import Groups
from modalview.assembly.kinematics import ROTATIONS, TRANSLATIONS, cross, minus, places
from modalview.assembly.locks import speed_ratios
from modalview.assembly.stretch import Stretch, stretches
from modalview.model.parts import FREEDOMS, Gear, Link, Model, Motion

Array = npt.NDArray[np.float64]

# A Mersenne prime: rank over its field never exceeds the rank over the rationals, and falls short of
# it only if it divides a determinant of the model by chance.
PRIME = 2**61 - 1
# Up to this many coordinates matrices are taken dense.
DENSE_LIMIT = 1500
# In larger models eigenvalues of the normalised rows^T rows (at most some tens) below this floor need the
# exact rank: a chain of 100,000 equal links has its least at 2.5e-10, rounding reaches about 1e-14.
LARGE_FLOOR = 1e-12
INVERSE_STEPS = 4
# Relative smallest eigenvalue of the normalised rows^T rows above which full rank is beyond doubt:
# rounding moves it by less than 1e-12.
CLEARLY_POSITIVE = 1e-9


def rigid_body_motions(model: Model, coordinates: Coordinates, rows: sp.csr_array) -> Array:
    """Return a basis (n, r) of the motions that stretch no spring.

    Parameters
    ----------
    model : Model
    coordinates : Coordinates
    rows : csr_array (t, n)
        Stretch of every stiffness term.

    Notes
    -----
    The pieces that touch no support give candidates by construction. If the rows leave nothing else
    (smallest eigenvalue clearly positive, Weyl's inequality) these are all. Otherwise the exact rank
    of the rows decides, computed over a prime field from the numbers as typed.
    """
    known = _free_pieces(model, coordinates)
    gram = _normalised_gram(rows)
    if rows.shape[1] > DENSE_LIMIT:
        return _of_large_model(model, coordinates, gram, known)
    if _is_definite(gram.toarray() + known @ known.T):
        return known
    number = rows.shape[1] - exact_rank(model, coordinates)
    return known if number == known.shape[1] else _softest(gram, number)


def _normalised_gram(rows: sp.csr_array) -> sp.csc_array:
    size = np.sqrt(np.asarray((rows * rows).sum(axis=1)).ravel())
    scaled = sp.diags_array(1 / np.where(size > 0, size, 1.0)) @ rows
    return sp.csc_array(scaled.T @ scaled)


def _softest(gram: sp.csc_array, number: int) -> Array:
    """Return the eigenvectors (n, number) of the least eigenvalues."""
    if gram.shape[0] <= DENSE_LIMIT:
        basis: Array = np.linalg.eigh(gram.toarray())[1][:, :number]
        return basis
    lu = splu(sp.csc_array(gram + LARGE_FLOOR * sp.eye_array(gram.shape[0])))
    block = np.random.default_rng(0).normal(size=(gram.shape[0], number))
    for _ in range(INVERSE_STEPS):
        block = np.linalg.qr(lu.solve(block))[0]
    return block


def _of_large_model(model: Model, coordinates: Coordinates, gram: sp.csc_array, known: Array) -> Array:
    """Find the motions piece by piece of coordinates, by one sparse factorization where that settles it.

    As many pivots of gram - floor below zero as motions known by construction prove that these are all.
    Otherwise the exact rank decides for the pieces that hold such pivots.
    """
    below = _pivots_below(gram)
    if below is not None and below.size == known.shape[1]:
        return known
    _, piece = connected_components(gram, directed=False)
    inside = np.ones(gram.shape[0], dtype=bool) if below is None else np.isin(piece, piece[below])
    soft = np.flatnonzero(inside)
    number = soft.size - exact_rank(model, coordinates, columns=set(soft.tolist()))
    if number == known.shape[1]:
        return known
    basis = np.zeros((gram.shape[0], number))
    basis[soft] = _softest(sp.csc_array(gram[soft][:, soft]), number)
    return basis


def _pivots_below(gram: sp.csc_array) -> npt.NDArray[np.intp] | None:
    """Return the coordinates at which the pivots of gram - floor are negative; None if rows were swapped.

    Their number is that of the eigenvalues below the floor (Sylvester's law of inertia).
    """
    shifted = sp.csc_array(gram - LARGE_FLOOR * sp.eye_array(gram.shape[0]))
    options = {"SymmetricMode": True}
    try:
        lu = splu(shifted, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options=options)
    except RuntimeError:  # a pivot is exactly zero
        return None
    if not np.array_equal(lu.perm_r, lu.perm_c):
        return None
    return np.flatnonzero(lu.U.diagonal()[lu.perm_c] < 0)


def _is_definite(matrix: Array) -> bool:
    floor = CLEARLY_POSITIVE * max(1.0, float(np.trace(matrix)) / len(matrix))
    try:
        la.cholesky(matrix - floor * np.eye(len(matrix)), check_finite=False)
    except np.linalg.LinAlgError:
        return False
    return True


def _free_pieces(model: Model, coordinates: Coordinates) -> Array:
    """Return the rigid motions of the pieces that touch no support, as orthonormal columns (n, r)."""
    groups = Groups(body.id for body in model.bodies)
    grounded = {body.id for body in model.bodies if body.dof is not None and _holds(model.motion, body.dof)}
    for link in model.links:
        a, b = link.from_.body, link.to.body
        if a is not None and b is not None:
            groups.join(a, b)
        else:
            grounded.add(str(a if a is not None else b))
    if model.motion is Motion.SHAFT_TRAIN:
        ratios = {body: float(ratio) for body, (_, ratio) in speed_ratios(model).items()}
    elif any(isinstance(link, Gear) for link in model.links):
        return np.zeros((len(coordinates.free), 0))
    else:
        ratios = {}
    columns = [
        column
        for piece in groups.lists()
        if not grounded.intersection(piece)
        for column in _piece_motions(model.motion, coordinates, piece, ratios)
    ]
    if not columns:
        return np.zeros((len(coordinates.free), 0))
    return _independent(np.array(columns).T)


def _holds(motion: Motion, dof: Sequence[str]) -> bool:
    return any(name not in dof for name in FREEDOMS[motion])


def _piece_motions(
    motion: Motion, coordinates: Coordinates, piece: Sequence[str], ratios: dict[str, float]
) -> list[Array]:
    roots = dict.fromkeys(coordinates.cluster_of[body] for body in piece)
    centres = {root: [float(c) for c in coordinates.centres[root]] for root in roots}
    origin = next(iter(centres.values()))
    found = []
    for name in FREEDOMS[motion]:
        unknowns: dict[tuple[str, str], float] = {}
        for root in roots:
            unknowns[root, name] = ratios.get(root, 1.0)
            if name in ROTATIONS and motion is not Motion.SHAFT_TRAIN:
                axis = [float(name == rotation) for rotation in ROTATIONS]
                swept = cross(axis, minus(centres[root], origin))
                unknowns.update({(root, t): float(s) for t, s in zip(TRANSLATIONS, swept, strict=True)})
        found.append(coordinates.of_motion(unknowns))
    return found


def _independent(columns: Array) -> Array:
    """Orthonormalise, leaving out motions that move nothing (a lone point has no rotation)."""
    q, r, _ = la.qr(columns, mode="economic", pivoting=True)
    size = np.abs(np.diag(r))
    return np.asarray(q[:, size > 1e-9 * max(float(size.max(initial=0.0)), 1e-300)], dtype=float)


def is_spring(_link: Link, term: Stretch) -> bool:
    """Whether a term is one of stiffness."""
    return term.family == "stiffness"


def exact_rank(
    model: Model,
    coordinates: Coordinates,
    wanted: Callable[[Link, Stretch], bool] = is_spring,
    columns: AbstractSet[int] | None = None,
) -> int:
    """Return the rank of the rows of the terms wanted, of stiffness unless asked otherwise.

    From the numbers as typed, over a large prime field; directions left out of the coordinates included.
    With ``columns`` only rows that touch one of these coordinates count.
    """
    exact = places(model, exact=True)
    basis = _exact_columns(coordinates, model)
    solved: dict[int, dict[int, int]] = {}
    for link in model.links:
        for term in stretches(link, exact):
            if wanted(link, term):
                row = _modular(term.form, basis)
                if columns is None or not columns.isdisjoint(row):
                    _insert(row, solved)
    return len(solved)


def _exact_columns(coordinates: Coordinates, model: Model) -> dict[tuple[str, str], dict[int, int]]:
    """Return the motion of every body freedom from the coordinates, over the prime field."""
    names = FREEDOMS[model.motion]
    table = sp.csr_array(sp.hstack([coordinates.to_bodies, coordinates.released]))
    keys = [(body.id, name) for body in model.bodies for name in names]
    return {
        key: {
            int(column): _residue(coordinates.unrounded.get((i, int(column)), Fraction(float(entry))))
            for column, entry in zip(
                table.indices[table.indptr[i] : table.indptr[i + 1]],
                table.data[table.indptr[i] : table.indptr[i + 1]],
                strict=True,
            )
        }
        for i, key in enumerate(keys)
    }


def _residue(number: Fraction) -> int:
    return number.numerator * pow(number.denominator, -1, PRIME) % PRIME


def _modular(
    form: dict[tuple[str, str], float | Fraction], basis: dict[tuple[str, str], dict[int, int]]
) -> dict[int, int]:
    row: dict[int, int] = {}
    for key, entry in form.items():
        weight = _residue(Fraction(entry))
        for column, value in basis.get(key, {}).items():
            row[column] = (row.get(column, 0) + weight * value) % PRIME
    return {column: value for column, value in row.items() if value}


def _insert(row: dict[int, int], solved: dict[int, dict[int, int]]) -> None:
    """Reduce a row by those already there and keep what is left, with a leading 1."""
    while row:
        lead = min(row)
        if lead not in solved:
            inverse = pow(row[lead], -1, PRIME)
            solved[lead] = {column: value * inverse % PRIME for column, value in row.items()}
            return
        weight = row[lead]
        for column, value in solved[lead].items():
            total = (row.get(column, 0) - weight * value) % PRIME
            if total:
                row[column] = total
            else:
                row.pop(column, None)
