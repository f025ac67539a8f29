"""Plate strips that bend to a cylinder, clamped along edges."""

from modalview.handbook.asked import length, poisson, young
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.validity import at_least
from modalview.units import quantities as q


def strip(length: float, width: float, thickness: float, young: float, poisson: float) -> float:
    """Return the stiffness of a wide plate strip clamped at one edge, loaded along the other."""
    return 3 * young * width * thickness**3 / 12 / (1 - poisson**2) / length**3


def strip_clamped(length: float, width: float, thickness: float, young: float, poisson: float) -> float:
    """Return the stiffness of a wide plate strip clamped at two opposite edges, loaded along its middle."""
    return 192 * young * width * thickness**3 / 12 / (1 - poisson**2) / length**3


_PLATE = (
    length("length", "length L across the clamped edge", "300 mm"),
    length("width", "width b along the clamped edge", "900 mm"),
    length("thickness", "thickness t", "12 mm"),
    young(),
    poisson(),
)
_THIN = "t at most L/10, b at least 2 L, so that it bends to a cylinder; load spread along the edge"
_STRIP = Source("plate bent to a cylinder, E replaced by E/(1 - nu^2)", "closed form")
_WIDE = (
    at_least(lambda s: s["length"] / s["thickness"], 10, "L/t"),
    at_least(lambda s: s["width"] / s["length"], 2, "b/L"),
)

RECIPES = (
    Recipe(
        "plate-strip-cantilever",
        "plate strip clamped along one edge",
        "Stiffness of a wide plate for a load spread along the free edge.",
        _PLATE,
        q.STIFFNESS,
        strip,
        "k = 3 E b t^3/(12 (1 - nu^2) L^3)",
        _THIN,
        _STRIP,
        "15 %",
        doubts=_WIDE,
    ),
    Recipe(
        "plate-strip-clamped",
        "plate strip clamped along two edges",
        "Stiffness of a wide plate for a load spread along the middle between two clamped edges.",
        _PLATE,
        q.STIFFNESS,
        strip_clamped,
        "k = 192 E b t^3/(12 (1 - nu^2) L^3)",
        _THIN,
        _STRIP,
        "15 %",
        doubts=_WIDE,
    ),
)
