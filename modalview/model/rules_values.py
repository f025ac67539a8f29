"""Rules of single values: signs, tolerances, directions and ends."""

import math
from collections.abc import Sequence

from modalview.errors import UnitError
from modalview.model.parts import Axes, Direction, End, Motion
from modalview.model.rules_context import Context, Findings, points
from modalview.model.values import Entry, Tolerance, Value, is_sane
from modalview.units.parse import read
from modalview.units.quantities import ANGLE
from modalview.units.show import short

# Axes further from a right angle than this cosine were not meant as right-handed axes.
SQUARE = 1e-3


def above_zero(key: str, entry: Entry | Value | None, why: str = "") -> Findings:
    """Yield a fault when a number is zero or less."""
    if entry is not None and entry.si <= 0:
        yield key, f'must be above zero; found "{entry.text}"{why}'


def not_negative(key: str, entry: Entry | Value | None) -> Findings:
    """Yield a fault when a number is below zero."""
    if entry is not None and entry.si < 0:
        yield key, f'must not be negative; found "{entry.text}"'


def positive_value(key: str, value: Value | None, why: str = "") -> Findings:
    """Yield what is wrong with a value that must be above zero, and with its tolerance."""
    if value is not None:
        yield from above_zero(key, value, why)
        yield from tolerance(f"{key} . tolerance", value.tolerance, value.entry)


def share(key: str, entry: Entry | None) -> Findings:
    """Yield a fault when a margin or ratio is not from 0 to below 100 %."""
    if entry is not None and not _is_share(entry):
        yield key, f'must be from 0 % to below 100 %; found "{entry.text}"{_percent_meant(entry)}'


def _is_share(entry: Entry) -> bool:
    return math.isnan(entry.si) or 0 <= entry.si < 1


def _percent_meant(entry: Entry) -> str:
    """Say that a bare number is a share of one, where it was hardly meant so."""
    bare = not entry.text.rstrip().endswith("%")
    told = f', which is {short(100 * entry.si)} %; write "{entry.text} %"'
    return told if bare and 1 < entry.si < 100 else ""


def tolerance(key: str, given: Tolerance | None, nominal: Entry | None) -> Findings:
    """Yield what is wrong with a tolerance; ``nominal`` is None for one of a whole part."""
    if given is None:
        return
    lower = given.minus or given.both
    if lower is not None and not _is_share(lower):
        told = f'must be from 0 % to below 100 % downwards; found "{lower.text}"'
        yield key, told + _percent_meant(lower)
    if given.plus is not None and not (math.isnan(given.plus.si) or 0 <= given.plus.si < math.inf):
        yield key, f'must not be negative upwards; found "{given.plus.text}"'
    if given.low is not None and given.high is not None:
        yield from _enclosure(key, given.low, given.high, nominal)


def _enclosure(key: str, low: Entry, high: Entry, nominal: Entry | None) -> Findings:
    if nominal is None:
        yield key, 'is a percentage here, such as "10 %"; from and to stand at the value itself'
        return
    if low.si > nominal.si or high.si < nominal.si:
        yield key, f'from "{low.text}" to "{high.text}" must enclose the value "{nominal.text}"'
    if nominal.si > 0 and low.si <= 0:
        yield key, f'from "{low.text}" must stay above zero, a tolerance below 100 %'


def end(key: str, given: End, context: Context) -> Findings:
    """Yield what is wrong with an end: on what it stands, and its offset."""
    if (given.body is None) == (given.support is None):
        found = "both are given" if given.body is not None else "neither is given"
        yield key, f"an end stands on one body or one support; {found}"
    if given.body is not None and given.body not in context.bodies:
        yield f"{key} . body", _unknown("body", given.body, given.body in context.supports)
    if given.support is not None and given.support not in context.supports:
        yield f"{key} . support", _unknown("support", given.support, given.support in context.bodies)
    if given.offset is not None:
        if given.support is not None and given.body is None:
            yield (
                f"{key} . offset",
                "is from a body's centre of gravity; place the support itself by its position",
            )
        yield from points(f"{key} . offset", given.offset, context, required=False)


def _unknown(kind: str, name: str, other: bool) -> str:  # noqa: FBT001  (private, one caller)
    hint = f"; it is a {'support' if kind == 'body' else 'body'}: write it so" if other else ""
    return f'there is no {kind} "{name}"{hint}'


def vector(key: str, given: Sequence[float] | None, context: Context) -> Findings:
    """Yield what is wrong with a vector: number of components, length, finiteness."""
    if given is None:
        return
    if len(given) != context.dimensions:
        yield key, f"has {len(given)} numbers; in {context.motion.value} it needs {context.dimensions}"
    elif not all(is_sane(number) or math.isnan(number) for number in given):
        yield key, f"needs finite numbers of any sensible size; found {list(given)}"
    elif not any(given):
        yield key, "has no length: all its numbers are zero"


def space_axis(key: str, given: Sequence[float] | None, context: Context) -> Findings:
    """Yield what is wrong with an axis of rotation, which only space has to be told."""
    if given is not None and context.motion is not Motion.SPACE:
        yield key, f"has a meaning in space only; in {context.motion.value} leave it out"
    else:
        yield from vector(key, given, context)


def axes(key: str, given: Axes | None, context: Context) -> Findings:
    """Yield what is wrong with a part's own axes."""
    if given is None:
        return
    if context.drawn_only:
        yield key, f"have no meaning in {context.motion.value}; leave them out"
        return
    wrong = [*vector(f"{key} . x", given.x, context), *vector(f"{key} . y", given.y, context)]
    yield from wrong
    if not wrong and given.x is not None and given.y is not None and cosine(given.x, given.y) > SQUARE:
        yield key, f"must stand at right angles; found x {list(given.x)} and y {list(given.y)}"


def cosine(one: Sequence[float], other: Sequence[float]) -> float:
    """Return the cosine of the angle between two lines, 0 to 1.

    >>> cosine((1, 0), (0, -3))
    0.0
    """
    product = sum(a * b for a, b in zip(one, other, strict=True))
    return abs(product) / math.hypot(*one) / math.hypot(*other)


def direction(
    key: str, given: Direction | None, context: Context, *, rotating: bool = False, turning: bool = False
) -> Findings:
    """Yield what is wrong with a direction.

    ``rotating`` permits the word, ``turning`` permits rotations such as "rz": the direction of a torque.
    """
    if given is None:
        return
    if not isinstance(given, str):
        if context.drawn_only:
            yield key, _ways(context, str(list(given)), rotating=rotating, turning=turning)
        else:
            yield from vector(key, given, context)
    elif given == "rotating" and rotating and not context.drawn_only:
        return
    elif given.removeprefix("-") not in _letters(context, turning=turning) and not _is_angle(given, context):
        yield key, _ways(context, f'"{given}"', rotating=rotating, turning=turning)


def _letters(context: Context, *, turning: bool) -> tuple[str, ...]:
    if turning or context.motion is Motion.SHAFT_TRAIN:
        return context.freedoms
    return tuple(one for one in context.freedoms if not one.startswith("r"))


def _is_angle(text: str, context: Context) -> bool:
    if context.motion is not Motion.PLANE:
        return False
    try:
        read(text, ANGLE)
    except UnitError:
        return False
    return True


def _ways(context: Context, found: str, *, rotating: bool, turning: bool) -> str:
    letters = _letters(context, turning=turning)
    ways = [f'"{one}"' for one in letters] + [f'"-{letters[0]}"']
    if context.motion is Motion.PLANE:
        ways.append('an angle from x such as "30 deg"')
    if not context.drawn_only:
        ways.append(f"a list of {context.dimensions} numbers")
        ways += ['"rotating"'] if rotating else []
    told = f"in {context.motion.value} is {', '.join(ways[:-1])} or {ways[-1]}; found {found}"
    if rotating and not turning and found.strip('"-') in context.freedoms:
        told += ', which needs a torque as magnitude, such as {"torque": "300 N m"}'
    return told


def listed(key: str, given: Sequence[str] | None, known: Sequence[str], where: str) -> Findings:
    """Yield what is wrong with a list of directions: unknown or doubled ones."""
    if given is None:
        return
    for one in dict.fromkeys(given):
        if one not in known:
            yield key, f'{where} has no direction "{one}"; it has {", ".join(known)}'
        elif given.count(one) > 1:
            yield key, f'names "{one}" twice'
