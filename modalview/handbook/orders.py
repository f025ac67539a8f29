"""Orders and frequencies that machines excite: vanes, teeth, poles, belts, engines, joints."""

import math

from modalview.handbook.asked import angle, asked, count, length, number
from modalview.handbook.recipe import Recipe, Source
from modalview.handbook.sizes import RecipeInput, Sizes
from modalview.units import quantities as q
from modalview.units.show import short

PRACTICE = Source("no single source", "common practice")


def frequency(order: float, speed: float) -> float:
    """Return the angular frequency of an order of a speed."""
    return order * speed


def passing(count: float, harmonic: float) -> float:
    """Return the order at which so many vanes, blades, teeth or bars pass."""
    return count * harmonic


def driven(driving: float, driven: float) -> float:
    """Return the order of a driven shaft's once per turn, counted on the driving one."""
    return driving / driven


def twice_line(line: float) -> float:
    """Return twice the mains frequency."""
    return 2 * line


def synchronous(line: float, poles: float) -> float:
    """Return the speed of the field of an induction machine."""
    return 2 * line / poles


def slip(line: float, poles: float, speed: float) -> float:
    """Return the angular frequency by which the rotor lags the field."""
    return abs(synchronous(line, poles) - speed)


def pole_pass(line: float, poles: float, speed: float) -> float:
    """Return the angular frequency at which poles pass a bar: slip times poles."""
    return poles * slip(line, poles, speed)


def belt(diameter: float, length: float, harmonic: float) -> float:
    """Return the order of a belt's once per round, counted on the pulley."""
    return harmonic * math.pi * diameter / length


def firing(cylinders: float, strokes: float, harmonic: float) -> float:
    """Return the order of the firing of an evenly firing engine."""
    return harmonic * cylinders * 2 / strokes


def gas(strokes: float, harmonic: float) -> float:
    """Return an order of the gas torque of one cylinder."""
    return harmonic * 2 / strokes


def inertia(harmonic: float) -> float:
    """Return an order of the forces and torques of the moving masses."""
    return harmonic


def joint(harmonic: float) -> float:
    """Return an order of a universal joint at an angle: twice per turn."""
    return 2 * harmonic


def joint_swing(angle: float) -> float:
    """Return how far a universal joint's output leads and lags, to either side."""
    return math.asin(math.tan(angle / 2) ** 2)


_HARMONIC = count("harmonic", "harmonic h", "1", default="1")
_LINE = asked("line", "mains frequency f", q.FREQUENCY, "50 Hz")
_POLES = count("poles", "number of poles p", "4", low=2)
_SPEED = asked("speed", "running speed n", q.SPEED, "1480 rpm")
_STROKES = count("strokes", "strokes of the cycle s, 4 or 2", "4", low=2)
_ENGINE = Source("C. F. Taylor, The Internal-Combustion Engine", "formula seen in the source")


def _even(sizes: Sizes) -> str:
    return "" if sizes["poles"] % 2 == 0 else "a machine has an even number of poles"


def _cycle(sizes: Sizes) -> str:
    return "" if sizes["strokes"] in {2, 4} else "an engine's cycle has 4 or 2 strokes"


def _near_synchronous(sizes: Sizes) -> str:
    """Slip of running induction machines is below some 10 %; common practice."""
    field = synchronous(sizes["line"], sizes["poles"])
    off = (field - sizes["speed"]) / field
    if off < 0:
        return "the speed is above the field's: a generator, or another number of poles"
    if off > 0.1:
        return f"the slip is {short(100 * off, 3)} %: check speed and number of poles"
    return ""


_INDUCTION = ((_LINE, _POLES, _SPEED), (_even,), (_near_synchronous,))


def _count(what: str, example: str) -> tuple[RecipeInput, ...]:
    return (count("count", f"number of {what} z", example), _HARMONIC)


PASSING = tuple(
    Recipe(
        name,
        title,
        sentence,
        _count(what, example),
        q.RATIO,
        passing,
        "order = h z",
        holds,
        PRACTICE,
        written="order",
    )
    for name, title, sentence, what, example, holds in (
        (
            "order-vanes",
            "vane or blade passing",
            "Order of a pump's vanes or a fan's blades.",
            "vanes or blades",
            "7",
            "even pitch; with diffuser vanes or struts also their multiples",
        ),
        (
            "order-teeth",
            "gear mesh",
            "Order of a gear's teeth, counted on the shaft that has them.",
            "teeth",
            "23",
            "even pitch; planets and carrier turn it by their own speeds: not for planetary gears",
        ),
        (
            "order-rotor-bars",
            "rotor bars",
            "Order of a rotor's bars; sidebands at twice the mains frequency lie on both sides.",
            "bars",
            "44",
            "induction machine; sidebands not included",
        ),
        (
            "order-jaws",
            "jaws or elements of a coupling",
            "Order of a coupling's jaws, pins or elements.",
            "jaws, pins or elements",
            "6",
            "even pitch",
        ),
    )
)

ELECTRICAL = (
    Recipe(
        "line-twice",
        "twice the mains frequency",
        "Pull between stator and rotor.",
        (_LINE,),
        q.FREQUENCY,
        twice_line,
        "f2 = 2 f",
        "fixed by the mains, whatever the speed; behind a frequency converter use its output frequency",
        PRACTICE,
    ),
    Recipe(
        "synchronous-speed",
        "synchronous speed",
        "Speed of the field of an induction or synchronous machine.",
        (_LINE, _POLES),
        q.SPEED,
        synchronous,
        "n = 120 f/p (rpm, Hz)",
        "p counts poles, not pairs",
        Source("two poles make one turn per period", "definition"),
        refusals=(_even,),
    ),
    Recipe(
        "slip-frequency",
        "slip frequency",
        "By how much the rotor lags the field.",
        _INDUCTION[0],
        q.FREQUENCY,
        slip,
        "fs = 2 f/p - n/60",
        "running induction machine: slip up to 10 %",
        Source("difference of two speeds", "definition"),
        "",
        *_INDUCTION[1:],
    ),
    Recipe(
        "pole-pass",
        "pole passing",
        "Spacing of the sidebands of a broken bar or an eccentric rotor.",
        _INDUCTION[0],
        q.FREQUENCY,
        pole_pass,
        "fp = p fs",
        "running induction machine: slip up to 10 %",
        PRACTICE,
        "",
        *_INDUCTION[1:],
    ),
)

DRIVES = (
    Recipe(
        "order-frequency",
        "frequency of an order",
        "Frequency at which an order excites at a speed.",
        (number("order", "order p", "7"), _SPEED),
        q.FREQUENCY,
        frequency,
        "f = p n/60",
        "any speed",
        Source("an order is a multiple of the speed", "definition"),
    ),
    Recipe(
        "order-driven-shaft",
        "driven shaft",
        "Once per turn of a driven shaft, counted on the driving one; teeth or pulley diameters.",
        (
            number("driving", "teeth or diameter of the driving one z1", "84"),
            number("driven", "of the driven one z2", "20"),
        ),
        q.RATIO,
        driven,
        "order = z1/z2",
        "gears: exact; belts slip by 1 to 2 %, toothed ones do not",
        Source("equal speed at the pitch line", "definition"),
        written="order",
    ),
    Recipe(
        "order-belt",
        "belt",
        "Once per round of a belt, counted on one of its pulleys; it excites most at h = 2.",
        (
            length("diameter", "pitch diameter of the pulley D", "250 mm"),
            length("length", "length of the belt L", "2.5 m"),
            _HARMONIC,
        ),
        q.RATIO,
        belt,
        "order = h pi D/L",
        "no slip: a belt that slips is 1 to 2 % slower",
        PRACTICE,
        "2 %",
        (
            lambda s: (
                "" if math.pi * s["diameter"] < s["length"] else "a belt is longer than round its pulley"
            ),
        ),
        written="order",
    ),
    Recipe(
        "order-firing",
        "firing of an engine or compressor",
        "Main order of an evenly firing reciprocating engine.",
        (count("cylinders", "number of cylinders N", "6"), _STROKES, _HARMONIC),
        q.RATIO,
        firing,
        "order = 2 h N/s",
        "even firing; a misfire and uneven cranks bring every half order: keep those in the check",
        _ENGINE,
        refusals=(_cycle,),
        written="order",
    ),
    Recipe(
        "order-gas",
        "gas torque of a cylinder (half orders)",
        "Orders of one cylinder; four-stroke engines have half orders.",
        (_STROKES, _HARMONIC),
        q.RATIO,
        gas,
        "order = 2 h/s",
        "orders that cancel on a rigid crank do excite a twisting one: keep all half orders",
        _ENGINE,
        refusals=(_cycle,),
        written="order",
    ),
    Recipe(
        "order-inertia",
        "moving masses of an engine or compressor",
        "Orders of the forces of pistons and rods: 1 and 2, less of 4 and 6.",
        (_HARMONIC,),
        q.RATIO,
        inertia,
        "order = h",
        "they repeat every turn; which cancel depends on the cranks",
        _ENGINE,
        written="order",
    ),
    Recipe(
        "order-universal-joint",
        "universal joint",
        "Torsional order of a joint that runs at an angle.",
        (_HARMONIC,),
        q.RATIO,
        joint,
        "order = 2 h",
        "one cross joint; two joints in one plane with equal angles cancel it at the ends, not between",
        PRACTICE,
        written="order",
    ),
    Recipe(
        "universal-joint-swing",
        "universal joint, swing",
        "How far the output leads and lags to either side, twice per turn.",
        (angle("angle", "angle of the joint b", "6 deg", high=math.radians(45)),),
        q.ANGLE,
        joint_swing,
        "swing = asin(tan(b/2)^2)",
        "one cross joint, up to 45 deg",
        Source("tan(out) = tan(in)/cos(b), largest difference", "closed form"),
        "10 %",
    ),
)
