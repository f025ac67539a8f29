"""What each link contributes to the rows, kept from edit to edit.

A body that is moved changes the rows of its own links only; those of all others serve again.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from modalview.assembly.kinematics import Freedom, Places, Vector
from modalview.assembly.stretch import stretches
from modalview.model.parts import Link


@dataclass(frozen=True, slots=True, eq=False)
class LinkRow:
    """One rank-one term of a link, in the freedoms of bodies and supports.

    Parameters
    ----------
    link, family : str
    keys : tuple of Freedom
    entries : tuple of float
        Stretch per unit motion of each freedom.
    factor : float
    values : tuple of str
        Ids of the parameters whose product with ``factor`` is the value of the term.
    """

    link: str
    family: str
    keys: tuple[Freedom, ...]
    entries: tuple[float, ...]
    factor: float
    values: tuple[str, ...]


@dataclass(frozen=True, slots=True, eq=False)
class LinkTerms:
    """The terms of a link, and what they were made of.

    Parameters
    ----------
    bones : tuple
        What of the link decides its rows; see ``skeleton``.
    ends : pair of Vector
        Where the bodies or supports at its ends are.
    rows : tuple of LinkRow
    """

    bones: tuple[Any, ...]
    ends: tuple[Vector, Vector]
    rows: tuple[LinkRow, ...]


def link_terms(
    links: Sequence[Link], bones: Sequence[tuple[Any, ...]], here: Places, before: Mapping[str, LinkTerms]
) -> dict[str, LinkTerms]:
    """Return the terms of every link by its id, in the order of the model.

    Parameters
    ----------
    links : sequence of Link
    bones : sequence of tuple
        Of each link.
    here : Places
        In floats.
    before : mapping
        Of another state of a model of the same motion; terms that came from the same serve again.
    """
    found = {}
    for link, own in zip(links, bones, strict=True):
        ends = (here.centre[here.part(link.from_)], here.centre[here.part(link.to)])
        known = before.get(link.id)
        if known is None or known.ends != ends or (known.bones is not own and known.bones != own):
            known = LinkTerms(own, ends, _rows(link, here))
        found[link.id] = known
    return found


def _rows(link: Link, here: Places) -> tuple[LinkRow, ...]:
    rows = []
    for term in stretches(link, here):
        names = [f"{link.id}.{key}" for key in term.keys]
        if term.family == "stiffness" and link.dynamic_ratio is not None:
            names.append(f"{link.id}.dynamic_ratio")
        divide = term.divide
        entries = tuple(float(entry) / divide for entry in term.form.values())
        rows.append(LinkRow(link.id, term.family, tuple(term.form), entries, term.factor, tuple(names)))
    return tuple(rows)
