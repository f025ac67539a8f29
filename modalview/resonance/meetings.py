"""At which machine speeds an order meets a mode: the crossings of a Campbell diagram.

W. Campbell (1924), Trans. ASME 46, 31-160: frequencies over speed, orders as rays through zero (from memory).
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from modalview.eigen.span import ModeSpan
from modalview.model.parts import Machine, Model
from modalview.model.values import Entry
from modalview.resonance.bands import bands

ONE = Entry("1 rad/s", 1.0)


@dataclass(frozen=True, slots=True)
class OrderLine:
    """One excitation over all speeds of its machine.

    Parameters
    ----------
    check : str
        "machine id/excitation id".
    label : str
        "7× vane pass".
    order : float or None
        As typed; None for a fixed frequency.
    rate : float
        Excitation frequency per machine speed: the order, times |rotation ratio| where it counts the turns of
        another body. 0 for a fixed frequency.
    fixed : float
        A fixed frequency, rad/s: a level line. 0 for an order.
    margin : pair of float
        Below and above, as a share of the excitation frequency.
    """

    check: str
    label: str
    order: float | None
    rate: float
    fixed: float
    margin: tuple[float, float]

    def at(self, speed: float) -> float:
        """Return the excitation frequency at a machine speed, both rad/s."""
        return self.rate * speed + self.fixed


@dataclass(frozen=True, slots=True)
class Meeting:
    """An order and a mode, and the machine speeds at which they meet; all rad/s.

    Parameters
    ----------
    check, label : str
        Of the order.
    mode : int
    speed : float
        At nominal values: the crossing itself.
    over_tolerance : pair of float
        Speeds at which the order is on the mode at some values within tolerance.
    within_margin : pair of float
        Speeds whose avoidance band holds the mode, at nominal values.
    reach : pair of float
        Speeds whose avoidance band holds the mode at some values within tolerance, that of the speed
        included: to be kept clear of.
    """

    check: str
    label: str
    mode: int
    speed: float
    over_tolerance: tuple[float, float]
    within_margin: tuple[float, float]
    reach: tuple[float, float]


def order_lines(model: Model, machine: Machine) -> tuple[OrderLine, ...]:
    """Return the lines of a machine's excitations, in the order of the file.

    Raises
    ------
    ModelFaultsError
        An order refers to a body that does not turn with the machine, or a margin is missing.
    """
    at_one = replace(machine, speed=ONE, speed_tolerance=None)
    return tuple(
        OrderLine(
            check=band.check,
            label=band.label,
            order=band.order,
            rate=band.excitation[0] if band.order is not None else 0.0,
            fixed=0.0 if band.order is not None else band.excitation[0],
            margin=band.margin,
        )
        for band in bands(replace(model, machines=(at_one,)))
    )


def meetings(
    lines: Sequence[OrderLine], modes: Sequence[ModeSpan], highest: float, speed_tolerance: float = 0.0
) -> tuple[Meeting, ...]:
    """Return every meeting of an order and a mode that reaches below a speed, by ascending speed.

    Parameters
    ----------
    lines : sequence of OrderLine
        Fixed frequencies meet a mode at every speed or at none: they are left out.
    modes : sequence of ModeSpan
        Elastic ones.
    highest : float, rad/s
    speed_tolerance : float
        Share by which the true speed may lie off the speed set.

    Notes
    -----
    A band [p n (1 - s_below), p n (1 + s_above)] holds a mode f where f/(p (1 + s_above)) <= n <=
    f/(p (1 - s_below)); over tolerances with the lowest f and the highest true speed n (1 + t), and the
    reverse.
    """
    found = [
        _meeting(line, mode, speed_tolerance) for line in lines if line.order is not None for mode in modes
    ]
    return tuple(sorted((one for one in found if one.reach[0] <= highest), key=lambda one: one.speed))


def _meeting(line: OrderLine, mode: ModeSpan, tolerance: float) -> Meeting:
    below, above = 1 - line.margin[0], 1 + line.margin[1]
    rate = line.rate
    return Meeting(
        check=line.check,
        label=line.label,
        mode=mode.number,
        speed=mode.nominal / rate,
        over_tolerance=(mode.low / (rate * (1 + tolerance)), mode.high / (rate * (1 - tolerance))),
        within_margin=(mode.nominal / (rate * above), mode.nominal / (rate * below)),
        reach=(mode.low / (rate * above * (1 + tolerance)), mode.high / (rate * below * (1 - tolerance))),
    )
