"""Chosen values tuned to measured peaks, by weighted least squares within their ranges."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field, replace

import numpy as np
import numpy.typing as npt
from scipy.optimize import least_squares

from modalview.advice.identified import value_slopes
from modalview.assembly.assemble import Assembly, assemble
from modalview.assembly.chosen import Chosen, with_numbers
from modalview.eigen.following import followed, likeness
from modalview.eigen.standard import eigenpairs
from modalview.eigen.threads import one_blas_thread
from modalview.errors import NotConvergedError

Array = npt.NDArray[np.float64]

# A step is halved where a paired mode is less like what it was than this; at most so many times.
ALIKE, HALVINGS = 0.6, 6
# Relative change of values, residuals and slope at which least squares stops: far below any uncertainty.
STOP = 1e-12
MOST_EVALUATIONS = 200
# A value nearer to an end of its range than this share of the range (of its logarithm) is at it.
AT_END = 1e-6


@dataclass(frozen=True, slots=True)
class Target:
    """A mode that is to lie at a measured frequency.

    Parameters
    ----------
    mode : int
        Its place among all modes at nominal values, from 0.
    frequency, uncertainty : float
        rad/s.
    """

    mode: int
    frequency: float
    uncertainty: float

    @property
    def weight(self) -> float:
        """What one unit of ln(frequency) is worth, in standard deviations."""
        return self.frequency / self.uncertainty


@dataclass(frozen=True, slots=True, eq=False)
class Fit:
    """Values that bring the modes nearest to their targets.

    Parameters
    ----------
    values : array (values,)
        SI.
    frequencies : array (targets,)
        Of the followed modes there, rad/s.
    places : int array (targets,)
        Their places among all modes there, from 0.
    weighted : array (targets, values)
        d(ln f) / d(ln value) over the relative uncertainty of each target, there.
    slopes : array (parameters, targets)
        d(ln f) / d(ln value) of every typed value of the model, there.
    residuals : array (targets,)
        (f - measured) / uncertainty.
    at_end : tuple of str
        "", "low" or "high" for each value.
    evaluations : int
    """

    values: Array
    frequencies: Array
    places: npt.NDArray[np.int64]
    weighted: Array
    slopes: Array
    residuals: Array
    at_end: tuple[str, ...]
    evaluations: int

    @property
    def misfit(self) -> float:
        """Sum of squared residuals."""
        return float(self.residuals @ self.residuals)


@dataclass(frozen=True, slots=True, eq=False)
class State:
    """All modes at some values: eigenvalues, shapes, and which is which."""

    logarithms: Array
    assembly: Assembly
    eigenvalues: Array
    shapes: Array
    places: npt.NDArray[np.int64]


@dataclass(slots=True, eq=False)
class Follower:
    """Modes at changing values, each mode followed from where it was by its shape.

    Parameters
    ----------
    assembly : Assembly
        At nominal values.
    chosen : sequence of Chosen
        What changes; each above zero.
    targets : sequence of Target
    stop : callable
        Asked between evaluations; raises where the person stopped it.
    """

    assembly: Assembly
    chosen: Sequence[Chosen]
    targets: Sequence[Target]
    stop: Callable[[], None]
    evaluations: int = 0
    _state: State | None = field(default=None)

    def at(self, logarithms: Array) -> State:
        """Return the state at values given by their logarithms (values,)."""
        if self._state is None:
            nominal = np.log([one.nominal for one in self.chosen])
            numbers = np.arange(self.assembly.pencil().modes)
            self._state = self._solved(nominal, numbers)
        self._state = self._went(self._state, np.asarray(logarithms, dtype=float), HALVINGS)
        return self._state

    def _went(self, start: State, end: Array, halvings: int) -> State:
        if np.array_equal(start.logarithms, end):
            return start
        there = self._solved(end, start.places)
        alike = likeness(start.shapes, there.shapes, there.assembly.pencil().M)
        places, size = followed(alike)
        watched = start.places[[one.mode for one in self.targets]]
        if halvings and float(size[watched].min(initial=1.0)) < ALIKE:
            middle = self._went(start, (start.logarithms + end) / 2, halvings - 1)
            return self._went(middle, end, halvings - 1)
        return replace(there, places=places[start.places])

    def _solved(self, logarithms: Array, places: npt.NDArray[np.int64]) -> State:
        self.stop()
        self.evaluations += 1
        numbers = zip(self.chosen, np.exp(logarithms).tolist(), strict=True)
        model = with_numbers(self.assembly.model, numbers)
        assembly = assemble(model, self.assembly)
        pencil = assembly.pencil()
        values, vectors = eigenpairs(pencil.standard.toarray())
        return State(logarithms.copy(), assembly, values, pencil.basis @ vectors, places)


def fitted(follower: Follower, share: Sequence[float] | None = None) -> Fit:
    """Return the values within their ranges that bring the modes nearest to their targets.

    Least squares of (f - measured) / uncertainty over ln(value), by a trust region within bounds, with
    analytic slopes. It finds the values nearest to where it starts; others may fit as well.

    Parameters
    ----------
    follower : Follower
    share : sequence of float or None
        Where in each range it starts, 0 to 1 of its logarithm; None: at the values as typed.

    Raises
    ------
    NotConvergedError
    CancelledError

    References
    ----------
    M. A. Branch, T. F. Coleman, Y. Li (1999), A subspace, interior, and conjugate gradient method for
    large-scale bound-constrained minimization problems, SIAM J. Sci. Comput. 21 (as scipy states it).
    """
    low = np.log([one.low for one in follower.chosen])
    high = np.log([one.high for one in follower.chosen])
    room = 1e-3 * (high - low)
    nominal = np.log([one.nominal for one in follower.chosen])
    wanted = nominal if share is None else low + np.asarray(share) * (high - low)
    start = np.clip(wanted, low + room, high - room)

    def residuals(logarithms: Array) -> Array:
        return _residuals(follower.targets, follower.at(logarithms))

    def slopes(logarithms: Array) -> Array:
        state = follower.at(logarithms)
        return _weighted(follower, state, _followed_slopes(follower, state))

    with one_blas_thread():
        found = least_squares(
            residuals,
            start,
            slopes,
            bounds=(low, high),
            xtol=STOP,
            ftol=STOP,
            gtol=STOP,
            max_nfev=MOST_EVALUATIONS,
        )
        if not found.success:
            raise NotConvergedError(
                f"least squares did not settle in {found.nfev} evaluations: the peaks hardly tell these "
                "values. Choose fewer, or narrower ranges"
            )
        return _fit(follower, np.clip(found.x, low, high), (low, high))


def _fit(follower: Follower, logarithms: Array, ends: tuple[Array, Array]) -> Fit:
    state = follower.at(logarithms)
    slopes = _followed_slopes(follower, state)
    low, high = ends
    near = AT_END * (high - low)
    return Fit(
        values=np.exp(logarithms),
        frequencies=_frequencies(follower.targets, state),
        places=_places(follower.targets, state),
        weighted=_weighted(follower, state, slopes),
        slopes=slopes,
        residuals=_residuals(follower.targets, state),
        at_end=tuple(
            "low" if x <= a + d else "high" if x >= b - d else ""
            for x, a, b, d in zip(logarithms, low, high, near, strict=True)
        ),
        evaluations=follower.evaluations,
    )


def _places(targets: Sequence[Target], state: State) -> npt.NDArray[np.int64]:
    return state.places[[one.mode for one in targets]]


def _frequencies(targets: Sequence[Target], state: State) -> Array:
    found: Array = np.sqrt(np.maximum(state.eigenvalues[_places(targets, state)], np.finfo(float).tiny))
    return found


def _residuals(targets: Sequence[Target], state: State) -> Array:
    wanted = np.array([one.frequency for one in targets])
    known = np.array([one.uncertainty for one in targets])
    missed: Array = (_frequencies(targets, state) - wanted) / known
    return missed


def _followed_slopes(follower: Follower, state: State) -> Array:
    """Return d(ln f) / d(ln value) of every typed value (parameters, targets)."""
    places = _places(follower.targets, state)
    return value_slopes(state.assembly, state.eigenvalues[places], state.shapes[:, places])


def _weighted(follower: Follower, state: State, slopes: Array) -> Array:
    """Return d(residual) / d(ln value) of the chosen values (targets, values)."""
    index = {one.id: i for i, one in enumerate(state.assembly.parameters)}
    rows = slopes[[index[one.name] for one in follower.chosen]]
    known = np.array([one.uncertainty for one in follower.targets])
    found: Array = (rows * _frequencies(follower.targets, state) / known).T
    return found
