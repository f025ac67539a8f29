"""Second moments of area of plain sections, for beams."""

import math

from modalview.handbook.asked import length, length_or_none
from modalview.handbook.recipe import Check, Recipe, Source
from modalview.handbook.validity import less
from modalview.units import quantities as q


def rectangle(width: float, depth: float) -> float:
    """Return the second moment of area of a rectangle about its middle, across the depth."""
    return width * depth**3 / 12


def tube(outer: float, inner: float) -> float:
    """Return the second moment of area of a round tube or rod about a diameter."""
    return math.pi * (outer**4 - inner**4) / 64


def flanged(width: float, depth: float, flange: float, web: float) -> float:
    """Return the second moment of area of an I or a box section about its strong axis, without fillets."""
    return (width * depth**3 - (width - web) * (depth - 2 * flange) ** 3) / 12


# What an I or a box section is told by, and what of it can be.
SECTION = (
    length("width", "width b", "150 mm"),
    length("depth", "depth h", "300 mm"),
    length("flange", "thickness of a flange t", "10.7 mm"),
    length("web", "thickness of the web, or of both walls, w", "7.1 mm"),
)
FITS: tuple[Check, ...] = (
    lambda s: "" if 2 * s["flange"] < s["depth"] else "both flanges must be thinner than the depth",
    lambda s: "" if s["web"] <= s["width"] else "the web must not be wider than the flanges",
)
_INTEGRAL = Source("integral of y^2 dA", "closed form")

RECIPES = (
    Recipe(
        "second-moment-rectangle",
        "second moment of a rectangle",
        "Of a bar or plate that bends across its depth.",
        (length("width", "width b", "50 mm"), length("depth", "depth h", "100 mm")),
        q.SECOND_MOMENT,
        rectangle,
        "I = b h^3/12",
        "about the middle, bending in the direction of h",
        _INTEGRAL,
        "3 %",
    ),
    Recipe(
        "second-moment-tube",
        "second moment of a round rod or tube",
        "Of a shaft or pipe in bending.",
        (
            length("outer", "outer diameter D", "114.3 mm"),
            length_or_none("inner", "inner diameter d", "104.3 mm", "0 mm"),
        ),
        q.SECOND_MOMENT,
        tube,
        "I = pi (D^4 - d^4)/64",
        "concentric circles",
        _INTEGRAL,
        "5 %",
        (less("inner", "outer", "the hole must be smaller than the outside"),),
    ),
    Recipe(
        "second-moment-i-section",
        "second moment of an I or box section",
        "Of a rolled beam, strong axis; of a box with w the sum of both walls.",
        SECTION,
        q.SECOND_MOMENT,
        flanged,
        "I = (b h^3 - (b - w) (h - 2 t)^3)/12",
        "fillets not counted: a rolled beam's table gives some per cent more",
        _INTEGRAL,
        "5 %",
        FITS,
    ),
)
