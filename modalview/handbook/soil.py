"""Rigid footings on the surface of deep, even soil: static stiffness of an elastic half-space.

Circles: vertical, rocking and torsion are exact for a rigid disc on frictionless (vertical, rocking) ground;
sliding has two published forms, of which the one named is used. Rectangles: fits of computed values.
"""

import math
from collections.abc import Callable

from modalview.handbook.asked import asked, length, poisson
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.sizes import RecipeInput
from modalview.handbook.validity import at_most
from modalview.units import quantities as q
from modalview.units.quantities import Quantity


def circle_vertical(radius: float, shear: float, poisson: float) -> float:
    """Return the vertical stiffness under a rigid disc."""
    return 4 * shear * radius / (1 - poisson)


def circle_sliding(radius: float, shear: float, poisson: float) -> float:
    """Return the horizontal stiffness under a rigid disc; the form 8 G r/(2 - nu)."""
    return 8 * shear * radius / (2 - poisson)


def circle_rocking(radius: float, shear: float, poisson: float) -> float:
    """Return the rocking stiffness under a rigid disc."""
    return 8 * shear * radius**3 / (3 * (1 - poisson))


def circle_torsion(radius: float, shear: float) -> float:
    """Return the torsional stiffness under a rigid disc."""
    return 16 * shear * radius**3 / 3


def _halves(length: float, width: float) -> tuple[float, float]:
    """Return half the short side and the ratio of the long to the short one."""
    return min(length, width) / 2, max(length, width) / min(length, width)


def rectangle_vertical(length: float, width: float, shear: float, poisson: float) -> float:
    """Return the vertical stiffness under a rigid rectangle."""
    half, ratio = _halves(length, width)
    return shear * half / (1 - poisson) * (3.1 * math.pow(ratio, 0.75) + 1.6)


def rectangle_sliding_long(length: float, width: float, shear: float, poisson: float) -> float:
    """Return the horizontal stiffness of a rigid rectangle along its long side."""
    half, ratio = _halves(length, width)
    return shear * half / (2 - poisson) * (6.8 * math.pow(ratio, 0.65) + 2.4)


def rectangle_sliding_short(length: float, width: float, shear: float, poisson: float) -> float:
    """Return the horizontal stiffness of a rigid rectangle along its short side."""
    half, ratio = _halves(length, width)
    return shear * half / (2 - poisson) * (6.8 * math.pow(ratio, 0.65) + 0.8 * ratio + 1.6)


def rectangle_rocking_long(length: float, width: float, shear: float, poisson: float) -> float:
    """Return the rocking stiffness about the axis along the long side, the softer one."""
    half, ratio = _halves(length, width)
    return shear * half**3 / (1 - poisson) * (3.2 * ratio + 0.8)


def rectangle_rocking_short(length: float, width: float, shear: float, poisson: float) -> float:
    """Return the rocking stiffness about the axis along the short side, the stiffer one."""
    half, ratio = _halves(length, width)
    return shear * half**3 / (1 - poisson) * (3.73 * math.pow(ratio, 2.4) + 0.27)


def rectangle_torsion(length: float, width: float, shear: float) -> float:
    """Return the torsional stiffness of a rigid rectangle about the vertical."""
    half, ratio = _halves(length, width)
    return shear * half**3 * (4.25 * math.pow(ratio, 2.45) + 4.06)


_G = asked("shear", "shear modulus of the soil G, at small strain", q.MODULUS, "50 MPa")
_NU = poisson("0.33")
_CIRCLE = (length("radius", "radius r", "1.5 m"), _G)
_RECTANGLE = (length("length", "one side", "4 m"), length("width", "other side", "3 m"), _G)
_DISC = Source(
    "F. E. Richart, J. R. Hall and R. D. Woods, Vibrations of Soils and Foundations, 1970, chapter 10; "
    "G. Gazetas, 1983",
    "from memory",
)
_FIT = Source(
    "A. Pais and E. Kausel, Approximate formulas for dynamic stiffnesses of rigid foundations, 1988",
    "from memory",
)
_HALF_SPACE = "rigid footing on the surface of deep even soil; static value: it falls at high frequency"
_NEAR = f"{_HALF_SPACE}; side ratio up to 4"
# Of soil moduli measured on site; needs the user's own spread where it is known. Common practice.
_SPREAD = "50 %"
_REMARKS = ("soil is the least known spring: give G its own spread; embedment and layers change it",)


def _footing(
    name: str,
    title: str,
    asks: tuple[RecipeInput, ...],
    result: Quantity,
    compute: Callable[..., float],
    formula: str,
) -> Recipe:
    circle = name.startswith("footing-circle")
    doubts = (
        ()
        if circle
        else (
            at_most(
                lambda s: max(s["length"], s["width"]) / min(s["length"], s["width"]), 4, "the side ratio"
            ),
        )
    )
    sentence = f"Stiffness of soil under a rigid {'circular' if circle else 'rectangular'} footing."
    return Recipe(
        name,
        title,
        sentence,
        asks,
        result,
        compute,
        formula,
        _HALF_SPACE if circle else _NEAR,
        _DISC if circle else _FIT,
        _SPREAD,
        doubts=doubts,
        remarks=_REMARKS,
    )


RECIPES = (
    _footing(
        "footing-circle-vertical",
        "circular footing, vertical",
        (*_CIRCLE, _NU),
        q.STIFFNESS,
        circle_vertical,
        "k = 4 G r/(1 - nu)",
    ),
    _footing(
        "footing-circle-sliding",
        "circular footing, sliding",
        (*_CIRCLE, _NU),
        q.STIFFNESS,
        circle_sliding,
        "k = 8 G r/(2 - nu)",
    ),
    _footing(
        "footing-circle-rocking",
        "circular footing, rocking",
        (*_CIRCLE, _NU),
        q.TORSIONAL_STIFFNESS,
        circle_rocking,
        "k = 8 G r^3/(3 (1 - nu))",
    ),
    _footing(
        "footing-circle-torsion",
        "circular footing, torsion",
        _CIRCLE,
        q.TORSIONAL_STIFFNESS,
        circle_torsion,
        "k = 16 G r^3/3",
    ),
    _footing(
        "footing-rectangle-vertical",
        "rectangular footing, vertical",
        (*_RECTANGLE, _NU),
        q.STIFFNESS,
        rectangle_vertical,
        "k = G B/(1 - nu) (3.1 (L/B)^0.75 + 1.6); B, L half the short, the long side",
    ),
    _footing(
        "footing-rectangle-sliding-long",
        "rectangular footing, sliding along the long side",
        (*_RECTANGLE, _NU),
        q.STIFFNESS,
        rectangle_sliding_long,
        "k = G B/(2 - nu) (6.8 (L/B)^0.65 + 2.4); B, L half the short, the long side",
    ),
    _footing(
        "footing-rectangle-sliding-short",
        "rectangular footing, sliding along the short side",
        (*_RECTANGLE, _NU),
        q.STIFFNESS,
        rectangle_sliding_short,
        "k = G B/(2 - nu) (6.8 (L/B)^0.65 + 0.8 L/B + 1.6); B, L half the short, the long side",
    ),
    _footing(
        "footing-rectangle-rocking-long",
        "rectangular footing, rocking about the long axis",
        (*_RECTANGLE, _NU),
        q.TORSIONAL_STIFFNESS,
        rectangle_rocking_long,
        "k = G B^3/(1 - nu) (3.2 L/B + 0.8); B, L half the short, the long side",
    ),
    _footing(
        "footing-rectangle-rocking-short",
        "rectangular footing, rocking about the short axis",
        (*_RECTANGLE, _NU),
        q.TORSIONAL_STIFFNESS,
        rectangle_rocking_short,
        "k = G B^3/(1 - nu) (3.73 (L/B)^2.4 + 0.27); B, L half the short, the long side",
    ),
    _footing(
        "footing-rectangle-torsion",
        "rectangular footing, torsion",
        _RECTANGLE,
        q.TORSIONAL_STIFFNESS,
        rectangle_torsion,
        "k = G B^3 (4.25 (L/B)^2.45 + 4.06); B, L half the short, the long side",
    ),
)
