"""Things that belong together because something joins them."""

from collections.abc import Hashable, Iterable
from typing import Generic, TypeVar

Thing = TypeVar("Thing", bound=Hashable)


class Groups(Generic[Thing]):
    """Disjoint sets of things, joined pair by pair; order of first appearance is kept."""

    def __init__(self, things: Iterable[Thing]) -> None:
        self._parent: dict[Thing, Thing] = {thing: thing for thing in things}
        self._place = {thing: place for place, thing in enumerate(self._parent)}

    def find(self, thing: Thing) -> Thing:
        """Return the first thing of a group."""
        root = thing
        while self._parent[root] != root:
            root = self._parent[root]
        while self._parent[thing] != root:
            self._parent[thing], thing = root, self._parent[thing]
        return root

    def join(self, a: Thing, b: Thing) -> None:
        """Put the groups of two things together."""
        first, second = self.find(a), self.find(b)
        if self._place[second] < self._place[first]:
            first, second = second, first
        self._parent[second] = first

    def join_all(self, things: Iterable[Thing]) -> None:
        """Put the groups of all things together."""
        known = [thing for thing in things if thing in self._parent]
        for thing in known[1:]:
            self.join(known[0], thing)

    def first_of(self) -> dict[Thing, Thing]:
        """Return the first thing of the group of every thing."""
        return {thing: self.find(thing) for thing in self._parent}

    def lists(self) -> list[list[Thing]]:
        """Return the groups."""
        groups: dict[Thing, list[Thing]] = {}
        for thing in self._parent:
            groups.setdefault(self.find(thing), []).append(thing)
        return list(groups.values())
