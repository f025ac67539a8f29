"""New machines and excitations, from what is typed in the window."""

from collections.abc import Callable
from dataclasses import replace
from typing import TypeVar

from modalview.errors import Fault, ModelFaultsError, UnitError
from modalview.model import rules_machines
from modalview.model.ids import free_id, fresh_id, ids_of
from modalview.model.parts import Direction, End, Excitation, Machine, Model
from modalview.model.rules_context import Context
from modalview.model.typed_machines import (
    typed_direction,
    typed_magnitude,
    typed_margin,
    typed_rate,
    typed_speed,
)

Read = TypeVar("Read")


def add_machine(
    model: Model, name: str, speed: str, margin: str, *, on: str | None = None
) -> tuple[Model, str]:
    """Add a machine without excitations.

    Parameters
    ----------
    name : str
        May be empty.
    speed : str
        "2950 rpm" or "600 to 1800 rpm", by the window's rules; empty where only fixed frequencies push.
    margin : str
        "15 %", or "-10 % / +20 %" below and above. It has no default.
    on : str or None
        The body whose speed this is.

    Returns
    -------
    (Model, str)
        The model and the machine's id.

    Raises
    ------
    ModelFaultsError
        Each fault's path is the field: "speed", "margin", "on".
    """
    found, faults = _Faults(), Context.of(model)
    new = Machine(
        id=fresh_id(model, "mc"),
        name=name.strip() or None,
        speed=found.read("speed", typed_speed, speed) if speed.strip() else None,
        on=on,
        margin=found.read("margin", typed_margin, margin),
    )
    if not margin.strip():
        found.add(
            "margin", 'is required and has no default; type the one that you answer for, such as "15 %"'
        )
    found.check(list(rules_machines.machine(new, faults)))
    return replace(model, machines=(*model.machines, new)), new.id


def add_excitation(  # noqa: PLR0913  (the fields of one form)
    model: Model,
    machine_id: str,
    rate: str,
    *,
    at: End | None = None,
    of: str | None = None,
    direction: Direction | None = None,
    magnitude: str = "",
    name: str = "",
) -> tuple[Model, str]:
    """Add an excitation to a machine, whose margin it takes.

    Parameters
    ----------
    rate : str
        An order of the machine's speed, "1x" or "0,5", or a fixed frequency, "100 Hz".
    at : End or None
        Where it acts.
    of : str or None
        Body whose speed the order is of; None for the machine's. Not heeded for a fixed frequency.
    direction : str, tuple or None
        As `parts.Direction`, "rotating" too.
    magnitude : str
        "400 N", "150 N m", "850 g mm", "G 6.3 of 320 kg", "0.1 mm" at a support; empty when not known.
    name : str
        May be empty.

    Returns
    -------
    (Model, str)
        The model and the excitation's id, such as "7x"; in no other machine there is the same.

    Raises
    ------
    ModelFaultsError
        Each fault's path is the field: "order", "frequency", "at", "direction", "magnitude".
    LookupError
        When there is no such machine.
    """
    owner = next((one for one in model.machines if one.id == machine_id), None)
    if owner is None:
        raise LookupError(f'there is no machine "{machine_id}"')
    found = _Faults()
    rhythm = found.read("order", typed_rate, rate)
    new = Excitation(
        id=_excitation_id(model, rhythm.order if rhythm else None),
        name=name.strip() or None,
        order=rhythm.order if rhythm else 1.0,
        frequency=rhythm.frequency if rhythm else None,
        of=of if rhythm and rhythm.order is not None else None,
        at=at,
        direction=typed_direction(direction),
        magnitude=found.read("magnitude", lambda text: typed_magnitude(text, model.motion), magnitude),
    )
    machine = replace(owner, excitations=(*owner.excitations, new))
    found.check(_added(machine, owner, Context.of(model)))
    machines = tuple(machine if one is owner else one for one in model.machines)
    return replace(model, machines=machines), new.id


class _Faults:
    """Collects what is wrong with each field of a form, so that all is told at once."""

    def __init__(self) -> None:
        self._faults: list[Fault] = []

    def add(self, field: str, reason: str) -> None:
        self._faults.append(Fault(field, reason))

    def read(self, field: str, reader: Callable[[str], Read], text: str) -> Read | None:
        """Return the text as read, or None after noting why it cannot be."""
        try:
            return reader(text)
        except UnitError as reason:
            self.add(field, str(reason))
            return None

    def check(self, findings: list[tuple[str, str]]) -> None:
        """Raise what was found, with what the rules find in fields that could be read."""
        noted = {fault.path for fault in self._faults}
        for key, reason in findings:
            if key.split(" . ")[0] not in noted:
                self.add(key, reason)
        if self._faults:
            raise ModelFaultsError(tuple(self._faults))


def _added(machine: Machine, owner: Machine, context: Context) -> list[tuple[str, str]]:
    """Return what the rules find in the last excitation of a machine, by field."""
    known = set(rules_machines.machine(owner, context))
    found = [one for one in rules_machines.machine(machine, context) if one not in known]
    return [(key.rpartition('" . ')[2], reason) for key, reason in found]


def _excitation_id(model: Model, order: float | None) -> str:
    if order is None:
        return fresh_id(model, "f")
    taken = set(ids_of(model))
    plain = f"{order:g}x"
    return plain if plain not in taken else free_id(f"{plain} ", taken, first=2)
