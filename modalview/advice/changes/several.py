"""The least change of several values as an option: rounded, proven by counts, solved anew."""

import math
from collections.abc import Sequence

import numpy as np

from modalview.advice.changes.edges import Gate
from modalview.advice.changes.landscape import Landscape, landscape
from modalview.advice.changes.least import Least, Search, least_change, rounded_points
from modalview.advice.changes.options import Base, Told, Tried, option_of, tried
from modalview.advice.changes.results import Found, Kind, LeastChange, Option, ValueChange
from modalview.advice.changes.values import Variable, require_apart
from modalview.advice.changes.writing import Writer
from modalview.units.show import short

# Few digits may cost this much of the amount, and this much besides.
DIGITS, DEARER, BESIDES = (3, 4, 5, 6), 0.02, 0.01
# Where counts leave a point open, values go so much farther from today's.
FARTHER = (0.0, 1e-4, 1e-3)


def least_of(base: Base, gates: Sequence[Gate], variables: Sequence[Variable], search: Search) -> LeastChange:
    """Find the least change of some values that clears everything, and prove it.

    Parameters
    ----------
    base : Base
    gates : sequence of Gate
    variables : sequence of Variable
    search : Search

    Raises
    ------
    InputError
        Two of the values multiply each other.
    CancelledError
    """
    require_apart(base.states[0].assembly, variables)
    scene = landscape(gates, variables)
    least = least_change(scene, search)
    option = _proven(base, scene, least, search) if least.factors is not None else None
    status = least.status
    if base.clear:
        status = Found.CLEAR_NOW
    elif status in (Found.FOUND, Found.CLEAR_NOW) and option is None:
        status = Found.NONE_FOUND
    factors = _factors(variables, option)
    return LeastChange(
        values=tuple(one.id for one in variables),
        status=status,
        limits=tuple((float(low), float(high)) for low, high in least.limits),
        factors=factors,
        amount=option.amount if option else (0.0 if status is Found.CLEAR_NOW else math.inf),
        least=least.bound,
        boxes=least.boxes,
        sentence=_sentence(base, variables, status, least, option),
        option=option,
    )


def _proven(base: Base, scene: Landscape, least: Least, search: Search) -> Option | None:
    if least.factors is None or base.clear:
        return None
    writer = Writer.of(base.states[0].assembly, base.model)
    spelled = [
        lambda factor, digits, side, one=one: writer.factor_spelled(one, factor, digits, side)
        for one in scene.variables
    ]
    weights = np.array(search.weights)
    for farther in FARTHER:
        start = np.exp(np.log(least.factors) * (1 + farther))
        for digits in DIGITS:
            points = rounded_points(start, spelled, digits)
            costs = np.abs(np.log(points)) @ weights
            fit = scene.clear(points)
            if digits < DIGITS[-1]:
                fit &= costs <= least.amount * (1 + DEARER) + BESIDES
            within = _within(points, least)
            for number in np.lexsort((costs, (points != 1.0).sum(axis=1))):
                if not (fit[number] and within[number]):
                    continue
                model, changes = writer.changed(scene.variables, points[number].tolist(), digits)
                after = tried(base, model)
                if after is not None and after.clear:
                    said = writer.told(scene.variables, points[number].tolist(), digits)
                    return _option(base, after, changes, (said, float(costs[number])))
    return None


def _within(points: np.ndarray, least: Least) -> np.ndarray:
    low, high = least.limits.T
    inside: np.ndarray = ((points >= low) & (points <= high)).all(axis=1)
    return inside


def _option(base: Base, after: Tried, changes: tuple[ValueChange, ...], told: tuple[str, float]) -> Option:
    text, amount = told
    kind = Kind.SEVERAL if len({one.factor for one in changes}) > 1 else Kind.ONE_VALUE
    return option_of(base, after, Told(kind, text, changes, amount))


def _factors(variables: Sequence[Variable], option: Option | None) -> tuple[float, ...]:
    if option is None:
        return ()
    changed = {one.value: one.factor for one in option.changes}
    return tuple(changed.get(one.members[0], 1.0) for one in variables)


def _sentence(
    base: Base, variables: Sequence[Variable], status: Found, least: Least, option: Option | None
) -> str:
    if status is Found.CLEAR_NOW:
        return "Everything is clear as it is."
    if option is not None:
        if option.amount <= least.bound * (1 + DEARER) + 2 * BESIDES:
            return f"{option.text}: the least change of {_names(variables)} that clears everything."
        share = short(100 * least.bound / option.amount, 2)
        return (
            f"{option.text}: a change of {_names(variables)} that clears everything, perhaps not the least; "
            f"none below {share} % of it exists."
        )
    writer = Writer.of(base.states[0].assembly, base.model)
    spans = ", ".join(
        f"{one.label} from {writer.text(one, low * writer.nominal(one), 3)} "
        f"to {writer.text(one, high * writer.nominal(one), 3)}"
        for one, (low, high) in zip(variables, least.limits.tolist(), strict=True)
    )
    if status is Found.NONE_EXISTS:
        boxes = f"{least.boxes} box{'es' if least.boxes != 1 else ''} of values"
        return f"No change clears everything: {spans}. Proven by counts over {boxes}."
    reached = f"; none cheaper than {short(least.bound, 3)} exists" if 0 < least.bound < math.inf else ""
    return f"None found: {spans}. That is no proof that none exists{reached}."


def _names(variables: Sequence[Variable]) -> str:
    names = [one.label for one in variables]
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"
