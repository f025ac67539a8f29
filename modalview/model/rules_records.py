"""Rules of what goes along with a model: damping, defaults, measured peaks, limits, load cases."""

import math
from collections.abc import Iterator

from modalview.errors import Fault, UnitError
from modalview.model.addresses import Address, look, quantity_of
from modalview.model.fields import fields_of
from modalview.model.parts import Limit, LoadCase, LoadChange, MeasuredPeak, Model, TitleBlock
from modalview.model.rules_context import Context, Findings
from modalview.model.rules_names import plain_name
from modalview.model.rules_values import above_zero, direction, end, not_negative, share, tolerance
from modalview.model.values import Value, is_sane
from modalview.units.parse import read
from modalview.units.quantities import ACCELERATION, LENGTH, VELOCITY, Quantity

LIMITED: dict[str, Quantity] = {
    "displacement peak": LENGTH,
    "displacement peak-to-peak": LENGTH,
    "velocity rms": VELOCITY,
    "acceleration rms": ACCELERATION,
}
UNITS = ("SI", "mm-t", "inch-pound")
CHANGED = ("mass", "inertia", "stiffness")


def whole(model: Model) -> Iterator[Fault]:
    """Yield the faults of what belongs to the model as a whole."""
    damping = model.damping
    if damping is not None:
        proportional = damping.alpha is not None or damping.beta is not None
        if (damping.ratio is not None) == proportional:
            found = "both are given" if proportional else "neither is given"
            yield Fault("damping", f"is a ratio, or alpha and beta; {found}")
        yield from _at("damping", share("ratio", damping.ratio))
        yield from _at("damping", not_negative("alpha", damping.alpha))
        yield from _at("damping", not_negative("beta", damping.beta))
    default = model.default_tolerance
    if default is not None:
        yield from _at("default_tolerance", tolerance("stiffness", default.stiffness, None))
        yield from _at("default_tolerance", tolerance("mass", default.mass, None))
    for key, reason in plain_name("title", model.title):
        yield Fault(key, reason)
    block = model.title_block
    for field in fields_of(TitleBlock) if block is not None else ():
        yield from _at("title_block", plain_name(field.key, getattr(block, field.name)))
    if model.units not in (None, *UNITS):
        yield Fault("units", f'is one of {", ".join(UNITS)}; found "{model.units}"')


def _at(place: str, findings: Findings) -> Iterator[Fault]:
    for key, reason in findings:
        yield Fault(f"{place} . {key}", reason)


def measured(given: MeasuredPeak, context: Context) -> Findings:
    """Yield every rule that a measured peak breaks."""
    yield from above_zero("frequency", given.frequency)
    yield from not_negative("uncertainty", given.uncertainty)
    if given.at is not None:
        yield from end("at", given.at, context)
    yield from direction("direction", given.direction, context)
    for number, point in enumerate(given.shape):
        yield from end(f"shape[{number}] . at", point.at, context)
        yield from direction(f"shape[{number}] . direction", point.direction, context)
        if not (is_sane(point.amplitude) or math.isnan(point.amplitude)):
            yield f"shape[{number}] . amplitude", "must be a finite number"


def limit(given: Limit, context: Context) -> Findings:
    """Yield every rule that a limit breaks."""
    yield from end("at", given.at, context)
    yield from direction("direction", given.direction, context)
    quantity = LIMITED.get(given.quantity)
    if quantity is None:
        yield "quantity", f'is one of {", ".join(LIMITED)}; found "{given.quantity}"'
        return
    try:
        if read(given.value, quantity) <= 0:
            yield "value", f'must be above zero; found "{given.value}"'
    except UnitError as reason:
        yield "value", str(reason)


def load_case(given: LoadCase, model: Model) -> Findings:
    """Yield every rule that a load case breaks."""
    for number, change in enumerate(given.changes):
        for key, reason in _change(change, model):
            yield f"changes[{number}] . {key}", reason


def changed_address(change: LoadChange, model: Model) -> Address | None:
    """Return the address of the value that a load case changes; None when there is no such value.

    A mount's direction and a tensor's moment are written "stiffness.y" and "inertia.Ixx".
    """
    group = next((name for name in ("bodies", "links") if _has(model, name, change.part)), None)
    steps = change.key.split(".")
    if group is None or steps[0] not in CHANGED:
        return None
    address = (group, change.part, *steps)
    try:
        return address if isinstance(look(model, address), Value) else None
    except LookupError:
        return None


def _has(model: Model, group: str, name: str) -> bool:
    return any(part.id == name for part in getattr(model, group))


def _change(change: LoadChange, model: Model) -> Findings:
    address = changed_address(change, model)
    if not (_has(model, "bodies", change.part) or _has(model, "links", change.part)):
        yield "part", f'there is no body or link "{change.part}"'
    elif address is None:
        yield "key", f'"{change.part}" has no value "{change.key}"; a load case changes {", ".join(CHANGED)}'
    else:
        quantity = quantity_of(model, address)
        try:
            amount = read(change.value, quantity) if quantity else math.nan
        except UnitError as reason:
            yield "value", str(reason)
            return
        if amount < 0 or (amount == 0 and change.key.startswith("stiffness")):
            yield "value", f'must be above zero; found "{change.value}"'
