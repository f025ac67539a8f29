"""What machines stand and hang on: known deflections, air, cables, bolts."""

import math

from modalview.handbook.asked import GRAVITY, asked, count, length, several, young
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.sizes import RecipeInput
from modalview.handbook.springs import STATICS
from modalview.handbook.validity import at_least, less
from modalview.units import quantities as q


def deflection(mass: float, deflection: float) -> float:
    """Return the stiffness under a mass from the static deflection."""
    return mass * GRAVITY / deflection


def deflection_frequency(deflection: float) -> float:
    """Return the natural angular frequency of a mass from its static deflection."""
    return math.sqrt(GRAVITY / deflection)


def air_spring(pressure: float, ambient: float, area: float, volume: float, exponent: float) -> float:
    """Return the stiffness of an air spring of constant effective area."""
    return exponent * (pressure + ambient) * area**2 / volume


def air_spring_load(pressure: float, area: float) -> float:
    """Return the mass that an air spring carries; the pressure is above ambient."""
    return pressure * area / GRAVITY


def air_spring_frequency(
    pressure: float, ambient: float, area: float, volume: float, exponent: float
) -> float:
    """Return the natural angular frequency of an air spring under the mass that it carries."""
    stiffness = air_spring(pressure, ambient, area, volume, exponent)
    return math.sqrt(stiffness / air_spring_load(pressure, area))


def cable(tension: float, length: float, place: float) -> float:
    """Return the stiffness across a tight cable, at a distance from one end."""
    return tension * length / (place * (length - place))


def cable_middle(tension: float, length: float) -> float:
    """Return the stiffness across the middle of a tight cable."""
    return 4 * tension / length


def bolts(bolts: float, diameter: float, grip: float, young: float) -> float:
    """Return the stiffness of bolts along their axes."""
    return bolts * young * math.pi * diameter**2 / 4 / grip


def bolts_rocking(distances: tuple[float, ...], diameter: float, grip: float, young: float) -> float:
    """Return the rocking stiffness of bolts at distances from the axis of rocking."""
    return young * math.pi * diameter**2 / 4 / grip * sum(one**2 for one in distances)


_AIR = (
    asked("pressure", "gauge pressure p", q.PRESSURE, "5 bar"),
    asked("ambient", "ambient pressure p0", q.PRESSURE, "1.01325 bar", "1.01325 bar"),
    asked("area", "effective area A", q.AREA, "0.02 m2"),
    asked("volume", "volume V, with that of a reservoir", q.VOLUME, "4 l"),
    RecipeInput("exponent", "exponent n", q.RATIO, "1.4", 1, 1.4, low_counts=True, default="1.4"),
)
_HARRIS = Source(
    "Harris' Shock and Vibration Handbook, chapter on air suspension (k = gamma p S/L)",
    "formula seen in the source",
)
_AIR_HOLDS = (
    "effective area constant over the stroke; n = 1.4 in fast motion, 1 in slow; no throttle to a reservoir"
)

RECIPES = (
    Recipe(
        "static-deflection",
        "stiffness from static deflection",
        "Stiffness of what comes down by a known amount under a known mass.",
        (
            asked("mass", "mass carried m", q.MASS, "900 kg"),
            length("deflection", "static deflection s", "35 mm"),
        ),
        q.STIFFNESS,
        deflection,
        "k = m g/s",
        "dynamic and static stiffness equal (steel springs: yes; rubber: 1.2 to 2.4 times); linear",
        STATICS,
        "10 %",
    ),
    Recipe(
        "deflection-frequency",
        "natural frequency from static deflection",
        "Vertical natural frequency of a mass from how far it comes down at rest.",
        (length("deflection", "static deflection s", "25 mm"),),
        q.FREQUENCY,
        deflection_frequency,
        "f = sqrt(g/s)/(2 pi)",
        "one mass on springs on rigid ground; dynamic and static stiffness equal",
        Source("k = m g/s in f = sqrt(k/m)/(2 pi)", "closed form"),
        "5 %",
    ),
    Recipe(
        "air-spring",
        "air spring",
        "Vertical stiffness of an air spring.",
        _AIR,
        q.STIFFNESS,
        air_spring,
        "k = n (p + p0) A^2/V",
        _AIR_HOLDS + "; the pressure in it is absolute",
        _HARRIS,
        "15 %",
    ),
    Recipe(
        "air-spring-load",
        "mass on an air spring",
        "Mass that an air spring carries at its gauge pressure.",
        (_AIR[0], _AIR[2]),
        q.MASS,
        air_spring_load,
        "m = p A/g",
        "gauge, not absolute, pressure",
        STATICS,
        "5 %",
    ),
    Recipe(
        "air-spring-frequency",
        "natural frequency of an air spring",
        "Vertical natural frequency under the mass that the gauge pressure carries.",
        _AIR,
        q.FREQUENCY,
        air_spring_frequency,
        "f = sqrt(k/m)/(2 pi), k = n (p + p0) A^2/V, m = p A/g",
        _AIR_HOLDS,
        _HARRIS,
        "8 %",
    ),
    Recipe(
        "cable-at",
        "tight cable, load anywhere",
        "Stiffness across a cable or belt at a distance from one end.",
        (
            asked("tension", "tension T", q.FORCE, "500 N"),
            length("length", "length L", "1.6 m"),
            length("place", "distance a from one end", "0.4 m"),
        ),
        q.STIFFNESS,
        cable,
        "k = T L/(a (L - a))",
        "motion far below a; the tension does not change with it; no bending stiffness",
        Source("J. P. Den Hartog, Mechanical Vibrations, table of spring constants", "from memory"),
        "15 %",
        (less("place", "length", "the load must act between the ends: a below L"),),
    ),
    Recipe(
        "cable-middle",
        "tight cable, load at the middle",
        "Stiffness across the middle of a cable or belt.",
        (asked("tension", "tension T", q.FORCE, "500 N"), length("length", "length L", "1.6 m")),
        q.STIFFNESS,
        cable_middle,
        "k = 4 T/L",
        "motion far below L; the tension does not change with it; no bending stiffness",
        Source("J. P. Den Hartog, Mechanical Vibrations, table of spring constants", "from memory"),
        "15 %",
    ),
    Recipe(
        "bolt-group",
        "bolts along their axes",
        "Stiffness of equal bolts where they alone carry (an open joint, or anchors above the grout).",
        (
            count("bolts", "number of bolts N", "8"),
            length("diameter", "diameter of the stressed section d", "22 mm"),
            length("grip", "free length L", "120 mm"),
            young(),
        ),
        q.STIFFNESS,
        bolts,
        "k = N E pi d^2/(4 L)",
        "bolts alone: a preloaded joint is several times stiffer, by the parts that it clamps; L from 2 d",
        Source("rods in parallel", "closed form"),
        "20 %",
        doubts=(at_least(lambda s: s["grip"] / s["diameter"], 2, "L/d"),),
    ),
    Recipe(
        "bolt-group-rocking",
        "bolts against rocking",
        "Rocking stiffness of equal bolts at their distances from the axis of rocking.",
        (
            several("distances", "distance of each bolt from the axis x1; x2; ...", q.LENGTH, "0.4 m; 0.4 m"),
            length("diameter", "diameter of the stressed section d", "22 mm"),
            length("grip", "free length L", "120 mm"),
            young(),
        ),
        q.TORSIONAL_STIFFNESS,
        bolts_rocking,
        "k = (E pi d^2/(4 L)) (x1^2 + x2^2 + ...)",
        "rigid flange; the axis goes through the centroid of the bolts; bolts alone carry; L from 2 d",
        Source("rods in parallel on levers", "closed form"),
        "20 %",
        doubts=(at_least(lambda s: s["grip"] / s["diameter"], 2, "L/d"),),
    ),
)
