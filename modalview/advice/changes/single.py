"""Windows of one value as they are shown, and the options they hold."""

from collections.abc import Iterator, Sequence
from math import log

from modalview.advice.changes.ceilings import ceilings, reach
from modalview.advice.changes.edges import Gate
from modalview.advice.changes.effects import Ranges
from modalview.advice.changes.numbers import DOWN, UP
from modalview.advice.changes.options import Base, Told, option_of, tried
from modalview.advice.changes.results import Kind, Option, ValueWindows
from modalview.advice.changes.values import Variable
from modalview.advice.changes.windows import Shown, windows
from modalview.advice.changes.writing import Writer

# Digits of a value that is proposed from a window: those its end was rounded to, at most.
DIGITS = 6
# A value beyond so many times today's is no proposal; its window is still shown.
FARTHEST = 20.0
# Where counts leave the end of a window open, a proposal goes so far inward.
INWARD = (0.0, 1e-4, 1e-3)


def value_windows(
    base: Base, gates: Sequence[Gate], variable: Variable, ranges: Ranges | None, *, prove: bool = True
) -> ValueWindows:
    """Return the windows and ceilings of one value.

    Parameters
    ----------
    base : Base
    gates : sequence of Gate
        Of all of its states.
    variable : Variable
    ranges : Ranges or None
        Of the model as it is, for the modes whose ceilings are told.
    prove : bool
        Prove the windows by counts.
    """
    writer = Writer.of(base.states[0].assembly, base.model)
    nominal = writer.nominal(variable)
    shown = Shown(
        nominal,
        lambda value, digits: writer.text(variable, value, digits),
        lambda value, digits, side: writer.spelled(variable, value, digits, side),
    )
    found = windows(gates, variable, shown, prove=prove)
    known = ranges is not None
    concerned = {mode for band in base.states[0].bands for mode in (ranges.within(band) if ranges else ())}
    low, high = variable.limits
    return ValueWindows(
        value=variable.id,
        label=variable.label,
        nominal=nominal,
        text=writer.text(variable, nominal, DIGITS) if writer.is_single(variable) else "",
        unit=writer.unit(variable),
        clear_now=any(one.low <= nominal <= one.high for one in found),
        windows=found,
        limits=(low * nominal, high * nominal),
        ceilings=ceilings(reach(base.states[0], variable), sorted(concerned)) if known and concerned else (),
    )


def window_options(
    base: Base, variable: Variable, found: ValueWindows, weight: float = 1.0
) -> Iterator[Option]:
    """Yield the nearest value below and above today's that clears everything, each proven and solved anew."""
    if found.clear_now:
        return
    below = max((one.high for one in found.windows if one.high < found.nominal), default=None)
    above = min((one.low for one in found.windows if one.low > found.nominal), default=None)
    for value, side in ((below, DOWN), (above, UP)):
        if value is None or not 1 / FARTHEST <= value / found.nominal <= FARTHEST:
            continue
        option = _option(base, variable, value / found.nominal, side, weight)
        if option is not None:
            yield option


def _option(base: Base, variable: Variable, factor: float, side: int, weight: float) -> Option | None:
    writer = Writer.of(base.states[0].assembly, base.model)
    for inward in INWARD:
        moved = (
            factor if not inward else writer.factor_spelled(variable, factor * (1 + side * inward), 5, side)
        )
        model, changes = writer.changed((variable,), (moved,), DIGITS)
        after = tried(base, model)
        if after is not None and after.clear:
            text = writer.told((variable,), (moved,), DIGITS)
            told = Told(Kind.ONE_VALUE, text, changes, weight * abs(log(moved)))
            return option_of(base, after, told)
    return None
