"""All entries of the handbook, by what a person looks for."""

from difflib import get_close_matches

from modalview.errors import Fault, RecipeFaultsError
from modalview.handbook import (
    beams,
    bearings,
    guidance,
    masses,
    mounts,
    orders,
    own_mass,
    plates,
    rubber,
    sections,
    shafts,
    soil,
    springs,
    water,
)
from modalview.handbook.recipe import Recipe

GROUPS: dict[str, tuple[Recipe, ...]] = {
    "Springs and rods": springs.RECIPES,
    "Shafts": shafts.RECIPES,
    "Beams": beams.RECIPES,
    "Plate strips": plates.RECIPES,
    "Second moments of area": sections.RECIPES,
    "Rubber": rubber.RECIPES,
    "Deflection, air, cables, bolts": mounts.RECIPES,
    "Footings on soil": soil.RECIPES,
    "Liquids": water.RECIPES,
    "Masses": masses.MASSES,
    "Inertias": masses.INERTIAS,
    "Own mass of springs and beams": own_mass.RECIPES,
    "Vanes, teeth, bars": orders.PASSING,
    "Electrical machines": orders.ELECTRICAL,
    "Orders, drives, engines": orders.DRIVES,
    "Rolling bearings": bearings.RECIPES,
    "Balance, severity, margins, damping": guidance.RECIPES,
}
RECIPES: dict[str, Recipe] = {one.id: one for group in GROUPS.values() for one in group}


def recipe(name: str) -> Recipe:
    """Return the entry of a name; raise RecipeFaultsError, with names like it, where there is none.

    >>> recipe("coil-spring").evaluate(
    ...     {"wire": "20 mm", "mean": "200 mm", "turns": "5", "shear": "80 GPa"}
    ... ).text
    '40 N/mm'
    """
    if name in RECIPES:
        return RECIPES[name]
    close = get_close_matches(name, RECIPES, n=3, cutoff=0.5)
    close += [one for one in RECIPES if name and name in one and one not in close]
    meant = f"; is {' or '.join(close[:4])} meant?" if close else ""
    raise RecipeFaultsError((Fault("", f"the handbook has no entry {name!r}{meant}"),))
