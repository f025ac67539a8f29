"""The terms of a model with dashpots, in coordinates sorted by what resists them besides stiffness.

Inertial coordinates give two roots each. Of the massless directions those that a dashpot resists give one
root each (they creep), the others follow statically and give none. Which is which is a matter of ranks,
decided in exact arithmetic on the numbers as typed.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.assemble import ALL_FREEDOMS, Assembly
from modalview.assembly.exact import null_space, reduced_echelon
from modalview.assembly.kinematics import places
from modalview.assembly.parameters import Case, values_at
from modalview.assembly.rigid import exact_rank, is_spring
from modalview.assembly.stretch import Stretch, stretches
from modalview.errors import NumericalError
from modalview.model.parts import FREEDOMS, Link

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]
Row = dict[int, Fraction]

# Smallest singular value of normalised dashpot rows over the free motions above which they are all resisted
# beyond doubt: rounding moves it by less than 1e-12. Below, the exact rank decides.
CLEARLY_RESISTED = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class DampedTerms:
    """M q'' + sum c d d^T q' + sum k a a^T q = 0 in N coordinates: inertial, then creeping, then static.

    Parameters
    ----------
    inertial, creeping, static : int
        How many coordinates of each kind.
    mass : csc_array (inertial, inertial)
        kg, kg m, kg m**2.
    stretching : csr_array (t, N)
        Stretch of every spring term; full column rank on the static coordinates.
    stiffness : array (t,)
        N/m or N m/rad, positive.
    resisting : csr_array (l, N)
        Stretch of every dashpot term: zero on the static coordinates, full column rank on the creeping ones.
    damping : array (l,)
        N s/m or N m s/rad, not negative.
    to_bodies : csr_array (bodies * freedoms, N)
        Motion of every body's freedoms.
    idle : csr_array (bodies * freedoms, i)
        Motions left out: massless, and neither a spring nor a dashpot resists them.
    free : array (N, r)
        Basis of the motions that stretch no spring.
    drifting : int
        How many of them move no dashpot either: they keep any velocity.
    scale : array (N,)
        Metres per unit of a coordinate; 1 for the massless ones.
    freedoms : tuple of str
        Freedoms of a body, in the order of ``to_bodies``.
    """

    inertial: int
    creeping: int
    static: int
    mass: sp.csc_array
    stretching: sp.csr_array
    stiffness: Array
    resisting: sp.csr_array
    damping: Array
    to_bodies: sp.csr_array
    idle: sp.csr_array
    free: Array
    drifting: int
    scale: Array
    freedoms: tuple[str, ...]

    @property
    def roots(self) -> int:
        """Number of roots of det(lambda^2 M + lambda C + K), zero roots included: known from structure."""
        return 2 * self.inertial + self.creeping

    def normal_resisting(self) -> Array:
        """Return the dashpot rows (l, N), dense, each of length 1."""
        return _normal(self.resisting)

    def body_motion(self, shapes: ComplexArray) -> ComplexArray:
        """Return x, y, z, rx, ry, rz of every body from coordinates (N, m): complex (m, bodies, 6)."""
        moved = np.asarray(self.to_bodies @ shapes).T
        bodies = self.to_bodies.shape[0] // len(self.freedoms)
        motion = np.zeros((len(moved), bodies, len(ALL_FREEDOMS)), dtype=complex)
        columns = [ALL_FREEDOMS.index(name) for name in self.freedoms]
        motion[:, :, columns] = moved.reshape(len(moved), bodies, len(self.freedoms))
        return motion


def has_dashpots(assembly: Assembly) -> bool:
    """Return whether any dashpot has a damping above zero."""
    terms = assembly.structure.damping
    return bool(np.any(terms.values(values_at(assembly.parameters, Case.NOMINAL)) > 0))


def damped_terms(assembly: Assembly) -> DampedTerms:
    """Sort the coordinates of a model, at nominal values, for a solve with its dashpots.

    Raises
    ------
    NumericalError
        A stiffness is not positive.

    Notes
    -----
    A dashpot of damping zero is left out: it resists nothing. Cost beyond that of the assembly only where
    there are massless directions or free motions.
    """
    structure = assembly.structure
    at = values_at(assembly.parameters, Case.NOMINAL)
    stiffness, damping = structure.stiffness.values(at), structure.damping.values(at)
    if np.any(stiffness <= 0):
        raise NumericalError("Damped modes need positive stiffnesses: a term is zero or negative.")
    change, massless = _sorted(assembly, damping > 0)
    inertial = structure.coordinates.massless.size - int(structure.coordinates.massless.sum())
    creeping, static = massless
    table = sp.csr_array(sp.hstack([structure.coordinates.to_bodies, structure.coordinates.released]))
    dashpots = np.flatnonzero(damping > 0)
    released = table.shape[1] - assembly.n
    springs = sp.hstack([structure.stiffness.rows, sp.csr_array((stiffness.size, released))])
    resisting = _cleared(_dashpot_rows(assembly, table)[dashpots] @ change, inertial + creeping)
    stretching = sp.csr_array(springs @ change)
    free = _free_motions(assembly, change)
    mass = assembly.pencil().M[:, np.flatnonzero(~structure.coordinates.massless)]
    scale = np.ones(change.shape[1])
    idle = np.setdiff1d(np.arange(assembly.n, table.shape[1]), change.indices)
    scale[:inertial] = assembly.pencil().scale[~structure.coordinates.massless]
    return DampedTerms(
        inertial=inertial,
        creeping=creeping,
        static=static,
        mass=sp.csc_array(mass[np.flatnonzero(~structure.coordinates.massless)]),
        stretching=stretching,
        stiffness=stiffness,
        resisting=resisting,
        damping=damping[dashpots],
        to_bodies=sp.csr_array(table @ change),
        idle=sp.csr_array(table[:, idle]),
        free=free,
        drifting=_drifting(assembly, resisting, free, change.shape[1]),
        scale=scale,
        freedoms=FREEDOMS[assembly.model.motion],
    )


def _cleared(rows: sp.csr_array, stop: int) -> sp.csr_array:
    """Return rows without what rounding left in columns that are exactly zero."""
    keep = np.zeros(rows.shape[1])
    keep[:stop] = 1.0
    cleared = sp.csr_array(rows @ sp.diags_array(keep))
    cleared.eliminate_zeros()
    return cleared


def _dashpot_rows(assembly: Assembly, table: sp.csr_array) -> sp.csr_array:
    """Stretch of every dashpot term from the coordinates and the directions left out of them."""
    known = assembly.structure.damping.rows
    if table.shape[1] == assembly.n:
        return known
    exact = _exact_dashpots(assembly, range(assembly.n, table.shape[1]))
    beside = np.zeros((known.shape[0], table.shape[1] - assembly.n))
    here = [
        term.divide
        for link in assembly.model.links
        for term in stretches(link, places(assembly.model))
        if term.family == "damping"
    ]
    for line, divide, row in zip(beside, here, exact, strict=True):
        for column, entry in row.items():
            line[column - assembly.n] = float(entry) / divide
    return sp.csr_array(sp.hstack([known, sp.csr_array(beside)]))


def _exact_dashpots(assembly: Assembly, columns: Sequence[int]) -> list[Row]:
    """Return every dashpot term over some columns, times its ``divide``, as typed."""
    model, coordinates = assembly.model, assembly.structure.coordinates
    table = sp.csr_array(sp.hstack([coordinates.to_bodies, coordinates.released]))
    wanted = set(columns)
    line_of = {
        (body.id, name): i
        for i, (body, name) in enumerate((b, f) for b in model.bodies for f in FREEDOMS[model.motion])
    }
    exact = places(model, exact=True)
    forms = (term.form for link in model.links for term in stretches(link, exact) if term.family == "damping")
    found = []
    for form in forms:
        row: Row = {}
        for key, weight in form.items():
            for column, entry in _entries(table, coordinates.unrounded, line_of.get(key)):
                if column in wanted:
                    row[column] = row.get(column, Fraction(0)) + Fraction(weight) * entry
        found.append({column: entry for column, entry in row.items() if entry})
    return found


def _entries(
    table: sp.csr_array, unrounded: Mapping[tuple[int, int], Fraction], line: int | None
) -> list[tuple[int, Fraction]]:
    if line is None:
        return []
    span = slice(table.indptr[line], table.indptr[line + 1])
    return [
        (int(column), unrounded.get((line, int(column)), Fraction(float(entry))))
        for column, entry in zip(table.indices[span], table.data[span], strict=True)
    ]


def _sorted(assembly: Assembly, working: npt.NDArray[np.bool_]) -> tuple[sp.csc_array, tuple[int, int]]:
    """Return the change of variable (n + d, N), and how many coordinates creep and how many are static.

    Static directions are the null space of the dashpots over the massless coordinates; the coordinates
    that this null space is solved for creep. What neither spring nor dashpot resists is left out.
    """
    coordinates = assembly.structure.coordinates
    n, released = assembly.n, coordinates.released.shape[1]
    inertial = np.flatnonzero(~coordinates.massless)
    light = [*map(int, np.flatnonzero(coordinates.massless)), *range(n, n + released)]
    rows = []
    if light:
        exact = _exact_dashpots(assembly, light)
        rows = [row for row, works in zip(exact, working, strict=True) if works and row]
    loose = range(n, n + released)
    inside = [{column: entry for column, entry in row.items() if column >= n} for row in rows]
    idle = {free for free, _ in null_space([row for row in inside if row], loose)}
    light = [column for column in light if column not in idle]
    rows = [{column: entry for column, entry in row.items() if column not in idle} for row in rows]
    solved = reduced_echelon(rows, light)
    vectors: list[Mapping[int, float]] = [{int(column): 1.0} for column in inertial]
    vectors += [{column: 1.0} for column in light if column in solved]
    static = null_space(rows, light)
    vectors += [{column: float(entry) for column, entry in vector.items()} for _, vector in static]
    return _columns(vectors, n + released), (len(solved), len(static))


def _columns(vectors: Sequence[Mapping[int, float]], size: int) -> sp.csc_array:
    rows = [row for vector in vectors for row in vector]
    entries = [entry for vector in vectors for entry in vector.values()]
    ends = np.cumsum([0, *(len(vector) for vector in vectors)])
    return sp.csc_array(
        (np.array(entries, dtype=float), np.array(rows, dtype=np.int64), ends), shape=(size, len(vectors))
    )


def _free_motions(assembly: Assembly, change: sp.csc_array) -> Array:
    """Return the motions that stretch no spring (N, r), in the sorted coordinates.

    The rigid-body motions, and every massless direction that only dashpots resist.
    """
    rigid, released = assembly.structure.rigid_body, change.shape[0] - assembly.n
    kept = np.unique(change.indices)
    loose = kept[kept >= assembly.n]
    motions = np.zeros((change.shape[0], rigid.shape[1] + loose.size))
    motions[: assembly.n, : rigid.shape[1]] = rigid
    motions[loose, rigid.shape[1] + np.arange(loose.size)] = 1.0
    if not released and not assembly.structure.coordinates.massless.any():
        return motions
    # Columns of the change are unit vectors but for the null space, solved for the creeping ones.
    found: Array = np.linalg.lstsq(change.toarray(), motions, rcond=None)[0]
    return found


def _drifting(assembly: Assembly, resisting: sp.csr_array, free: Array, size: int) -> int:
    """Return how many free motions no dashpot resists, exactly."""
    if free.shape[1] == 0:
        return 0
    values = np.linalg.svd(_normal(resisting) @ np.linalg.qr(free)[0], compute_uv=False)
    if values.size == free.shape[1] and values[-1] > CLEARLY_RESISTED:
        return 0
    if values.max(initial=0.0) == 0:
        return int(free.shape[1])
    working = {p.id for p in assembly.parameters if p.family == "damping" and p.nominal > 0}

    def resists(link: Link, term: Stretch) -> bool:
        return is_spring(link, term) or f"{link.id}.{term.keys[0]}" in working

    return size - exact_rank(assembly.model, assembly.structure.coordinates, resists)


def _normal(rows: sp.csr_array) -> Array:
    dense: Array = rows.toarray()
    size = np.linalg.norm(dense, axis=1)
    normal: Array = dense / np.where(size > 0, size, 1.0)[:, None]
    return normal
