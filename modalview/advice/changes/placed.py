"""A mode placed at a frequency by one value, as an option."""

import math

from modalview.advice.changes.ceilings import reach
from modalview.advice.changes.options import Base, Told, option_of, tried
from modalview.advice.changes.placement import placing_factor, reach_of
from modalview.advice.changes.results import Kind, Placement
from modalview.advice.changes.values import Variable
from modalview.advice.changes.writing import Writer
from modalview.errors import InputError
from modalview.units.show import significant

# A frequency is placed to far less than it is ever known: five digits of the value.
DIGITS = 5


def placement(
    base: Base, variable: Variable, mode: int, frequency_hz: float, weight: float = 1.0
) -> Placement:
    """Return the value that puts a mode at a frequency, at nominal values of the model as it is.

    Raises
    ------
    InputError
        There is no such mode, or the frequency is not above zero.
    """
    state = base.states[0]
    modes = state.assembly.pencil().modes
    if not 1 <= mode <= modes:
        raise InputError(f"Mode {mode} is asked for; the model has modes 1 to {modes}.")
    if not 0 < frequency_hz < math.inf:
        raise InputError(f"A mode is placed at a frequency above zero; found {frequency_hz:g} Hz.")
    span = reach_of(reach(state, variable), mode)
    factor = placing_factor(state, variable, mode, frequency_hz)
    low, high = variable.limits
    wanted = f"mode {mode} at {significant(frequency_hz, 4)} Hz"
    if factor is None:
        text = f"{variable.label} alone cannot put {wanted}: it moves it {_span(span)}."
        return Placement(variable.id, variable.label, mode, frequency_hz, span, None, None, text)
    writer = Writer.of(state.assembly, base.model)
    needed = writer.text(variable, factor * writer.nominal(variable), 4)
    if not low <= factor <= high:
        text = f"{variable.label} would have to be {needed} to put {wanted}: beyond your limits."
        return Placement(variable.id, variable.label, mode, frequency_hz, span, factor, None, text)
    model, changes = writer.changed((variable,), (factor,), DIGITS)
    after = tried(base, model)
    if after is None or not changes:
        text = (
            f"{wanted[:1].upper()}{wanted[1:]} is where it is." if not changes else "The value breaks a rule."
        )
        return Placement(variable.id, variable.label, mode, frequency_hz, span, factor, None, text)
    said = writer.told((variable,), (factor,), DIGITS)
    told = Told(Kind.PLACED, said, changes, weight * abs(math.log(factor)), claim=wanted)
    option = option_of(base, after, told)
    text = f"{option.text} puts {wanted}."
    return Placement(variable.id, variable.label, mode, frequency_hz, span, factor, option, text)


def _span(span: tuple[float, float]) -> str:
    low, high = (significant(end, 4) for end in span)
    if math.isinf(span[1]):
        return f"from {low} Hz upward"
    return f"between {low} and {high} Hz"
