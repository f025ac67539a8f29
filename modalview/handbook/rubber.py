"""Bonded rubber blocks by hardness: compression, shear, dynamic over static stiffness."""

import math
from bisect import bisect_right
from itertools import pairwise

from modalview.handbook.asked import length
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.sizes import RecipeInput
from modalview.handbook.validity import at_least, within
from modalview.units import quantities as q

# Hardness (IRHD, near Shore A), modulus E0 and shear modulus G in MPa, factor of the shape: natural rubber.
LINDLEY = (
    (30, 0.92, 0.30, 0.93),
    (35, 1.18, 0.37, 0.89),
    (40, 1.50, 0.45, 0.85),
    (45, 1.80, 0.54, 0.80),
    (50, 2.20, 0.64, 0.73),
    (55, 3.25, 0.81, 0.64),
    (60, 4.45, 1.06, 0.57),
    (65, 5.85, 1.37, 0.54),
    (70, 7.35, 1.73, 0.53),
    (75, 9.40, 2.22, 0.52),
)
# The trade's dynamic over static stiffness runs from 1.2 to 2.4; here on a straight line over hardness.
SOFTEST, HARDEST = (35.0, 1.2), (75.0, 2.4)


def rubber(hardness: float) -> tuple[float, float, float]:
    """Return modulus E0 and shear modulus G in Pa, and the factor of the shape, between rows of the table."""
    index = bisect_right(LINDLEY, hardness, key=lambda row: row[0])
    low, high = list(pairwise(LINDLEY))[min(index, len(LINDLEY) - 1) - 1]
    part = (hardness - low[0]) / (high[0] - low[0])
    young, shear, factor = (one + part * (other - one) for one, other in zip(low[1:], high[1:], strict=True))
    return 1e6 * young, 1e6 * shear, factor


def _pressed(area: float, shape: float, thickness: float, hardness: float) -> float:
    young, _, factor = rubber(hardness)
    return young * (1 + 2 * factor * shape**2) * area / thickness


def rubber_round(diameter: float, thickness: float, hardness: float) -> float:
    """Return the static stiffness of a bonded round rubber block in compression."""
    return _pressed(math.pi * diameter**2 / 4, diameter / (4 * thickness), thickness, hardness)


def rubber_rectangle(length: float, width: float, thickness: float, hardness: float) -> float:
    """Return the static stiffness of a bonded rectangular rubber block in compression."""
    shape = length * width / (2 * thickness * (length + width))
    return _pressed(length * width, shape, thickness, hardness)


def rubber_shear_round(diameter: float, thickness: float, hardness: float) -> float:
    """Return the static stiffness of a bonded round rubber block in shear."""
    return rubber(hardness)[1] * math.pi * diameter**2 / 4 / thickness


def rubber_shear_rectangle(length: float, width: float, thickness: float, hardness: float) -> float:
    """Return the static stiffness of a bonded rectangular rubber block in shear."""
    return rubber(hardness)[1] * length * width / thickness


def dynamic_ratio(hardness: float) -> float:
    """Return dynamic over static stiffness of rubber of a hardness."""
    (low, at_low), (high, at_high) = SOFTEST, HARDEST
    return at_low + (at_high - at_low) * (hardness - low) / (high - low)


_HARDNESS = RecipeInput("hardness", "hardness (IRHD or Shore A) H", q.RATIO, "50", 30, 75, low_counts=True)
_THICK = length("thickness", "thickness of the rubber t", "40 mm")
_LINDLEY = Source("P. B. Lindley, Engineering Design with Natural Rubber", "from memory")
_COMPRESSED = (
    "metal bonded to both faces; shape factor S (loaded over free area) from 0.25 to 3; up to some 15 % "
    "compression; static: multiply by the dynamic ratio for modes"
)
_SHEARED = "metal bonded to both faces; t at most a quarter of the side; static, up to some 50 % of shear"
_STATIC = (
    "a static stiffness: give the dynamic ratio beside it (recipe rubber-dynamic-ratio), modes need both",
)
_SIDES = (length("length", "side a", "120 mm"), length("width", "side b", "80 mm"), _THICK, _HARDNESS)
_ROUND = (length("diameter", "diameter D", "100 mm"), _THICK, _HARDNESS)

RECIPES = (
    Recipe(
        "rubber-round",
        "bonded round rubber block, compression",
        "Static stiffness of a round mount pressed between metal faces.",
        _ROUND,
        q.STIFFNESS,
        rubber_round,
        "k = E0 (1 + 2 f S^2) A/t, S = D/(4 t); E0 and f by hardness",
        _COMPRESSED,
        _LINDLEY,
        "20 %",
        doubts=(within(lambda s: s["diameter"] / 4 / s["thickness"], 0.25, 3, "shape factor S"),),
        remarks=_STATIC,
    ),
    Recipe(
        "rubber-rectangle",
        "bonded rectangular rubber block, compression",
        "Static stiffness of a rectangular pad pressed between metal faces.",
        _SIDES,
        q.STIFFNESS,
        rubber_rectangle,
        "k = E0 (1 + 2 f S^2) a b/t, S = a b/(2 t (a + b)); E0 and f by hardness",
        _COMPRESSED,
        _LINDLEY,
        "20 %",
        doubts=(
            within(
                lambda s: s["length"] * s["width"] / (2 * s["thickness"] * (s["length"] + s["width"])),
                0.25,
                3,
                "shape factor S",
            ),
        ),
        remarks=_STATIC,
    ),
    Recipe(
        "rubber-round-shear",
        "bonded round rubber block, shear",
        "Static stiffness of a round mount across its axis.",
        _ROUND,
        q.STIFFNESS,
        rubber_shear_round,
        "k = G A/t; G by hardness",
        _SHEARED,
        _LINDLEY,
        "20 %",
        doubts=(at_least(lambda s: s["diameter"] / s["thickness"], 4, "D/t"),),
        remarks=_STATIC,
    ),
    Recipe(
        "rubber-rectangle-shear",
        "bonded rectangular rubber block, shear",
        "Static stiffness of a rectangular pad across its thickness.",
        _SIDES,
        q.STIFFNESS,
        rubber_shear_rectangle,
        "k = G a b/t; G by hardness",
        _SHEARED,
        _LINDLEY,
        "20 %",
        doubts=(at_least(lambda s: min(s["length"], s["width"]) / s["thickness"], 4, "side/t"),),
        remarks=_STATIC,
    ),
    Recipe(
        "rubber-dynamic-ratio",
        "dynamic over static stiffness of rubber",
        "Ratio for the dynamic_ratio of a mount, by hardness.",
        (_HARDNESS,),
        q.RATIO,
        dynamic_ratio,
        "ratio = 1.2 + 1.2 (H - 35)/40",
        "hardness 35 to 75; small motion, room temperature; a straight line through what the trade uses",
        Source("no single source; the maker's figure goes before it", "common practice"),
        "20 %",
        doubts=(within(lambda s: s["hardness"], 35, 75, "hardness"),),
    ),
)
