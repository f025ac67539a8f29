"""How strong an excitation is at a machine speed, and at which frequency it acts."""

import math
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
import numpy.typing as npt

from modalview.assembly.locks import speed_ratios
from modalview.errors import Fault, ModelFaultsError
from modalview.model.parts import Excitation, Machine, Magnitude, Model, Motion, SpeedRange
from modalview.units import quantities as q
from modalview.units.show import show

Array = npt.NDArray[np.float64]

FORCE, TORQUE, UNBALANCE, MOTION = "force", "torque", "unbalance", "motion"
RAD_PER_RPM = math.pi / 30


@dataclass(frozen=True, slots=True)
class Strength:
    """Size and frequency of one excitation.

    Parameters
    ----------
    id : str
        "machine id/excitation id".
    kind : str
        "force", "torque", "unbalance" or "motion" (of a support).
    size : float
        Peak: N, N m, kg m or m.
    ratio : float
        Excitation frequency over machine speed: order times |rotation ratio|; 0 for a fixed frequency.
    fixed : float or None
        Fixed frequency, rad/s: it does not vary with the speed.
    sentence : str
        Where the size comes from, with its numbers.
    """

    id: str
    kind: str
    size: float
    ratio: float
    fixed: float | None
    sentence: str

    def omega(self, speed: Array) -> Array:
        """Return the excitation frequency (s,) at machine speeds (s,), both rad/s."""
        if self.fixed is not None:
            return np.full(np.shape(speed), self.fixed)
        found: Array = self.ratio * np.asarray(speed, dtype=float)
        return found

    def amplitude(self, omega: Array) -> Array:
        """Return the peak force, torque or motion (w,) at excitation frequencies (w,), rad/s.

        An unbalance U gives U w^2 with the frequency of its own order: what is out of balance turns with it.
        """
        w = np.asarray(omega, dtype=float)
        found: Array = self.size * w**2 if self.kind == UNBALANCE else np.full(w.shape, self.size)
        return found


def strength(model: Model, machine: Machine, excitation: Excitation) -> Strength:
    """Return how strong an excitation is.

    Raises
    ------
    ModelFaultsError
        Names what is missing: a size, a point, a direction, the rotor's mass, the speed, the body an order
        belongs to; or says why a kind of size has no meaning there.

    Notes
    -----
    A balance grade G gives the unbalance U = G m / Omega with the rotor's mass m and its service speed Omega,
    the machine's highest speed (times the ratio of the body the order belongs to) unless typed.

    References
    ----------
    ISO 21940-11: Mechanical vibration, rotor balancing, procedures and tolerances (grade, from memory).
    """
    place = f"{machine.id}/{excitation.id}"
    given = excitation.magnitude
    if given is None:
        raise _fault(place, "its size is not given; give a force, torque, unbalance, grade or motion")
    if excitation.at is None:
        raise _fault(place, "its point is not given; say at which body it acts")
    turning = _rotation_ratio(model, machine, excitation, place)
    kind, size, sentence = _size(given, machine, place, abs(turning))
    _require_sense(model, excitation, kind, place)
    if excitation.frequency is not None:
        return Strength(place, kind, size, 0.0, excitation.frequency.si, sentence)
    if excitation.order is None:
        raise _fault(place, "it has neither an order of the speed nor a fixed frequency; give one of them")
    if machine.speed is None:
        raise _fault(place, "an order needs the speed of its machine; give the machine a speed")
    return Strength(place, kind, size, excitation.order * abs(float(turning)), None, sentence)


def running_speeds(machine: Machine) -> tuple[float, float] | None:
    """Return the lowest and the highest speed of a machine, rad/s; None without a speed."""
    if machine.speed is None:
        return None
    if isinstance(machine.speed, SpeedRange):
        return machine.speed.from_.si, machine.speed.to.si
    return machine.speed.si, machine.speed.si


def _fault(place: str, reason: str) -> ModelFaultsError:
    return ModelFaultsError((Fault(place, reason),))


def _size(given: Magnitude, machine: Machine, place: str, turning: Fraction) -> tuple[str, float, str]:
    """Return kind, size in SI, and where the size comes from."""
    if given.grade is not None:
        return _graded(given, machine, place, turning)
    if given.unbalance is not None:
        return UNBALANCE, given.unbalance.si, f"unbalance {given.unbalance.text}"
    if given.torque is not None:
        return TORQUE, given.torque.si, f"torque {given.torque.text}"
    if given.motion is not None:
        return MOTION, given.motion.si, f"motion {given.motion.text} of the support"
    if given.force is not None:
        return FORCE, given.force.si, f"force {given.force.text}"
    raise _fault(place, "its size is empty; give a force, torque, unbalance, grade or motion")


def _graded(given: Magnitude, machine: Machine, place: str, turning: Fraction) -> tuple[str, float, str]:
    grade, mass = given.grade, given.rotor_mass
    if grade is None or mass is None:
        raise _fault(place, "a balance grade needs the mass of the rotor; give rotor_mass")
    speeds = running_speeds(machine)
    if given.service_speed is not None:
        service = given.service_speed.si
    elif speeds is not None:
        service = speeds[1] * float(turning)
    else:
        raise _fault(place, "a balance grade needs a service speed, and the machine has no speed")
    if service <= 0:
        raise _fault(place, "the service speed of a balance grade must be above zero")
    size = grade.si * mass.si / service
    sentence = (
        f"unbalance {show(size, q.UNBALANCE)}: grade {grade.text}, rotor of {mass.text}, service speed "
        f"{show(service, q.SPEED)}"
    )
    return UNBALANCE, size, sentence


def _rotation_ratio(model: Model, machine: Machine, excitation: Excitation, place: str) -> Fraction:
    """Return how fast the body an order belongs to turns against the machine's own."""
    if excitation.order is None or excitation.of is None or excitation.of == machine.on:
        return Fraction(1)
    ratios = speed_ratios(model)
    if machine.on not in ratios or excitation.of not in ratios:
        raise _fault(place, f"{excitation.of} or the body whose speed the machine has is not in the model")
    (train, own), (other, speed) = ratios[machine.on], ratios[excitation.of]
    if train != other:
        raise _fault(
            place,
            f"{excitation.of} is joined to {machine.on} by no shaft or gear, so the speed of {machine.on} "
            "does not say how fast it turns; give the excitation as a frequency",
        )
    return speed / own


def _require_sense(model: Model, excitation: Excitation, kind: str, place: str) -> None:
    at, motion = excitation.at, model.motion
    on_support = at is not None and at.support is not None
    if kind == MOTION and not on_support:
        raise _fault(place, "a motion is imposed at a support; let it act at one")
    if kind != MOTION and on_support:
        raise _fault(place, f"a {kind} at a support moves nothing; let it act on a body, or give a motion")
    if motion is Motion.SINGLE_AXIS and kind == TORQUE:
        raise _fault(place, "a torque has no meaning in single axis, where nothing turns")
    if motion is Motion.SHAFT_TRAIN and kind in (FORCE, UNBALANCE):
        raise _fault(place, f"a {kind} has no meaning in a shaft train, which turns only; give a torque")
    if motion is Motion.SHAFT_TRAIN and kind == MOTION:
        raise _fault(place, "a motion of a support in m has no meaning in a shaft train, which turns only")
    if motion in (Motion.PLANE, Motion.SPACE) and excitation.direction is None:
        needs_none = kind == TORQUE and (motion is Motion.PLANE or excitation.axis is not None)
        if not needs_none:
            raise _fault(place, "its direction is not given")
