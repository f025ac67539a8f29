"""Doubts about mounts and springs of one body that are symmetric but for one."""

from collections.abc import Hashable, Iterator, Sequence
from operator import attrgetter
from typing import NamedTuple

from modalview.advice.doubt import Doubt, named, plain
from modalview.advice.survey import Survey
from modalview.model.parts import Body, Link, Motion, Mount, Spring
from modalview.model.values import Value
from modalview.units import quantities as q
from modalview.units.show import show

# Offsets are compared in these steps, m, and values to this share: both are typed, not measured.
STEP, SAME_VALUE = 1e-6, 1e-9
# With fewer links that have a partner than this, one without is no exception.
MOST_PAIRED = 4

_of_mount = attrgetter("x", "y", "z", "rx", "ry", "rz")


class Spot(NamedTuple):
    """A link at its offset from a body's centre of gravity, in ``STEP``, with its values."""

    link: Link
    place: tuple[int, ...]
    values: tuple[Value, ...]


def partners(survey: Survey) -> Iterator[Doubt]:
    """Yield links that alone have no mirrored partner of equal value about an axis of their body."""
    if survey.motion not in (Motion.PLANE, Motion.SPACE):
        return
    for body in survey.model.bodies:
        links = survey.links_at[body.id]
        if len(links) < 3:
            continue
        spots = [(link, place) for link in links if (place := _place(link, body)) is not None]
        there = {place for _, place in spots}
        if any(place[axis] and mirrored(place, axis) in there for axis in _axes(survey) for place in there):
            for group in _alike(survey, spots).values():
                if len(group) > 2:
                    yield from _lone_of(survey, body, group)
                    yield from _unequal_of(survey, body, group)


def _place(link: Link, body: Body) -> tuple[int, ...] | None:
    offset = (link.from_ if link.from_.body == body.id else link.to).offset
    return None if offset is None else tuple([round(entry.si / STEP) for entry in offset])


def _axes(survey: Survey) -> range:
    """Return the directions to mirror along: x, and y where that is level too."""
    return range(2) if survey.motion is Motion.SPACE else range(1)


def mirrored(place: tuple[int, ...], axis: int) -> tuple[int, ...]:
    """Return the place opposite.

    >>> mirrored((3, 4), 0)
    (-3, 4)
    """
    return (*place[:axis], -place[axis], *place[axis + 1 :])


def _alike(
    survey: Survey, spots: Sequence[tuple[Link, tuple[int, ...]]]
) -> dict[tuple[Hashable, ...], list[Spot]]:
    """Return springs and mounts, those together that can be each other's partners."""
    groups: dict[tuple[Hashable, ...], list[Spot]] = {}
    for link, place in spots:
        if isinstance(link, Spring):
            spot = Spot(link, place, (link.stiffness,))
            groups.setdefault(_slope(survey, link), []).append(spot)
        elif isinstance(link, Mount) and link.stiffness is not None and link.axes is None:
            values = _of_mount(link.stiffness)
            given = tuple(value is not None for value in values)
            spot = Spot(link, place, tuple(value for value in values if value is not None))
            groups.setdefault(given, []).append(spot)
    return groups


def _slope(survey: Survey, link: Spring) -> tuple[Hashable, ...]:
    """Return how a spring leans, the same for mirrored ones."""
    if link.direction is not None:
        return (str(link.direction).strip("+- "),)
    start, stop = survey.places.point(link.from_), survey.places.point(link.to)
    line = [abs(float(b) - float(a)) for a, b in zip(start, stop, strict=True)]
    longest = max(line) or 1.0
    return tuple(round(1000 * one / longest) for one in line)


def _equal(a: Spot, b: Spot) -> bool:
    return all(abs(x.si - y.si) <= SAME_VALUE * x.si for x, y in zip(a.values, b.values, strict=True))


def _lone_of(survey: Survey, body: Body, group: Sequence[Spot]) -> Iterator[Doubt]:
    """Yield the one link opposite which there is none, along one axis of many pairs or along both."""
    there = {spot.place for spot in group}
    lone: list[tuple[Spot, tuple[int, ...], int]] = []
    for axis in _axes(survey):
        single = [spot for spot in group if mirrored(spot.place, axis) not in there]
        paired = sum(1 for spot in group if spot.place[axis]) - len(single)
        if len(single) == 1 and paired:
            lone.append((single[0], mirrored(single[0].place, axis), paired))
    # Alone it is an exception beside many pairs, or where the fourth corner lacks along either axis.
    corner = len(lone) == 2 and lone[0][1] == lone[1][1]
    if not lone or not (corner or lone[0][2] >= MOST_PAIRED):
        return
    spot, place, _ = lone[0]
    opposite = ", ".join(show(one * STEP, q.LENGTH) for one in place)
    text = (
        f"{named(spot.link)} alone has no partner opposite, at ({opposite}) from the centre of gravity of "
        f"{plain(body)}; is one missing?"
    )
    effect = "One too few, or one misplaced: the body is held lopsided, and its directions couple."
    yield Doubt("mirror partner", (spot.link.id, body.id), text, effect)


def _unequal_of(survey: Survey, body: Body, group: Sequence[Spot]) -> Iterator[Doubt]:
    """Yield the one pair of mirrored links with unlike values; of two such pairs the link in both."""
    there = {spot.place: spot for spot in group}
    odd: list[tuple[Spot, Spot]] = []
    for axis in _axes(survey):
        sided = [spot for spot in group if spot.place[axis] > 0]
        known = [(s, there[at]) for s in sided if (at := mirrored(s.place, axis)) in there]
        unlike = [pair for pair in known if not _equal(*pair)]
        if len(unlike) == 1 and 1 < len(known) == len(sided):
            odd.append(unlike[0])
    if not odd:
        return
    first = next((spot for spot in odd[0] if all(spot in pair for pair in odd)), odd[0][0])
    second = odd[0][1] if first is odd[0][0] else odd[0][0]
    mine, other = next((x, y) for x, y in zip(first.values, second.values, strict=True) if x.si != y.si)
    text = (
        f"{named(first.link)} has {mine.text}, its mirrored partner {plain(second.link)} {other.text}; "
        f"all other pairs of {plain(body)} are equal."
    )
    effect = "A mistyped value makes directions couple that would move apart."
    yield Doubt("mirror partner", (first.link.id, second.link.id, body.id), text, effect)
