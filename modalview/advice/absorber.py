"""A tuned absorber as parts of the model: a mass on a spring of its own, with or without a damper.

Undamped it is tuned to the excitation and parts the mode there in two; damped, after Den Hartog, it keeps the
largest response of one mode low over all speeds.
"""

import math
from dataclasses import dataclass, replace
from typing import Final

from modalview.errors import InputError
from modalview.model.differences import Rewrite, checked_edit
from modalview.model.entries import decimal_of, point_of
from modalview.model.ids import free_id, ids_of
from modalview.model.parts import (
    FREEDOMS,
    Body,
    Damper,
    Drawn,
    End,
    InertiaTensor,
    Link,
    Model,
    Motion,
    Shaft,
    Spring,
)
from modalview.model.values import Tolerance, Value
from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.show import show

# Of the mass it works on, where none is chosen. Common practice is 5 to 15 %.
MASS_RATIO: Final = 0.10
LEAST_RATIO, LARGEST_RATIO = 0.001, 1.0
# How well an absorber can be made: its mass is weighed, its arm set by trial. Chosen, no source.
MASS_TOLERANCE, ARM_TOLERANCE = "1 %", "3 %"
DIGITS = 3
SOURCE = "tuned absorber"
# As drawn, m: size of the mass, and the length of its spring.
_SIZE, _GAP = (0.5, 0.2), 0.5
FATIGUE = "The arm of an absorber fatigues: retain its mass."


@dataclass(frozen=True, slots=True)
class Absorber:
    """What is to be added.

    Parameters
    ----------
    body : str
        Id of the body it sits on.
    direction : str
        A freedom of that body: "y"; "rz" in a shaft train.
    frequency_hz : float
        Undamped: of the excitation. Damped: of the mode whose response is to be kept low.
    mass_ratio : float
        Mass of the absorber over the mass it works on.
    damped : bool
    """

    body: str
    direction: str
    frequency_hz: float
    mass_ratio: float = MASS_RATIO
    damped: bool = False


@dataclass(frozen=True, slots=True)
class Tuning:
    """Mass, spring and dashpot of an absorber, SI (kg m2, N m/rad, N m s/rad in a shaft train).

    Parameters
    ----------
    mass, stiffness, damping : float
        Damping 0 without a dashpot.
    ratio : float
        Of the dashpot: damping over 2 sqrt(stiffness mass).
    largest_response : float or None
        Highest amplification of the static deflection at the best damping, by any frequency of an undamped
        single mode; None without a dashpot.
    """

    mass: float
    stiffness: float
    damping: float
    ratio: float
    largest_response: float | None


def tuning(mass_ratio: float, works_on: float, frequency_hz: float, *, damped: bool) -> Tuning:
    """Return the tuning of an absorber.

    Parameters
    ----------
    mass_ratio : float
        mu: mass of the absorber over ``works_on``.
    works_on : float
        Mass (or inertia) that the mode moves at the place of the absorber.
    frequency_hz : float
        Of the excitation without a dashpot; of the mode with one.
    damped : bool
        Undamped, k = m omega**2. Damped, the frequency is that of the mode over 1 + mu, the damping ratio of
        the absorber by itself sqrt(3 mu / (8 (1 + mu))), and the two fixed points lie at sqrt(1 + 2 / mu).

    References
    ----------
    J. P. Den Hartog, Mechanical Vibrations (1934), chapter on the damped vibration absorber; from memory.

    Examples
    --------
    >>> tuning(0.05, 2100.0, 1180 / 60, damped=False).stiffness.__round__(-4)
    1600000.0
    >>> round(tuning(0.1, 2100.0, 19.89, damped=True).ratio, 4)
    0.1846
    """
    mass = mass_ratio * works_on
    omega = 2 * math.pi * frequency_hz / (1 + mass_ratio if damped else 1.0)
    ratio = math.sqrt(3 * mass_ratio / (8 * (1 + mass_ratio))) if damped else 0.0
    return Tuning(
        mass=mass,
        stiffness=mass * omega**2,
        damping=2 * ratio * mass * omega,
        ratio=ratio,
        largest_response=math.sqrt(1 + 2 / mass_ratio) if damped else None,
    )


def directions(model: Model) -> tuple[str, ...]:
    """Return the directions an absorber can act along."""
    every = FREEDOMS[model.motion]
    return every if model.motion is Motion.SHAFT_TRAIN else tuple(one for one in every if one in "xyz")


def own_mass(model: Model, asked: Absorber) -> float:
    """Return the nominal mass, or in a shaft train the inertia, of the body an absorber sits on.

    Raises
    ------
    InputError
        There is no such body, it cannot move that way, it is massless, or the ratio is out of range.
    """
    body = _body(model, asked.body)
    label = body.name or body.id
    allowed = directions(model)
    if asked.direction not in allowed:
        raise InputError(
            f'an absorber acts along one of {", ".join(allowed)} here; found "{asked.direction}"'
        )
    if body.dof is not None and asked.direction not in body.dof:
        raise InputError(f"{label} is held still along {asked.direction}: an absorber there does nothing")
    if not LEAST_RATIO <= asked.mass_ratio <= LARGEST_RATIO:
        raise InputError(
            f"the mass ratio of an absorber is {LEAST_RATIO:.1%} to {LARGEST_RATIO:.0%}; "
            f"found {asked.mass_ratio:.3g}"
        )
    if not (asked.frequency_hz > 0 and math.isfinite(asked.frequency_hz)):
        raise InputError(f"an absorber is tuned to a frequency above zero; found {asked.frequency_hz:.4g} Hz")
    value = body.inertia if model.motion is Motion.SHAFT_TRAIN else body.mass
    if isinstance(value, InertiaTensor) or value is None or value.si <= 0:
        raise InputError(f"{label} has no mass that an absorber could be a share of: choose another body")
    return value.si


def absorber_edit(model: Model, asked: Absorber, tuned: Tuning, system: str = "SI") -> Rewrite:
    """Return the edit that adds an absorber: its mass, its spring and, damped, its dashpot.

    Parameters
    ----------
    model : Model
    asked : Absorber
        Checked by `own_mass`.
    tuned : Tuning
    system : str
        Units that the new values are written in, to three digits.

    Raises
    ------
    ModelFaultsError
        The parts would break a rule.
    """
    train = model.motion is Motion.SHAFT_TRAIN
    body = _body(model, asked.body)
    taken = set(ids_of(model))
    names = [free_id(stem, taken) for stem in ("ab", "ka", "ca")]
    mass_in, stiffness_in, damping_in = (
        (q.INERTIA, q.TORSIONAL_STIFFNESS, q.TORSIONAL_DAMPING) if train else (q.MASS, q.STIFFNESS, q.DAMPING)
    )
    mass, stiffness = _value(tuned.mass, mass_in, system), _value(tuned.stiffness, stiffness_in, system)
    new = _mass(model, body, asked, names[0], replace(mass, tolerance=Tolerance.symmetric(MASS_TOLERANCE)))
    arm = replace(stiffness, tolerance=Tolerance.symmetric(ARM_TOLERANCE))
    start, end = _end(model, new, asked, -1), _end(model, body, asked, +1)
    along = _along(model, asked)
    links: list[Link] = [
        Shaft(id=names[1], name="absorber arm", from_=start, to=end, stiffness=arm)
        if train
        else Spring(id=names[1], name="absorber arm", from_=start, to=end, stiffness=arm, direction=along)
    ]
    if tuned.damping > 0:
        damping = _value(tuned.damping, damping_in, system)
        links.append(
            Damper(id=names[2], name="absorber damper", from_=start, to=end, damping=damping, direction=along)
        )
    after = replace(model, bodies=(*model.bodies, new), links=(*model.links, *links))
    return checked_edit(model, after, f"Add absorber to {body.name or body.id}")


def _body(model: Model, name: str) -> Body:
    found = next((one for one in model.bodies if one.id == name), None)
    if found is None:
        known = ", ".join(one.id for one in model.bodies)
        raise InputError(f'there is no body "{name}" for an absorber to sit on; the model has {known}')
    return found


def _value(si: float, quantity: Quantity, system: str) -> Value:
    return replace(Value.typed(show(si, quantity, system, DIGITS), quantity), source=SOURCE, status="assumed")


def _along(model: Model, asked: Absorber) -> str | None:
    return asked.direction if model.motion in (Motion.PLANE, Motion.SPACE) else None


def _axis(model: Model, asked: Absorber) -> int:
    """Return along which coordinate it stands off from its body."""
    if model.motion is Motion.SINGLE_AXIS:
        return 1
    return 0 if model.motion is Motion.SHAFT_TRAIN else "xyz".index(asked.direction)


def _half(body: Body, axis: int, motion: Motion) -> float:
    """Return half of what a body is drawn with along a coordinate, m."""
    drawn = body.drawn
    upright = axis == (2 if motion is Motion.SPACE else 1)
    side = (drawn.height if upright else drawn.width) if drawn else None
    return side.si / 2 if side is not None else 0.0


def _mass(model: Model, body: Body, asked: Absorber, name: str, value: Value) -> Body:
    train, turns = model.motion is Motion.SHAFT_TRAIN, model.motion in (Motion.PLANE, Motion.SPACE)
    system, axis = model.units or "SI", _axis(model, asked)
    position = None
    if body.position is not None:
        place = [one.si for one in body.position]
        away = _half(body, axis, model.motion) + _GAP + _SIZE[1 if axis else 0] / 2
        place[axis] = float(decimal_of(place[axis] + away))
        if train:
            place[1] = float(decimal_of(place[1] + _half(body, 1, model.motion) + _GAP))
        position = point_of(place, system)
    width, height = point_of(_SIZE, system)
    return Body(
        id=name,
        name="absorber",
        mass=None if train else value,
        inertia=value if train else None,
        position=position,
        dof=(asked.direction,) if turns else None,
        drawn=Drawn(width=width, height=height, shape="disc" if train else None),
    )


def _end(model: Model, body: Body, asked: Absorber, side: int) -> End:
    """Return the end of the arm at the side of a body that faces the other, on the line of its motion."""
    axis = _axis(model, asked)
    half = _half(body, axis, model.motion)
    if model.motion is Motion.SHAFT_TRAIN or half == 0 or body.position is None:
        return End(body=body.id)
    offset = [0.0] * len(body.position)
    offset[axis] = side * half
    return End(body=body.id, offset=point_of(offset, model.units or "SI"))
