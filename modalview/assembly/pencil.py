"""The pencil K z = lambda M z in the independent coordinates of a model, with the terms it is made of."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.condense import massless_recovery
from modalview.assembly.massroot import mass_root_inverse
from modalview.assembly.quadratic import QuadraticForm
from modalview.errors import NumericalError
from modalview.factor.parts import PencilParts
from modalview.factor.pattern import Pattern
from modalview.factor.shifted import ShiftedPencil, shifted_pencil

Array = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Coordinate:
    """One independent coordinate.

    Parameters
    ----------
    part : str
        Id of the body that carries it, or of the first body of a rigid cluster.
    freedom : str
        "x", "y", "z", "rx", "ry", "rz", or "train" for a geared train turning together.
    cluster : int
        Coordinates of one cluster share a block of M; other blocks do not couple through M.
    """

    part: str
    freedom: str
    cluster: int


@dataclass(frozen=True, eq=False)
class Reused:
    """What does not depend on values: shared by all pencils of one structure.

    Parameters
    ----------
    pattern : Pattern
        Order and pattern of K - sigma M.
    absolute : QuadraticForm
        Of the absolute values of the rows.
    """

    pattern: Pattern
    absolute: QuadraticForm


@dataclass(frozen=True, eq=False)
class Pencil:
    """K z = lambda M z of n coordinates at one set of values.

    Attributes
    ----------
    K, M : csc_array (n, n)
        Stiffness (N/m, N, N m/rad) and mass (kg, kg m, kg m**2), symmetric, both triangles stored. M is
        block-diagonal by cluster; rows and columns of massless coordinates are exactly zero.
    massless : bool array (n,)
        Coordinates without inertia. K restricted to them is positive definite.
    scale : array (n,)
        Metres per unit of the coordinate: 1 for a translation, a radius of gyration for a rotation
        (1 in a shaft train). Divide a row, multiply a shape by it to compare unlike coordinates.
    rows : csr_array (t, n) or None
        Stretch of each stiffness term per unit motion; None for matrices of others.
    stiffness : array (t,) or None
        Value of each term, N/m or N m/rad; K = rows.T @ diag(stiffness) @ rows.
    rigid_body : array (n, r)
        Basis of the motions that stretch nothing; their number r is exact where ``rows`` is given.
    C : csc_array (n, n)
        Viscous damping, N s/m; zero without dashpots.
    coordinates : sequence of Coordinate
        What each coordinate is.
    reused : Reused or None
        What all pencils of one structure share.
    """

    K: sp.csc_array
    M: sp.csc_array
    massless: npt.NDArray[np.bool_]
    scale: Array
    rigid_body: Array
    rows: sp.csr_array | None = None
    stiffness: Array | None = None
    C: sp.csc_array | None = None
    coordinates: Sequence[Coordinate] = field(default=())
    reused: Reused | None = None

    @property
    def n(self) -> int:
        """Number of coordinates, massless ones included."""
        return int(self.K.shape[0])

    @property
    def modes(self) -> int:
        """Number of modes: coordinates with inertia."""
        return self.n - int(self.massless.sum())

    @cached_property
    def basis(self) -> sp.csc_array:
        """W (n, modes), with W.T M W = I: columns are massy coordinates, massless ones following statically.

        S = W.T K W is the standard symmetric form; z = W y turns its eigenvectors into shapes.
        W = R L^-T with R the static recovery of massless coordinates and M = L L.T.
        """
        root = mass_root_inverse(self.M, ~self.massless)
        if not self.massless.any():
            return root
        return sp.csc_array(massless_recovery(self.K, self.massless) @ root)

    @cached_property
    def factor(self) -> sp.csr_array:
        """G (t, modes) = diag(sqrt stiffness) rows W, so that S = G.T G; 1/s. Needs terms of one sign."""
        if self.rows is None or self.stiffness is None:
            raise NumericalError("This pencil was given as matrices and has no terms to factor.")
        return sp.csr_array(sp.diags_array(np.sqrt(self.stiffness)) @ (self.rows @ self.basis))

    @cached_property
    def standard(self) -> sp.csc_array:
        """S (modes, modes) = W.T K W, symmetric, 1/s**2."""
        half = self.basis.T @ (self.K @ self.basis)
        return sp.csc_array((half + half.T) / 2)

    @cached_property
    def formation(self) -> sp.csc_array:
        """|rows|.T diag(|stiffness|) |rows| (n, n): what rounding in forming K is proportional to.

        |K| where no terms are known: then the entries given are taken as the truth.
        """
        if self.rows is None or self.stiffness is None:
            return sp.csc_array(abs(self.K))
        if self.reused is not None:
            return self.reused.absolute.matrix(np.abs(self.stiffness))
        absolute = abs(self.rows)
        return sp.csc_array(absolute.T @ sp.diags_array(np.abs(self.stiffness)) @ absolute)

    @cached_property
    def shifted(self) -> ShiftedPencil:
        """K - sigma M for counts and solves at many shifts."""
        terms, definite = 0, False
        if self.rows is not None and self.stiffness is not None:
            terms = int(np.bincount(self.rows.indices, minlength=1).max())
            definite = bool(np.all(self.stiffness >= 0))
        parts = PencilParts(
            K=self.K,
            M=self.M,
            basis=self.basis,
            formation=self.formation,
            massless=self.massless,
            terms=terms,
            rigid_modes=self.rigid_body.shape[1],
            definite=definite,
            rows=self.rows,
            stiffness=self.stiffness,
            scale=self.scale,
        )
        return shifted_pencil(parts, self.reused.pattern if self.reused else None)


def pencil_of_terms(
    rows: sp.csr_array,
    stiffness: Array,
    mass: Array,
    *,
    rigid_body: Array | None = None,
    scale: Array | None = None,
) -> Pencil:
    """Build a pencil from stretch rows (t, n), term values (t,) and a diagonal mass (n,).

    ``rigid_body`` (n, r) spans the motions that stretch nothing; None says there are none.
    Zero masses are massless coordinates; each must be held by some term.
    """
    n = rows.shape[1]
    K = sp.csc_array(rows.T @ sp.diags_array(stiffness) @ rows)
    return Pencil(
        K=K,
        M=sp.csc_array(sp.diags_array(np.asarray(mass, dtype=float))),
        massless=np.asarray(mass) == 0,
        scale=np.ones(n) if scale is None else scale,
        rigid_body=np.zeros((n, 0)) if rigid_body is None else rigid_body,
        rows=sp.csr_array(rows),
        stiffness=np.asarray(stiffness, dtype=float),
    )


def pencil_of_matrices(K: sp.csc_array, M: sp.csc_array, *, rigid_body: Array | None = None) -> Pencil:
    """Build a pencil from matrices of others: symmetric K and M (n, n), taken as exact.

    Rows of M that are wholly zero are massless coordinates. Without ``rigid_body`` the number of zero
    modes is found by counts, not from structure.
    """
    n = K.shape[0]
    empty_rows = np.asarray(abs(M).sum(axis=1)).ravel() == 0
    return Pencil(
        K=sp.csc_array(K),
        M=sp.csc_array(M),
        massless=empty_rows,
        scale=np.ones(n),
        rigid_body=np.zeros((n, 0)) if rigid_body is None else rigid_body,
    )
