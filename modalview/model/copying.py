"""Parts copied: a fragment is a small model of its own, pasted with fresh ids wherever it is wanted."""

from collections.abc import Callable, Collection, Mapping, Sequence
from dataclasses import replace
from typing import Any

from modalview.errors import InputError
from modalview.model.ids import LISTS, ids_of
from modalview.model.moving import moved
from modalview.model.parts import (
    End,
    Excitation,
    Limit,
    Link,
    LoadCase,
    Machine,
    MeasuredPeak,
    Model,
)

DIGITS = "0123456789"


def fragment(model: Model, ids: Collection[str]) -> Model:
    """Return a model of some parts and what belongs to them.

    Parameters
    ----------
    ids : collection of str
        Bodies and supports; machines and measured peaks where they are to come along; others stand for
        nothing.

    Returns
    -------
    Model
        With the links between those parts, the supports that their links stand on, limits at them,
        and their changes in load cases. What a machine or a peak says of other parts is left out. Parts are
        the very same objects. It has no title, and bodies of a fragment may be free.
    """
    bodies = {body.id for body in model.bodies if body.id in ids}
    supports = {support.id for support in model.supports if support.id in ids}
    for link in model.links:
        ends = (link.from_, link.to)
        if any(end.body in bodies for end in ends):
            supports |= {end.support for end in ends if end.support is not None}
    kept = frozenset(bodies | supports)
    links = tuple(one for one in model.links if _on(one.from_, kept) and _on(one.to, kept))
    named = kept | {link.id for link in links}
    return Model(
        motion=model.motion,
        bodies=tuple(body for body in model.bodies if body.id in kept),
        supports=tuple(support for support in model.supports if support.id in kept),
        links=links,
        machines=tuple(_machine(one, kept) for one in model.machines if one.id in ids),
        default_tolerance=model.default_tolerance,
        measured=tuple(_peak(one, kept) for one in model.measured if one.id in ids),
        limits=tuple(one for one in model.limits if _on(one.at, kept)),
        load_cases=tuple(case for one in model.load_cases if (case := _case(one, named)).changes),
        units=model.units,
    )


def _on(end: End, kept: Collection[str]) -> bool:
    return end.body in kept or end.support in kept


def _machine(machine: Machine, kept: Collection[str]) -> Machine:
    """Return a machine with only what it says of the parts that are copied."""
    on = machine.on if machine.on in kept else None
    return replace(
        machine,
        on=on,
        excitations=tuple(
            one
            for one in machine.excitations
            if (one.at is None or _on(one.at, kept))
            and (one.of is None or (on is not None and one.of in kept))
        ),
    )


def _peak(peak: MeasuredPeak, kept: Collection[str]) -> MeasuredPeak:
    shape = tuple(point for point in peak.shape if _on(point.at, kept))
    if peak.at is not None and not _on(peak.at, kept):
        return replace(peak, at=None, direction=None, shape=shape)
    return replace(peak, shape=shape)


def _case(case: LoadCase, named: Collection[str]) -> LoadCase:
    return replace(case, changes=tuple(change for change in case.changes if change.part in named))


def pasted(model: Model, piece: Model, step: Sequence[float]) -> tuple[Model, tuple[str, ...]]:
    """Return the model with a fragment put in, and the ids its parts have there.

    Parameters
    ----------
    piece : Model
        From `fragment`, also of another file. Its ids stay where they are free in the model.
    step : sequence of float
        From where the fragment was to where it comes, m.

    Returns
    -------
    (Model, tuple of str)
        Changes of load cases join the case of the same id. A tolerance by default is that of the model.

    Raises
    ------
    InputError
        When the fragment is empty, or its parts move otherwise than those of the model.
    """
    if not any(getattr(piece, name) for name in LISTS):
        raise InputError("nothing that can be copied is chosen: choose bodies or supports")
    if piece.motion is not model.motion:
        raise InputError(
            f"what was copied is of a model in {piece.motion.value} and cannot move in {model.motion.value}"
        )
    chosen = {body.id for body in piece.bodies} | {support.id for support in piece.supports}
    shifted = moved(piece, chosen, step)
    own = replace(shifted, load_cases=())
    namer = _Namer(model)
    names = {part.id: namer.fresh(part.id) for name in LISTS for part in getattr(own, name)}
    copy = _renamed(own, names)
    lists: dict[str, Any] = {
        name: (*getattr(model, name), *getattr(copy, name)) for name in LISTS if getattr(copy, name)
    }
    if piece.load_cases:
        cases = tuple(_case_renamed(one, names) for one in piece.load_cases)
        lists["load_cases"] = _cases_joined(model, cases, namer)
    return replace(model, **lists), tuple(names.values())


def duplicated(model: Model, ids: Collection[str], step: Sequence[float]) -> tuple[Model, tuple[str, ...]]:
    """Return the model with some parts doubled, and the ids of the new ones.

    Parameters
    ----------
    ids : collection of str
        As for `fragment`. A link that is chosen without its bodies is doubled between the same ends.
    step : sequence of float
        From the parts to their copies, m.

    Raises
    ------
    InputError
        When nothing is chosen that can be doubled.
    """
    piece = fragment(model, ids)
    inside = {link.id for link in piece.links}
    alone = [link for link in model.links if link.id in ids and link.id not in inside]
    new: tuple[str, ...] = ()
    if not alone or any(getattr(piece, name) for name in LISTS):
        model, new = pasted(model, piece, step)
    namer = _Namer(model)
    copies: list[Link] = [replace(link, id=namer.fresh(link.id)) for link in alone]
    return replace(model, links=(*model.links, *copies)), (*new, *(link.id for link in copies))


class _Namer:
    """Gives ids that a model does not hold yet, each once."""

    def __init__(self, model: Model) -> None:
        self._taken = set(ids_of(model))
        self._next: dict[str, int] = {}  # lower numbers are known to be taken

    def fresh(self, name: str) -> str:
        """Return an id like another: "k1" becomes "k2", "motor" becomes "motor 2"; a free one stays."""
        if name in self._taken:
            stem = name.rstrip(DIGITS)
            stem = f"{name} " if stem == name else stem
            number = self._next.get(stem, 2 if stem.endswith(" ") else 1)
            while f"{stem}{number}" in self._taken:
                number += 1
            self._next[stem] = number + 1
            name = f"{stem}{number}"
        self._taken.add(name)
        return name


def _renamed(piece: Model, names: Mapping[str, str]) -> Model:
    """Return a fragment whose parts, and all that refers to them, have other ids."""

    def each(items: Sequence[Any], change: Callable[[Any], Any]) -> tuple[Any, ...]:
        return tuple(change(replace(item, id=names[item.id])) for item in items)

    def end(given: End) -> End:
        return replace(given, body=_name(given.body, names), support=_name(given.support, names))

    def link(given: Link) -> Link:
        return replace(given, from_=end(given.from_), to=end(given.to))

    def excitation(given: Excitation) -> Excitation:
        return replace(given, at=given.at and end(given.at), of=_name(given.of, names))

    def machine(given: Machine) -> Machine:
        excitations = tuple(excitation(one) for one in given.excitations)
        return replace(given, on=_name(given.on, names), excitations=excitations)

    def peak(given: MeasuredPeak) -> MeasuredPeak:
        shape = tuple(replace(point, at=end(point.at)) for point in given.shape)
        return replace(given, at=given.at and end(given.at), shape=shape)

    def limit(given: Limit) -> Limit:
        return replace(given, at=end(given.at))

    return replace(
        piece,
        bodies=each(piece.bodies, lambda body: body),
        supports=each(piece.supports, lambda support: support),
        links=each(piece.links, link),
        machines=each(piece.machines, machine),
        measured=each(piece.measured, peak),
        limits=each(piece.limits, limit),
    )


def _name(name: str | None, names: Mapping[str, str]) -> str | None:
    return None if name is None else names.get(name, name)


def _case_renamed(case: LoadCase, names: Mapping[str, str]) -> LoadCase:
    return replace(
        case, changes=tuple(replace(one, part=names.get(one.part, one.part)) for one in case.changes)
    )


def _cases_joined(model: Model, cases: Sequence[LoadCase], namer: _Namer) -> tuple[LoadCase, ...]:
    """Return the model's load cases with pasted changes in the case of the same id, others after them."""
    mine = {case.id: case for case in model.load_cases}
    for case in cases:
        old = mine.get(case.id)
        if old is not None:
            mine[case.id] = replace(old, changes=(*old.changes, *case.changes))
        else:
            fresh = namer.fresh(case.id)
            mine[fresh] = replace(case, id=fresh)
    return tuple(mine.values())
