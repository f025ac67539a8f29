"""Masses and moments of inertia of plain shapes, and the trade's ways of writing them."""

import math

from modalview.handbook.asked import GRAVITY, asked, density, length, length_or_none, number
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.sections import FITS, SECTION
from modalview.handbook.validity import less
from modalview.units import quantities as q


def plate(length: float, width: float, thickness: float, density: float) -> float:
    """Return the mass of a rectangular plate or block."""
    return density * length * width * thickness


def cylinder(outer: float, inner: float, length: float, density: float) -> float:
    """Return the mass of a cylinder, disc, ring or tube."""
    return density * math.pi * (outer**2 - inner**2) / 4 * length


def section(line_mass: float, length: float) -> float:
    """Return the mass of a rolled section."""
    return line_mass * length


def section_area(area: float, length: float, density: float) -> float:
    """Return the mass of a bar of any section."""
    return density * area * length


def flanged(width: float, depth: float, flange: float, web: float, length: float, density: float) -> float:
    """Return the mass of an I or box section, without fillets."""
    return density * length * (2 * width * flange + web * (depth - 2 * flange))


def of_weight(weight: float) -> float:
    """Return the mass that weighs so much."""
    return weight / GRAVITY


def block_inertia(mass: float, first: float, second: float) -> float:
    """Return the inertia of a block about its centre, across two of its sides."""
    return mass * (first**2 + second**2) / 12


def rod_inertia(mass: float, length: float) -> float:
    """Return the inertia of a thin rod about its centre, across it."""
    return mass * length**2 / 12


def ring_inertia(mass: float, diameter: float) -> float:
    """Return the inertia of a thin ring, or of a mass that a drum moves along, about the axis."""
    return mass * diameter**2 / 4


def cylinder_inertia(mass: float, outer: float, inner: float) -> float:
    """Return the inertia of a cylinder, disc or ring of known mass about its axis."""
    return mass * (outer**2 + inner**2) / 8


def cylinder_inertia_made(outer: float, inner: float, length: float, density: float) -> float:
    """Return the inertia of a cylinder, disc or ring about its axis."""
    return density * math.pi * (outer**4 - inner**4) / 32 * length


def cylinder_across(mass: float, outer: float, inner: float, length: float) -> float:
    """Return the inertia of a cylinder about its centre, across its axis."""
    return mass * (3 * (outer**2 + inner**2) / 4 + length**2) / 12


def moved(inertia: float, mass: float, distance: float) -> float:
    """Return an inertia about an axis beside the centre of gravity."""
    return inertia + mass * distance**2


def of_radius(mass: float, radius: float) -> float:
    """Return the inertia from mass and radius of gyration."""
    return mass * radius**2


def of_diameter(mass: float, diameter: float) -> float:
    """Return the inertia from mass and diameter of gyration, a quarter of GD2."""
    return mass * diameter**2 / 4


def reflected(inertia: float, ratio: float) -> float:
    """Return an inertia as it is felt on the other side of a gear."""
    return inertia * ratio**2


_BY_VOLUME = Source("mass = density x volume", "definition")
_INTEGRAL = Source("integral of r^2 dm", "closed form")
_HOLE = (less("inner", "outer", "the hole must be smaller than the outside"),)
_STEEL = density()
_MASS = asked("mass", "mass m", q.MASS, "450 kg")
_OUTER, _LONG = length("outer", "outer diameter D", "800 mm"), length("length", "length L", "400 mm")
_INNER = length_or_none("inner", "inner diameter d", "200 mm", "0 mm")

MASSES = (
    Recipe(
        "mass-plate",
        "mass of a plate or block",
        "Mass of a baseplate, slab or inertia block.",
        (
            length("length", "length a", "3 m"),
            length("width", "width b", "1.2 m"),
            length("thickness", "thickness t", "40 mm"),
            _STEEL,
        ),
        q.MASS,
        plate,
        "m = rho a b t",
        "even and solid: ribs, grout and openings on top",
        _BY_VOLUME,
        "3 %",
    ),
    Recipe(
        "mass-cylinder",
        "mass of a cylinder, disc, ring or tube",
        "Mass of a round part, solid or bored.",
        (_OUTER, _INNER, _LONG, _STEEL),
        q.MASS,
        cylinder,
        "m = rho pi (D^2 - d^2) L/4",
        "even and concentric",
        _BY_VOLUME,
        "3 %",
        _HOLE,
    ),
    Recipe(
        "mass-section",
        "mass of a rolled section by its table",
        "Mass of a steel beam from its mass per length.",
        (
            asked("line_mass", "mass per length m1", q.LINE_MASS, "42.2 kg/m"),
            length("length", "length L", "6 m"),
        ),
        q.MASS,
        section,
        "m = m1 L",
        "rolled sections may weigh a few per cent more or less than their table",
        _BY_VOLUME,
        "4 %",
    ),
    Recipe(
        "mass-bar",
        "mass of a bar of any section",
        "Mass of a beam or column from the area of its section.",
        (asked("area", "area A", q.AREA, "5380 mm2"), length("length", "length L", "6 m"), _STEEL),
        q.MASS,
        section_area,
        "m = rho A L",
        "even along its length",
        _BY_VOLUME,
        "4 %",
    ),
    Recipe(
        "mass-i-section",
        "mass of an I or box section",
        "Mass of a steel beam from the dimensions of its section; of a box with w the sum of both walls.",
        (*SECTION, length("length", "length L", "6 m"), _STEEL),
        q.MASS,
        flanged,
        "m = rho L (2 b t + w (h - 2 t))",
        "fillets not counted: a rolled beam's table gives some per cent more",
        _BY_VOLUME,
        "6 %",
        FITS,
    ),
    Recipe(
        "mass-of-weight",
        "mass from weight",
        "Mass of what weighs so much.",
        (asked("weight", "weight W, a force", q.FORCE, "9.81 kN"),),
        q.MASS,
        of_weight,
        "m = W/g, g = 9.80665 m/s2",
        "standard gravity; the place on earth changes it by less than 0.3 %",
        Source("standard gravity, 3rd CGPM, 1901", "definition"),
        "2 %",
    ),
)

INERTIAS = (
    Recipe(
        "inertia-block",
        "inertia of a plate or block",
        "About its centre of gravity, the axis along the third side.",
        (
            _MASS,
            length("first", "side a across the axis", "1.2 m"),
            length("second", "side b across the axis", "0.8 m"),
        ),
        q.INERTIA,
        block_inertia,
        "J = m (a^2 + b^2)/12",
        "evenly filled: a machine with its mass near the outside has up to three times as much",
        _INTEGRAL,
        "10 %",
    ),
    Recipe(
        "inertia-rod",
        "inertia of a thin rod",
        "About its middle, across the rod.",
        (_MASS, length("length", "length L", "2.5 m")),
        q.INERTIA,
        rod_inertia,
        "J = m L^2/12",
        "much thinner than long",
        _INTEGRAL,
        "5 %",
    ),
    Recipe(
        "inertia-ring",
        "inertia of a thin ring or rim",
        "About its axis; also of a mass that a drum, belt or rack moves along.",
        (_MASS, length("diameter", "mean diameter D", "900 mm")),
        q.INERTIA,
        ring_inertia,
        "J = m D^2/4",
        "all mass near the diameter: a rim of a tenth of the radius is right to 0.3 %",
        _INTEGRAL,
        "3 %",
    ),
    Recipe(
        "inertia-cylinder",
        "inertia of a cylinder or disc of known mass",
        "About its axis, solid or bored.",
        (_MASS, _OUTER, _INNER),
        q.INERTIA,
        cylinder_inertia,
        "J = m (D^2 + d^2)/8",
        "even and concentric",
        _INTEGRAL,
        "5 %",
        _HOLE,
    ),
    Recipe(
        "inertia-cylinder-made",
        "inertia of a cylinder, disc or ring from its dimensions",
        "About its axis, solid or bored.",
        (_OUTER, _INNER, _LONG, _STEEL),
        q.INERTIA,
        cylinder_inertia_made,
        "J = rho pi (D^4 - d^4) L/32",
        "even and concentric",
        _INTEGRAL,
        "5 %",
        _HOLE,
    ),
    Recipe(
        "inertia-cylinder-across",
        "inertia of a cylinder across its axis",
        "About its centre of gravity, across the axis: a rotor that rocks.",
        (_MASS, _OUTER, _INNER, _LONG),
        q.INERTIA,
        cylinder_across,
        "J = m (3 (D^2 + d^2)/4 + L^2)/12",
        "even and concentric",
        _INTEGRAL,
        "10 %",
        _HOLE,
    ),
    Recipe(
        "inertia-moved",
        "inertia about an axis beside the centre of gravity",
        "What the distance from the centre of gravity adds.",
        (
            asked("inertia", "inertia about the centre of gravity J0", q.INERTIA, "46 kg m2"),
            _MASS,
            length("distance", "distance of the parallel axes e", "0.4 m"),
        ),
        q.INERTIA,
        moved,
        "J = J0 + m e^2",
        "axes parallel",
        Source("Huygens-Steiner", "closed form"),
        "10 %",
    ),
    Recipe(
        "inertia-wr2",
        "inertia from weight and radius of gyration (WR2)",
        "WR2 is the moment of inertia itself.",
        (_MASS, length("radius", "radius of gyration R", "250 mm")),
        q.INERTIA,
        of_radius,
        "J = W R^2, W as a mass",
        'W in kg or lb as a mass; a field also reads "WR2 1092 lb ft2"',
        Source("radius of gyration", "definition"),
        "5 %",
    ),
    Recipe(
        "inertia-gd2",
        "inertia from weight and diameter of gyration (GD2)",
        "GD2 is four times the moment of inertia.",
        (_MASS, length("diameter", "diameter of gyration D", "500 mm")),
        q.INERTIA,
        of_diameter,
        "J = G D^2/4, G as a mass",
        'G in kg as a mass; a field also reads "GD2 184 kgf m2"; taken as J it would be four times too much',
        Source("diameter of gyration", "common practice"),
        "5 %",
    ),
    Recipe(
        "reflected-inertia",
        "inertia through a gear",
        "A shaft's inertia as the other shaft feels it.",
        (
            asked("inertia", "inertia J1", q.INERTIA, "1.6 kg m2"),
            number("ratio", "speed of this shaft over that of the reference r", "4.2"),
        ),
        q.INERTIA,
        reflected,
        "J = J1 r^2",
        "rigid gear; the ratio is squared; the program's gears do this by themselves",
        Source("equal energy on both sides of the gear", "closed form"),
        "5 %",
    ),
)
