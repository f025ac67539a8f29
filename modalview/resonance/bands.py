"""The frequencies to be kept clear: machine speeds and orders, widened by their margins."""

import math
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from typing import Generic, TypeVar

from modalview.assembly.locks import speed_ratios
from modalview.errors import Fault, ModelFaultsError
from modalview.model.parts import Excitation, Machine, Margin, Model, SpeedRange
from modalview.model.values import Entry
from modalview.resonance.results import Band
from modalview.units.show import short

Number = TypeVar("Number", float, Fraction)
Typed = Entry | float | Fraction

RAD_PER_HZ = 2 * math.pi
# From here on four digits do not hold a whole number of Hz.
FOUR_DIGITS = 9999.5


def bands(model: Model) -> tuple[Band, ...]:
    """Return the avoidance band of every excitation of every machine, in the order of the file.

    Returns
    -------
    tuple of Band
        [p n1 (1 - margin below), p n2 (1 + margin above)] for order p of speeds n1 to n2; a speed
        tolerance widens n1 and n2 in the tolerance band; fixed frequencies are not widened. rad/s.

    Raises
    ------
    ModelFaultsError
        An order refers to a body that does not turn with the machine, or a margin is missing.

    Notes
    -----
    The reference of a margin is the excitation frequency (common practice, no source).
    """
    return tuple(
        _band(model, machine, excitation) for machine in model.machines for excitation in machine.excitations
    )


def _band(model: Model, machine: Machine, excitation: Excitation) -> Band:
    edges = edges_of(model, machine, excitation, _double)
    below, above = _margin(machine, excitation, edges.check)
    return Band(
        check=edges.check,
        machine=machine.id,
        excitation_id=excitation.id,
        label=excitation_label(excitation),
        order=excitation.order,
        excitation=edges.excitation,
        nominal=edges.nominal,
        tolerance=edges.tolerance,
        margin=(below.si, above.si),
    )


@dataclass(frozen=True, slots=True)
class Edges(Generic[Number]):
    """Ends of one band: the excitation itself, its band at nominal speed, and over the speed's tolerance."""

    check: str
    excitation: tuple[Number, Number]
    nominal: tuple[Number, Number]
    tolerance: tuple[Number, Number]


def _double(value: Typed) -> float:
    return value.si if isinstance(value, Entry) else float(value)


def edges_of(
    model: Model, machine: Machine, excitation: Excitation, number: Callable[[Typed], Number]
) -> Edges[Number]:
    """Return the ends of an excitation's band in the numbers that ``number`` makes of what was typed."""
    check = f"{machine.id}/{excitation.id}"
    below, above = (number(side) for side in _margin(machine, excitation, check))
    if excitation.frequency is not None:
        low = high = number(excitation.frequency)
        slowest, fastest = low, high
    else:
        order = number(abs(_ratio(model, machine, excitation, check))) * number(excitation.order or 0.0)
        slow, fast = (number(speed) for speed in _speeds(machine, check))
        tolerance = number(machine.speed_tolerance) if machine.speed_tolerance else number(0.0)
        low, high = order * slow, order * fast
        slowest, fastest = low * (1 - tolerance), high * (1 + tolerance)
    return Edges(
        check=check,
        excitation=(low, high),
        nominal=(low * (1 - below), high * (1 + above)),
        tolerance=(slowest * (1 - below), fastest * (1 + above)),
    )


def excitation_label(excitation: Excitation) -> str:
    """Return a short label: "1×", "7× vane pass", "100 Hz line"."""
    if excitation.frequency is not None:
        frequency = excitation.frequency.si / RAD_PER_HZ
        head = f"{short(frequency, 4)} Hz" if frequency < FOUR_DIGITS else f"{short(round(frequency))} Hz"
    else:
        head = f"{short(excitation.order or 0.0)}×"
    return f"{head} {excitation.name}" if excitation.name else head


def _margin(machine: Machine, excitation: Excitation, check: str) -> tuple[Entry, Entry]:
    margin = excitation.margin if excitation.margin is not None else machine.margin
    if margin is None:
        raise ModelFaultsError(
            (Fault(check, "no margin is given; there is no default, state one such as 15 %"),)
        )
    if isinstance(margin, Margin):
        return margin.below, margin.above
    return margin, margin


def _speeds(machine: Machine, check: str) -> tuple[Entry, Entry]:
    if machine.speed is None:
        raise ModelFaultsError((Fault(check, "an order needs the speed of its machine"),))
    if isinstance(machine.speed, SpeedRange):
        return machine.speed.from_, machine.speed.to
    return machine.speed, machine.speed


def _ratio(model: Model, machine: Machine, excitation: Excitation, check: str) -> Fraction:
    """Return how fast the body an order belongs to turns against the machine's own."""
    if excitation.of is None or excitation.of == machine.on:
        return Fraction(1)
    ratios = speed_ratios(model)
    (train, own), (other_train, speed) = ratios[machine.on or ""], ratios[excitation.of]
    if train != other_train:
        reason = (
            f"{excitation.of} is joined to {machine.on} by no shaft or gear, so the speed of {machine.on} "
            "does not say how fast it turns; give the excitation as a frequency"
        )
        raise ModelFaultsError((Fault(check, reason),))
    return speed / own
