"""How many modes lie below the edges of bands, at any factors of some values, from one factorization each.

K - sigma M changes by sum t_k b_k b_k^T when values change by factors, b_k the roots of their terms, and
t = factor - 1 for a stiffness, -sigma (factor - 1) for a mass. The small matrix F = B^T (K - sigma M)^-1 B
then tells the count at all factors, and the factors at which a mode crosses the edge.
"""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cached_property, partial

import numpy as np
import numpy.typing as npt

from modalview.advice.changes.states import State
from modalview.advice.changes.values import Variable
from modalview.assembly.parameters import Case
from modalview.eigen.threads import one_blas_thread
from modalview.errors import NumericalError
from modalview.factor.pattern import Pattern
from modalview.resonance.results import Band

Array = npt.NDArray[np.float64]
Ints = npt.NDArray[np.int64]
Bools = npt.NDArray[np.bool_]

# Where a mode lies on the edge itself, the edge moves outward by this share, a few times.
NUDGE, NUDGES = 1e-9, 4
# Small matrices beyond so many columns cost more than a sparse factorization.
MOST_COLUMNS = 60
# A factorization that leaves more than this share of the edge open is not taken.
SHARP = 1e-5
# Eigenvalues of F below this share of the largest are rounding: their modes cross at no factor.
NOTHING = 1e-13
# A small matrix with an eigenvalue nearer to zero than this share of its size decides no count.
DOUBT = 1e-11


@dataclass(frozen=True, eq=False)
class Edge:
    """One edge of one band, in one state and case.

    Parameters
    ----------
    state : State
    case : Case
    omega : float
        The edge, rad/s.
    outward : int
        +1 for an upper edge, -1 for a lower one: where it moves when a mode lies on it.
    """

    state: State
    case: Case
    omega: float
    outward: int

    @cached_property
    def _factored(self) -> tuple[float, int, Callable[[Array], Array]]:
        """Return the shift, the modes below it, and what solves (K - sigma M) x = b."""
        shifted = self.state.assembly.pencil(self.case).shifted
        for nudge in range(NUDGES + 1):
            sigma = self.omega**2 * (1 + self.outward * nudge * NUDGE * 10**nudge)
            found = shifted.factorize(sigma)
            if found.uncertainty < SHARP * sigma:
                return sigma, found.negative, partial(shifted.solve, found)
        return self._dense()

    def _dense(self) -> tuple[float, int, Callable[[Array], Array]]:
        pencil = self.state.assembly.pencil(self.case)
        sigma = self.omega**2 * (1 + self.outward * NUDGE)
        matrix = (pencil.K - sigma * pencil.M).toarray()
        scale = pencil.scale
        try:
            negative = pencil.shifted.factorize_dense(sigma).negative
            inverse = np.linalg.inv(matrix / np.outer(scale, scale)) / np.outer(scale, scale)
        except np.linalg.LinAlgError as error:
            raise NumericalError(
                f"K - sigma M is singular around {self.omega / (2 * np.pi):.6g} Hz."
            ) from error
        return sigma, negative, lambda right: inverse @ right

    @property
    def sigma(self) -> float:
        """Where it is counted, rad**2/s**2."""
        return self._factored[0]

    def counter(self, variables: Sequence[Variable]) -> "Flexible | Refactored":
        """Return what counts here at many factors of some variables, the quicker way for so many terms."""
        columns = sum(columns_of(self.state, self.case, one).shape[1] for one in variables)
        return self.flexible(variables) if columns <= MOST_COLUMNS else self._refactored(variables)

    def _refactored(self, variables: Sequence[Variable]) -> "Refactored":
        sigma, structure = self._factored[0], self.state.assembly.structure
        shifted = self.state.assembly.pencil(self.case).shifted
        parts = []
        for one in variables:
            family = "mass" if one.family == "mass" else "stiffness"
            values = np.zeros(self.state.rows(family).shape[0])
            own = [t for m in one.members if m not in self.state.fixed for t in self.state.terms[m]]
            values[own] = self.state.term_values(self.case, family)[own]
            form = structure.mass.form if family == "mass" else structure.stiffness.form
            parts.append(shifted.pattern.values(form.matrix(values)) * (-sigma if family == "mass" else 1.0))
        rigid = int(structure.rigid_body.shape[1])
        data = shifted.stiffness - sigma * shifted.inertia
        return Refactored(shifted.pattern, data, np.array(parts), rigid)

    def flexible(self, variables: Sequence[Variable]) -> "Flexible":
        """Return what counts here at any factors of some variables."""
        sigma, below, solve = self._factored
        columns, weight, of = [], [], []
        for number, one in enumerate(variables):
            own = columns_of(self.state, self.case, one)
            columns.append(own)
            weight += [1.0 if one.family == "stiffness" else -sigma] * own.shape[1]
            of += [number] * own.shape[1]
        right = np.concatenate(columns, axis=1) if columns else np.zeros((0, 0))
        flexibility = right.T @ solve(right) if right.shape[1] else np.zeros((0, 0))
        rigid = int(self.state.assembly.structure.rigid_body.shape[1])
        return Flexible(
            below=max(below, rigid),
            flexibility=(flexibility + flexibility.T) / 2,
            weight=np.array(weight),
            of=np.array(of, dtype=np.int64),
        )


def columns_of(state: State, case: Case, variable: Variable) -> Array:
    """Return the roots of a variable's terms in one case (n, r): B B^T is its matrix there."""
    family = "mass" if variable.family == "mass" else "stiffness"
    rows = state.rows(family)
    values = state.term_values(case, family)
    terms = sorted({t for m in variable.members if m not in state.fixed for t in state.terms[m]})
    filled = [t for t in terms if rows.indptr[t] < rows.indptr[t + 1] and values[t] > 0]
    columns = np.zeros((rows.shape[1], len(filled)))
    for number, t in enumerate(filled):
        entries = slice(rows.indptr[t], rows.indptr[t + 1])
        columns[rows.indices[entries], number] = rows.data[entries] * math.sqrt(values[t])
    return columns


@dataclass(frozen=True, eq=False)
class Flexible:
    """The count at one edge as a function of factors.

    Parameters
    ----------
    below : int
        Modes below the edge at factors 1.
    flexibility : array (r, r)
        F.
    weight : array (r,)
        dt / d factor of each column: 1, or -sigma for a mass.
    of : int array (r,)
        The variable each column belongs to.
    """

    below: int
    flexibility: Array
    weight: Array
    of: Ints

    def counts(self, factors: Array) -> tuple[Ints, Bools]:
        """Count the modes below the edge at factors (m, variables): numbers (m,), and which are decided.

        Notes
        -----
        N(S + B T B^T) = N(S) + N(-sign T - |T|^(1/2) F |T|^(1/2)) - (number of t > 0), from the inertia of a
        bordered matrix (E. V. Haynsworth (1968), Linear Algebra Appl. 1, 73). In floating point: what is
        shown to a person is counted anew with proven edges.
        """
        if self.of.size == 0:
            return np.full(len(factors), self.below), np.ones(len(factors), dtype=bool)
        t = self.weight * (factors[:, self.of] - 1.0)
        sign = np.where(t < 0, -1.0, 1.0)
        size = np.sqrt(np.abs(t))
        inner = -(size[:, :, None] * self.flexibility * size[:, None, :])
        diagonal = np.arange(self.of.size)
        inner[:, diagonal, diagonal] -= sign
        with one_blas_thread():
            values = np.linalg.eigvalsh(inner)
        number = self.below + (values < 0).sum(axis=1) - (sign > 0).sum(axis=1)
        largest = np.abs(values).max(axis=1)
        return number, np.abs(values).min(axis=1) > DOUBT * largest

    def only(self, numbers: Sequence[int]) -> "Flexible":
        """Return the same for some of the variables, in that order; the others stay as they are."""
        kept = np.concatenate([np.flatnonzero(self.of == one) for one in numbers])
        of = np.concatenate([np.full(int((self.of == one).sum()), i) for i, one in enumerate(numbers)])
        return Flexible(self.below, self.flexibility[np.ix_(kept, kept)], self.weight[kept], of)

    def crossings(self) -> Array:
        """Return the factors above zero at which a mode crosses the edge, ascending; for one variable.

        Notes
        -----
        S + t B B^T is singular where t = -1/mu, mu an eigenvalue of F: t = weight (factor - 1).
        """
        if self.of.size == 0:
            return np.zeros(0)
        mu = np.linalg.eigvalsh(self.flexibility)
        mu = mu[np.abs(mu) > NOTHING * np.abs(mu).max()]
        factors = 1.0 - 1.0 / (self.weight[0] * mu)
        return np.sort(factors[factors > 0])


@dataclass(frozen=True, eq=False)
class Refactored:
    """The count at one edge as a function of factors, by a new factorization for each: for many terms.

    Parameters
    ----------
    pattern : Pattern
    data : array (stored,)
        K - sigma M at factors 1, at its stored positions.
    parts : array (variables, stored)
        What each variable adds to it at factor 1.
    rigid : int
        Modes that are never fewer.
    """

    pattern: Pattern
    data: Array
    parts: Array
    rigid: int

    def counts(self, factors: Array) -> tuple[Ints, Bools]:
        """Count the modes below the edge at factors (m, variables): numbers (m,), and which are decided."""
        numbers, decided = np.zeros(len(factors), dtype=np.int64), np.zeros(len(factors), dtype=bool)
        turned = self.pattern.turned
        for row, point in enumerate(factors):
            try:
                lu = self.pattern.factorize(self.data + (point - 1.0) @ self.parts)
            except RuntimeError:  # an exactly zero pivot column
                continue
            numbers[row] = max(int((lu.U.diagonal() < 0).sum()), self.rigid)
            decided[row] = np.array_equal(lu.perm_r, turned) and np.array_equal(lu.perm_c, turned)
        return numbers, decided


@dataclass(frozen=True, eq=False)
class Gate:
    """One check in one state: clear where as many modes lie up to its band as below it.

    Parameters
    ----------
    state : State
    band : Band
    upper : Edge
        The upper edge at soft-heavy values.
    lower : Edge
        The lower edge at stiff-light values.
    """

    state: State
    band: Band
    upper: Edge
    lower: Edge

    @property
    def name(self) -> str:
        """The check with its load case."""
        return self.state.named(self.band.check)


def gates_of(states: Sequence[State]) -> tuple[Gate, ...]:
    """Return every check of every state, over the tolerance of its speed too."""
    return tuple(
        Gate(
            state,
            band,
            Edge(state, Case.SOFT_HEAVY, band.tolerance[1], +1),
            Edge(state, Case.STIFF_LIGHT, band.tolerance[0], -1),
        )
        for state in states
        for band in state.bands
    )
