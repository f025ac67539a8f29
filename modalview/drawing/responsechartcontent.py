"""What the response chart and its table show, taken from a forced response."""

from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from modalview.drawing.primitives import Floats
from modalview.model.parts import Machine, Margin, Model, Motion
from modalview.study.response_results import (
    ACCELERATION,
    DISPLACEMENT,
    PEAK_TO_PEAK,
    QUANTITIES,
    VELOCITY,
    Curve,
    ForceCurve,
    MachineResponse,
    ResponseResult,
)

FORCE = "force peak"
SHOWN = (*QUANTITIES, FORCE)
SUM = "all, summed"

# (per SI, unit with rms or peak) of a quantity in each system; then of what turns.
_UNITS: dict[str, dict[str, tuple[float, str]]] = {
    "SI": {
        DISPLACEMENT: (1e6, "um peak"),
        PEAK_TO_PEAK: (1e6, "um peak-to-peak"),
        VELOCITY: (1e3, "mm/s rms"),
        ACCELERATION: (1.0, "m/s2 rms"),
    },
    "mm-t": {
        DISPLACEMENT: (1e3, "mm peak"),
        PEAK_TO_PEAK: (1e3, "mm peak-to-peak"),
        VELOCITY: (1e3, "mm/s rms"),
        ACCELERATION: (1e3, "mm/s2 rms"),
    },
    "inch-pound": {
        DISPLACEMENT: (1e3 / 0.0254, "mil peak"),
        PEAK_TO_PEAK: (1e3 / 0.0254, "mil peak-to-peak"),
        VELOCITY: (1 / 0.0254, "in/s rms"),
        ACCELERATION: (1 / 0.0254, "in/s2 rms"),
    },
}
_TURNING: dict[str, tuple[float, str]] = {
    DISPLACEMENT: (1e3, "mrad peak"),
    PEAK_TO_PEAK: (1e3, "mrad peak-to-peak"),
    VELOCITY: (1.0, "rad/s rms"),
    ACCELERATION: (1.0, "rad/s2 rms"),
}
# One pound-force is 4.4482216152605 N exactly.
_FORCES = {"SI": (1.0, 1.0), "mm-t": (1.0, 1e3), "inch-pound": (1 / 4.4482216152605, 12 / 1.3558179483314004)}
_FORCE_UNITS = {"SI": ("N", "N m"), "mm-t": ("N", "N mm"), "inch-pound": ("lbf", "lbf in")}


@dataclass(frozen=True, slots=True)
class Choice:
    """What is looked at.

    Parameters
    ----------
    machine : str
        Id.
    place : str
        Id of a watch, or of a link or support where the quantity is a force.
    quantity : str
        Of SHOWN.
    system : str
        Of units.
    """

    machine: str
    place: str
    quantity: str = VELOCITY
    system: str = "SI"


@dataclass(frozen=True, slots=True, eq=False)
class Series:
    """One curve.

    Parameters
    ----------
    label : str
    values : array (s,)
        In the unit shown; infinite where nothing damps a resonance.
    total : bool
        Whether it is the sum, or the only one.
    """

    label: str
    values: Floats
    total: bool


@dataclass(frozen=True, slots=True)
class PeakMark:
    """A maximum of the sum, or of the only curve.

    Parameters
    ----------
    rpm, value : float
    half_power_rpm : pair of float or None
    """

    rpm: float
    value: float
    half_power_rpm: tuple[float | None, float | None] = (None, None)


@dataclass(frozen=True, slots=True)
class LimitMark:
    """A limit of the user's own."""

    label: str
    value: float
    exceeded: bool


@dataclass(frozen=True, slots=True, eq=False)
class ResponseContent:
    """A response chart.

    Parameters
    ----------
    place, quantity, unit : str
        "motor, y", "velocity", "mm/s rms".
    damping : str
        Which damping was used, in words.
    speeds_rpm : array (s,)
    series : tuple of Series
        Each excitation, then the sum where there are several.
    band : pair of arrays (s,) or None
        The sum with half and with double the damping.
    peaks : tuple of PeakMark
    limits : tuple of LimitMark
    running_rpm : pair of float
    margin : pair of float
        Widest margin wanted below and above, as a share.
    barred_rpm : tuple of pairs
        Ranges barred by the user.
    """

    place: str
    quantity: str
    unit: str
    damping: str
    speeds_rpm: Floats
    series: tuple[Series, ...]
    band: tuple[Floats, Floats] | None
    peaks: tuple[PeakMark, ...]
    limits: tuple[LimitMark, ...]
    running_rpm: tuple[float, float]
    margin: tuple[float, float] = (0.0, 0.0)
    barred_rpm: tuple[tuple[float, float], ...] = ()

    @property
    def total(self) -> Series:
        """The sum, or the only curve."""
        return self.series[-1]


def unit_of(model: Model, quantity: str, system: str, force_unit: str = "N") -> tuple[float, str]:
    """Return how many shown units one of SI is, and the unit with rms or peak.

    >>> unit_of(Model(), VELOCITY, "SI")
    (1000.0, 'mm/s rms')
    """
    if quantity == FORCE:
        column = 0 if force_unit == "N" else 1
        return _FORCES[system][column], f"{_FORCE_UNITS[system][column]} peak"
    if model.motion is Motion.SHAFT_TRAIN:
        return _TURNING[quantity]
    return _UNITS[system][quantity]


def quantity_name(quantity: str, model: Model) -> str:
    """Return a quantity as it is offered: "velocity, mm/s rms" goes on from here.

    >>> quantity_name("velocity rms", Model()), quantity_name("displacement peak", Model())
    ('velocity', 'displacement')
    """
    word = quantity.split(" ", maxsplit=1)[0]
    turning = {"displacement": "twist", "velocity": "speed of twist", "acceleration": "acceleration of twist"}
    return turning.get(word, "torque") if model.motion is Motion.SHAFT_TRAIN else word


def machine_of(result: ResponseResult, machine: str) -> MachineResponse | None:
    """Return the response of a machine, or None where it has none."""
    return next((one for one in result.machines if one.machine == machine), None)


def response_content(result: ResponseResult, choice: Choice) -> ResponseContent | None:
    """Take what a chart shows; None where nothing runs over speeds, or the place is not known.

    Parameters
    ----------
    result : ResponseResult
    choice : Choice
    """
    found = machine_of(result, choice.machine)
    if found is None or found.running_rpm is None or not len(found.speeds_rpm):
        return None
    model = result.request.model
    content = (
        _of_force(found, choice, model) if choice.quantity == FORCE else _of_motion(found, choice, model)
    )
    machine = next((one for one in model.machines if one.id == choice.machine), None)
    if content is None or machine is None:
        return content
    return replace(
        content,
        damping=result.damping.sentence,
        margin=widest_margin(machine),
        barred_rpm=tuple((_rpm(one.from_.si), _rpm(one.to.si)) for one in machine.barred_ranges),
    )


def _rpm(si: float) -> float:
    return float(f"{si * 30 / np.pi:.12g}")


def widest_margin(machine: Machine) -> tuple[float, float]:
    """Return the widest margin of a machine's orders below and above, as a share."""
    given = [one.margin if one.margin is not None else machine.margin for one in machine.excitations]
    pairs = [
        (one.below.si, one.above.si) if isinstance(one, Margin) else (one.si, one.si)
        for one in given
        if one is not None
    ]
    return max((a for a, _ in pairs), default=0.0), max((b for _, b in pairs), default=0.0)


def _of_motion(found: MachineResponse, choice: Choice, model: Model) -> ResponseContent | None:
    curves = [one for one in found.curves if one.watch == choice.place]
    watch = next((one for one in found.watches if one.id == choice.place), None)
    if not curves or watch is None:
        return None
    per, unit = unit_of(model, choice.quantity, choice.system)
    labels = {one.id: one.label for one in found.drivers}
    last = curves[-1]
    return ResponseContent(
        place=watch.label,
        quantity=quantity_name(choice.quantity, model),
        unit=unit,
        damping="",
        speeds_rpm=found.speeds_rpm,
        series=tuple(
            Series(
                labels.get(one.excitation or "", SUM),
                per * one.nominal.values(choice.quantity),
                total=one is last,
            )
            for one in curves
        ),
        band=_band(last, choice.quantity, per),
        peaks=_peaks(last, choice.quantity, per),
        limits=tuple(
            LimitMark(f"{one.label}: {one.text}", per * one.value, one.exceeded)
            for one in found.limits
            if one.watch == choice.place and one.quantity == choice.quantity
        ),
        running_rpm=found.running_rpm or (0.0, 0.0),
    )


def _band(curve: Curve, quantity: str, per: float) -> tuple[Floats, Floats] | None:
    if curve.half is None or curve.double is None:
        return None
    return per * curve.half.values(quantity), per * curve.double.values(quantity)


def _peaks(curve: Curve, quantity: str, per: float) -> tuple[PeakMark, ...]:
    times = 2.0 if quantity == PEAK_TO_PEAK else 1.0
    wanted = DISPLACEMENT if quantity == PEAK_TO_PEAK else quantity
    return tuple(
        PeakMark(one.speed_rpm, times * per * one.value, one.half_power_rpm)
        for one in curve.peaks
        if one.quantity == wanted
    )


def _of_force(found: MachineResponse, choice: Choice, model: Model) -> ResponseContent | None:
    curves = [one for one in found.forces if _place_of(one) == choice.place]
    if not curves:
        return None
    per, unit = unit_of(model, FORCE, choice.system, curves[0].unit)
    labels = {one.id: one.label for one in found.drivers}
    total = next((one for one in curves if one.excitation is None), curves[-1])
    ordered = [*(one for one in curves if one is not total), total]
    return ResponseContent(
        place=total.label,
        quantity="moment" if total.unit != "N" else "force",
        unit=unit,
        damping="",
        speeds_rpm=found.speeds_rpm,
        series=tuple(
            Series(labels.get(one.excitation or "", SUM), per * one.values, total=one is total)
            for one in ordered
        ),
        band=None,
        peaks=tuple(PeakMark(rpm, value) for rpm, value in _tops(found.speeds_rpm, per * total.values)),
        limits=(),
        running_rpm=found.running_rpm or (0.0, 0.0),
    )


def _tops(speeds: Floats, values: Floats) -> Iterable[tuple[float, float]]:
    """Yield the inner maxima of a curve."""
    inner = np.flatnonzero((values[1:-1] > values[:-2]) & (values[1:-1] >= values[2:])) + 1
    return ((float(speeds[at]), float(values[at])) for at in inner)


def _place_of(one: ForceCurve) -> str:
    return f"{one.part} {one.unit}"


def force_places(found: MachineResponse) -> tuple[tuple[str, str], ...]:
    """Return what forces are known of: (place of a Choice, label)."""
    names = {
        _place_of(one): f"{one.label}, {'moment' if one.unit != 'N' else 'force'}" for one in found.forces
    }
    return tuple(names.items())
