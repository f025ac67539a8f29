"""Parts taken away, with everything that hangs on them."""

from collections.abc import Collection, Sequence
from dataclasses import dataclass, replace
from typing import Any

from modalview.model.ids import LISTS
from modalview.model.parts import End, Excitation, LoadCase, Machine, MeasuredPeak, Model

# An excitation is named with its machine.
ExcitationId = tuple[str, str]


def without(model: Model, ids: Collection[str | ExcitationId]) -> Model:
    """Return the model without some parts and without what would have no place or meaning any more.

    Parameters
    ----------
    ids : collection
        Ids of anything in the model's lists; an excitation is named (machine, excitation).

    Returns
    -------
    Model
        Also without the links of a removed body or support, supports that lose their last link, excitations
        at a removed part or that count its rotation, limits there, and changes of it in load cases. A
        machine whose speed was that of a removed body stays, without ``on`` and without orders of other
        bodies. A measured peak stays, for the machine has it all the same, without the place where it
        was measured. What stays untouched is the very same object.
    """
    gone = _gone(model, ids)
    changes: dict[str, Any] = {}
    for name in LISTS:
        old = getattr(model, name)
        change = _CHANGES.get(name, lambda part, _gone: part)
        new = tuple(change(part, gone) for part in old if part.id not in gone.parts)
        if name == "limits":
            new = tuple(one for one in new if not gone.holds(one.at))
        if not _same(old, new):
            changes[name] = new
    return replace(model, **changes) if changes else model


@dataclass(frozen=True, slots=True)
class _Gone:
    """What goes: ids of parts and records, and excitations by machine and id."""

    parts: frozenset[str]
    excitations: frozenset[ExcitationId]

    def holds(self, end: End | None) -> bool:
        """Tell whether an end stands on something that goes."""
        return end is not None and (end.body in self.parts or end.support in self.parts)


def _gone(model: Model, ids: Collection[str | ExcitationId]) -> _Gone:
    parts = {one for one in ids if isinstance(one, str)}
    gone = _Gone(frozenset(parts), frozenset(one for one in ids if not isinstance(one, str)))
    links = {one.id for one in model.links if gone.holds(one.from_) or gone.holds(one.to)} | parts
    lost: set[str | None] = set()
    kept: set[str | None] = set()
    for link in model.links:
        (lost if link.id in links else kept).update({link.from_.support, link.to.support})
    supports = {one.id for one in model.supports if one.id in lost and one.id not in kept}
    return replace(gone, parts=frozenset(parts | links | supports))


def _machine(machine: Machine, gone: _Gone) -> Machine:
    driven = machine.on in gone.parts
    excitations = tuple(
        one
        for one in machine.excitations
        if (machine.id, one.id) not in gone.excitations
        and not gone.holds(one.at)
        and not _uncounted(one, gone, driven=driven)
    )
    if not driven and len(excitations) == len(machine.excitations):
        return machine
    return replace(machine, on=None if driven else machine.on, excitations=excitations)


def _uncounted(excitation: Excitation, gone: _Gone, *, driven: bool) -> bool:
    """Tell whether nobody knows any more how fast the rotation is that an order counts."""
    return excitation.of is not None and (driven or excitation.of in gone.parts)


def _peak(peak: MeasuredPeak, gone: _Gone) -> MeasuredPeak:
    shape = tuple(point for point in peak.shape if not gone.holds(point.at))
    if gone.holds(peak.at):
        return replace(peak, at=None, direction=None, shape=shape)
    return peak if len(shape) == len(peak.shape) else replace(peak, shape=shape)


def _case(case: LoadCase, gone: _Gone) -> LoadCase:
    changes = tuple(change for change in case.changes if change.part not in gone.parts)
    return case if len(changes) == len(case.changes) else replace(case, changes=changes)


_CHANGES: dict[str, Any] = {"machines": _machine, "measured": _peak, "load_cases": _case}


def _same(old: Sequence[object], new: Sequence[object]) -> bool:
    return len(old) == len(new) and all(a is b for a, b in zip(old, new, strict=True))
