"""What is asked of a forced response, and what window, command line and report are given."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.model.parts import Direction, End, Model
from modalview.study.results import never

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

DISPLACEMENT, PEAK_TO_PEAK = "displacement peak", "displacement peak-to-peak"
VELOCITY, ACCELERATION = "velocity rms", "acceleration rms"
QUANTITIES = (DISPLACEMENT, PEAK_TO_PEAK, VELOCITY, ACCELERATION)


@dataclass(frozen=True, slots=True)
class Watch:
    """A point and a direction whose motion is looked at.

    Parameters
    ----------
    id : str
        Unique in a request.
    label : str
        As it is shown: "motor, y".
    at : End
        A point on a body.
    direction : Direction or None
        As typed; None: the larger axis of the ellipse that the point moves on.
    """

    id: str
    label: str
    at: End
    direction: Direction | None = None


@dataclass(frozen=True, slots=True)
class ResponseRequest:
    """What is to be computed; captures all its inputs.

    Parameters
    ----------
    model : Model
    number : int
        Of the request; results of an older number are dropped by who asked.
    machine : str or None
        Id of one machine; None: every machine.
    watches : tuple of Watch
        Empty: the points of the model's limits and of its excitations.
    speeds_rpm : tuple of float
        Further speeds at which the motion of the whole model is wanted; those of the machine always are.
    span_rpm : pair of float or None
        Speeds the curves run over; None: from a tenth of the lowest speed to 1.3 times the highest.
    cancelled : callable
        Asked between steps.
    progress : callable or None
        Told (what is done, share done 0..1).
    """

    model: Model
    number: int = 0
    machine: str | None = None
    watches: tuple[Watch, ...] = ()
    speeds_rpm: tuple[float, ...] = ()
    span_rpm: tuple[float, float] | None = None
    cancelled: Callable[[], bool] = never
    progress: Callable[[str, float], None] | None = None


@dataclass(frozen=True, slots=True)
class LeftOut:
    """An excitation, or a limit, that could not be computed, and why."""

    id: str
    reason: str


@dataclass(frozen=True, slots=True)
class ModeLoss:
    """Damping of one undamped mode by the parts it strains.

    Parameters
    ----------
    mode : int
        Its number, rigid-body modes included.
    frequency_hz : float
    loss_factor : float
        Sum of eta times strain energy share: approximate, it takes the undamped shape.
    ratio : float
        Half of it, the viscous ratio of the same height at resonance.
    """

    mode: int
    frequency_hz: float
    loss_factor: float
    ratio: float


@dataclass(frozen=True, slots=True)
class DampingUsed:
    """Which damping holds.

    Parameters
    ----------
    kind : str
        "dashpots", "loss factors", "dashpots and loss factors", "modal ratio", "proportional" or "none".
    sentence : str
        The same in words, with what was ignored.
    losses : tuple of ModeLoss
        Of every elastic mode, where a link has a loss factor; approximate.
    """

    kind: str
    sentence: str
    losses: tuple[ModeLoss, ...]


@dataclass(frozen=True, slots=True)
class Driver:
    """One excitation as it was taken.

    Parameters
    ----------
    id : str
        "machine id/excitation id".
    label : str
        "1× unbalance".
    hz_per_rpm : float
        Excitation frequency per speed; 0 for a fixed frequency.
    fixed_hz : float or None
        A fixed frequency does not vary with the speed.
    kind : str
        "force", "torque", "unbalance" or "motion" (a balance grade is an unbalance).
    size : float
        N, N m, kg m or m (peak).
    sentence : str
        Where the size comes from, with its numbers.
    """

    id: str
    label: str
    hz_per_rpm: float
    fixed_hz: float | None
    kind: str
    size: float
    sentence: str


@dataclass(frozen=True, slots=True, eq=False)
class Traces:
    """Motion at one point over the speeds of the curves.

    Parameters
    ----------
    displacement : array (s,)
        Peak; m, or rad in a shaft train. Infinite at an undamped resonance.
    velocity, acceleration : array (s,)
        rms; m/s and m/s2, or rad/s and rad/s2.
    """

    displacement: Array
    velocity: Array
    acceleration: Array

    def values(self, quantity: str) -> Array:
        """Return one of QUANTITIES over the speeds, SI."""
        if quantity == PEAK_TO_PEAK:
            doubled: Array = 2 * self.displacement
            return doubled
        found: Array = {
            DISPLACEMENT: self.displacement,
            VELOCITY: self.velocity,
            ACCELERATION: self.acceleration,
        }[quantity]
        return found


@dataclass(frozen=True, slots=True)
class Peak:
    """A maximum of a curve.

    Parameters
    ----------
    quantity : str
        Of QUANTITIES; peak-to-peak is left out, it peaks with the displacement.
    speed_rpm : float
        Its place, to 1e-6 of itself.
    value : float
        SI; infinite where nothing damps it.
    half_power_rpm : pair of float or None
        Where the curve falls to 1/sqrt 2 of it, below and above; None where it does not before its next
        minimum or the end of the curve.
    """

    quantity: str
    speed_rpm: float
    value: float
    half_power_rpm: tuple[float | None, float | None]


@dataclass(frozen=True, slots=True, eq=False)
class Curve:
    """Motion at one watch under one excitation, or the plain sum over all.

    Parameters
    ----------
    watch : str
        Id of a Watch.
    excitation : str or None
        Id of a Driver; None: the sum of the amplitudes of all excitations. Phases between orders are not
        known: the sum is never exceeded, and different frequencies add up to it only now and then.
    nominal : Traces
    half, double : Traces or None
        With half and with double the damping, as damping is never known well; None without damping.
    peaks : tuple of Peak
        Of the nominal curve, in the order of speed.
    """

    watch: str
    excitation: str | None
    nominal: Traces
    half: Traces | None
    double: Traces | None
    peaks: tuple[Peak, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Transmission:
    """What one excitation passes on to the supports, over the speeds of the curves.

    Parameters
    ----------
    excitation : str
    kind : str
        "force": N at the supports over N applied; "moment": N m at the supports, about the point of the
        torque, over N m applied; "motion": no such pair, each watch has its ratio (``ratios``).
    at_supports : array (s,)
        N or N m, peak; of the vector sum over all supports. Of a motion: the force at the supports that
        stand still and the moved one, N.
    ratio : array (s,) or None
        Transmissibility; None of a motion.
    ratios : tuple of (watch, array (s,))
        Of a motion: displacement at each watch over that of the support.
    """

    excitation: str
    kind: str
    at_supports: Array
    ratio: Array | None
    ratios: tuple[tuple[str, Array], ...]


@dataclass(frozen=True, slots=True, eq=False)
class ForceCurve:
    """Force or moment in one link or at one support, over the speeds of the curves.

    Parameters
    ----------
    part : str
        Id of a link or a support.
    label : str
    unit : str
        "N" or "N m".
    excitation : str or None
        None: the sum of the amplitudes.
    values : array (s,)
        Peak of the resultant (the larger axis of its ellipse).
    """

    part: str
    label: str
    unit: str
    excitation: str | None
    values: Array


@dataclass(frozen=True, slots=True)
class PartForce:
    """Dynamic force in one link, or at one support, at one speed.

    Parameters
    ----------
    part : str
        Id of the link or support.
    label : str
    force_n, moment_nm : float or None
        Peak of the resultant: of a link at its end ``to`` (and, where larger, ``from``: a gear, a beam).
        None: shared with other rigid links in a way that stiffness alone would tell.
    """

    part: str
    label: str
    force_n: float | None
    moment_nm: float | None


@dataclass(frozen=True, slots=True, eq=False)
class Steady:
    """The whole model under one excitation at one speed.

    Parameters
    ----------
    excitation : str
        Id of a Driver.
    speed_rpm : float or None
        None of a machine without a speed: a fixed frequency.
    frequency_hz : float
    infinite : bool
        Undamped and exactly at resonance: there is no steady motion, and the numbers are not given.
    applied : float
        N, N m or m, peak.
    motion : complex array (bodies, 6)
        x, y, z (m), rx, ry, rz (rad) of every body: the motion is the real part times exp(i w t). Zero where
        infinite.
    links, supports : tuple of PartForce
    transmissibility : float or None
        As in Transmission; None of a motion, or where infinite.
    isolation_percent : float or None
        100 (1 - transmissibility): below zero where it amplifies.
    """

    excitation: str
    speed_rpm: float | None
    frequency_hz: float
    infinite: bool
    applied: float
    motion: ComplexArray
    links: tuple[PartForce, ...]
    supports: tuple[PartForce, ...]
    transmissibility: float | None
    isolation_percent: float | None


@dataclass(frozen=True, slots=True)
class LimitCheck:
    """A limit of the model against the sum curve, over the speeds at which the machine runs.

    Parameters
    ----------
    limit : str
        Id.
    label : str
        Its name, or its id.
    watch : str
        Id of the Watch of its curve.
    quantity : str
    value : float
        The limit, SI.
    text : str
        As typed.
    worst, worst_rpm : float
        The largest over the machine's speeds, SI, and where; ``worst_rpm`` is None without a speed.
    worst_half, worst_double : float or None
        The largest with half and double damping.
    exceeded : bool
        With the damping as given.
    """

    limit: str
    label: str
    watch: str
    quantity: str
    value: float
    text: str
    worst: float
    worst_rpm: float | None
    worst_half: float | None
    worst_double: float | None
    exceeded: bool


@dataclass(frozen=True, slots=True, eq=False)
class MachineResponse:
    """The response to the excitations of one machine.

    Parameters
    ----------
    machine, label : str
    running_rpm : pair of float or None
        Its lowest and highest speed; None without a speed.
    drivers : tuple of Driver
    left_out : tuple of LeftOut
        Excitations without a size or a point, and why; limits that do not fit.
    speeds_rpm : array (s,)
        Ascending, dense about every peak; empty without a speed.
    watches : tuple of Watch
    curves : tuple of Curve
        Watch by watch: each excitation, then the sum where there are several.
    transmissions : tuple of Transmission
    forces : tuple of ForceCurve
        Of every link and support, in a model of not too many links.
    limits : tuple of LimitCheck
    states : tuple of Steady
        At the machine's speeds and those asked for, each excitation.
    """

    machine: str
    label: str
    running_rpm: tuple[float, float] | None
    drivers: tuple[Driver, ...]
    left_out: tuple[LeftOut, ...]
    speeds_rpm: Array
    watches: tuple[Watch, ...]
    curves: tuple[Curve, ...]
    transmissions: tuple[Transmission, ...]
    forces: tuple[ForceCurve, ...]
    limits: tuple[LimitCheck, ...]
    states: tuple[Steady, ...]

    def curve(self, watch: str, excitation: str | None = None) -> Curve:
        """Return the curve of a watch under an excitation; None: the sum, or the only one."""
        found = [one for one in self.curves if one.watch == watch]
        if excitation is None:
            return found[-1]
        return next(one for one in found if one.excitation == excitation)


@dataclass(frozen=True, slots=True, eq=False)
class ResponseResult:
    """The forced response of a model, with what it rests on.

    Parameters
    ----------
    request : ResponseRequest
    damping : DampingUsed
    machines : tuple of MachineResponse
        Those with at least one excitation that can be computed.
    left_out : tuple of LeftOut
        Excitations of all machines that could not, and why.
    evidence : tuple of str
        Method, residuals, balance of energy.
    notes : tuple of str
        What the numbers mean and what was ignored.
    worst_residual : float
        Largest backward error of a solve: ||D q - f|| / (||D|| ||q|| + ||f||), row by row.
    seconds : float
    """

    request: ResponseRequest
    damping: DampingUsed
    machines: tuple[MachineResponse, ...]
    left_out: tuple[LeftOut, ...]
    evidence: tuple[str, ...]
    notes: tuple[str, ...]
    worst_residual: float
    seconds: float
