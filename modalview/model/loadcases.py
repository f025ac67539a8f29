"""A model in one of its load cases: the same machine with other masses or stiffnesses."""

from dataclasses import replace

from modalview.model.addresses import look, put, quantity_of
from modalview.model.parts import LoadCase, Model
from modalview.model.rules_records import changed_address
from modalview.model.values import Entry, Tolerance, Value
from modalview.units.parse import unit_of
from modalview.units.show import short

# Limits that move along with their value are written to so many digits.
DIGITS = 9


def in_load_case(model: Model, case: LoadCase) -> Model:
    """Return the model with the values of a load case in place.

    Tolerances stay with the values: shares as they are, limits at the same shares of the new value.

    Parameters
    ----------
    model : Model
        Free of faults.
    case : LoadCase
        Of this model.
    """
    for change in case.changes:
        address = changed_address(change, model)
        quantity = quantity_of(model, address) if address else None
        if address is None or quantity is None:
            continue
        model = put(model, address, with_number(look(model, address), Entry.typed(change.value, quantity)))
    return model


def with_number(value: Value, entry: Entry) -> Value:
    """Return a value with another number; limits of its own move along with it."""
    tolerance = value.tolerance
    if tolerance is not None and value.si:
        tolerance = moved_limits(tolerance, entry.si / value.si)
    return replace(value, entry=entry, tolerance=tolerance)


def moved_limits(tolerance: Tolerance, factor: float) -> Tolerance:
    """Return a tolerance for a value that is ``factor`` times as large: limits scale, shares stay.

    >>> from modalview.units.quantities import STIFFNESS
    >>> limits = Tolerance(low=Entry.typed("3 kN/mm", STIFFNESS), high=Entry.typed("5 kN/mm", STIFFNESS))
    >>> moved_limits(limits, 2.0).low
    Entry(text='6 kN/mm', si=6000000.0)
    """
    if tolerance.low is None or tolerance.high is None:
        return tolerance
    return replace(tolerance, low=_scaled(tolerance.low, factor), high=_scaled(tolerance.high, factor))


def _scaled(entry: Entry, factor: float) -> Entry:
    unit = unit_of(entry.text)
    # What stands before a unit that scales in proportion is a plain number; other texts ("35 mm under 900
    # kg") keep no more than their meaning.
    number = entry.text.removesuffix(unit).strip()
    try:
        return Entry(f"{short(float(number) * factor, DIGITS)} {unit}", entry.si * factor)
    except ValueError:
        return Entry(short(entry.si * factor, DIGITS), entry.si * factor)
