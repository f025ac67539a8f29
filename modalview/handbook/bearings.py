"""Orders of rolling bearings, counted on the shaft that turns the inner ring; the outer ring stands still."""

import math

from modalview.handbook.asked import angle, count, length
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.validity import less, within
from modalview.units import quantities as q


def _share(ball: float, pitch: float, angle: float) -> float:
    return ball / pitch * math.cos(angle)


def cage(ball: float, pitch: float, angle: float) -> float:
    """Return the order of the cage."""
    return (1 - _share(ball, pitch, angle)) / 2


def outer(elements: float, ball: float, pitch: float, angle: float) -> float:
    """Return the order at which balls pass a point of the outer race."""
    return elements * cage(ball, pitch, angle)


def inner(elements: float, ball: float, pitch: float, angle: float) -> float:
    """Return the order at which balls pass a point of the inner race."""
    return elements * (1 + _share(ball, pitch, angle)) / 2


def spin(ball: float, pitch: float, angle: float) -> float:
    """Return the order of a ball's own turning."""
    return pitch / (2 * ball) * (1 - _share(ball, pitch, angle) ** 2)


def spin_strikes(ball: float, pitch: float, angle: float) -> float:
    """Return the order at which a spot on a ball strikes the races: twice per turn of the ball."""
    return 2 * spin(ball, pitch, angle)


_ELEMENTS = count("elements", "number of balls or rollers z", "8", low=3)
_KINEMATIC = (
    length("ball", "diameter of a ball or roller d", "10 mm"),
    length("pitch", "pitch diameter Dp", "50 mm"),
    angle("angle", "contact angle a", "0 deg", default="0 deg"),
)
_HARRIS = Source("T. A. Harris, Rolling Bearing Analysis (kinematics)", "from memory")
_ROLLING = "outer ring still, pure rolling: real ones slide by 1 to 2 %; the maker's figures go before"
_FITS = (less("ball", "pitch", "a ball must be smaller than the pitch diameter"),)
_USUAL = (within(lambda s: s["ball"] / s["pitch"], 0.02, 0.5, "d/Dp"),)

RECIPES = tuple(
    Recipe(
        name,
        title,
        sentence,
        asks,
        q.RATIO,
        compute,
        formula,
        _ROLLING,
        _HARRIS,
        "2 %",
        _FITS,
        _USUAL,
        written="order",
    )
    for name, title, sentence, asks, compute, formula in (
        (
            "bearing-cage",
            "bearing, cage",
            "Order of the turning cage.",
            _KINEMATIC,
            cage,
            "order = (1 - g)/2, g = d cos(a)/Dp",
        ),
        (
            "bearing-outer",
            "bearing, outer race",
            "Order at which rolling elements pass a spot of the outer race.",
            (_ELEMENTS, *_KINEMATIC),
            outer,
            "order = z (1 - g)/2, g = d cos(a)/Dp",
        ),
        (
            "bearing-inner",
            "bearing, inner race",
            "Order at which rolling elements pass a spot of the inner race.",
            (_ELEMENTS, *_KINEMATIC),
            inner,
            "order = z (1 + g)/2, g = d cos(a)/Dp",
        ),
        (
            "bearing-spin",
            "bearing, turning of a ball",
            "Order of the turning of a rolling element.",
            _KINEMATIC,
            spin,
            "order = Dp/(2 d) (1 - g^2), g = d cos(a)/Dp",
        ),
        (
            "bearing-ball-strikes",
            "bearing, spot on a ball",
            "Order at which a spot on a rolling element strikes both races: what is heard.",
            _KINEMATIC,
            spin_strikes,
            "order = Dp/d (1 - g^2), g = d cos(a)/Dp",
        ),
    )
)
