"""Where mounts stand as a change: raised or lowered, set wider or closer, under one body.

Frequencies are no monotone functions of where things stand, so nothing here is proven for what lies between
two places: places are tried, and each that is offered is proven by itself.
"""

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from typing import Final

from modalview.model.differences import Rewrite, checked_edit
from modalview.model.entries import decimal_of, length_entry, length_like
from modalview.model.moving import upright_axis
from modalview.model.parts import Body, Damper, End, Link, Model, Motion, Mount, Point, Spring
from modalview.units import quantities as q
from modalview.units.show import show

# Places tried to either side, and how far: up to the centre of gravity and half as far the other way; half
# to twice the width. Chosen, no source.
TRIES: Final = 20
BEYOND, CLOSEST, WIDEST = 0.5, 0.5, 2.0
# Places are told in steps of so much of a metre.
STEP = 0.01
HALVINGS = 6
# Nearer together than this share of the largest offset, feet stand in one line.
LINE = 1e-6
HEIGHT, WIDTH = "height", "width"

Clears = Callable[[Model], bool]


@dataclass(frozen=True, slots=True)
class Feet:
    """Springs, mounts and dampers at the feet of one body, and one way of moving them all.

    Parameters
    ----------
    body, label : str
    links : tuple of str
        Ids.
    number : int
        Feet: links at one place are one.
    axis : int
        The coordinate that changes.
    kind : str
        ``HEIGHT``: all go by one step. ``WIDTH``: all go away from their middle by one factor.
    now : float
        Height over the centre of gravity on average, or the distance between the outermost; m.
    """

    body: str
    label: str
    links: tuple[str, ...]
    number: int
    axis: int
    kind: str
    now: float

    @property
    def what(self) -> str:
        """What changes, in words."""
        along = "xyz"[self.axis]
        feet = f"{self.number} feet of {self.label}"
        return f"height of the {feet}" if self.kind == HEIGHT else f"distance of the {feet} along {along}"


@dataclass(frozen=True, slots=True)
class Moved:
    """Feet at another place, where everything is clear.

    Parameters
    ----------
    feet : Feet
    to : float
        Height or distance, m.
    model : Model
    edit : Rewrite
    text : str
    before, after : str
        The place in words, with unit: "250 mm below", "1.51 m".
    """

    feet: Feet
    to: float
    model: Model
    edit: Rewrite
    text: str
    before: str
    after: str


def every_feet(model: Model) -> tuple[Feet, ...]:
    """Return what feet there are that could be moved: of bodies on two or more links of their own.

    Parameters
    ----------
    model : Model
        In plane or space; elsewhere places have no influence and nothing is returned.
    """
    if model.motion not in (Motion.PLANE, Motion.SPACE):
        return ()
    up = upright_axis(model.motion)
    found: list[Feet] = []
    for body in model.bodies:
        links = _feet_of(model, body, up)
        if len(links) < 2:
            continue
        label, ids = body.name or body.id, tuple(one.id for one in links)
        axes = range(len(body.position or ()))
        number = len({tuple(_offset(one, body.id, axis) for axis in axes) for one in links})
        if number < 2:
            continue
        heights = [_offset(one, body.id, up) for one in links]
        found.append(Feet(body.id, label, ids, number, up, HEIGHT, sum(heights) / len(heights)))
        for axis in axes:
            places = [_offset(one, body.id, axis) for one in links]
            apart = max(places) - min(places)
            if axis != up and apart > LINE * max(map(abs, places)):
                found.append(Feet(body.id, label, ids, number, axis, WIDTH, apart))
    return tuple(one for one in found if moved_feet(model, one, one.now) is not None)


def moves_that_clear(model: Model, feet: Feet, clears: Clears, system: str = "SI") -> Iterator[Moved]:
    """Yield the nearest place to either side, in whole centimetres, that clears everything.

    Parameters
    ----------
    model : Model
    feet : Feet
        Of `every_feet`.
    clears : callable
        Whether a model is clear in every check, by counts.
    system : str
        Units of the texts.
    """
    if feet.kind == HEIGHT:
        sides = [0.0, feet.now + math.copysign(BEYOND * abs(feet.now), feet.now)] if feet.now else []
    else:
        sides = [CLOSEST * feet.now, WIDEST * feet.now]
    for far in sides:
        found = _nearest(model, feet, far, clears)
        if found is not None:
            yield _told(model, feet, *found, system)


def moved_feet(model: Model, feet: Feet, to: float) -> Model | None:
    """Return the model with feet at a height or width in m; None where they share a support that cannot go.

    A support goes along with the feet on it; the other end of a link between two bodies does so too, as if
    a plinth were put there.
    """
    links = {one.id: one for one in model.links if one.id in feet.links}
    steps = {name: _step(feet, link, links, to) for name, link in links.items()}
    supports: dict[str, float] = {}
    for name, link in links.items():
        for end in (link.from_, link.to):
            if end.support is not None and supports.setdefault(end.support, steps[name]) != steps[name]:
                return None
    others = {end.support for link in model.links if link.id not in links for end in (link.from_, link.to)}
    if others & set(supports):
        return None
    return replace(
        model,
        links=tuple(
            _moved(model, one, feet.axis, steps[one.id]) if one.id in links else one for one in model.links
        ),
        supports=tuple(
            replace(one, position=_shifted(one.position, feet.axis, supports[one.id]))
            if one.id in supports and one.position is not None
            else one
            for one in model.supports
        ),
    )


def _feet_of(model: Model, body: Body, up: int) -> list[Link]:
    """Return the links under a body: those to the ground or to bodies below it, at places of their own."""
    found: list[Link] = []
    heights = {one.id: one.position[up].si if one.position else 0.0 for one in model.bodies}
    for link in model.links:
        ends = {link.from_.body: link.to, link.to.body: link.from_}
        other = ends.get(body.id)
        if other is None or not isinstance(link, Spring | Mount | Damper):
            continue
        if other.body is None or heights[other.body] < heights[body.id]:
            found.append(link)
    return found


def _own_end(link: Link, body: str) -> End:
    return link.from_ if link.from_.body == body else link.to


def _offset(link: Link, body: str, axis: int) -> float:
    offset = _own_end(link, body).offset
    return offset[axis].si if offset else 0.0


def _step(feet: Feet, link: Link, links: dict[str, Link], to: float) -> float:
    if feet.kind == HEIGHT:
        return float(decimal_of(to - feet.now))
    places = [_offset(one, feet.body, feet.axis) for one in links.values()]
    middle = (max(places) + min(places)) / 2
    step = (_offset(link, feet.body, feet.axis) - middle) * (to / feet.now - 1)
    return round(step, 6)


def _moved(model: Model, link: Link, axis: int, step: float) -> Link:
    if step == 0:
        return link
    return replace(
        link, from_=_moved_end(model, link.from_, axis, step), to=_moved_end(model, link.to, axis, step)
    )


def _moved_end(model: Model, end: End, axis: int, step: float) -> End:
    if end.body is None:
        return end
    size = 3 if model.motion is Motion.SPACE else 2
    offset = end.offset or tuple(length_entry(0.0, model.units or "SI") for _ in range(size))
    return replace(end, offset=_shifted(offset, axis, step))


def _shifted(point: Point, axis: int, step: float) -> Point:
    return tuple(
        length_like(one, float(decimal_of(one.si) + decimal_of(step))) if number == axis else one
        for number, one in enumerate(point)
    )


def _nearest(model: Model, feet: Feet, far: float, clears: Clears) -> tuple[float, Model] | None:
    """Return the place nearest to today's, towards ``far``, of those tried that clear everything."""

    def tried(place: float) -> Model | None:
        there = moved_feet(model, feet, place)
        return there if there is not None and clears(there) else None

    failed = feet.now
    for number in range(1, TRIES + 1):
        place = feet.now + (far - feet.now) * number / TRIES
        if tried(place) is None:
            failed = place
            continue
        reached = place
        for _ in range(HALVINGS):
            middle = (failed + reached) / 2
            failed, reached = (failed, middle) if tried(middle) is not None else (middle, reached)
        side = math.ceil if far > feet.now else math.floor
        for more in range(2):  # the round place itself is proven, or the next
            round_ = round(STEP * (side(reached / STEP) + math.copysign(more, far - feet.now)), 9)
            there = tried(round_)
            if there is not None:
                return round_, there
        return None
    return None


def _told(model: Model, feet: Feet, to: float, after: Model, system: str) -> Moved:
    before, there = _place(feet, feet.now, system), _place(feet, to, system)
    if feet.kind == HEIGHT:
        way = "Raise" if to > feet.now else "Lower"
        step = show(abs(to - feet.now), q.LENGTH, system, 3)
        text = f"{way} the {feet.number} feet of {feet.label} by {step}, to {there} its centre of gravity"
    else:
        way = "wider" if to > feet.now else "closer"
        along = "xyz"[feet.axis]
        text = f"Set the {feet.number} feet of {feet.label} {way} along {along}: {before} to {there} apart"
    return Moved(feet, to, after, checked_edit(model, after, text), text, before, there)


def _place(feet: Feet, place: float, system: str) -> str:
    """Return a width, or a height against the centre of gravity: "250 mm below"."""
    if feet.kind == WIDTH:
        return show(place, q.LENGTH, system, 3)
    if abs(place) < STEP / 2:
        return "level with"
    return f"{show(abs(place), q.LENGTH, system, 3)} {'above' if place > 0 else 'below'}"
