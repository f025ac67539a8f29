"""The balanced state matrix of a model with dashpots: every entry a rate in 1/s, no unit of length in it."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.linalg as la
import scipy.sparse as sp

from modalview.assembly.dampedterms import DampedTerms
from modalview.assembly.massroot import mass_root_inverse
from modalview.errors import InputError
from modalview.factor.rounding import gamma

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# The state matrix is dense; the iteration on it takes half a minute at this size, growing with the cube.
LARGEST = 3000
# Operations behind one entry after a QR step, per row and column: a generous count (Higham (2002), section
# 19.3, leaves the constant open).
QR_STEPS = 12


@dataclass(frozen=True, slots=True, eq=False)
class Recovery:
    """How a state turns back into motion.

    Parameters
    ----------
    root : array (inertial, inertial)
        L^-T of M = L L.T.
    moving : array (inertial, v)
        Orthonormal: velocities without the drifting motions.
    pushed : array (creeping, v)
        Rate of the creeping states from velocities.
    creep : array (creeping, creeping)
        R of H_p = Q R, its columns in ``order``: the states of creeping coordinates p are R p[order].
    order : int array (creeping,)
    static : array (static, inertial + creeping)
        Static coordinates from the others (inertial ones times L.T).
    """

    root: Array
    moving: Array
    pushed: Array
    creep: Array
    order: npt.NDArray[np.intp]
    static: Array


@dataclass(frozen=True, slots=True, eq=False)
class StateMatrix:
    """x' = A x with A = [[-E E^T, F], [-F^T, -H^T H]]; x = (forces over sqrt k, velocities times sqrt m).

    Its symmetric part is -diag(E E^T, H^T H), never above zero; its skew part is F. It holds every root but
    the zero ones, which structure tells. Without massless joints between dashpots E is empty, F is G made
    square and H^T H is C over the masses.

    Parameters
    ----------
    stretch : array (g, v)
        F.
    relax : array (g, creeping)
        E; sqrt(1/s).
    resist : array (l, v)
        H; sqrt(1/s).
    zero_roots : int
        Roots at 0 that A does not hold: one for each motion that stretches no spring, a second for each of
        them that moves no dashpot.
    rounding : float, 1/s
        The exact A, in some orthonormal basis, is nearer than this in the 2-norm.
    likely : float, 1/s
        The same as it may be expected, without the constants of the worst case.
    recovery : Recovery
    """

    stretch: Array
    relax: Array
    resist: Array
    zero_roots: int
    rounding: float
    likely: float
    recovery: Recovery

    @property
    def forces(self) -> int:
        """Number g of states that are forces; the others are velocities."""
        return int(self.stretch.shape[0])

    @property
    def size(self) -> int:
        """Number of states."""
        return int(sum(self.stretch.shape))

    @property
    def matrix(self) -> Array:
        """A, dense (g + v, g + v), 1/s."""
        top = np.hstack([-self.relax @ self.relax.T, self.stretch])
        return np.vstack([top, np.hstack([-self.stretch.T, -self.resist.T @ self.resist])])

    def shapes(self, roots: ComplexArray, vectors: ComplexArray) -> ComplexArray:
        """Return coordinates (N, m), as DampedTerms sorts them, of eigenvectors (g + v, m) at roots (m,)."""
        back = self.recovery
        force, speed = vectors[: self.forces], vectors[self.forces :]
        inertial = back.moving @ speed / roots
        both = np.vstack([inertial, np.zeros((back.order.size, roots.size))])
        if back.order.size:
            state = -(self.relax.T @ force + back.pushed @ speed) / roots
            both[len(inertial) + back.order] = la.solve_triangular(back.creep, state)
        found: ComplexArray = np.vstack(
            [back.root @ inertial, both[len(inertial) :], back.static @ both]
        ).astype(complex)
        return found


def state_matrix(terms: DampedTerms) -> StateMatrix:
    """Form the balanced state matrix.

    Raises
    ------
    InputError
        More states than LARGEST.

    Notes
    -----
    With G = diag(sqrt k) A L^-T and H = diag(sqrt c) D L^-T: static coordinates are projected out of G by
    QR. Creeping coordinates p have no inertia: H_p = Q R turns their balance of forces into
    z' = -(E^T g + Q^T H_m v) for z = R p, with E = G_p R^-1; then F = G_m - E Q^T H_m, H = (1 - Q Q^T) H_m.
    Drifting velocities are taken out by an orthonormal basis. [F, E] is made square by QR where it has
    more rows than its rank, which is known from structure: extra rows would be extra zero roots.

    References
    ----------
    The form is derived here. QR: G. H. Golub, C. F. Van Loan (1996), Matrix Computations, 3rd ed., section
    5.2; row by row: A. J. Cox, N. J. Higham (1998), in Numerical Analysis 1997 (Pitman), 57-73.
    """
    whole = 2 * terms.inertial + terms.creeping
    if whole > LARGEST:
        raise InputError(
            f"The model has {whole} damped roots; they are found up to {LARGEST}. "
            "Hold directions that do not matter, or join bodies that move as one with rigid links."
        )
    n, p = terms.inertial, terms.creeping
    root = mass_root_inverse(terms.mass, np.ones(n, dtype=bool)).toarray()
    stretch = _scaled(terms.stretching, terms.stiffness, root)
    damp = _scaled(terms.resisting, terms.damping, root)[:, : n + p]
    stretch, static, held = _without(stretch, n + p)
    creep, order, pushed, resist = _crept(damp, n)
    relax = la.solve_triangular(creep, stretch[:, n + order].T, trans="T").T if p else stretch[:, n:]
    spread = float(np.linalg.cond(creep)) if p else 1.0
    moving = _moving(terms, root)
    F, resist, pushed = (stretch[:, :n] - relax @ pushed) @ moving, resist @ moving, pushed @ moving
    square, relax = _squared(F, relax, n + p - terms.free.shape[1])
    size = float(np.linalg.norm(stretch[:, :n])) + float(np.linalg.norm(damp[:, :n])) ** 2
    size += spread * (float(np.linalg.norm(relax)) ** 2 + float(np.linalg.norm(damp[:, :n])) ** 2)
    rows, columns = stretch.shape[0] + damp.shape[0], n + p + terms.static
    return StateMatrix(
        stretch=square,
        relax=relax,
        resist=resist,
        zero_roots=terms.free.shape[1] + terms.drifting,
        rounding=gamma(QR_STEPS * max(rows, 1) * columns) * held * size,
        likely=gamma(rows + columns + 8) * size / np.sqrt(max(columns, 1)),
        recovery=Recovery(root, moving, pushed, creep, order, static),
    )


def _scaled(rows: sp.csr_array, values: Array, root: Array) -> Array:
    """Return diag(sqrt values) rows, dense, the inertial columns times L^-T."""
    dense: Array = (sp.diags_array(np.sqrt(values)) @ rows).toarray()
    inertial = len(root)
    return np.hstack([dense[:, :inertial] @ root, dense[:, inertial:]])


def _by_size(block: Array) -> npt.NDArray[np.intp]:
    """Order rows from large to small: QR with column pivoting is then stable row by row."""
    return np.argsort(-np.abs(block).max(axis=1, initial=0.0), kind="stable")


def _without(stretch: Array, kept: int) -> tuple[Array, Array, float]:
    """Project the static columns out of G; with them from the others, and the condition of what held them."""
    held = stretch[:, kept:]
    if held.shape[1] == 0:
        return stretch, np.zeros((0, kept)), 1.0
    order = _by_size(held)
    q, r, columns = la.qr(held[order], pivoting=True)
    turned = q.T @ stretch[order, :kept]
    count = held.shape[1]
    static = np.zeros((count, kept))
    static[columns] = -la.solve_triangular(r[:count], turned[:count])
    return turned[count:], static, float(np.linalg.cond(r[:count]))


def _crept(damp: Array, inertial: int) -> tuple[Array, npt.NDArray[np.intp], Array, Array]:
    """Return R and its order of columns, Q^T H_m, and (1 - Q Q^T) H_m in a basis of its own."""
    light, heavy = damp[:, inertial:], damp[:, :inertial]
    count = light.shape[1]
    if count == 0:
        return np.zeros((0, 0)), np.zeros(0, dtype=np.intp), np.zeros((0, inertial)), heavy
    rows = _by_size(light)
    q, r, order = la.qr(light[rows], pivoting=True)
    turned = q.T @ heavy[rows]
    triangle = np.asarray(r[:count], dtype=float)
    return triangle, np.asarray(order, dtype=np.intp), turned[:count], turned[count:]


def _moving(terms: DampedTerms, root: Array) -> Array:
    """Return an orthonormal basis (inertial, v) of the velocities that something resists."""
    if terms.drifting == 0:
        return np.eye(terms.inertial)
    drift = drifting_motions(terms)[: terms.inertial]
    inertial = np.linalg.solve(root, drift)
    whole: Array = np.linalg.qr(inertial, mode="complete")[0]
    return whole[:, terms.drifting :]


def drifting_motions(terms: DampedTerms) -> Array:
    """Return a basis (N, drifting) of the motions that neither a spring nor a dashpot resists.

    The null space of the dashpots over the free motions; its dimension is known exactly.
    """
    basis = np.linalg.qr(terms.free)[0]
    turned = np.linalg.svd(terms.normal_resisting() @ basis, full_matrices=True)[2]
    found: Array = basis @ turned[len(turned) - terms.drifting :].T
    return found


def _squared(stretch: Array, relax: Array, rank: int) -> tuple[Array, Array]:
    """Turn the force states so that only those that anything feeds are left."""
    if len(stretch) <= rank:
        return stretch, relax
    both = np.hstack([stretch, relax])
    order = _by_size(both)
    r, columns = la.qr(both[order], mode="r", pivoting=True)
    square = np.zeros((rank, both.shape[1]))
    square[:, columns] = r[:rank]
    return square[:, : stretch.shape[1]], square[:, stretch.shape[1] :]
