"""Liquids: their columns as springs and masses, and the water that moves along with a body."""

import math

from modalview.handbook.asked import GRAVITY, asked, density, length
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.validity import at_least, at_most
from modalview.units import quantities as q


def column(area: float, length: float, density: float) -> float:
    """Return the mass of a column of liquid."""
    return density * area * length


def column_stiffness(area: float, length: float, bulk: float) -> float:
    """Return the stiffness of a closed column of liquid against being compressed."""
    return bulk * area / length


def surface(area: float, density: float) -> float:
    """Return the stiffness that a free surface, or buoyancy at a water line, gives."""
    return density * GRAVITY * area


def filling(inner: float, length: float, density: float) -> float:
    """Return the mass of the liquid in a pipe."""
    return density * math.pi * inner**2 / 4 * length


def added_cylinder(diameter: float, length: float, density: float) -> float:
    """Return the added mass of a long cylinder that moves across its axis in open water."""
    return density * math.pi * diameter**2 / 4 * length


def added_gap(diameter: float, bore: float, length: float, density: float) -> float:
    """Return the added mass of a long cylinder that moves across its axis in a full bore."""
    radius, wall = diameter / 2, bore / 2
    return density * math.pi * radius**2 * length * (wall**2 + radius**2) / (wall**2 - radius**2)


def added_plate(width: float, length: float, density: float) -> float:
    """Return the added mass of a long strip that moves broadside in open water."""
    return density * math.pi * width**2 / 4 * length


def added_sphere(diameter: float, density: float) -> float:
    """Return the added mass of a sphere in open water."""
    return density * math.pi * diameter**3 / 12


_RHO = density("1000 kg/m3")
LAMB = Source("H. Lamb, Hydrodynamics, 6th edition, 1932 (potential flow)", "from memory")
_OPEN = "ideal fluid at rest; walls and surface farther away than some diameters; fully under water"
_LONG = (at_least(lambda s: s["length"] / s["diameter"], 5, "length/diameter"),)

RECIPES = (
    Recipe(
        "liquid-column",
        "mass of a column of liquid",
        "Mass of liquid that moves as one plug.",
        (asked("area", "area A", q.AREA, "0.07 m2"), length("length", "length L", "6 m"), _RHO),
        q.MASS,
        column,
        "m = rho A L",
        "moves as one: short against the wave length of its pulsation",
        Source("mass = density x volume", "definition"),
        "5 %",
    ),
    Recipe(
        "liquid-in-pipe",
        "mass of the liquid in a pipe",
        "Mass that a full pipe carries along across its axis.",
        (length("inner", "inner diameter d", "300 mm"), length("length", "length L", "6 m"), _RHO),
        q.MASS,
        filling,
        "m = rho pi d^2 L/4",
        "pipe full; motion across the pipe",
        Source("mass = density x volume", "definition"),
        "5 %",
    ),
    Recipe(
        "liquid-column-stiffness",
        "closed column of liquid in compression",
        "Stiffness of trapped liquid against a piston.",
        (
            asked("area", "area A", q.AREA, "0.02 m2"),
            length("length", "length L", "0.5 m"),
            asked("bulk", "bulk modulus K (water about 2.2 GPa)", q.MODULUS, "1.4 GPa"),
        ),
        q.STIFFNESS,
        column_stiffness,
        "k = K A/L",
        "rigid walls, no gas: a little air, or a wall that gives, makes it many times softer",
        Source("definition of the bulk modulus", "closed form"),
        "30 %",
    ),
    Recipe(
        "water-line-stiffness",
        "free surface or buoyancy",
        "Vertical stiffness at a water line; for a U-tube take twice the area.",
        (asked("area", "area at the water line A", q.AREA, "4 m2"), _RHO),
        q.STIFFNESS,
        surface,
        "k = rho g A",
        "walls upright at the surface; small motion",
        Source("Archimedes' principle", "closed form"),
        "5 %",
    ),
    Recipe(
        "added-mass-cylinder",
        "added mass of a cylinder in open water",
        "Water that moves along with a column or pipe across its axis.",
        (
            length("diameter", "outer diameter D", "400 mm"),
            length("length", "length under water L", "6 m"),
            _RHO,
        ),
        q.MASS,
        added_cylinder,
        "m = rho pi D^2 L/4",
        f"{_OPEN}; length from 5 D",
        LAMB,
        "15 %",
        doubts=_LONG,
        remarks=("the water inside a pipe comes on top (recipe liquid-in-pipe)",),
    ),
    Recipe(
        "added-mass-in-bore",
        "added mass of a cylinder in a full bore",
        "Water in the gap of a shaft, rotor or column inside a rigid, full bore.",
        (
            length("diameter", "outer diameter D", "200 mm"),
            length("bore", "bore D2", "300 mm"),
            length("length", "length L", "2 m"),
            _RHO,
        ),
        q.MASS,
        added_gap,
        "m = rho pi D^2 L/4 (D2^2 + D^2)/(D2^2 - D^2)",
        "concentric, rigid bore, gap not so thin that friction governs: (D2 - D)/D from 0.05; L from 5 D",
        Source(
            "R. J. Fritz, The effect of liquids on the dynamic motions of immersed solids, 1972",
            "from memory",
        ),
        "20 %",
        (lambda s: "" if s["diameter"] < s["bore"] else "the cylinder must be thinner than the bore",),
        (*_LONG, at_least(lambda s: s["bore"] / s["diameter"] - 1, 0.05, "(D2 - D)/D")),
    ),
    Recipe(
        "added-mass-plate",
        "added mass of a strip moving broadside",
        "Water that moves along with a long flat strip across its plane.",
        (length("width", "width b", "0.5 m"), length("length", "length L", "3 m"), _RHO),
        q.MASS,
        added_plate,
        "m = rho pi b^2 L/4",
        f"{_OPEN}; length from 5 b (a square plate: about half of this)",
        LAMB,
        "20 %",
        doubts=(at_most(lambda s: s["width"] / s["length"], 0.2, "b/L"),),
    ),
    Recipe(
        "added-mass-sphere",
        "added mass of a sphere",
        "Water that moves along with a compact body.",
        (length("diameter", "diameter D", "0.6 m"), _RHO),
        q.MASS,
        added_sphere,
        "m = rho pi D^3/12",
        _OPEN,
        LAMB,
        "15 %",
    ),
)
