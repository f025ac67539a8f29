"""What a spring's, beam's or shaft's own mass adds where the body sits: Rayleigh's parts, and exact ones.

Rayleigh's parts keep the shape of the load at rest, so their frequencies are never too low. The exact ones
depend on the body's mass M: with them, sqrt(k/(M + m)) is the lowest frequency of the heavy spring itself.
"""

import math
from collections.abc import Callable

from modalview.handbook.asked import asked
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.sizes import RecipeInput, Sizes
from modalview.units import quantities as q

# Below this the exact part is Rayleigh's to more digits than its difference leaves.
LIGHT = 1e-6
_HALVINGS = 200
_FREE_CANTILEVER = 1.8751040687119611


def third(own: float) -> float:
    """Return a third: a spring, rod or shaft that stretches or twists evenly."""
    return own / 3


def cantilever(own: float) -> float:
    """Return 33/140: a cantilever with a body at its tip."""
    return 33 / 140 * own


def pinned(own: float) -> float:
    """Return 17/35: a beam on two pins with a body at its middle."""
    return 17 / 35 * own


def clamped(own: float) -> float:
    """Return 13/35: a beam clamped at both ends with a body at its middle, or a leg in sway."""
    return 13 / 35 * own


def spring_exact(own: float, body: float) -> float:
    """Return the part of a spring's or shaft's own mass that gives the exact lowest frequency.

    Notes
    -----
    beta tan(beta) = own/body has its first root below pi/2; omega = beta sqrt(k/own).
    """
    if own < LIGHT * body:
        return third(own)
    root = _root(lambda b: body * b * math.sin(b) - own * math.cos(b), math.pi / 2)
    return own / root**2 - body


def cantilever_exact(own: float, body: float) -> float:
    """Return the part of a cantilever's own mass at its tip that gives the exact lowest frequency.

    Notes
    -----
    1 + cos cosh + (body/own) beta (cos sinh - sin cosh) = 0 at beta; omega = beta^2 sqrt(E I/(own L^3)).
    """
    if own < LIGHT * body:
        return cantilever(own)

    def rest(b: float) -> float:
        swing = math.cos(b) * math.sinh(b) - math.sin(b) * math.cosh(b)
        return -(own * (1 + math.cos(b) * math.cosh(b)) + body * b * swing)

    root = _root(rest, _FREE_CANTILEVER)
    return 3 * own / root**4 - body


def _root(rises: Callable[[float], float], high: float) -> float:
    """Return where a function that is negative near 0 passes zero, by halving; ``high`` where it does not."""
    low = 0.0
    for _ in range(_HALVINGS):
        middle = (low + high) / 2
        low, high = (middle, high) if rises(middle) < 0 else (low, middle)
    return high


_OWN = asked("own", "own mass of the spring or beam ms", q.MASS, "60 kg")
_BODY = RecipeInput("body", "mass of the body M", q.MASS, "600 kg", low_counts=True)
_OWN_J = asked("own", "own inertia of the shaft Js", q.INERTIA, "1 kg m2")
_BODY_J = RecipeInput("body", "inertia of the disc Jd", q.INERTIA, "2 kg m2", low_counts=True)
_CHECKED = RecipeInput("body", "mass of the body M", q.MASS, "600 kg", low_counts=True, only_checked=True)
_CHECKED_J = RecipeInput(
    "body", "inertia of the disc Jd", q.INERTIA, "2 kg m2", low_counts=True, only_checked=True
)
RAYLEIGH = Source("Lord Rayleigh, The Theory of Sound; W. T. Thomson, section 2.4", "from memory")
_LIGHT = "own mass up to the body's; never gives too low a frequency"


_WAVES = Source("S. Timoshenko, Vibration Problems in Engineering (waves along the spring)", "from memory")


def _light(sizes: Sizes) -> str:
    """Tell of heavy springs: the frequency is 0.7 % high for a spring as heavy as the body (exact roots)."""
    if "body" not in sizes:
        return "without the body's mass it was not checked that the body is the heavier one"
    if sizes["own"] <= sizes["body"]:
        return ""
    return "the spring is heavier than the body: take the exact part, or divide it into several bodies"


RECIPES = (
    Recipe(
        "own-mass-spring",
        "own mass of a spring or rod",
        "What to add to the body on a spring or rod for its own mass.",
        (_OWN, _CHECKED),
        q.MASS,
        third,
        "m = ms/3",
        _LIGHT,
        RAYLEIGH,
        "3 %",
        doubts=(_light,),
    ),
    Recipe(
        "own-mass-spring-exact",
        "own mass of a spring or rod, exact",
        "The same, so that the lowest frequency is that of the heavy spring.",
        (_OWN, _BODY),
        q.MASS,
        spring_exact,
        "m = ms/b^2 - M, b tan b = ms/M",
        "the lowest frequency only; far end fixed",
        _WAVES,
        "3 %",
    ),
    Recipe(
        "own-inertia-shaft",
        "own inertia of a shaft",
        "What to add to the disc on a shaft for the shaft's own inertia.",
        (_OWN_J, _CHECKED_J),
        q.INERTIA,
        third,
        "J = Js/3",
        "other end fixed or a node; " + _LIGHT,
        RAYLEIGH,
        "3 %",
        doubts=(_light,),
    ),
    Recipe(
        "own-inertia-shaft-exact",
        "own inertia of a shaft, exact",
        "The same, so that the lowest frequency is that of the heavy shaft.",
        (_OWN_J, _BODY_J),
        q.INERTIA,
        spring_exact,
        "J = Js/b^2 - Jd, b tan b = Js/Jd",
        "the lowest frequency only; other end fixed or a node",
        _WAVES,
        "3 %",
    ),
    Recipe(
        "own-mass-cantilever",
        "own mass of a cantilever",
        "What to add to the body at the tip for the beam's own mass.",
        (_OWN, _CHECKED),
        q.MASS,
        cantilever,
        "m = 33 ms/140",
        _LIGHT,
        RAYLEIGH,
        "3 %",
        doubts=(_light,),
    ),
    Recipe(
        "own-mass-cantilever-exact",
        "own mass of a cantilever, exact",
        "The same, so that the lowest frequency is that of the heavy beam; 0.2427 ms without a body.",
        (_OWN, _BODY),
        q.MASS,
        cantilever_exact,
        "m = 3 ms/b^4 - M, 1 + cos b cosh b + (M/ms) b (cos b sinh b - sin b cosh b) = 0",
        "the lowest frequency only; slender beam",
        Source("W. T. Thomson, appendix D and section on beams", "from memory"),
        "3 %",
    ),
    Recipe(
        "own-mass-pinned",
        "own mass of a beam on two pins",
        "What to add to the body at the middle for the beam's own mass.",
        (_OWN, _CHECKED),
        q.MASS,
        pinned,
        "m = 17 ms/35",
        _LIGHT,
        RAYLEIGH,
        "3 %",
        doubts=(_light,),
    ),
    Recipe(
        "own-mass-clamped",
        "own mass of a clamped beam or a leg in sway",
        "What to add to the body at the middle of a beam clamped at both ends, or on a leg that sways.",
        (_OWN, _CHECKED),
        q.MASS,
        clamped,
        "m = 13 ms/35",
        _LIGHT,
        RAYLEIGH,
        "3 %",
        doubts=(_light,),
    ),
)
