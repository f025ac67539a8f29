"""One doubt, and the words that doubts share."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from modalview.model.parts import Body, Link, Support

# So many doubts of one rule are told one by one; of more, the last one told speaks for all the others.
TOLD = 4
# More parts than this of which the same is said are counted, not named.
NAMED = 3


@dataclass(frozen=True, slots=True)
class Doubt:
    """A hint that blocks nothing.

    Parameters
    ----------
    rule : str
        Which rule raised it, in stable words: "value far off".
    parts : tuple of str
        Ids of the parts concerned, the doubtful one first; empty where it is the whole model.
    text : str
        What was found, in whole sentences with numbers and units.
    effect : str
        What it would mean for the result.
    """

    rule: str
    parts: tuple[str, ...]
    text: str
    effect: str


def named(part: Body | Support | Link) -> str:
    """Return how a sentence begins that speaks of a part: "Motor pedestal (spring k1)", "Spring k3"."""
    kind = _kind(part)
    if part.name is None:
        return f"{kind.capitalize()} {part.id}"
    return f"{part.name[:1].upper()}{part.name[1:]} ({kind} {part.id})"


def _kind(part: Body | Support | Link) -> str:
    if isinstance(part, Support):
        return "support"
    if isinstance(part, Body):
        return "junction" if is_junction(part) else "body"
    return part.kind


def plain(part: Body | Support | Link) -> str:
    """Return a part's name, or its id where it has none."""
    return part.name or part.id


def listed(names: Sequence[str]) -> str:
    """Return names as they stand in a sentence.

    >>> listed(["a", "b"]), listed(["a", "b", "c", "d", "e"])
    ('a and b', 'a, b, c and 2 more')
    """
    if len(names) > NAMED + 1:
        return f"{', '.join(names[:NAMED])} and {len(names) - NAMED} more"
    return " and ".join(filter(None, (", ".join(names[:-1]), names[-1])))


def is_junction(body: Body) -> bool:
    """Tell whether a body has neither mass nor inertia."""
    massless = body.mass is None or body.mass.si == 0
    inertia = body.inertia
    return massless and (inertia is None or (not hasattr(inertia, "Ixx") and inertia.si == 0))


def few(doubts: Sequence[Doubt]) -> list[Doubt]:
    """Return the doubts of one rule, the many beyond ``TOLD`` folded into one with all their parts."""
    if len(doubts) <= TOLD:
        return list(doubts)
    rest = doubts[TOLD - 1 :]
    parts = dict.fromkeys(part for one in rest for part in one.parts)
    more = f"{rest[0].text} The same holds of {len(rest) - 1} more."
    return [*doubts[: TOLD - 1], replace(rest[0], parts=tuple(parts), text=more)]
