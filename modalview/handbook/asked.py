"""What recipes ask for, in few words: lengths, counts, moduli, words."""

import math

from modalview.handbook.sizes import RecipeInput
from modalview.units import quantities as q
from modalview.units.quantities import Quantity

GRAVITY = 9.80665


def asked(name: str, label: str, quantity: Quantity, example: str, default: str = "") -> RecipeInput:
    """Return an input above zero."""
    return RecipeInput(name, label, quantity, example, default=default)


def length(name: str, label: str, example: str) -> RecipeInput:
    """Return a length above zero."""
    return asked(name, label, q.LENGTH, example)


def length_or_none(name: str, label: str, example: str, default: str = "") -> RecipeInput:
    """Return a length that may be zero."""
    return RecipeInput(name, label, q.LENGTH, example, low_counts=True, default=default)


def several(name: str, label: str, quantity: Quantity, example: str, *, zero: bool = False) -> RecipeInput:
    """Return one or more values of a quantity, above zero or, with ``zero``, at least zero."""
    return RecipeInput(name, label, quantity, example, several=True, low_counts=zero)


def count(name: str, label: str, example: str, low: int = 1, default: str = "") -> RecipeInput:
    """Return a whole number, at least ``low``."""
    return RecipeInput(name, label, q.RATIO, example, low=low, low_counts=True, default=default, whole=True)


def number(name: str, label: str, example: str, default: str = "") -> RecipeInput:
    """Return a plain number above zero."""
    return asked(name, label, q.RATIO, example, default)


def angle(name: str, label: str, example: str, default: str = "", high: float = math.pi / 2) -> RecipeInput:
    """Return an angle from zero to ``high``."""
    return RecipeInput(name, label, q.ANGLE, example, high=high, low_counts=True, default=default)


def word(name: str, label: str, choices: tuple[str, ...]) -> RecipeInput:
    """Return a choice out of words."""
    return RecipeInput(name, label, None, choices[0], choices=choices)


def young(default: str = "") -> RecipeInput:
    """Return the modulus of elasticity."""
    return asked("young", "modulus of elasticity E", q.MODULUS, "206 GPa", default)


def shear(example: str = "80 GPa") -> RecipeInput:
    """Return the shear modulus."""
    return asked("shear", "shear modulus G", q.MODULUS, example)


def poisson(example: str = "0.3") -> RecipeInput:
    """Return Poisson's ratio, from 0 to 0.5."""
    return RecipeInput("poisson", "Poisson's ratio nu", q.RATIO, example, high=0.5, low_counts=True)


def density(example: str = "7850 kg/m3", default: str = "") -> RecipeInput:
    """Return a density."""
    return asked("density", "density rho", q.DENSITY, example, default)
