"""Rayleigh quotients and residuals of given shapes, with a bound of every rounding error in them."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.linalg import LinearOperator, onenormest, splu

from modalview.assembly.pencil import Pencil

Array = npt.NDArray[np.float64]

UNIT = float(np.finfo(float).eps) / 2
# Shapes are treated this many at a time, so that stretches of all terms need little memory.
CHUNK = 64
# numpy sums runs of 128 with eight accumulators, then pairwise: at most 24 additions in a row and one
# more per doubling, whatever the length.
RUN = 26
# Entries of the inverse mass root carry an error far below this; the residual is rounding already.
ROOT_SLACK = 1e-6
# A matrix at least this large is not decomposed only to bound its condition.
LARGE_INNER = 1500


@dataclass(frozen=True, slots=True, eq=False)
class Rayleigh:
    """Quotients and residuals of m shapes.

    Parameters
    ----------
    quotient : array (m,)
        x.T K x / x.T M x as computed, rad^2/s^2.
    quotient_error : array (m,)
        The exact quotient of the stored shape is nearer than this.
    residual : array (m,)
        At least ||W.T (K x - quotient M x)|| / ||x||_M, rounding included.
    """

    quotient: Array
    quotient_error: Array
    residual: Array


def gamma(operations: int) -> float:
    """Bound of the relative error of that many roundings in a row.

    N. J. Higham (2002), Accuracy and Stability of Numerical Algorithms, section 3.1.
    """
    return operations * UNIT / (1 - operations * UNIT)


def summing(length: int) -> int:
    """Roundings in a row when numpy sums a contiguous run of this length."""
    return RUN + max(0, int(np.ceil(np.log2(max(length, 1) / 128))))


def rayleigh(pencil: Pencil, shapes: Array) -> Rayleigh:
    """Evaluate shapes (n, m) against the pencil, from its terms where it has them.

    From the terms the quotient is a sum of squares over a sum of squares: no cancellation, relative
    error near u even where the stiffness spans fourteen decades. Matrices of others are taken as exact.
    """
    energy = StretchEnergy.of(pencil) if pencil.rows is not None else MatrixEnergy.of(pencil)
    floor = massless_floor(pencil)
    parts = [energy.evaluate(chunk, floor) for chunk in _chunks(shapes)]
    if not parts:
        return Rayleigh(np.zeros(0), np.zeros(0), np.zeros(0))
    return Rayleigh(
        np.concatenate([part.quotient for part in parts]),
        np.concatenate([part.quotient_error for part in parts]),
        np.concatenate([part.residual for part in parts]),
    )


def _chunks(shapes: Array) -> Iterator[Array]:
    for start in range(0, shapes.shape[1], CHUNK):
        yield np.ascontiguousarray(shapes[:, start : start + CHUNK])


@dataclass(frozen=True, slots=True, eq=False)
class Inertia:
    """M and the inverse mass root with their roundings."""

    pencil: Pencil
    mass: sp.csr_array
    absolute_mass: sp.csr_array
    root: sp.csr_array
    absolute_root: sp.csr_array
    degree: int

    @classmethod
    def of(cls, pencil: Pencil) -> "Inertia":
        mass = sp.csr_array(pencil.M)
        root = sp.csr_array(pencil.basis.T)
        return cls(pencil, mass, abs(mass), root, abs(root), _degree(mass))

    def norm_squared(self, shapes: Array) -> tuple[Array, Array]:
        """x.T M x (m,) and the bound of its absolute rounding error."""
        n = shapes.shape[0]
        value = _sum(shapes * (self.mass @ shapes))
        size = _sum(np.abs(shapes) * (self.absolute_mass @ np.abs(shapes)))
        return value, gamma(summing(n) + self.degree + 2) * size

    def residual(self, force: Array, rounding: Array, norm: Array) -> Array:
        """Bound of ||W.T r|| / ||x||_M from the computed r and the bound of its rounding."""
        inner = np.sqrt(_sum((self.root @ force) ** 2))
        outer = np.sqrt(_sum((self.absolute_root @ rounding) ** 2))
        total: Array = (inner + outer) * (1 + ROOT_SLACK) / norm
        return total


@dataclass(frozen=True, slots=True, eq=False)
class StretchEnergy:
    """Energies and forces from the terms K = rows.T diag(k) rows."""

    inertia: Inertia
    rows: sp.csr_array
    absolute_rows: sp.csr_array
    turned: sp.csr_array
    absolute_turned: sp.csr_array
    stiffness: Array
    width: int
    degree: int

    @classmethod
    def of(cls, pencil: Pencil) -> "StretchEnergy":
        assert pencil.rows is not None  # noqa: S101 - chosen by the caller
        assert pencil.stiffness is not None  # noqa: S101 - same
        rows = sp.csr_array(pencil.rows)
        turned = sp.csr_array(rows.T)
        return cls(
            Inertia.of(pencil),
            rows,
            abs(rows),
            turned,
            abs(turned),
            pencil.stiffness[:, None],
            _degree(rows),
            _degree(turned),
        )

    def stretches(self, shapes: Array) -> tuple[Array, Array]:
        """Stretch of every term (t, m) and the bound of its rounding."""
        return self.rows @ shapes, gamma(self.width + 1) * (self.absolute_rows @ np.abs(shapes))

    def evaluate(self, shapes: Array, floor: "MasslessFloor | None") -> Rayleigh:
        """See `rayleigh`."""
        stretch, unsure = self.stretches(shapes)
        weight = np.abs(self.stiffness)
        energy = _sum(self.stiffness * stretch**2)
        size = _sum(weight * stretch**2)
        energy_error = gamma(summing(len(stretch)) + 4) * size
        energy_error += _sum(weight * (2 * np.abs(stretch) + unsure) * unsure)
        norm2, norm2_error = self.inertia.norm_squared(shapes)
        quotient = energy / norm2
        pull = self.turned @ (self.stiffness * stretch)
        force = pull - quotient * (self.inertia.mass @ shapes)
        inertial = np.abs(quotient) * (self.inertia.absolute_mass @ np.abs(shapes))
        elastic = self.absolute_turned @ (weight * np.abs(stretch))
        rounding = gamma(max(self.degree, self.inertia.degree) + 6) * (elastic + inertial)
        rounding += self.absolute_turned @ (weight * unsure)
        error = _quotient_error(quotient, energy_error, norm2, norm2_error)
        if floor is not None:
            error += floor.energy(pull, rounding) / norm2
        residual = self.inertia.residual(force, rounding, np.sqrt(norm2 - norm2_error))
        return Rayleigh(quotient, error, residual)


@dataclass(frozen=True, slots=True, eq=False)
class MatrixEnergy:
    """Energies and forces from the entries of K, taken as exact."""

    inertia: Inertia
    stiffness: sp.csr_array
    absolute: sp.csr_array
    degree: int

    @classmethod
    def of(cls, pencil: Pencil) -> "MatrixEnergy":
        stiffness = sp.csr_array(pencil.K)
        return cls(Inertia.of(pencil), stiffness, abs(stiffness), _degree(stiffness))

    def evaluate(self, shapes: Array, floor: "MasslessFloor | None") -> Rayleigh:
        """See `rayleigh`."""
        pull = self.stiffness @ shapes
        elastic = self.absolute @ np.abs(shapes)
        energy = _sum(shapes * pull)
        energy_error = gamma(summing(len(shapes)) + self.degree + 2) * _sum(np.abs(shapes) * elastic)
        norm2, norm2_error = self.inertia.norm_squared(shapes)
        quotient = energy / norm2
        force = pull - quotient * (self.inertia.mass @ shapes)
        inertial = np.abs(quotient) * (self.inertia.absolute_mass @ np.abs(shapes))
        rounding = gamma(max(self.degree, self.inertia.degree) + 6) * (elastic + inertial)
        error = _quotient_error(quotient, energy_error, norm2, norm2_error)
        if floor is not None:
            error += floor.energy(pull, rounding) / norm2
        residual = self.inertia.residual(force, rounding, np.sqrt(norm2 - norm2_error))
        return Rayleigh(quotient, error, residual)


@dataclass(frozen=True, slots=True, eq=False)
class MasslessFloor:
    """Lower bound of the stiffness of massless coordinates against a misplacement.

    A shape whose massless coordinates are off by d has d.T K00 d too much energy; d is known only
    through the force that is left on them.
    """

    where: Array
    scale: Array
    least: float

    def energy(self, pull: Array, rounding: Array) -> Array:
        """Bound of the surplus energy (m,) from the forces left on the massless coordinates."""
        left = (np.abs(pull[self.where]) + rounding[self.where]) * self.scale[:, None]
        surplus: Array = _sum(left**2) / self.least
        return surplus


def massless_floor(pencil: Pencil) -> MasslessFloor | None:
    """Return the floor, or None where every coordinate has inertia."""
    where = np.flatnonzero(pencil.massless)
    if where.size == 0:
        return None
    inner = sp.csc_array(pencil.K[where][:, where])
    scale = 1 / np.sqrt(inner.diagonal())
    scaled = sp.csc_array(sp.diags_array(scale) @ inner @ sp.diags_array(scale))
    if where.size < LARGE_INNER:
        least = float(np.linalg.eigvalsh(scaled.toarray())[0])
    else:
        solve = splu(scaled).solve
        inverse = LinearOperator(scaled.shape, matvec=solve, rmatvec=solve, dtype=float)
        least = 1 / (3 * float(onenormest(inverse)))  # the estimate is rarely off by more than 3
    return MasslessFloor(where, scale, max(least, UNIT))


def _quotient_error(quotient: Array, energy_error: Array, norm2: Array, norm2_error: Array) -> Array:
    least = norm2 - norm2_error
    error: Array = (energy_error + np.abs(quotient) * (norm2_error + 2 * UNIT * norm2)) / least
    return error


def _sum(entries: Array) -> Array:
    """Sum over rows (n, m) -> (m,), along contiguous runs so that numpy sums pairwise."""
    total: Array = np.ascontiguousarray(entries.T).sum(axis=1)
    return total


def _degree(matrix: sp.csr_array) -> int:
    return int(np.diff(matrix.indptr).max(initial=0))
