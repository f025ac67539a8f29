"""Searches and counts in turn, until the modes nearest to a frequency are complete."""

from collections.abc import Callable
from typing import Self

import numpy as np
import numpy.typing as npt

from modalview.assembly.pencil import Pencil
from modalview.eigen.near_certificate import Edges, edges_in
from modalview.eigen.near_pieces import pieces
from modalview.eigen.near_search import MOST_STARTS, Search

Array = npt.NDArray[np.float64]

# Ties may bring in more modes than were asked for, up to this number.
MOST_WITH_TIES = 400
# Distances nearer to each other than this, relatively, are a tie: never cut.
TIE = 1e-6
# A gap must hold so many times the uncertainty of the counts made in its middle: twice, and a little room.
ROOM = 2.2
# Windows tried until the counts agree with what was found.
TRIES = 12
# Modes looked for at a time where no gap is in sight yet; a spectrum so dense that none comes among so many
# times the modes asked for (and a few dozen) is left undecided.
MORE, PATIENCE = 4, 3


class Hunt:
    """The modes nearest to a value in all pieces of a model.

    Parameters
    ----------
    pencil : Pencil
    asked : float
        rad**2/s**2.
    count : int
        Not more than there are.
    step : callable
        Told (what is being done, share done); may raise to stop.
    """

    def __init__(self, pencil: Pencil, asked: float, count: int, step: Callable[[str, float], None]) -> None:
        self.asked, self.count, self.step = asked, count, step
        self.places = []
        self.searches: list[Search] = []
        for where, piece in pieces(pencil):
            self.places.append(where)
            self.searches.append(Search(piece, asked, self._told))
        self._n = pencil.n
        self._shifted = [search.pencil.shifted for search in self.searches]
        self.rigid = [search.rigid.shape[1] for search in self.searches]
        self.edges: Edges | None = None
        self.reach = 0.0
        self.warnings: tuple[str, ...] = ()

    def complete(self) -> Self:
        """Find modes until the counts around them agree; ``edges`` stays None where they do not decide."""
        for search in self.searches:
            search.find(self.count)
        wanted, room = self.count, ROOM * max(p.least_uncertainty(self.asked) for p in self._shifted)
        for _ in range(TRIES):
            gap = self._gap(wanted, room)
            if gap is None:
                if not self._more():
                    break
                continue
            self.step("counts", 0.8)
            for search in self.searches:
                search.forget_factors()
            edges = edges_in(self._shifted, self.asked, gap)
            missing = self._missing(edges)
            if ROOM * edges.uncertainty >= gap[1] - gap[0] or min(missing) < 0:
                seen = edges.uncertainty if np.isfinite(edges.uncertainty) else room
                room = ROOM * max(room, seen)
                continue
            self.edges, self.reach = edges, edges.radius
            if not any(missing):
                return self
            wanted = sum(edges.inside(self.rigid))
            if wanted > MOST_WITH_TIES:
                self.warnings = (
                    f"{wanted} modes lie as near as the {self.count} asked for; not all were looked for.",
                )
                return self
            for search, lacking in zip(self.searches, missing, strict=True):
                search.find(lacking, starts=lacking)
        self._undecided()
        return self

    def shapes(self) -> Array:
        """Return the shapes (n, k) of all modes within reach, polished piece by piece."""
        columns = []
        for where, search in zip(self.places, self.searches, strict=True):
            polished = search.polished(self.reach)
            whole = np.zeros((self._n, polished.shape[1]))
            whole[where] = polished
            columns.append(whole)
        return np.hstack(columns)

    def _told(self) -> None:
        solves = sum(search.solves for search in self.searches)
        self.step("modes near the frequency", min(0.8, solves / (4 * self.count + 60)))

    def _distances(self) -> Array:
        return np.sort(np.concatenate([search.distances() for search in self.searches]))

    def _gap(self, wanted: int, room: float) -> tuple[float, float] | None:
        """Return the first gap at or beyond the wanted distances that is no tie and wide enough."""
        frontier = min(search.frontier for search in self.searches)
        known = self._distances()
        known = known[known < frontier]
        if known.size < wanted:
            return None
        everything = not np.isfinite(frontier)
        beyond = 2 * known[-1] + TIE * self.asked + 2 * room if everything else frontier
        ends = np.append(known, beyond)
        wide = np.flatnonzero(np.diff(ends) > np.maximum(TIE * ends[1:], room))
        wide = wide[wide >= wanted - 1]
        return (float(ends[wide[0]]), float(ends[wide[0] + 1])) if wide.size else None

    def _more(self) -> bool:
        """Look for a few more modes in the piece whose view ends nearest."""
        nearest = min(self.searches, key=lambda search: search.frontier)
        if nearest.left == 0 or self._distances().size > PATIENCE * self.count + MOST_STARTS:
            return False
        nearest.find(max(MORE, nearest.values.size // 2))
        return True

    def _missing(self, edges: Edges) -> list[int]:
        return [
            inside - int(np.sum(search.distances() < edges.radius))
            for inside, search in zip(edges.inside(self.rigid), self.searches, strict=True)
        ]

    def _undecided(self) -> None:
        known = self._distances()
        last = float(known[min(self.count, known.size) - 1])
        self.edges, self.reach = None, float(np.nextafter(last * (1 + TIE), np.inf))
        self.warnings = ("Rounding leaves undecided whether a mode near the frequency is missing.",)
