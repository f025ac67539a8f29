"""The search for the modes of one piece nearest to a frequency, repeated until counts are satisfied."""

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil
from modalview.eigen.jacobi import singular_pairs
from modalview.eigen.near_krylov import Krylov, Ritz, next_test
from modalview.errors import NumericalError
from modalview.factor.pattern import Pattern

if TYPE_CHECKING:
    from scipy.sparse.linalg import SuperLU

Array = npt.NDArray[np.float64]

# Largest dimension of one subspace.
LARGEST = 200
# Models of so few modes are inverted as a whole.
FEW = 100
# Starting vectors of a repeated search: one finds one of several equal modes.
MOST_STARTS = 24
# A shift this much nearer to one mode than to the wanted ones drowns them in its rounding...
TOO_NEAR = 1e7
# ... and moves by this share of the distance to the last wanted one.
ASIDE = 1e-3
# Below a free model the shift stands off zero by this share of the largest eigenvalue; then, where modes lie
# nearer, by this share of the nearest.
OFF_ZERO, OFF_LOWEST = 1e-9, 0.1
# Where pivots vanish the shift moves by these shares of itself; modes do not mind, they are measured from
# the value asked for.
NUDGES = (0.0, 1e-6, 1e-4, -3e-4, 1e-3, -3e-3)
# Residual of a probing solve, relative to ||A|| ||x|| + ||b||, up to which factors are used.
PROBE = 1e-13
# A shift is moved so often at most.
MOVES = 4
# Rows orthogonalised at a time.
BLOCK = 4096
SEED = 20260131


@dataclass(frozen=True, slots=True)
class Progress:
    """One test of convergence.

    Parameters
    ----------
    solves : int
        Solves with the factorization so far.
    found : int
        Modes found in this search.
    residual : float
        Largest relative residual among the wanted modes.
    """

    solves: int
    found: int
    residual: float


@dataclass(slots=True, eq=False)
class Search:
    """Finds modes of one piece, nearest first, and keeps what it has found.

    Parameters
    ----------
    pencil : Pencil
        Of one piece.
    asked : float
        rad**2/s**2.
    step : callable
        Called before every solve; may raise to stop.

    Attributes
    ----------
    values : array (k,)
        Eigenvalues found, in no order, and in ``locked`` (modes, k) their vectors of S.
    rigid : array (modes, r)
        Rigid-body modes, kept out.
    frontier : float
        Distance of the nearest mode that was seen but not found.
    solves : int
    history : list of Progress
    """

    pencil: Pencil
    asked: float
    step: Callable[[], None]
    values: Array = field(default_factory=lambda: np.zeros(0))
    history: list[Progress] = field(default_factory=list)
    locked: Array = field(init=False)
    rigid: Array = field(init=False)
    solves: int = 0
    frontier: float = 0.0
    _operator: Callable[[Array], Array] | None = None
    _shift: float = 0.0
    _moves: int = 0
    _moved: bool = False
    _random: np.random.Generator = field(default_factory=lambda: np.random.default_rng(SEED))

    def __post_init__(self) -> None:
        pencil = self.pencil
        motions = np.asarray(pencil.basis.T @ (pencil.M @ pencil.rigid_body))
        self.rigid = np.linalg.qr(motions)[0] if motions.shape[1] else motions
        self.locked = np.zeros((pencil.modes, 0))
        free = bool(self.rigid.shape[1])
        self._shift = -OFF_ZERO * pencil.shifted.extents.top if free and self.asked == 0 else self.asked

    @property
    def left(self) -> int:
        """How many modes are not found yet."""
        return self.pencil.modes - int(self.rigid.shape[1] + self.values.size)

    def distances(self) -> Array:
        """Return how far the modes found lie from the value asked for, ascending."""
        return np.sort(np.abs(self.values - self.asked))

    def find(self, wanted: int, starts: int = 1) -> None:
        """Find at least so many further modes, the nearest ones left.

        Raises
        ------
        NumericalError
            The iteration does not converge; what was found stays.
        """
        wanted = min(wanted, self.left)
        if self.left == 0:
            self.frontier = np.inf
        while wanted > 0:
            before = self.values.size
            self._run(wanted, min(starts, MOST_STARTS, self.left))
            if self.values.size == before and not self._moved:
                message = (
                    f"The modes near {np.sqrt(max(self.asked, 0.0)) / (2 * np.pi):.6g} Hz were not found in "
                    f"{LARGEST} solves: {before} are, {wanted} are wanted. Ask for fewer."
                )
                raise NumericalError(message)
            wanted = min(wanted - (self.values.size - before), self.left)

    def _run(self, wanted: int, starts: int) -> None:
        """One subspace from new starting vectors, with all that was found kept out."""
        self._moved = False
        operator = self._operator or self._factored()
        space = Krylov(operator, self._shift, self.asked, np.hstack([self.rigid, self.locked]))
        already, dimension = self.solves, min(2 * wanted + 6, LARGEST)
        if self.pencil.modes <= FEW:
            self._tick()
            space.fill()
            self.solves = already + space.multiplied
        else:
            space.start(self._random.standard_normal((self.pencil.modes, starts)))
        while True:
            space.extend(dimension, self._tick)
            ritz_ = space.ritz()
            worst = ritz_.worst(wanted)
            residual = float(ritz_.residual[:wanted].max(initial=0.0))
            self.history.append(Progress(already + space.multiplied, int(ritz_.found.size), residual))
            if self._moves_shift(ritz_, wanted):
                return
            if worst <= 1 or space.exhausted or space.multiplied >= LARGEST:
                break
            dimension = min(next_test(space, worst, wanted), LARGEST)
        if worst > 1 and not space.exhausted and self._moves_off(ritz_):
            return
        self._lock(space, ritz_, whole=space.exhausted)

    def _tick(self) -> None:
        self.solves += 1
        self.step()

    def _lock(self, space: Krylov, found: Ritz, *, whole: bool) -> None:
        chosen = np.arange(found.value.size) if whole else found.found
        if whole:  # an image of zero is no mode, only the end of the span
            chosen = chosen[found.strength[chosen] > 0]
        vectors = space.vectors(found, chosen)
        if self.locked.shape[1]:
            vectors = np.linalg.qr(np.hstack([self.locked, vectors]))[0]
        self.locked = vectors
        self.values = np.append(self.values, found.value[chosen])
        unseen = np.delete(found.distance, chosen)
        self.frontier = float(unseen.min(initial=np.inf))

    def _moves_shift(self, found: Ritz, wanted: int) -> bool:
        """Move the shift aside where one mode drowns the others."""
        last = min(wanted, found.strength.size) - 1
        if self._moves >= MOVES or found.strength.max() <= TOO_NEAR * found.strength[last]:
            return False
        return self._move_to(self.asked + ASIDE * float(found.distance[last]))

    def _moves_off(self, found: Ritz) -> bool:
        """Bring the shift below a free model nearer to its lowest modes."""
        if self._shift == self.asked or self.asked != 0 or self._moves >= MOVES:
            return False
        return self._move_to(-OFF_LOWEST * float(found.distance[0]))

    def _move_to(self, shift: float) -> bool:
        self._moves += 1
        self._moved = True
        self._operator = None
        self._shift = shift
        return True

    def _factored(self) -> Callable[[Array], Array]:
        """Factor once; stand aside where pivots vanish, which uniform models are prone to."""
        pencil, shifted = self.pencil, self.pencil.shifted
        scale = abs(self._shift) or OFF_ZERO * shifted.extents.top
        for share in NUDGES:
            shift = self._shift + share * scale
            matrix = shifted.pattern.matrix(shifted.stiffness - shift * shifted.inertia)
            lu = _probed(shifted.pattern, matrix)
            if lu is not None:
                break
        else:
            raise NumericalError(f"K - sigma M is singular around sigma = {self.asked:g} rad²/s².")
        self._shift = shift
        self._operator = _inverse(pencil, lu)
        return self._operator

    def forget_factors(self) -> None:
        """Let go of the factorization, the most memory by far; a further search makes it anew."""
        self._operator = None

    def polished(self, reach: float) -> Array:
        """Return shapes (n, k) of the modes found nearer than ``reach``, refined from the terms, ascending.

        One block: its Ritz values are squares of the singular values of G V, by one-sided Jacobi, because
        the factored K - sigma M knows soft modes only to the rounding of the stiffest part.
        """
        near = np.flatnonzero(np.abs(self.values - self.asked) < reach)
        order = near[np.argsort(self.values[near], kind="stable")]
        vectors, pencil = self.locked[:, order], self.pencil
        if order.size and pencil.stiffness is not None and not np.any(pencil.stiffness < 0):
            triangle = _triangle(pencil.factor @ vectors)
            _, turn = singular_pairs(triangle)
            vectors = vectors @ turn
        elif order.size:
            shapes = pencil.basis @ vectors
            _, turn = np.linalg.eigh(shapes.T @ (pencil.K @ shapes))
            vectors = vectors @ turn
        return np.asarray(pencil.basis @ vectors)


def _inverse(pencil: Pencil, lu: "SuperLU[np.float64]") -> Callable[[Array], Array]:
    """Return y -> (S - shift)^-1 y, (modes,) or (modes, k), from factors in the stored order."""
    stored, weigh = pencil.shifted.pattern.stored, sp.csr_array(pencil.M @ pencil.basis)
    if pencil.modes == pencil.n and weigh.nnz == np.count_nonzero(weigh.diagonal()):
        # masses alone: a sparse product would cost more than the solve of a small model
        root, back = weigh.diagonal(), np.argsort(stored)

        def scaled(vector: Array) -> Array:
            right = (root * vector.T).T[back]
            return np.asarray((root * lu.solve(right)[stored].T).T)

        return scaled
    weigh = sp.csr_array(weigh[np.argsort(stored)])
    gather = sp.csr_array(weigh.T)

    def weighed(vector: Array) -> Array:
        return np.asarray(gather @ lu.solve(weigh @ vector))

    return weighed


def _triangle(tall: Array) -> Array:
    """Return R of tall = Q R, (t, k) to at most (k, k).

    Block by block, each of which fits into the cache, then from the R of all blocks (J. Demmel, L. Grigori,
    M. Hoemmen, J. Langou (2012), SIAM J. Sci. Comput. 34, A206): as accurate, column by column.
    """
    if len(tall) > BLOCK:
        starts = range(0, len(tall), BLOCK)
        tall = np.vstack([np.linalg.qr(tall[start : start + BLOCK], mode="r") for start in starts])
    return np.asarray(np.linalg.qr(tall, mode="r"), dtype=float)


def _probed(pattern: Pattern, matrix: sp.csc_array) -> "SuperLU[np.float64] | None":
    """Return the factors of a stored matrix if they solve it; None where pivots vanished."""
    try:
        lu = pattern.factorize(matrix.data)
    except RuntimeError:
        return None
    right = np.random.default_rng(SEED).standard_normal(pattern.n)
    solution = lu.solve(right)
    size = float(abs(matrix).sum(axis=0).max()) * float(np.abs(solution).max()) + float(np.abs(right).max())
    return lu if float(np.abs(matrix @ solution - right).max()) <= PROBE * size else None
