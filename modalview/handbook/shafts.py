"""Shafts in torsion: solid, hollow, stepped, in series, and seen through a gear."""

import math

from modalview.handbook.asked import asked, length, length_or_none, number, several, shear
from modalview.handbook.recipe import Check, Recipe, Source
from modalview.handbook.sizes import Sizes
from modalview.handbook.springs import RAO, STATICS, series
from modalview.handbook.validity import as_many, at_least, less
from modalview.units import quantities as q

TORSION = Source(f"{RAO}, example 1.6; Saint-Venant torsion of round sections", "formula seen in the source")
_SLENDER = "round section, length at least that of one diameter; keyways, hubs and shrink fits not counted"


def shaft(outer: float, inner: float, length: float, shear: float) -> float:
    """Return the torsional stiffness of a solid or hollow round shaft.

    >>> round(shaft(0.3, 0.2, 2.0, 80e9))
    25525440
    """
    return shear * math.pi * (outer**4 - inner**4) / 32 / length


def solid(diameter: float, length: float, shear: float) -> float:
    """Return the torsional stiffness of a solid round shaft."""
    return shaft(diameter, 0.0, length, shear)


def stepped(
    outer: tuple[float, ...], inner: tuple[float, ...], length: tuple[float, ...], shear: float
) -> float:
    """Return the torsional stiffness of pieces of shaft one after another."""
    return series(
        tuple(shaft(big, hole, long, shear) for big, hole, long in zip(outer, inner, length, strict=True))
    )


def torsion_series(stiffness: tuple[float, ...]) -> float:
    """Return the torsional stiffness of shafts and couplings one after another."""
    return series(stiffness)


def reflected_stiffness(stiffness: float, ratio: float) -> float:
    """Return a torsional stiffness as it is seen from the other side of a gear."""
    return stiffness * ratio**2


def lever(stiffness: float, radius: float) -> float:
    """Return the torsional stiffness of a spring that acts along the rim of a radius."""
    return stiffness * radius**2


def _holes(sizes: Sizes) -> str:
    pairs = zip(sizes["outer"], sizes["inner"], strict=False)
    return "" if all(hole < big for big, hole in pairs) else "every hole must be smaller than its shaft"


_HOLES: Check = _holes
_HOLE = less("inner", "outer", "the hole must be smaller than the shaft")

RECIPES = (
    Recipe(
        "shaft-solid",
        "solid shaft in torsion",
        "Torsional stiffness of a solid round shaft.",
        (length("diameter", "diameter D", "120 mm"), length("length", "length L", "900 mm"), shear()),
        q.TORSIONAL_STIFFNESS,
        solid,
        "k = G pi D^4/(32 L)",
        _SLENDER,
        TORSION,
        "5 %",
        doubts=(at_least(lambda s: s["length"] / s["diameter"], 1, "L/D"),),
    ),
    Recipe(
        "shaft-hollow",
        "hollow shaft in torsion",
        "Torsional stiffness of a round tube or bored shaft.",
        (
            length("outer", "outer diameter D", "300 mm"),
            length_or_none("inner", "inner diameter d", "200 mm"),
            length("length", "length L", "2 m"),
            shear(),
        ),
        q.TORSIONAL_STIFFNESS,
        shaft,
        "k = G pi (D^4 - d^4)/(32 L)",
        _SLENDER,
        TORSION,
        "5 %",
        (_HOLE,),
        (at_least(lambda s: s["length"] / s["outer"], 1, "L/D"),),
    ),
    Recipe(
        "shaft-stepped",
        "stepped shaft in torsion",
        "Torsional stiffness of pieces of different diameters one after another.",
        (
            several("outer", "outer diameter D of each piece", q.LENGTH, "300 mm; 250 mm"),
            several(
                "inner", "inner diameter d of each piece (0 mm: solid)", q.LENGTH, "200 mm; 150 mm", zero=True
            ),
            several("length", "length L of each piece", q.LENGTH, "2 m; 3 m"),
            shear(),
        ),
        q.TORSIONAL_STIFFNESS,
        stepped,
        "1/k = sum of 32 L/(G pi (D^4 - d^4))",
        _SLENDER
        + "; the step itself gives a little: lengthen the thin piece by about a tenth of its diameter",
        TORSION,
        "7 %",
        (as_many("outer", "inner", "length"), _HOLES),
        (
            at_least(
                lambda s: min(long / big for long, big in zip(s["length"], s["outer"], strict=True)),
                0.5,
                "the smallest L/D of a piece",
            ),
        ),
    ),
    Recipe(
        "torsion-in-series",
        "shafts and couplings one after another",
        "One torsional stiffness for parts that carry the same torque.",
        (
            several(
                "stiffness",
                "torsional stiffnesses k1; k2; ...",
                q.TORSIONAL_STIFFNESS,
                "1.9e5 N m/rad; 6e5 N m/rad",
            ),
        ),
        q.TORSIONAL_STIFFNESS,
        torsion_series,
        "1/k = 1/k1 + 1/k2 + ...",
        "no inertia between the parts that matters; all turn at the same speed",
        STATICS,
        "10 %",
    ),
    Recipe(
        "reflected-stiffness",
        "torsional stiffness through a gear",
        "A shaft's torsional stiffness as the other shaft feels it.",
        (
            asked("stiffness", "torsional stiffness k1", q.TORSIONAL_STIFFNESS, "1.9e5 N m/rad"),
            number("ratio", "speed of this shaft over that of the reference r", "4.2"),
        ),
        q.TORSIONAL_STIFFNESS,
        reflected_stiffness,
        "k = k1 r^2",
        "rigid gear; the ratio is squared",
        Source("equal energy on both sides of the gear", "closed form"),
        "10 %",
    ),
    Recipe(
        "spring-on-a-radius",
        "springs around a centre",
        "Torsional or rocking stiffness of a spring that acts along the rim of a radius.",
        (
            asked("stiffness", "stiffness k1", q.STIFFNESS, "5 kN/mm"),
            length("radius", "radius r", "250 mm"),
        ),
        q.TORSIONAL_STIFFNESS,
        lever,
        "k = k1 r^2",
        "small turn; the spring acts at right angles to the radius",
        STATICS,
        "10 %",
    ),
)
