"""D(w) q = f of a whole model at many frequencies, by the route that suits its damping and size."""

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.dampedterms import DampedTerms, damped_terms
from modalview.eigen.modes import Modes
from modalview.eigen.solve import find_modes
from modalview.errors import InputError, NumericalError
from modalview.response.bymodes import ByModes
from modalview.response.bysparse import BySparse
from modalview.response.bystates import ByStates
from modalview.response.damping import NONE, PROPORTIONAL, RATIO, Damping, damping_of
from modalview.response.load import Load, Push, load_of, product
from modalview.response.motion import SteadyMotion
from modalview.response.states import Undamped, states_of, undamped_part

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# All modes of a model of so many are found within seconds; larger ones are factored at every frequency.
LARGEST_BY_MODES = 1500
# States are dense: their roots cost the cube of their number, a second at this size.
LARGEST_BY_STATES = 600
# Frequencies solved together, so that motion of all coordinates needs little memory.
CHUNK_NUMBERS = 2_000_000


@dataclass(frozen=True, eq=False)
class Dynamics:
    """The equations of steady motion of one model.

    Attributes
    ----------
    assembly : Assembly
    terms : DampedTerms
        M, and the terms of K and C, in N coordinates: inertial, creeping, static. Nothing that a dashpot
        touches is condensed.
    damping : Damping
        As the model has it.
    modes : Modes or None
        Undamped, where they are there already.
    """

    assembly: Assembly
    terms: DampedTerms
    damping: Damping
    modes: Modes | None = None

    @classmethod
    def of(cls, assembly: Assembly, modes: Modes | None = None) -> "Dynamics":
        """Take up a model at nominal values."""
        return cls(assembly, damped_terms(assembly), damping_of(assembly), modes)

    @property
    def size(self) -> int:
        """Number N of coordinates."""
        return int(self.terms.stretching.shape[1])

    def with_damping(self, factor: float = 1.0) -> "Damped":
        """Return what solves with so many times the damping of the model.

        Without dashpots, and with one loss factor for all springs or none, undamped modes stay apart. With
        others, first-order states are superposed or solved. Large models are factored at each frequency.
        """
        kept: dict[float, Damped] = self._kept
        if factor not in kept:
            kept[factor] = Damped(self, self.damping.multiplied(factor), self._route(factor))
        return kept[factor]

    @cached_property
    def _kept(self) -> dict[float, "Damped"]:
        return {}

    def _route(self, factor: float) -> ByModes | ByStates | BySparse:
        damping, terms = self.damping.multiplied(factor), self.terms
        apart = not damping.viscous and damping.uniform_loss is not None
        if apart and (self.modes is not None or terms.inertial <= LARGEST_BY_MODES):
            return self._by_modes
        if not apart and 2 * terms.inertial + terms.creeping <= LARGEST_BY_STATES:
            return ByStates.of(states_of(terms, self._undamped, damping))
        return BySparse.of(terms, damping)

    @cached_property
    def undamped_modes(self) -> Modes:
        """All undamped modes."""
        return self.modes if self.modes is not None else find_modes(self.assembly.pencil())

    @cached_property
    def _by_modes(self) -> ByModes:
        return ByModes.of(self.assembly, self.terms, self.undamped_modes)

    @cached_property
    def _undamped(self) -> Undamped:
        return undamped_part(self.terms)


@dataclass(frozen=True, slots=True, eq=False)
class Damped:
    """Solves for steady motion with one damping.

    Parameters
    ----------
    dynamics : Dynamics
    damping : Damping
    route : ByModes, ByStates or BySparse
    """

    dynamics: Dynamics
    damping: Damping
    route: ByModes | ByStates | BySparse

    @property
    def method(self) -> str:
        """In words."""
        if isinstance(self.route, ByModes):
            return "superposed undamped modes, all of them, and the static give of massless joints"
        if isinstance(self.route, ByStates):
            return self.route.method
        return "sparse factorization at every frequency"

    @property
    def by_factors(self) -> bool:
        """Whether every frequency costs a factorization, and resonances are not known."""
        return isinstance(self.route, BySparse)

    def solve(self, omega: Array, load: Load) -> SteadyMotion:
        """Return the motion (N, w) at angular frequencies (w,) above zero, per unit of the load."""
        w = np.asarray(omega, dtype=float)
        if w.ndim != 1 or not np.all(np.isfinite(w) & (w > 0)):
            raise InputError(
                "omega: steady motion is computed at frequencies above zero; a speed of 0 has none."
            )
        if isinstance(self.route, ByModes):
            return self.route.solve(w, load, self.damping)
        return self.route.solve(w, load)

    def batches(self, count: int) -> Iterator[slice]:
        """Cut so many frequencies into pieces whose motions fit into memory."""
        step = max(1, CHUNK_NUMBERS // max(self.dynamics.size, 1))
        for start in range(0, count, step):
            yield slice(start, min(start + step, count))

    def resonances(self) -> tuple[Array, Array, npt.NDArray[np.bool_]]:
        """Return natural frequencies (r,) and half-widths of their peaks (r,), rad/s, and which are undamped.

        Where a peak may be, and how wide; of a model too large for roots, nothing.
        """
        if isinstance(self.route, ByModes):
            modes = self.route.modes
            values = modes.eigenvalues[modes.elastic]
            rates = self.damping.modal_rates(values) + (self.damping.uniform_loss or 0.0) * np.sqrt(values)
            return np.sqrt(values), rates / 2, rates == 0
        if isinstance(self.route, ByStates):
            roots, undamped = self.route.roots, self.route.undamped
            turning = roots.imag > 0
            return np.abs(roots[turning]), np.maximum(-roots[turning].real, 0.0), undamped[turning]
        return np.zeros(0), np.zeros(0), np.zeros(0, dtype=bool)

    def backward_error(self, omega: Array, load: Load, motion: SteadyMotion) -> Array:
        """Return (w,) how well the motion satisfies the equations: ||D q - f|| / || |D| |q| + |f| ||.

        Rotations are divided by their radius of gyration. Formed from the terms, independent of the route;
        zero where something is infinite.
        """
        terms, q = self.dynamics.terms, motion.coordinates
        right = load.steady[:, None] + (0 if load.rate is None else 1j * omega * load.rate[:, None])
        base = load.steady[:, None] if load.based else 0.0
        stiffness = (terms.stiffness * (1 + 1j * self.damping.losses))[:, None]
        dashpots = (self.damping.times * terms.damping)[:, None]
        elastic = product(terms.stretching.T, stiffness * product(terms.stretching, q))
        inert, heavy = np.zeros_like(q), slice(0, terms.inertial)
        inert[heavy] = product(terms.mass, q[heavy])
        left = elastic - omega**2 * inert
        left += 1j * omega * product(terms.resisting.T, dashpots * product(terms.resisting, q))
        left += 1j * omega * self.on_stiffness(omega) * (elastic - base)
        left[heavy] += 1j * omega * product(terms.mass, self.on_mass(load, omega, q)[heavy])
        stretched = product(abs(terms.stretching), np.abs(q))
        size = (
            np.abs(product(abs(terms.stretching).T, np.abs(stiffness) * stretched))
            + omega**2 * np.abs(inert)
            + np.abs(right)
        )
        weight = 1 / terms.scale[:, None]
        worst = np.linalg.norm(weight * (left - right), axis=0)
        found: Array = worst / np.maximum(np.linalg.norm(weight * size, axis=0), np.finfo(float).tiny)
        return np.where(motion.unbounded, 0.0, found)

    def _follows(self, load: Load) -> ComplexArray:
        """Return q_s with K q_s = f: how the model follows its base when it moves slowly (N,)."""
        if isinstance(self.route, ByModes):
            return self.route.follows(load, self.damping.uniform_loss or 0.0)
        if isinstance(self.route, BySparse):
            followed = self.route.follows(load)
            return followed if followed is not None else np.zeros_like(load.steady)
        return np.zeros_like(load.steady)

    def on_stiffness(self, omega: Array) -> Array:
        """Return b (w,), s, with the part b K of damping given for the whole model.

        beta of proportional damping; zeta / w where a large model's ratio is taken as i zeta (K + w^2 M).
        """
        if self.damping.kind == RATIO and isinstance(self.route, BySparse):
            return self.damping.ratio / omega
        return np.full(omega.shape, self.damping.beta)

    def on_mass(self, push: Load | Push, omega: Array, motion: ComplexArray) -> ComplexArray:
        """Return a (N, w) with the part M a of damping given for the whole model times a motion (N, w).

        It acts on motion relative to a moving base.
        """
        damping, terms = self.damping, self.dynamics.terms
        if damping.own or damping.kind == NONE:
            return np.zeros_like(motion)
        moved = motion
        if push.based:
            load = push if isinstance(push, Load) else load_of(self.dynamics.assembly, terms, damping, push)
            moved = motion - self._follows(load)[:, None]
        if damping.kind == PROPORTIONAL:
            return damping.alpha * moved
        if isinstance(self.route, BySparse):
            return damping.ratio * omega * moved
        route = self.route
        if not isinstance(route, ByModes):
            raise NumericalError("A modal ratio needs modes.")
        rates = damping.modal_rates(route.modes.eigenvalues)[:, None]
        amounts = route.shapes[: terms.inertial].T @ (terms.mass @ moved[: terms.inertial])
        return np.asarray(route.shapes @ (rates * amounts))
