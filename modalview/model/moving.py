"""Parts moved, aligned and spread on the sheet, bodies drawn larger or smaller, ends led elsewhere.

Steps are added as decimals, so that 0.1 m and 0.2 m are 0.3 m, and each coordinate keeps its unit. What
does not move stays the very same object.
"""

import math
from collections.abc import Callable, Collection, Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from typing import cast

from modalview.errors import Fault, InputError, ModelFaultsError
from modalview.model import rules_links
from modalview.model.entries import decimal_of, length_entry, length_like, point_of
from modalview.model.parts import Body, Drawn, End, Link, Model, Motion, Point, Support
from modalview.model.rules_context import Context, place_of
from modalview.model.values import Entry

# Edges and centres that parts can be aligned at: which way, and which of low, middle, high.
EDGES: dict[str, tuple[str, str]] = {
    "left": ("sideways", "low"),
    "centre": ("sideways", "middle"),
    "right": ("sideways", "high"),
    "bottom": ("upright", "low"),
    "middle": ("upright", "middle"),
    "top": ("upright", "high"),
}
WAYS = ("sideways", "upright")
# Decimals of a metre kept of a third of a distance, so that thirds that cancel leave zero.
FINEST = 18


def upright_axis(motion: Motion) -> int:
    """Return which coordinate stands upright on the sheet: z in space, y elsewhere."""
    return 2 if motion is Motion.SPACE else 1


def moved(
    model: Model, ids: Collection[str], step: Sequence[float], *, lone_supports_follow: bool = True
) -> Model:
    """Return the model with bodies and supports moved.

    Parameters
    ----------
    ids : collection of str
        Bodies and supports; other ids stand for nothing here. Parts without a position stay so.
    step : sequence of float
        Along each of the model's coordinates, m.
    lone_supports_follow : bool
        Whether a support that carries nothing but moved bodies goes along sideways, keeping its height.

    Raises
    ------
    UnitError
        When a step is not finite.
    """
    return _moved_each(model, dict.fromkeys(ids, tuple(step)), follow=lone_supports_follow)


def placed(model: Model, places: Mapping[str, Sequence[float]]) -> Model:
    """Return the model with bodies and supports at places in m, by id; nothing follows them."""

    def put(part: Body | Support) -> Body | Support:
        place = places.get(part.id)
        if place is None:
            return part
        if part.position is None or len(part.position) != len(place):
            return replace(part, position=point_of(place, model.units or "SI"))
        return _at(part, [length_like(old, new) for old, new in zip(part.position, place, strict=True)])

    return _with_parts(model, put)


def lone_supports(model: Model, ids: Collection[str]) -> dict[str, tuple[str, ...]]:
    """Return the supports, by id, that carry bodies of ``ids`` and nothing else, with those bodies."""
    carried: dict[str, set[str | None]] = {}
    for link in model.links:
        for end, other in ((link.from_, link.to), (link.to, link.from_)):
            if end.support is not None:
                carried.setdefault(end.support, set()).add(other.body)
    return {
        support: tuple(sorted(str(body) for body in bodies))
        for support, bodies in carried.items()
        if support not in ids and all(body in ids for body in bodies)
    }


def _moved_each(model: Model, steps: Mapping[str, tuple[float, ...]], *, follow: bool) -> Model:
    """Move each part by its own step, with the supports that carry only parts of the same step."""
    all_steps = dict(steps)
    upright = upright_axis(model.motion)
    for support, bodies in (lone_supports(model, steps) if follow else {}).items():
        sideways = {
            tuple(0.0 if axis == upright else size for axis, size in enumerate(steps[body]))
            for body in bodies
        }
        if len(sideways) == 1:
            all_steps[support] = sideways.pop()

    def shift(part: Body | Support) -> Body | Support:
        step = all_steps.get(part.id)
        if step is None or part.position is None:
            return part
        return _at(part, [_shifted(old, by) for old, by in zip(part.position, step, strict=True)])

    return _with_parts(model, shift)


def _shifted(old: Entry, step: float) -> Entry:
    by = decimal_of(step)
    return length_like(old, float(decimal_of(old.si) + by)) if by else old


def _at(part: Body | Support, position: Sequence[Entry]) -> Body | Support:
    """Return a part at a position; the same object where it stands there already."""
    old = part.position or ()
    if len(old) == len(position) and all(a is b for a, b in zip(old, position, strict=True)):
        return part
    return replace(part, position=tuple(position))


def _with_parts(model: Model, change: Callable[[Body | Support], Body | Support]) -> Model:
    """Return the model with every body and support changed; the same object where none is."""
    bodies = cast("tuple[Body, ...]", tuple(change(body) for body in model.bodies))
    supports = cast("tuple[Support, ...]", tuple(change(support) for support in model.supports))
    if _differ(model.bodies, bodies):
        model = replace(model, bodies=bodies)
    return replace(model, supports=supports) if _differ(model.supports, supports) else model


def _differ(old: Sequence[object], new: Sequence[object]) -> bool:
    return any(a is not b for a, b in zip(old, new, strict=True))


def resized(model: Model, body_id: str, width: float, height: float) -> Model:
    """Return the model with a body drawn in another size, in m, about its centre of gravity.

    Raises
    ------
    LookupError
        When there is no such body.
    InputError
        When a size is not above zero.
    """
    if not (min(width, height) > 0 and math.isfinite(width + height)):
        raise InputError(f'the size of "{body_id}" must be above zero; found {width:g} m by {height:g} m')
    old = _named(model.bodies, body_id)
    drawn = old.drawn or Drawn()
    units = model.units or "SI"
    new = replace(
        drawn,
        width=length_like(drawn.width, width) if drawn.width else length_entry(width, units),
        height=length_like(drawn.height, height) if drawn.height else length_entry(height, units),
    )
    if new == drawn:
        return model
    return _with_parts(model, lambda part: replace(old, drawn=new) if part is old else part)


def _named(bodies: Iterable[Body], name: str) -> Body:
    for body in bodies:
        if body.id == name:
            return body
    raise LookupError(f'there is no body "{name}"')


def reattached(model: Model, link_id: str, side: str, end: End) -> Model:
    """Return the model with one end of a link elsewhere.

    Parameters
    ----------
    side : str
        "from" or "to".
    end : End
        On a body or a support of the model; see `adding.end_at`.

    Raises
    ------
    LookupError
        When there is no such link or side.
    ModelFaultsError
        When the link would break a rule there; the reason says which.
    """
    if side not in ("from", "to"):
        raise LookupError(f'a link has the sides "from" and "to"; found "{side}"')
    number = next((at for at, link in enumerate(model.links) if link.id == link_id), None)
    if number is None:
        raise LookupError(f'there is no link "{link_id}"')
    old = model.links[number]
    new: Link = replace(old, from_=end) if side == "from" else replace(old, to=end)
    if new == old:
        return model
    context = Context.of(model)
    known = set(rules_links.link(old, context))
    place = place_of("links", number, link_id)
    wrong = [(key, reason) for key, reason in rules_links.link(new, context) if (key, reason) not in known]
    if wrong:
        raise ModelFaultsError(tuple(Fault(f"{place} . {key}", reason) for key, reason in wrong))
    return replace(model, links=(*model.links[:number], new, *model.links[number + 1 :]))


def slid(model: Model, ids: Collection[str], step: Sequence[float]) -> Model:
    """Return the model with links moved along, on the bodies that they join.

    Parameters
    ----------
    ids : collection of str
        Links; other ids stand for nothing here.
    step : sequence of float
        Along each of the model's coordinates, m. A support that holds none but these links goes along; one
        that holds others, too, stays, and with it that end of the link.
    """
    held: dict[str, set[bool]] = {}
    for link in model.links:
        for end in (link.from_, link.to):
            if end.support is not None:
                held.setdefault(end.support, set()).add(link.id in ids)
    alone = [support for support, among in held.items() if among == {True}]
    placed_so = {body.id: body.position for body in model.bodies}

    def slide(end: End) -> End:
        at = placed_so.get(end.body or "")
        if at is None:
            return end
        old = end.offset or tuple(Entry("0 m", 0.0) for _ in at)
        like = old if end.offset else at
        sums = [decimal_of(one.si) + decimal_of(by) for one, by in zip(old, step, strict=True)]
        offset = tuple(length_like(unit, float(total)) for unit, total in zip(like, sums, strict=True))
        return replace(end, offset=offset if any(sums) else None)

    links = tuple(
        replace(link, from_=slide(link.from_), to=slide(link.to)) if link.id in ids and any(step) else link
        for link in model.links
    )
    model = _moved_each(model, dict.fromkeys(alone, tuple(step)), follow=False)
    return replace(model, links=links) if _differ(model.links, links) else model


@dataclass(frozen=True, slots=True)
class _Extent:
    """Where a part begins and ends along one coordinate, m, in decimals: two equal edges are equal."""

    name: str
    middle: Decimal
    half: Decimal

    def at(self, edge: str) -> Decimal:
        sign = {"low": -1, "middle": 0, "high": 1}[edge]
        return self.middle + sign * self.half


def aligned(model: Model, ids: Collection[str], edge: str, axes: tuple[int, int] | None = None) -> Model:
    """Return the model with parts moved to one line: that of the outermost edge, or of the middle of all.

    Parameters
    ----------
    ids : collection of str
        Bodies and supports; those without a position stay.
    edge : str
        "left", "centre", "right", "top", "middle" or "bottom", of the bodies as drawn. A body
        that has no drawn size, and a support, counts as a point.
    axes : pair of int or None
        Numbers of the coordinates that are seen sideways and upright; None is as the sheet usually stands.

    Notes
    -----
    Along y of a space model bodies count as points: no file has their depth.
    """
    way, which = EDGES[edge]
    axis = _axis(model, way, axes)
    extents = _extents(model, ids, axis)
    if len(extents) < 2:
        return model
    low, high = min(one.at("low") for one in extents), max(one.at("high") for one in extents)
    line = {"low": low, "middle": (low + high) / 2, "high": high}[which]
    return _settled(model, {one.name: one.middle + line - one.at(which) for one in extents}, axis)


def spread(model: Model, ids: Collection[str], way: str, axes: tuple[int, int] | None = None) -> Model:
    """Return the model with parts at even distances between the two outermost.

    Parameters
    ----------
    ids : collection of str
        Bodies and supports, at least three that have a position.
    way : str
        "sideways" or "upright"; distances are between centres of gravity.
    axes : pair of int or None
        As of `aligned`.
    """
    axis = _axis(model, way, axes)
    extents = sorted(_extents(model, ids, axis), key=lambda one: one.middle)
    if len(extents) < 3:
        return model
    first, last = extents[0].middle, extents[-1].middle
    gap = (last - first) / (len(extents) - 1)
    inner = {one.name: first + gap * number for number, one in enumerate(extents[1:-1], 1)}
    return _settled(model, inner, axis)


def _axis(model: Model, way: str, axes: tuple[int, int] | None) -> int:
    """Return the number of the coordinate that lies one of the ways."""
    sideways, upright = axes or (0, upright_axis(model.motion))
    return upright if way == "upright" else sideways


def _extents(model: Model, ids: Collection[str], axis: int) -> list[_Extent]:
    upright = upright_axis(model.motion)
    found = []
    parts: tuple[Body | Support, ...] = (*model.bodies, *model.supports)
    for part in parts:
        if part.id in ids and part.position is not None:
            drawn = part.drawn if isinstance(part, Body) else None
            sizes = {0: drawn.width, upright: drawn.height} if drawn else {}
            size = sizes.get(axis)
            half = decimal_of(size.si) / 2 if size else Decimal(0)
            found.append(_Extent(part.id, decimal_of(part.position[axis].si), half))
    return found


def span(model: Model, axis: int) -> tuple[float, float] | None:
    """Return from where to where all parts reach along a coordinate, in m, as drawn; None for none."""
    ids = [*(body.id for body in model.bodies), *(support.id for support in model.supports)]
    parts = _extents(model, ids, axis)
    if not parts:
        return None
    return float(min(one.at("low") for one in parts)), float(max(one.at("high") for one in parts))


def _settled(model: Model, middles: Mapping[str, Decimal], axis: int) -> Model:
    """Move parts so that their centres come to given coordinates along one axis."""
    parts: tuple[Body | Support, ...] = (*model.bodies, *model.supports)
    positions: dict[str, Point] = {part.id: part.position for part in parts if part.position is not None}
    steps = {}
    for name, middle in middles.items():
        old = positions[name]
        by = float(decimal_of(float(round(middle, FINEST))) - decimal_of(old[axis].si))
        steps[name] = tuple(by if number == axis else 0.0 for number in range(len(old)))
    return _moved_each(model, steps, follow=True)
