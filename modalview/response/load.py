"""What pushes a model in a steady response: forces, or the motion of a support."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.assemble import Assembly
from modalview.assembly.dampedterms import DampedTerms
from modalview.assembly.loads import body_force, support_motion
from modalview.assembly.parameters import Case, values_at
from modalview.errors import Fault, ModelFaultsError
from modalview.model.parts import Excitation
from modalview.response.damping import Damping
from modalview.response.strength import MOTION, Strength

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# A force that does less than this share of its size on any motion of the model does nothing but rounding.
NOTHING = 1e-12


@dataclass(frozen=True, slots=True, eq=False)
class Push:
    """An excitation of unit size, before damping comes in.

    Parameters
    ----------
    strength : Strength
    bodies : complex array (bodies * freedoms,)
        Force on the freedoms of every body; zero for base motion.
    moved : complex array (s,)
        Motion of the supports; zero for a force.
    """

    strength: Strength
    bodies: ComplexArray
    moved: ComplexArray

    @property
    def based(self) -> bool:
        """Whether a support moves."""
        return self.strength.kind == MOTION


@dataclass(frozen=True, slots=True, eq=False)
class Load:
    """Right-hand side of unit size: steady + i w rate, in the coordinates of DampedTerms (N,).

    Parameters
    ----------
    steady : complex array (N,)
    rate : complex array (N,) or None
        From dashpots to a moving support.
    based : bool
        A support moves: damping of the whole model acts on the motion relative to it.
    """

    steady: ComplexArray
    rate: ComplexArray | None
    based: bool


def push_of(assembly: Assembly, terms: DampedTerms, excitation: Excitation, strength: Strength) -> Push:
    """Return where an excitation of unit size pushes.

    Raises
    ------
    ModelFaultsError
        It pushes a massless direction that nothing resists, or moves a support that carries nothing.
    """
    structure = assembly.structure
    supports = len(structure.stiffness.support_freedoms)
    none = np.zeros(terms.to_bodies.shape[0], dtype=complex)
    if strength.kind == MOTION:
        moved = support_motion(assembly, excitation)
        if moved is None:
            raise _fault(strength.id, "the direction of the motion is not given")
        if not _carries(assembly, moved):
            raise _fault(
                strength.id,
                f"the motion of {excitation.at.support if excitation.at else ''} moves nothing: no spring or "
                "dashpot stands on this support in this direction",
            )
        return Push(strength, none, moved)
    force = body_force(assembly.model, excitation)
    if force is None:
        raise _fault(strength.id, "the direction of its force, or the axis of its torque, is not given")
    size = float(np.abs(force).max(initial=0.0))
    if terms.idle.shape[1] and float(np.abs(product(terms.idle.T, force)).max()) > NOTHING * size:
        raise _fault(
            strength.id,
            "it pushes a massless joint in a direction that nothing resists: that would move without bound",
        )
    return Push(strength, force, np.zeros(supports, dtype=complex))


def load_of(assembly: Assembly, terms: DampedTerms, damping: Damping, push: Push) -> Load:
    """Return the right-hand side of a push with a damping.

    A support that moves by y pushes by -(sum k (1 + i eta) a g^T y + i w c d g^T y), with g the stretch per
    motion of the support.
    """
    steady = product(terms.to_bodies.T, push.bodies)
    if not push.based:
        return Load(steady, None, based=False)
    stretched = product(assembly.structure.stiffness.support_rows, push.moved)
    complex_stiffness = terms.stiffness * (1 + 1j * damping.losses)
    steady = steady - product(terms.stretching.T, complex_stiffness * stretched)
    resisted = product(support_resisting(assembly), push.moved)
    rate = -damping.times * product(terms.resisting.T, terms.damping * resisted)
    return Load(steady, rate if np.any(rate) else None, based=True)


def support_resisting(assembly: Assembly) -> sp.csr_array:
    """Return the stretch of every dashpot at work (l, s) per motion of the supports, as in DampedTerms."""
    structure = assembly.structure
    working = structure.damping.values(values_at(assembly.parameters, Case.NOMINAL)) > 0
    return sp.csr_array(structure.damping.support_rows[np.flatnonzero(working)])


def product(matrix: sp.csr_array | sp.csc_array, vector: npt.NDArray[np.inexact]) -> ComplexArray:
    """Return a sparse matrix times a vector or several, complex."""
    return np.asarray(matrix @ vector, dtype=complex)


def _carries(assembly: Assembly, moved: ComplexArray) -> bool:
    structure = assembly.structure
    stretched = np.concatenate(
        [product(structure.stiffness.support_rows, moved), product(support_resisting(assembly), moved)]
    )
    return bool(np.abs(stretched).max(initial=0.0) > NOTHING * float(np.abs(moved).max(initial=0.0)))


def _fault(place: str, reason: str) -> ModelFaultsError:
    return ModelFaultsError((Fault(place, reason),))
