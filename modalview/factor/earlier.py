"""Counts made before, with their factors: after an edit of a few springs they need no new ones."""

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from modalview.factor.edited import EditedCount
    from modalview.factor.inertia import Inertia
    from modalview.factor.shifted import ShiftedPencil

# Entries of L in all that is kept: up to half a gigabyte, as each is there four times, with its index.
MOST_ENTRIES = 12_000_000
# A verdict takes some thirty counts: with room for fewer none is worth keeping, and many more never are.
FEWEST, MOST = 30, 100


@dataclass(slots=True, eq=False)
class Earlier:
    """One count of a model as it was.

    Parameters
    ----------
    shifted : ShiftedPencil
    found : Inertia
        With its factors.
    terms : tuple of int
        Terms of the edits that ``prepared`` is made for.
    prepared : EditedCount or None
    """

    shifted: "ShiftedPencil"
    found: "Inertia"
    terms: tuple[int, ...] = ()
    prepared: "EditedCount | None" = None


@dataclass(slots=True, eq=False)
class EarlierCounts:
    """The latest counts of models of one pattern, oldest first; never copied to another process."""

    _kept: list[Earlier] = field(default_factory=list)

    def __reduce__(self) -> tuple[type["EarlierCounts"], tuple[()]]:
        """Go to another process empty: factors cannot be sent."""
        return EarlierCounts, ()

    def at(self, sigma: float) -> list[Earlier]:
        """Return the counts made at a shift, the latest first."""
        return [one for one in reversed(self._kept) if one.found.sigma == sigma]

    def keep(self, one: Earlier, entries: int) -> None:
        """Keep a count whose L has so many entries, and let go of the oldest that there is no room for."""
        room = min(MOST, MOST_ENTRIES // max(entries, 1))
        if room >= FEWEST:
            self._kept = [*self._kept, one][-room:]
