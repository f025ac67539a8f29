"""Balance grades and figures of guidance: published tables as examples, never as the rule."""

import math

from modalview.handbook.asked import asked, number, word
from modalview.handbook.orders import PRACTICE
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.sizes import Sizes
from modalview.units import quantities as q
from modalview.units.show import short

CHECK = "an example: check against the current edition of the standard and what was agreed"
# ISO 21940-11, table 1, a selection; in m/s.
GRADES = {
    "pumps": 6.3e-3,
    "fans": 6.3e-3,
    "electric motors": 6.3e-3,
    "compressors": 2.5e-3,
    "gas and steam turbines": 2.5e-3,
    "machine-tool drives": 2.5e-3,
    "cardan drive shafts": 16e-3,
    "crushing machines": 16e-3,
    "complete reciprocating engines for cars and trucks": 100e-3,
    "gyroscopes": 0.4e-3,
}
# ISO 10816-1:1995, annex B: upper limits of zones A, B and C in m/s rms, by class of machine.
SEVERITY = {
    "I": (0.71e-3, 1.8e-3, 4.5e-3),
    "II": (1.12e-3, 2.8e-3, 7.1e-3),
    "III": (1.8e-3, 4.5e-3, 11.2e-3),
    "IV": (2.8e-3, 7.1e-3, 18e-3),
}
ZONES = ("A", "B", "C")
# Damping ratios as found, lowest and highest; for plausibility only.
DAMPING = {
    "steel material": (0.0005, 0.002),
    "welded steel frame": (0.01, 0.03),
    "bolted steel frame": (0.02, 0.05),
    "reinforced concrete": (0.02, 0.07),
    "natural rubber mount": (0.02, 0.08),
    "filled rubber mount": (0.05, 0.15),
    "coil spring": (0.001, 0.01),
    "torsional train": (0.005, 0.02),
}
# From these amplification factors on a mode counts as a resonance, and its margin follows the formula.
FROM, FORMULA_FROM = 2.5, 3.55


def specific_unbalance(grade: float, speed: float) -> float:
    """Return the permissible offset of a rotor's centre of gravity."""
    return grade / speed


def permissible_unbalance(grade: float, mass: float, speed: float) -> float:
    """Return the permissible unbalance of a rotor, in kg m."""
    return mass * grade / speed


def usual_grade(machine: str) -> float:
    """Return the grade that the table gives for a kind of machine, in m/s."""
    return GRADES[machine]


def severity_limit(machine: str, zone: str) -> float:
    """Return the upper limit of a zone of severity, in m/s rms."""
    return SEVERITY[machine][ZONES.index(zone)]


def damping(structure: str) -> float:
    """Return the middle, by ratio, of the damping found in a kind of structure."""
    return math.sqrt(math.prod(DAMPING[structure]))


def margin_below(amplification: float) -> float:
    """Return the separation wanted of a mode below the lowest speed, as a share of that speed."""
    if amplification < FROM:
        return 0.0
    return 0.05 if amplification <= FORMULA_FROM else (100 - (84 + 6 / (amplification - 3))) / 100


def margin_above(amplification: float) -> float:
    """Return the separation wanted of a mode above the highest speed, as a share of that speed."""
    if amplification < FROM:
        return 0.0
    return 0.15 if amplification <= FORMULA_FROM else (126 - 6 / (amplification - 3) - 100) / 100


def _damping_range(sizes: Sizes) -> str:
    low, high = DAMPING[sizes["structure"]]
    return f"found from {short(100 * low)} % to {short(100 * high)} %; the value is their middle by ratio"


_GRADE = asked("grade", "balance quality grade G", q.BALANCE_GRADE, "G 6.3")
_TOP = asked("speed", "highest service speed n", q.SPEED, "3000 rpm")
_ISO = Source("ISO 21940-11 (before: ISO 1940-1), G = e x angular speed", "formula seen in the source")
_API = Source(
    "API 617, 5th and 6th edition, as quoted elsewhere",
    "formula seen second-hand, check against the current edition",
)
_AMPLIFICATION = (number("amplification", "amplification factor AF", "5"),)

RECIPES = (
    Recipe(
        "specific-unbalance",
        "offset that a balance grade permits",
        "Permissible offset of the centre of gravity, in um (or g mm per kg).",
        (_GRADE, _TOP),
        q.LENGTH,
        specific_unbalance,
        "e = G/(2 pi n)",
        "rigid rotor; the highest service speed, not the running one",
        _ISO,
    ),
    Recipe(
        "permissible-unbalance",
        "unbalance that a balance grade permits",
        "Permissible unbalance of a whole rotor, both planes together.",
        (_GRADE, asked("mass", "mass of the rotor m", q.MASS, "50 kg"), _TOP),
        q.UNBALANCE,
        permissible_unbalance,
        "U = m G/(2 pi n)",
        "rigid rotor; the highest service speed, not the running one; in use it grows",
        _ISO,
    ),
    Recipe(
        "balance-grade",
        "usual balance grade",
        "Grade that is usual for a kind of machine.",
        (word("machine", "kind of machine", tuple(GRADES)),),
        q.BALANCE_GRADE,
        usual_grade,
        "table",
        "a selection of the table; rigid rotors",
        Source("ISO 21940-11, table 1", "check against the current edition"),
        remarks=(CHECK,),
    ),
    Recipe(
        "severity-limit",
        "limit of vibration severity",
        "Upper limit of a zone, mm/s rms on a bearing housing.",
        (word("machine", "class of machine", tuple(SEVERITY)), word("zone", "zone below the limit", ZONES)),
        q.VELOCITY,
        severity_limit,
        "table",
        "rms, 10 Hz to 1 kHz; I small, II medium, III large on rigid, IV on soft foundations",
        Source("ISO 10816-1:1995, annex B (now ISO 20816)", "from memory, check against the current edition"),
        remarks=(CHECK,),
    ),
    Recipe(
        "margin-below",
        "margin of a mode below the lowest speed",
        "Separation by amplification factor, as a share of the running speed.",
        _AMPLIFICATION,
        q.RATIO,
        margin_below,
        "0 below AF 2.5; 5 % to 3.55; above, 100 - (84 + 6/(AF - 3)) %",
        "an older form of one rule for compressors; of the speed, not of the mode",
        _API,
        remarks=(CHECK,),
        written="percent",
    ),
    Recipe(
        "margin-above",
        "margin of a mode above the highest speed",
        "Separation by amplification factor, as a share of the running speed.",
        _AMPLIFICATION,
        q.RATIO,
        margin_above,
        "0 below AF 2.5; 15 % to 3.55; above, 126 - 6/(AF - 3) - 100 %",
        "an older form of one rule for compressors; of the speed, not of the mode",
        _API,
        remarks=(CHECK,),
        written="percent",
    ),
    Recipe(
        "damping-ratio",
        "usual damping ratio",
        "Fraction of critical damping found in a kind of structure.",
        (word("structure", "kind of structure", tuple(DAMPING)),),
        q.RATIO,
        damping,
        "sqrt(lowest * highest)",
        "for plausibility: the range is wide; measure where the response matters",
        PRACTICE,
        doubts=(_damping_range,),
        written="percent",
    ),
)
