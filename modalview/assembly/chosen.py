"""Typed values chosen by name, such as "k3.stiffness", with the range they may take.

A name is a part's id and its field. Values that the terms are made of have tolerances; coordinates of
points ("g1.from.offset.y") have none and need a range that is given.
"""

from collections.abc import Iterable
from dataclasses import dataclass, replace

from modalview.assembly.parameters import Parameter
from modalview.errors import InputError
from modalview.model.addresses import Address, look, put, quantity_of
from modalview.model.parts import FREEDOMS, Model, Motion
from modalview.model.values import Entry, Tolerance, Value
from modalview.units.numbers import split_number
from modalview.units.parse import unit_of
from modalview.units.quantities import LENGTH, Quantity
from modalview.units.show import MOST_DIGITS, short, show
from modalview.units.table import find_unit

GEOMETRY = "geometry"
AXES = ("x", "y", "z")
# So many names are listed where one is not known.
LISTED = 12


@dataclass(frozen=True, slots=True)
class Chosen:
    """One value or coordinate and the range it may take.

    Parameters
    ----------
    name, label : str
        "sole.stiffness.rz"; the same with the name of the part, "soleplate stiffness rz".
    family : str
        "stiffness", "mass", "damping" or "geometry".
    address : Address
    quantity : Quantity
    entry : Entry
        As typed.
    low, high : float
        SI; both the nominal value where neither tolerance nor range is given.
    given : bool
        Whether the range was given, not taken from the tolerance.
    """

    name: str
    label: str
    family: str
    address: Address
    quantity: Quantity
    entry: Entry
    low: float
    high: float
    given: bool = False

    @property
    def nominal(self) -> float:
        """As typed, SI."""
        return self.entry.si

    @property
    def exact(self) -> bool:
        """Whether it has no range."""
        return self.low == self.high

    def shown(self, si: float, digits: int = 4) -> str:
        """Return a number of it for people, in the unit it was typed in."""
        return typed_like(si, self.entry, self.quantity, digits).text

    def span(self, low: float, high: float, digits: int = 4) -> str:
        """Return two numbers of it for people, the unit once where both have the same."""
        first, last = self.shown(low, digits), self.shown(high, digits)
        unit = unit_of(last)
        return f"{first.removesuffix(unit).strip() if unit else first} to {last}"


def values_of(model: Model, parameters: Iterable[Parameter]) -> tuple[Chosen, ...]:
    """Return every typed value of the parts, with the range its tolerance gives it.

    Inertia tensors are left out: their one factor is no value that somebody typed.
    """
    bodies = {body.id for body in model.bodies}
    found = []
    for one in parameters:
        key = one.id[len(one.part) + 1 :]
        address: Address = ("bodies" if one.part in bodies else "links", one.part, *key.split("."))
        quantity = quantity_of(model, address) if one.entry is not None else None
        if one.entry is None or quantity is None:
            continue
        label = f"{one.label} {key.replace('.', ' ').replace('_', ' ')}"
        found.append(
            Chosen(one.id, label, one.family, address, quantity, one.entry, low=one.low, high=one.high)
        )
    return tuple(found)


def coordinates_of(model: Model) -> tuple[Chosen, ...]:
    """Return every typed coordinate of bodies, supports and ends of links that decides rows."""
    if model.motion in (Motion.SINGLE_AXIS, Motion.SHAFT_TRAIN):
        return ()
    axes = [name for name in FREEDOMS[model.motion] if name in AXES]
    groups = (("bodies", model.bodies), ("supports", model.supports), ("links", model.links))
    found = []
    for group, parts in groups:
        for part in parts:
            places = ("position",) if group != "links" else ("from.offset", "to.offset")
            for place in places:
                address: Address = (group, part.id, *place.split("."))
                point = look(model, address) or ()
                for number, (axis, entry) in enumerate(zip(axes, point, strict=False)):
                    name, label = f"{part.id}.{place}.{axis}", f"{part.name or part.id} {place} {axis}"
                    where = (*address, number)
                    found.append(
                        Chosen(name, label, GEOMETRY, where, LENGTH, entry, low=entry.si, high=entry.si)
                    )
    return tuple(found)


def chosen(known: Iterable[Chosen], wish: str) -> Chosen:
    """Return the value that a text names, with the range it gives.

    Parameters
    ----------
    known : iterable of Chosen
    wish : str
        "k3.stiffness" or "k3.stiffness=50 to 500 kN/mm"; a part with one value needs its id alone.

    Raises
    ------
    InputError
        Nothing has that name, several values have, or the range is none.
    UnitError
        An end of the range is no value of that quantity.

    Examples
    --------
    >>> from modalview.units.quantities import STIFFNESS
    >>> entry = Entry.typed("175 kN/mm", STIFFNESS)
    >>> k3 = Chosen("k3.stiffness", "", "stiffness", ("links", "k3", "stiffness"), STIFFNESS, entry, 1e8, 2e8)
    >>> found = chosen([k3], "k3 = 50 to 500 kN/mm")
    >>> found.name, found.low, found.high
    ('k3.stiffness', 50000000.0, 500000000.0)
    """
    known = tuple(known)
    parts = wish.split("=")
    for cut in range(1, len(parts)):
        name, text = "=".join(parts[:cut]).strip(), "=".join(parts[cut:]).strip()
        if any(_is_named(one, name) for one in known):
            return _ranged(_named(known, name), text)
    return _named(known, parts[0].strip())


def _is_named(one: Chosen, name: str) -> bool:
    return name in (one.name, one.address[1])


def _named(known: tuple[Chosen, ...], name: str) -> Chosen:
    exact = [one for one in known if one.name == name]
    found = exact or [one for one in known if one.address[1] == name and one.family != GEOMETRY]
    if len(found) == 1:
        return found[0]
    if found:
        raise InputError(f'"{name}" has several values: say which, {_list(found)}.')
    near = [one for one in known if one.name.startswith(name.partition(".")[0])] or list(known)
    raise InputError(f'There is no value "{name}". There are {_list(near)}.')


def _list(found: list[Chosen]) -> str:
    names = [one.name for one in found[:LISTED]]
    more = f" and {len(found) - LISTED} more" if len(found) > LISTED else ""
    return ", ".join(names) + more


def _ranged(one: Chosen, text: str) -> Chosen:
    low_text, to, high_text = (part.strip() for part in text.partition(" to "))
    if not to:
        raise InputError(
            f'{one.name}: "{text}" is no range; write "{one.name}=LOW to HIGH", such as '
            f'"{one.name}={one.span(one.nominal / 2, 2 * one.nominal)}".'
        )
    bare = split_number(low_text)
    if bare is not None and not bare[1].strip() and unit_of(high_text):
        low_text = f"{low_text} {unit_of(high_text)}"
    low, high = (Entry.typed(each, one.quantity).si for each in (low_text, high_text))
    if one.family != GEOMETRY and low <= 0:
        raise InputError(f'{one.name}: a range starts above zero; found "{low_text}".')
    if not low < high:
        raise InputError(f'{one.name}: a range must rise from low to high; found "{text}".')
    return replace(one, low=low, high=high, given=True)


def typed_like(si: float, entry: Entry, quantity: Quantity, digits: int = MOST_DIGITS) -> Entry:
    """Return a number typed in the unit of another entry, to so many digits; in SI where it has none.

    >>> from modalview.units.quantities import STIFFNESS
    >>> typed_like(1.23456789e8, Entry.typed("175 kN/mm", STIFFNESS), STIFFNESS, 4).text
    '123.5 kN/mm'
    """
    spelling = unit_of(entry.text)
    unit = find_unit(spelling, quantity) if spelling else None
    if unit is None:
        return Entry.typed(show(si, quantity, digits=digits), quantity)
    return Entry.typed(f"{short(si / float(unit.factor), digits)} {spelling}", quantity)


def with_numbers(model: Model, numbers: Iterable[tuple[Chosen, float]]) -> Model:
    """Return the model with other numbers at some values, for computing only: texts are not typed anew."""
    for one, si in numbers:
        there = look(model, one.address)
        entry = Entry(one.entry.text, si)
        if isinstance(there, Value):
            # A tolerance as limits would no longer enclose the value; here only the number counts.
            there = replace(there, entry=entry, tolerance=_relative(there.tolerance))
        else:
            there = entry
        model = put(model, one.address, there)
    return model


def _relative(tolerance: Tolerance | None) -> Tolerance | None:
    return None if tolerance is None or tolerance.low is not None else tolerance
