"""All frequencies of one small model at many values, as one stack of matrices."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.assemble import Assembly
from modalview.assembly.termsets import TermSet
from modalview.errors import InputError, NumericalError

Array = npt.NDArray[np.float64]

# Dense matrices are stacked: beyond this many coordinates one model at a time is as quick.
LARGEST_STACKED = 300
# Numbers of one stack, so that it stays in the processor's cache (measured: larger is slower).
STACK_NUMBERS = 200_000


@dataclass(frozen=True, slots=True, eq=False)
class Filling:
    """Matrices of rank-one terms at many values: sum v_i r_i r_i^T with v_i a product of typed values.

    Parameters
    ----------
    products : csr_array (t, n * n)
        r_i r_i^T of every term, row by row.
    factor : array (t,)
    product_of : int array (t, f)
        Which values a term is the product of; one past the last stands for 1.
    size : int
        n.
    """

    products: sp.csr_array
    factor: Array
    product_of: npt.NDArray[np.int64]
    size: int

    @classmethod
    def of(cls, terms: TermSet) -> "Filling":
        """Take up the terms of a structure."""
        rows = terms.rows.toarray()
        t, n = rows.shape
        products = sp.csr_array(np.einsum("ti,tj->tij", rows, rows).reshape(t, n * n))
        return cls(products, terms.factor, terms.product_of, n)

    def at(self, values: Array) -> Array:
        """Return the matrices (s, n, n) at values (s, parameters)."""
        # One product over the stored entries for the whole stack.
        filled = np.asarray((self.products.T @ self._sizes(values)).T)
        return filled.reshape(len(values), self.size, self.size)

    def diagonals_at(self, values: Array) -> Array:
        """Return the diagonals (s, n) of the same matrices."""
        diagonal = self.products[:, :: self.size + 1]
        return np.asarray((diagonal.T @ self._sizes(values)).T)

    @property
    def diagonal(self) -> bool:
        """Whether the matrices have entries on their diagonals alone."""
        return bool(np.all(self.products.indices % (self.size + 1) == 0))

    def _sizes(self, values: Array) -> Array:
        """Return the value of every term (t, s)."""
        padded = np.concatenate([values, np.ones((len(values), 1))], axis=1).T
        sizes: Array = self.factor[:, None] * padded[self.product_of].prod(axis=1)
        return sizes


@dataclass(frozen=True, slots=True, eq=False)
class Stack:
    """What gives the frequencies of one structure at many values; small, and quick to send elsewhere.

    Parameters
    ----------
    stiffness, mass : Filling
    massless : bool array (n,)
    rigid_body : int
        Number of modes at zero, which no value changes.
    """

    stiffness: Filling
    mass: Filling
    massless: npt.NDArray[np.bool_]
    rigid_body: int

    @classmethod
    def of(cls, assembly: Assembly) -> "Stack":
        """Take up a model.

        Raises
        ------
        InputError
            More than 300 coordinates.
        """
        if assembly.n > LARGEST_STACKED:
            raise InputError(
                f"The model has {assembly.n} degrees of freedom; values are varied in models of up to "
                f"{LARGEST_STACKED}. Hold directions that do not matter, or join bodies that move as one."
            )
        structure = assembly.structure
        return cls(
            Filling.of(structure.stiffness),
            Filling.of(structure.mass),
            structure.coordinates.massless,
            structure.rigid_body.shape[1],
        )

    @property
    def modes(self) -> int:
        """Number of modes."""
        return int((~self.massless).sum())

    def eigenvalues(self, values: Array) -> Array:
        """Return all eigenvalues (s, modes), ascending, rad^2/s^2, at values (s, parameters), SI.

        Parameters
        ----------
        values : array (s, parameters)
            Stiffnesses and masses above zero, in the order of the assembly's parameters.

        Returns
        -------
        array (s, modes)
            Those of rigid-body modes are exactly 0. Absolute error about modes * u * the largest; no
            interval is proven.

        Raises
        ------
        NumericalError
            A mass matrix is not positive definite.
        """
        found = np.empty((len(values), self.modes))
        step = max(1, STACK_NUMBERS // max(self.stiffness.size**2, 1))
        for start in range(0, len(values), step):
            found[start : start + step] = np.linalg.eigvalsh(self._standard(values[start : start + step]))
        np.maximum(found, 0.0, out=found)
        found[:, : self.rigid_body] = 0.0
        return found

    def modes_at(self, values: Array) -> tuple[Array, Array]:
        """Return eigenvalues (s, modes) and M-orthonormal shapes (s, n, modes) at values (s, parameters).

        For models without massless coordinates; as accurate as ``eigenvalues``.
        """
        if self.massless.any():
            raise InputError("Shapes of a stack are found for models without massless coordinates.")
        eigenvalues, vectors = np.linalg.eigh(self._standard(values))
        np.maximum(eigenvalues, 0.0, out=eigenvalues)
        eigenvalues[:, : self.rigid_body] = 0.0
        if self.mass.diagonal:
            return eigenvalues, vectors / np.sqrt(self.mass.diagonals_at(values))[:, :, None]
        lower = np.linalg.cholesky(self.mass.at(values))
        return eigenvalues, np.asarray(np.linalg.solve(lower.transpose(0, 2, 1), vectors))

    def _standard(self, values: Array) -> Array:
        K = self.stiffness.at(values)
        if self.massless.any() or not self.mass.diagonal:
            return standard_forms(K, self.mass.at(values), self.massless)
        root = 1 / np.sqrt(self.mass.diagonals_at(values))
        K *= root[:, :, None]
        K *= root[:, None, :]
        return K


def standard_forms(K: Array, M: Array, massless: npt.NDArray[np.bool_]) -> Array:
    """Return S = L^-1 K L^-T with M = L L^T of every pencil of a stack (s, m, m), massless ones condensed.

    Parameters
    ----------
    K, M : array (s, n, n)
        Rows and columns of massless coordinates are zero in M.
    massless : bool array (n,)

    Notes
    -----
    Static condensation: R. J. Guyan (1965), AIAA Journal 3, 380; exact for coordinates without mass.
    """
    if massless.any():
        kept = ~massless
        inner, across = K[:, massless][:, :, massless], K[:, massless][:, :, kept]
        K = K[:, kept][:, :, kept] - across.transpose(0, 2, 1) @ np.linalg.solve(inner, across)
        M = M[:, kept][:, :, kept]
    try:
        lower = np.linalg.cholesky(M)
    except np.linalg.LinAlgError as error:
        raise NumericalError("The mass matrix is not positive definite at some of the values.") from error
    half = np.linalg.solve(lower, K)
    return np.asarray(np.linalg.solve(lower, half.transpose(0, 2, 1)))
