"""Springs and rods: what pulls and pushes, alone, side by side, one after another, or askew."""

import math

from modalview.handbook.asked import angle, asked, count, length, several, shear, young
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.validity import at_least, at_most, less, within
from modalview.units import quantities as q

RAO = "S. S. Rao, Mechanical Vibrations in SI Units, 2017"
FRONT = Source(f"{RAO}, inside front cover", "formula seen in the source")
STATICS = Source("equilibrium of forces", "closed form")


def coil(wire: float, mean: float, turns: float, shear: float) -> float:
    """Return the axial stiffness of a coil spring of round wire.

    >>> round(coil(0.02, 0.2, 5, 80e9), 6)
    40000.0
    """
    return shear * wire**4 / (8 * mean**3 * turns)


def rod(diameter: float, length: float, young: float) -> float:
    """Return the axial stiffness of a round rod."""
    return young * math.pi * diameter**2 / 4 / length


def bar(area: float, length: float, young: float) -> float:
    """Return the axial stiffness of a bar of any section."""
    return young * area / length


def tapered(first: float, second: float, length: float, young: float) -> float:
    """Return the axial stiffness of a conical rod."""
    return math.pi * young * first * second / (4 * length)


def series(stiffness: tuple[float, ...]) -> float:
    """Return the stiffness of springs one after another."""
    return 1 / sum(1 / one for one in stiffness)


def parallel(stiffness: tuple[float, ...]) -> float:
    """Return the stiffness of springs side by side."""
    return sum(stiffness)


def inclined_along(stiffness: float, angle: float, springs: float) -> float:
    """Return the stiffness of equal inclined springs along the direction the angle is from."""
    return springs * stiffness * math.cos(angle) ** 2


def inclined_across(stiffness: float, angle: float, springs: float) -> float:
    """Return the stiffness of equal springs in one plane across the direction the angle is from."""
    return springs * stiffness * math.sin(angle) ** 2


_SQUARE = "small motion; springs with little preload, whose turning adds no stiffness"
_ASKEW = (
    asked("stiffness", "stiffness of one spring k1", q.STIFFNESS, "300 kN/m"),
    angle("angle", "angle a between spring and direction", "30 deg"),
    count("springs", "number of equal springs N", "2", default="1"),
)

RECIPES = (
    Recipe(
        "coil-spring",
        "coil spring",
        "Axial stiffness of a helical spring of round wire.",
        (
            length("wire", "wire diameter d", "20 mm"),
            length("mean", "mean coil diameter D", "200 mm"),
            asked("turns", "active turns n", q.RATIO, "5"),
            shear(),
        ),
        q.STIFFNESS,
        coil,
        "k = G d^4/(8 D^3 n)",
        "D/d from 4 to 20, n from 2; D is the mean, not the outer diameter; resting turns do not count",
        Source(f"{RAO}, example 1.5", "formula seen in the source"),
        "10 %",
        (less("wire", "mean", "the wire must be thinner than the coil is wide"),),
        (
            within(lambda s: s["mean"] / s["wire"], 4, 20, "coil index D/d"),
            at_least(lambda s: s["turns"], 2, "the number of active turns"),
        ),
    ),
    Recipe(
        "rod",
        "round rod along its axis",
        "Stiffness of a rod, bolt or tie in tension and compression.",
        (length("diameter", "diameter d", "20 mm"), length("length", "length L", "1 m"), young()),
        q.STIFFNESS,
        rod,
        "k = pi E d^2/(4 L)",
        "L at least 2 d; no buckling, no give of the ends",
        FRONT,
        "5 %",
        doubts=(at_least(lambda s: s["length"] / s["diameter"], 2, "L/d"),),
    ),
    Recipe(
        "bar",
        "bar of any section along its axis",
        "Stiffness of a column, tie or leg in tension and compression.",
        (asked("area", "area A", q.AREA, "4200 mm2"), length("length", "length L", "1 m"), young()),
        q.STIFFNESS,
        bar,
        "k = E A/L",
        "length at least 2 sqrt(A); no buckling, no give of the ends",
        FRONT,
        "5 %",
        doubts=(at_least(lambda s: s["length"] / math.sqrt(s["area"]), 2, "L/sqrt(A)"),),
    ),
    Recipe(
        "rod-tapered",
        "tapered rod along its axis",
        "Stiffness of a conical round rod.",
        (
            length("first", "diameter at one end d1", "30 mm"),
            length("second", "diameter at the other end d2", "20 mm"),
            length("length", "length L", "1 m"),
            young(),
        ),
        q.STIFFNESS,
        tapered,
        "k = pi E d1 d2/(4 L)",
        "slender taper: |d1 - d2|/(2 L) at most 0.2",
        FRONT,
        "5 %",
        doubts=(at_most(lambda s: abs(s["first"] - s["second"]) / 2 / s["length"], 0.2, "|d1 - d2|/(2 L)"),),
    ),
    Recipe(
        "springs-in-series",
        "springs one after another",
        "One stiffness for springs that carry the same force.",
        (several("stiffness", "stiffnesses k1; k2; ...", q.STIFFNESS, "20 kN/mm; 5 kN/mm"),),
        q.STIFFNESS,
        series,
        "1/k = 1/k1 + 1/k2 + ...",
        "no mass between the springs that matters",
        STATICS,
        "10 %",
    ),
    Recipe(
        "springs-in-parallel",
        "springs side by side",
        "One stiffness for springs that share the same deflection.",
        (several("stiffness", "stiffnesses k1; k2; ...", q.STIFFNESS, "40 kN/m; 40 kN/m; 40 kN/m"),),
        q.STIFFNESS,
        parallel,
        "k = k1 + k2 + ...",
        "what joins them does not tilt and is much stiffer than they are",
        STATICS,
        "10 %",
    ),
    Recipe(
        "inclined-springs-along",
        "inclined springs, along the direction",
        "Stiffness of equal springs at an angle from the direction of motion, in that direction.",
        _ASKEW,
        q.STIFFNESS,
        inclined_along,
        "k = N k1 cos(a)^2",
        _SQUARE,
        STATICS,
        "10 %",
    ),
    Recipe(
        "inclined-springs-across",
        "inclined springs, across the direction",
        "Stiffness of equal springs in one plane, across the direction from which the angle is measured.",
        _ASKEW,
        q.STIFFNESS,
        inclined_across,
        "k = N k1 sin(a)^2",
        _SQUARE + "; every spring lies in the same plane",
        STATICS,
        "10 %",
    ),
)
