"""Beams in bending, at the point and in the direction of the load.

Lengths from the ends to the load are a and b = L - a. All for slender beams: shear makes a short one softer,
which ``SLENDER`` guards.
"""

from collections.abc import Callable

from modalview.handbook.asked import asked, length, young
from modalview.handbook.recipe import Check, Recipe, Source
from modalview.handbook.sizes import RecipeInput, Sizes
from modalview.handbook.validity import less
from modalview.units import quantities as q
from modalview.units.show import short

THOMSON = "W. T. Thomson, Theory of Vibration with Applications, table of spring stiffness"
TABLE = Source(
    f"{THOMSON}; S. S. Rao, Mechanical Vibrations, inside front cover", "formula seen in the source"
)
BERNOULLI = Source("Euler-Bernoulli beam, by superposition", "closed form")
# From here on shear adds at most some per cent to the deflection; common practice, no source.
SLENDERNESS = 10
SLENDER = "length at least 10 times the depth h; ends as rigid as said: the give of real ends is not counted"


def cantilever(length: float, young: float, second: float) -> float:
    """Return the stiffness at the tip of a cantilever."""
    return 3 * young * second / length**3


def guided(length: float, young: float, second: float) -> float:
    """Return the stiffness of a beam clamped at one end whose other end moves without turning."""
    return 12 * young * second / length**3


def pinned(length: float, young: float, second: float) -> float:
    """Return the stiffness at the middle of a beam on two pins."""
    return 48 * young * second / length**3


def clamped(length: float, young: float, second: float) -> float:
    """Return the stiffness at the middle of a beam clamped at both ends."""
    return 192 * young * second / length**3


def propped(length: float, young: float, second: float) -> float:
    """Return the stiffness at the middle of a beam clamped at one end and pinned at the other."""
    return 768 * young * second / (7 * length**3)


def cantilever_turn(length: float, young: float, second: float) -> float:
    """Return the stiffness of a cantilever's tip against turning, free to move."""
    return young * second / length


def pinned_turn(length: float, young: float, second: float) -> float:
    """Return the stiffness of a beam on two pins against turning at one of them."""
    return 3 * young * second / length


def pinned_at(length: float, place: float, young: float, second: float) -> float:
    """Return the stiffness of a beam on two pins at a load anywhere between them."""
    a, b = place, length - place
    return 3 * young * second * length / (a**2 * b**2)


def clamped_at(length: float, place: float, young: float, second: float) -> float:
    """Return the stiffness of a beam clamped at both ends at a load anywhere between them."""
    a, b = place, length - place
    return 3 * young * second * length**3 / (a**3 * b**3)


def propped_at(length: float, place: float, young: float, second: float) -> float:
    """Return the stiffness at a distance from the clamped end of a beam pinned at the other end."""
    a, b = place, length - place
    return 12 * young * second * length**3 / (a**3 * b**2 * (3 * length + b))


def pinned_overhang(span: float, overhang: float, young: float, second: float) -> float:
    """Return the stiffness at the tip of an overhang beyond one of two pins."""
    return 3 * young * second / ((span + overhang) * overhang**2)


def clamped_overhang(span: float, overhang: float, young: float, second: float) -> float:
    """Return the stiffness at the tip of an overhang beyond the pin of a clamped and pinned beam."""
    return 12 * young * second / (overhang**2 * (3 * span + 4 * overhang))


_L = length("length", "length L", "2 m")
_EI = (
    young(),
    asked("second", "second moment of area I", q.SECOND_MOMENT, "8.4e6 mm4"),
    RecipeInput("depth", "depth h of the section", q.LENGTH, "200 mm", only_checked=True),
)


def _slender(sizes: Sizes) -> str:
    shortest = min(sizes[name] for name in ("length", "span", "overhang") if name in sizes)
    if "depth" not in sizes:
        return f"without the depth h it was not checked that the beam is slender (L/h from {SLENDERNESS})"
    found = shortest / sizes["depth"]
    if found >= SLENDERNESS:
        return ""
    return f"L/h is {short(found, 3)}, below {SLENDERNESS}: shear makes the beam softer than this"


_AT = length("place", "distance a of the load from one end", "0.5 m")
_BETWEEN: tuple[Check, ...] = (less("place", "length", "the load must act between the ends: a below L"),)
_REACH = (length("span", "span l", "2 m"), length("overhang", "overhang a", "0.5 m"))


def _beam(  # noqa: PLR0913, PLR0917  (a row of a table)
    name: str,
    title: str,
    sentence: str,
    asks: tuple[RecipeInput, ...],
    compute: Callable[..., float],
    formula: str,
    source: Source = TABLE,
    refusals: tuple[Check, ...] = (),
) -> Recipe:
    result = q.TORSIONAL_STIFFNESS if name.endswith("turn") else q.STIFFNESS
    return Recipe(
        name,
        title,
        sentence,
        (*asks, *_EI),
        result,
        compute,
        formula,
        SLENDER,
        source,
        "10 %",
        refusals,
        (_slender,),
    )


RECIPES = (
    _beam(
        "cantilever-tip",
        "cantilever, load at the tip",
        "Stiffness of the free end across the beam.",
        (_L,),
        cantilever,
        "k = 3 E I/L^3",
    ),
    _beam(
        "cantilever-turn",
        "cantilever, turn of the tip",
        "Stiffness of the free end against a moment, the end free to move.",
        (_L,),
        cantilever_turn,
        "k = E I/L",
        BERNOULLI,
    ),
    _beam(
        "beam-guided",
        "beam clamped, other end moves without turning",
        "Stiffness of one leg of a stiff frame in sway.",
        (_L,),
        guided,
        "k = 12 E I/L^3",
        BERNOULLI,
    ),
    _beam(
        "beam-pinned-middle",
        "beam on two pins, load at the middle",
        "Stiffness at the middle of a simply supported beam.",
        (_L,),
        pinned,
        "k = 48 E I/L^3",
    ),
    _beam(
        "beam-pinned-at",
        "beam on two pins, load anywhere",
        "Stiffness at the load, between two pins.",
        (_L, _AT),
        pinned_at,
        "k = 3 E I L/(a^2 b^2), b = L - a",
        BERNOULLI,
        _BETWEEN,
    ),
    _beam(
        "beam-pinned-turn",
        "beam on two pins, turn at one end",
        "Stiffness of one pinned end against a moment there.",
        (_L,),
        pinned_turn,
        "k = 3 E I/L",
        BERNOULLI,
    ),
    _beam(
        "beam-clamped-middle",
        "beam clamped at both ends, load at the middle",
        "Stiffness at the middle of a built-in beam.",
        (_L,),
        clamped,
        "k = 192 E I/L^3",
    ),
    _beam(
        "beam-clamped-at",
        "beam clamped at both ends, load anywhere",
        "Stiffness at the load of a built-in beam.",
        (_L, _AT),
        clamped_at,
        "k = 3 E I L^3/(a^3 b^3), b = L - a",
        BERNOULLI,
        _BETWEEN,
    ),
    _beam(
        "beam-propped-middle",
        "beam clamped and pinned, load at the middle",
        "Stiffness at the middle of a propped cantilever.",
        (_L,),
        propped,
        "k = 768 E I/(7 L^3)",
    ),
    _beam(
        "beam-propped-at",
        "beam clamped and pinned, load anywhere",
        "Stiffness at the load; the distance a is from the clamped end.",
        (_L, length("place", "distance a of the load from the clamped end", "0.5 m")),
        propped_at,
        "k = 12 E I L^3/(a^3 b^2 (3 L + b)), b = L - a",
        BERNOULLI,
        _BETWEEN,
    ),
    _beam(
        "beam-pinned-overhang",
        "beam on two pins with an overhang, load at its tip",
        "Stiffness at the tip of an overhung end.",
        _REACH,
        pinned_overhang,
        "k = 3 E I/((l + a) a^2)",
        Source(THOMSON, "formula seen in the source"),
    ),
    _beam(
        "beam-propped-overhang",
        "beam clamped and pinned with an overhang, load at its tip",
        "Stiffness at the tip of an end overhung beyond the pin.",
        _REACH,
        clamped_overhang,
        "k = 12 E I/(a^2 (3 l + 4 a))",
        BERNOULLI,
    ),
)
