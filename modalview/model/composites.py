"""Fields that hold more than one number, typed as one text: speeds, margins, directions, teeth.

What `composite_text` writes, `read_composite` reads, by the window's rule: a decimal comma is accepted where
a single value stands.
"""

import re
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from modalview.errors import UnitError
from modalview.model.parts import (
    Axes,
    Body,
    Damper,
    Excitation,
    Gear,
    Machine,
    Margin,
    RigidLink,
    Shaft,
    SpeedRange,
    Spring,
)
from modalview.model.typed_machines import typed_direction, typed_margin, typed_rate, typed_speed
from modalview.model.values import Entry
from modalview.units.show import short

_VECTOR_PART = re.compile(r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?")


@dataclass(frozen=True, slots=True)
class _Form:
    """How one kind of field is written and read."""

    write: Callable[[Any], str]
    read: Callable[[str], Any]


def composite_text(part: type, name: str, item: Any) -> str | None:
    """Return the text of a field that is typed as one although it holds more; None for every other field.

    >>> composite_text(Gear, "teeth", (84, -20)), composite_text(Gear, "stiffness", None)
    ('84 : -20', None)
    """
    form = _FORMS.get((part, name))
    if form is None:
        return None
    return "" if item is None else form.write(item)


def is_composite(part: type, name: str) -> bool:
    """Tell whether `read_composite` knows the field."""
    return (part, name) in _FORMS


def read_composite(part: type, name: str, text: str) -> Any:
    """Read what `composite_text` writes.

    Raises
    ------
    UnitError
        With the way such a field is written.

    Examples
    --------
    >>> read_composite(Machine, "speed", "600 to 1800 rpm").to.text
    '1800 rpm'
    >>> read_composite(Spring, "direction", "0 0.6 0.8")
    (0.0, 0.6, 0.8)
    """
    return _FORMS[part, name].read(text.replace("\u2212", "-").strip())


def _speed_text(speed: Entry | SpeedRange) -> str:
    return f"{speed.from_.text} to {speed.to.text}" if isinstance(speed, SpeedRange) else speed.text


def _margin_text(margin: Entry | Margin) -> str:
    return f"-{margin.below.text} / +{margin.above.text}" if isinstance(margin, Margin) else margin.text


def _vector_text(vector: tuple[float, ...]) -> str:
    return " ".join(short(number, 15) for number in vector)


def _numbers(text: str) -> tuple[float, ...] | None:
    words = re.split(r"[\s;]+", text.strip("[]() ").replace(", ", " "))
    if len(words) < 2 or not all(_VECTOR_PART.fullmatch(word) for word in words):
        return None
    return tuple(float(word) for word in words)


def _vector(text: str) -> tuple[float, ...]:
    found = _numbers(text)
    if found is None:
        raise UnitError(f'"{text}" cannot be read as a direction: write its components, such as "0 0.6 0.8"')
    return found


def _direction_text(direction: str | tuple[float, ...]) -> str:
    return direction if isinstance(direction, str) else _vector_text(direction)


def _direction(text: str) -> str | tuple[float, ...]:
    """Read a word as it is, several numbers as components; the rules tell which words there are."""
    return _numbers(text) or typed_direction(text) or text


def _teeth(text: str) -> tuple[int, int]:
    match = re.fullmatch(r"([+-]?\d{1,9})\s*[:/]\s*([+-]?\d{1,9})", text)
    if match is None:
        raise UnitError(f'"{text}" cannot be read as teeth: write those of both gears, such as "84 : 20"')
    return int(match[1]), int(match[2])


def _order(text: str) -> float:
    rate = typed_rate(text)
    if rate.order is None:
        raise UnitError(f'"{text}" is a fixed frequency; an order is a number such as "1" or "0.5x"')
    return rate.order


def _words(text: str) -> tuple[str, ...]:
    return tuple(re.split(r"[\s,;]+", text))


_DIRECTION = _Form(_direction_text, _direction)
_VECTOR = _Form(_vector_text, _vector)
_WORDS = _Form(", ".join, _words)
_MARGIN = _Form(_margin_text, typed_margin)
_FORMS: dict[tuple[type, str], _Form] = {
    (Machine, "speed"): _Form(_speed_text, typed_speed),
    (Machine, "margin"): _MARGIN,
    (Excitation, "margin"): _MARGIN,
    (Excitation, "order"): _Form(lambda order: short(order, 15), _order),
    (Excitation, "direction"): _DIRECTION,
    (Excitation, "axis"): _VECTOR,
    (Spring, "direction"): _DIRECTION,
    (Damper, "direction"): _DIRECTION,
    (Shaft, "axis"): _VECTOR,
    (Gear, "axis"): _VECTOR,
    (Gear, "teeth"): _Form(lambda teeth: f"{teeth[0]} : {teeth[1]}", _teeth),
    (Axes, "x"): _VECTOR,
    (Axes, "y"): _VECTOR,
    (Body, "dof"): _WORDS,
    (RigidLink, "directions"): _WORDS,
}
