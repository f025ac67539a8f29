"""Rayleigh quotients and residuals of given shapes, with a bound of every rounding error in them."""

from dataclasses import dataclass
from typing import Self

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil
from modalview.eigen.massless import MasslessFloor, massless_floor
from modalview.eigen.sums import column_sums, summing
from modalview.errors import NumericalError
from modalview.factor.rounding import UNIT, gamma

Array = npt.NDArray[np.float64]

# Shapes are treated this many at a time, so that stretches of all terms need little memory.
CHUNK = 64
# With more coordinates than this, one by one: arrays that fit into the cache are faster.
TALL = 8_000
# Entries of the inverse mass root carry an error far below this; the residual is rounding already.
ROOT_SLACK = 1e-6


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


@dataclass(frozen=True, slots=True, eq=False)
class Forces:
    """Elastic forces and energies of m shapes, with bounds of their rounding.

    Parameters
    ----------
    pull, size, unsure : array (n, m)
        K x; |K| |x| in the form it was summed; what an error of the stretches adds to the rounding.
    energy, energy_error : array (m,)
        x.T K x.
    """

    pull: Array
    size: Array
    unsure: Array
    energy: Array
    energy_error: Array


@dataclass(frozen=True, slots=True, eq=False)
class Stretching:
    """K = rows.T diag(k) rows as its terms."""

    rows: sp.csr_array
    absolute_rows: sp.csr_array
    turned: sp.csr_array
    absolute_turned: sp.csr_array
    stiffness: Array
    width: int
    degree: int

    @classmethod
    def of(cls, pencil: Pencil) -> Self:
        """Prepare the terms of a pencil that has them."""
        if pencil.rows is None or pencil.stiffness is None:
            raise NumericalError("This pencil was given as matrices and has no terms.")
        rows = sp.csr_array(pencil.rows)
        turned = sp.csr_array(rows.T)
        stiffness = pencil.stiffness[:, None]
        return cls(rows, abs(rows), turned, abs(turned), stiffness, _degree(rows), _degree(turned))

    def forces(self, shapes: Array) -> Forces:
        """Sum over the terms."""
        stretch, off = self._stretch(shapes)
        weight = np.abs(self.stiffness)
        pull = self.turned @ (self.stiffness * stretch)
        size = self.absolute_turned @ (weight * np.abs(stretch))
        unsure = self.absolute_turned @ (weight * off)
        energy = column_sums(self.stiffness * stretch**2)
        error = gamma(summing(len(stretch)) + 4) * column_sums(weight * stretch**2)
        error += column_sums(weight * (2 * np.abs(stretch) + off) * off)
        return Forces(pull, size, unsure, energy, error)

    def cross_energy(self, shapes: Array) -> tuple[Array, float]:
        """Return X.T K X (g, g) and a bound of its rounding in the Frobenius norm."""
        stretch, off = self._stretch(shapes)
        force = self.stiffness * stretch
        heavy = np.abs(self.stiffness) * (np.abs(stretch) + off)
        cross = np.stack([column_sums(stretch * one[:, None]) for one in force.T])
        size = np.stack([column_sums(np.abs(stretch) * one[:, None]) for one in heavy.T])
        spread = np.stack([column_sums(off * one[:, None]) for one in heavy.T])
        rounding = gamma(summing(len(stretch)) + 4) * size + spread + spread.T
        return cross, float(np.linalg.norm(rounding))

    def _stretch(self, shapes: Array) -> tuple[Array, Array]:
        return self.rows @ shapes, gamma(self.width + 1) * (self.absolute_rows @ np.abs(shapes))


@dataclass(frozen=True, slots=True, eq=False)
class Entries:
    """A symmetric matrix by its entries, taken as exact."""

    matrix: sp.csr_array
    absolute: sp.csr_array
    degree: int

    @classmethod
    def of(cls, matrix: sp.csc_array) -> Self:
        """Prepare a matrix."""
        rows = sp.csr_array(matrix)
        return cls(rows, abs(rows), _degree(rows))

    def forces(self, shapes: Array) -> Forces:
        """Multiply the matrix."""
        pull, size = self.matrix @ shapes, self.absolute @ np.abs(shapes)
        energy = column_sums(shapes * pull)
        error = gamma(summing(len(shapes)) + self.degree + 2) * column_sums(np.abs(shapes) * size)
        return Forces(pull, size, np.zeros_like(pull), energy, error)

    def cross_energy(self, shapes: Array) -> tuple[Array, float]:
        """Return X.T A X (g, g) and a bound of its rounding in the Frobenius norm."""
        pull, size = self.matrix @ shapes, self.absolute @ np.abs(shapes)
        cross = np.stack([column_sums(pull * one[:, None]) for one in shapes.T])
        absolute = np.stack([column_sums(size * one[:, None]) for one in np.abs(shapes).T])
        rounding = gamma(summing(len(shapes)) + self.degree + 2) * absolute
        return cross, float(np.linalg.norm(rounding))


@dataclass(frozen=True, slots=True, eq=False)
class Energy:
    """Elastic and inertial energy of a pencil's shapes."""

    elastic: Stretching | Entries
    inertial: Entries
    root: sp.csr_array
    absolute_root: sp.csr_array
    floor: MasslessFloor | None

    @classmethod
    def of(cls, pencil: Pencil) -> Self:
        """Choose how shapes are evaluated: from the terms where the pencil has them.

        From the terms a quotient is a sum of squares over a sum of squares: no cancellation, relative
        error near u even where the stiffness spans fourteen decades.
        """
        elastic = Entries.of(pencil.K) if pencil.rows is None else Stretching.of(pencil)
        root = sp.csr_array(pencil.basis.T)
        return cls(elastic, Entries.of(pencil.M), root, abs(root), massless_floor(pencil))

    def rayleigh(self, shapes: Array) -> Rayleigh:
        """Evaluate shapes (n, m) one by one."""
        chunk = CHUNK if len(shapes) <= TALL else 1
        starts = range(0, max(shapes.shape[1], 1), chunk)
        parts = [self._chunk(np.ascontiguousarray(shapes[:, start : start + chunk])) for start in starts]
        quotient = np.concatenate([part.quotient for part in parts])
        error = np.concatenate([part.quotient_error for part in parts])
        return Rayleigh(quotient, error, np.concatenate([part.residual for part in parts]))

    def _chunk(self, shapes: Array) -> Rayleigh:
        forces, inertia = self.elastic.forces(shapes), self.inertial.forces(shapes)
        least = inertia.energy - inertia.energy_error
        quotient = forces.energy / inertia.energy
        residual = forces.pull - quotient * inertia.pull
        degree = max(self.elastic.degree, self.inertial.degree)
        rounding = gamma(degree + 6) * (forces.size + np.abs(quotient) * inertia.size) + forces.unsure
        error = forces.energy_error + np.abs(quotient) * (inertia.energy_error + 2 * UNIT * inertia.energy)
        if self.floor is not None:
            error = error + self.floor.surplus_energy(forces.pull, rounding)
        inner = np.sqrt(column_sums((self.root @ residual) ** 2))
        outer = np.sqrt(column_sums((self.absolute_root @ rounding) ** 2))
        bound = (inner + outer) * (1 + ROOT_SLACK) / np.sqrt(least)
        return Rayleigh(quotient, error / least, bound)

    def gram_defect(self, shapes: Array) -> float:
        """Bound of ||X.T M X - I|| of shapes (n, g)."""
        gram, rounding = self.inertial.cross_energy(shapes)
        return float(np.linalg.norm(gram - np.eye(len(gram)))) + rounding

    def ritz_defect(self, shapes: Array, quotients: Array, gram_defect: float) -> float:
        """Bound of the distance between Ritz values of the span of X (n, g) and its quotients."""
        cross, rounding = self.elastic.cross_energy(shapes)
        off = float(np.linalg.norm(cross - np.diag(quotients))) + rounding
        size = float(np.abs(quotients).max()) + off
        if self.floor is not None:
            pull = self.elastic.forces(shapes)
            left = self.floor.surplus_energy(
                pull.pull, gamma(self.elastic.degree + 6) * pull.size + pull.unsure
            )
            off += float(np.sum(left))
        return off + size * gram_defect * (1 + 2 * gram_defect)


def _degree(matrix: sp.csr_array) -> int:
    return int(np.diff(matrix.indptr).max(initial=0))
