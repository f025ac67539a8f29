"""Balance of power in steady motion: what an excitation feeds in goes out through damping."""

import numpy as np
import numpy.typing as npt

from modalview.response.dynamic import Damped
from modalview.response.load import Push, product

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]


def power_fed(solver: Damped, push: Push, omega: Array, motion: ComplexArray) -> Array:
    """Return the mean power (w,) that a force of unit size feeds into a motion (N, w), W.

    Re(f^H x')/2 of a force; for a moving base see ``power_lost`` alone.
    """
    moved = product(solver.dynamics.terms.to_bodies, motion)
    fed: Array = -omega * np.imag(np.conj(push.bodies) @ moved) / 2
    return fed


def power_lost(solver: Damped, push: Push, omega: Array, motion: ComplexArray) -> Array:
    """Return the mean power (w,) that damping takes out of a motion (N, w), W.

    c |rate|^2 / 2 per dashpot, w eta k |stretch|^2 / 2 per spring with a loss factor, and q'^H C q' / 2 for
    damping given for the whole model. Of forces, not of base motion.
    """
    terms, damping = solver.dynamics.terms, solver.damping
    stretched = np.abs(product(terms.stretching, motion)) ** 2
    rates = omega**2 * np.abs(product(terms.resisting, motion)) ** 2
    lost = omega / 2 * ((terms.stiffness * damping.losses) @ stretched)
    lost = lost + (damping.times * terms.damping) @ rates / 2
    lost = lost + omega**2 / 2 * solver.on_stiffness(omega) * (terms.stiffness @ stretched)
    heavy = slice(0, terms.inertial)
    slowed = product(terms.mass, solver.on_mass(push, omega, motion)[heavy])
    on_mass: Array = omega**2 / 2 * np.real(np.sum(np.conj(motion[heavy]) * slowed, axis=0))
    return np.asarray(lost + on_mass, dtype=float)
