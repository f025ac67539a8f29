"""What is typed about a machine in the window: speeds, margins, orders, directions, magnitudes."""

import re
from dataclasses import dataclass

from modalview.errors import UnitError
from modalview.model.parts import Direction, Magnitude, Margin, Motion, SpeedRange
from modalview.model.tolerance_text import typed_entry, typed_tolerance
from modalview.model.values import Entry
from modalview.units import quantities as q
from modalview.units.parse import unit_of

# "600 to 1800 rpm", "600 rpm to 1800 rpm", "600-1800 rpm"
_RANGE = re.compile(r"(?P<low>.+?)\s+to\s+(?P<high>.+)|(?P<first>[0-9.,]+)\s*[-\u2013]\s*(?P<last>[0-9.,].*)")
_ORDER = re.compile(r"(?P<number>[0-9.,]+)\s*[x\u00d7]?")
_GRADE = re.compile(r"(?P<grade>G\s*[0-9].*?)\s+(?:of|on)\s+(?P<mass>.+?)(?:\s+at\s+(?P<speed>.+))?")


def typed_speed(text: str) -> Entry | SpeedRange:
    """Read "2950 rpm", or a range such as "600 to 1800 rpm" or "10 Hz to 30 Hz".

    >>> speed = typed_speed("600 to 1800 rpm")
    >>> speed.from_.text, speed.to.text
    ('600 rpm', '1800 rpm')

    Raises
    ------
    UnitError
        When it is neither.
    """
    plain = text.strip().replace("\u2212", "-")
    match = _RANGE.fullmatch(plain)
    if match is None:
        return typed_entry(plain, q.SPEED)
    low, high = (match["low"] or match["first"]).strip(), (match["high"] or match["last"]).strip()
    if not unit_of(low):
        low = f"{low} {unit_of(high)}"
    return SpeedRange(from_=typed_entry(low, q.SPEED), to=typed_entry(high, q.SPEED))


def typed_margin(text: str) -> Entry | Margin | None:
    """Read "15 %" to both sides, or "-10 % / +20 %" below and above; None for an empty text.

    >>> typed_margin("-10 % / +20 %").above.text
    '20 %'
    """
    found = typed_tolerance(text, None)
    if found is None:
        return None
    if found.minus is not None and found.plus is not None:
        return Margin(below=found.minus, above=found.plus)
    return found.both


@dataclass(frozen=True, slots=True)
class Rate:
    """How often an excitation pushes: an order of the speed, or a fixed frequency."""

    order: float | None = None
    frequency: Entry | None = None


def typed_rate(text: str) -> Rate:
    """Read an order ("1", "7x", "0,5") or a frequency ("100 Hz").

    >>> typed_rate("7x"), typed_rate("100 Hz").frequency.text
    (Rate(order=7.0, frequency=None), '100 Hz')

    Raises
    ------
    UnitError
        When it is neither.
    """
    match = _ORDER.fullmatch(text.strip())
    if match is not None:
        # Read as a ratio, so that a comma with two readings is refused in the same words.
        return Rate(order=typed_entry(match["number"], q.RATIO).si)
    if not text.strip():
        raise UnitError(
            'it is empty; give an order of the speed, such as "1x", or a frequency, such as "100 Hz"'
        )
    return Rate(frequency=typed_entry(text, q.FREQUENCY))


def typed_direction(given: Direction | None) -> Direction | None:
    """Keep a direction as the file may hold it: "30,5 deg" becomes "30.5 deg", nothing None."""
    if not isinstance(given, str):
        return given
    plain = given.strip().replace("\u2212", "-")
    return plain.replace(",", ".") if plain else None


def typed_magnitude(text: str, motion: Motion) -> Magnitude | None:
    """Read how strong an excitation is; its unit says which kind. None for an empty text.

    "400 N", "150 N m", "850 g mm", "0.1 mm" of a support's motion, or a balance quality grade with
    the mass of the rotor, "G 6.3 of 320 kg", and its service speed where it is not the
    machine's, "G 6.3 of 320 kg at 1800 rpm".

    >>> typed_magnitude("G 6,3 of 320 kg", Motion.PLANE).rotor_mass.text
    '320 kg'

    Raises
    ------
    UnitError
        When it is none of them.
    """
    plain = text.strip()
    if not plain:
        return None
    if plain.upper().startswith("G"):
        return _grade(plain)
    kinds = {
        "force": q.FORCE,
        "torque": q.TORQUE,
        "unbalance": q.UNBALANCE,
        "motion": q.ANGLE if motion is Motion.SHAFT_TRAIN else q.LENGTH,
    }
    for kind, quantity in kinds.items():
        try:
            return Magnitude(**{kind: typed_entry(plain, quantity)})
        except UnitError:
            continue
    raise UnitError(
        f'"{text}" cannot be read as the size of an excitation: write a force "400 N", a torque "150 N m", '
        'an unbalance "850 g mm", a balance quality grade "G 6.3 of 320 kg", or a support\'s motion "0.1 mm"'
    )


def _grade(text: str) -> Magnitude:
    match = _GRADE.fullmatch(text)
    if match is None:
        raise UnitError(
            f'"{text}": a balance quality grade needs the mass of the rotor: write "G 6.3 of 320 kg", with '
            '"at 1800 rpm" after it where the grade belongs to another speed than the machine\'s'
        )
    return Magnitude(
        grade=typed_entry(match["grade"], q.BALANCE_GRADE),
        rotor_mass=typed_entry(match["mass"], q.MASS),
        service_speed=typed_entry(match["speed"], q.SPEED) if match["speed"] else None,
    )
