"""An edit from two models: what differs between before and after, kept small, with its way back.

Drawing operations are plain functions from model to model; here they become edits. Parts that both
models share stay the very same objects when the edit is applied and when it is reverted.
"""

import re
from collections import Counter
from collections.abc import Hashable
from dataclasses import dataclass, replace
from typing import Any

from modalview.errors import Fault, ModelFaultsError
from modalview.model.fields import fields_of
from modalview.model.parts import Model
from modalview.model.rules import faults


@dataclass(frozen=True, slots=True)
class _Whole:
    """Another thing in a field that is no list."""

    old: Any
    new: Any

    def put(self, _there: Any) -> Any:
        return self.new

    def back(self, _there: Any) -> Any:
        return self.old


@dataclass(frozen=True, slots=True)
class _Items:
    """Other items at some places of a list that keeps its length."""

    items: tuple[tuple[int, Any, Any], ...]

    def put(self, there: tuple[Any, ...]) -> tuple[Any, ...]:
        return self._with(there, 2)

    def back(self, there: tuple[Any, ...]) -> tuple[Any, ...]:
        return self._with(there, 1)

    def _with(self, there: tuple[Any, ...], which: int) -> tuple[Any, ...]:
        found = list(there)
        for item in self.items:
            found[item[0]] = item[which]
        return tuple(found)


@dataclass(frozen=True, slots=True)
class _Stretch:
    """Other items in one stretch of a list."""

    start: int
    old: tuple[Any, ...]
    new: tuple[Any, ...]

    def put(self, there: tuple[Any, ...]) -> tuple[Any, ...]:
        return (*there[: self.start], *self.new, *there[self.start + len(self.old) :])

    def back(self, there: tuple[Any, ...]) -> tuple[Any, ...]:
        return (*there[: self.start], *self.old, *there[self.start + len(self.new) :])


_Change = _Whole | _Items | _Stretch


@dataclass(frozen=True, slots=True)
class Rewrite:
    """An edit that turns one model into another.

    Parameters
    ----------
    text : str
        For the undo menu.
    changes : tuple of (field of the model, change)
    merge : hashable or None
        Consecutive edits with the same one are one step for the person, such as those of one drag.
    """

    text: str
    changes: tuple[tuple[str, _Change], ...]
    merge: Hashable | None = None

    def __bool__(self) -> bool:
        """Tell whether anything changes."""
        return bool(self.changes)

    def apply(self, model: Model) -> Model:
        """Return the model with the change."""
        fields: dict[str, Any] = {name: change.put(getattr(model, name)) for name, change in self.changes}
        return replace(model, **fields)

    def revert(self, model: Model) -> Model:
        """Return the model without it again."""
        fields: dict[str, Any] = {name: change.back(getattr(model, name)) for name, change in self.changes}
        return replace(model, **fields)


def edit_between(before: Model, after: Model, text: str, *, merge: Hashable | None = None) -> Rewrite:
    """Return the edit that makes ``after`` of ``before``.

    Linear in the length of the lists that are not the same object; equal parts are not looked into
    when they are the same object.

    >>> fan = Model(title="Fan")
    >>> edit = edit_between(Model(), fan, "Name it")
    >>> edit.apply(Model()) == fan, edit.revert(fan) == Model(), bool(edit_between(fan, fan, ""))
    (True, True, False)
    """
    changes = []
    for field in fields_of(Model):
        old, new = getattr(before, field.name), getattr(after, field.name)
        if old is not new and old != new:
            lists = isinstance(old, tuple) and isinstance(new, tuple)
            changes.append((field.name, _difference(old, new) if lists else _Whole(old, new)))
    return Rewrite(text, tuple(changes), merge)


def checked_edit(before: Model, after: Model, text: str, *, merge: Hashable | None = None) -> Rewrite:
    """Return the edit between two models unless it breaks a rule.

    Raises
    ------
    ModelFaultsError
        With the faults that the change adds; those the model has already do not stand in the way.
    """
    added = added_faults(before, after)
    if added:
        raise ModelFaultsError(added)
    return edit_between(before, after, text, merge=merge)


def added_faults(before: Model, after: Model) -> tuple[Fault, ...]:
    """Return the faults of ``after`` that ``before`` does not have; places in lists do not count."""
    found = faults(after)
    if not found:
        return ()
    known = Counter(map(_wherever, faults(before)))
    added = []
    for fault in found:
        if known[_wherever(fault)]:
            known[_wherever(fault)] -= 1
        else:
            added.append(fault)
    return tuple(added)


def joined(first: Rewrite, second: Rewrite, after: Model) -> Rewrite:
    """Return two edits made one after the other as one.

    Parameters
    ----------
    after : Model
        As it is with both applied.
    """
    return edit_between(first.revert(second.revert(after)), after, second.text, merge=second.merge)


def _wherever(fault: Fault) -> tuple[str, str]:
    """Return a fault without the numbers of the parts in their lists, which removing a part shifts."""
    return re.sub(r"\[\d+\]", "[]", fault.path), re.sub(r"\[\d+\]", "[]", fault.reason)


def _difference(old: tuple[Any, ...], new: tuple[Any, ...]) -> _Items | _Stretch:
    if len(old) == len(new):
        pairs = enumerate(zip(old, new, strict=True))
        return _Items(tuple((at, one, other) for at, (one, other) in pairs if not _same(one, other)))
    shorter = min(len(old), len(new))
    start = next((at for at in range(shorter) if not _same(old[at], new[at])), shorter)
    left = shorter - start
    end = next((at for at in range(left) if not _same(old[-1 - at], new[-1 - at])), left)
    return _Stretch(start, old[start : len(old) - end], new[start : len(new) - end])


def _same(one: Any, other: Any) -> bool:
    return one is other or one == other
