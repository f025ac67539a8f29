"""Doubts about what stands beside its feet."""

import math
from collections.abc import Iterator, Sequence

from modalview.advice.doubt import Doubt, named
from modalview.advice.layout import ACROSS, SAME_PLACE
from modalview.advice.survey import Survey, carries, turns
from modalview.assembly.directions import axes_vectors, direction_vector, length
from modalview.assembly.groups import Groups
from modalview.assembly.kinematics import Vector, minus
from modalview.assembly.stretch import acting_point
from modalview.model.parts import Beam, Link, Motion, Mount, RigidLink, Shaft, Spring
from modalview.units import quantities as q
from modalview.units.show import show

# A frame of more bodies than this may well lean out over its feet; common practice, no source.
MOST_CARRIED = 30
# The centre of gravity may lie so far outside the feet, as a share of their spread, before it is told.
OUTSIDE = 1e-6

Spot = tuple[float, float]


def outside_its_feet(survey: Survey) -> Iterator[Doubt]:
    """Yield what is carried by feet between which its centre of gravity does not lie, seen from above.

    Carried is what tilts as one group of linked bodies; feet are where links that bear weight leave it for
    ground, or for a body that cannot tilt. Nothing is said where a foot holds against tilting by itself, as
    a beam does, or where the feet span no base.
    """
    if survey.motion not in (Motion.PLANE, Motion.SPACE):
        return
    for group, leaving in _carried_groups(survey):
        mass = sum(_mass(survey, part) for part in group)
        if not leaving or mass == 0 or len(group) > MOST_CARRIED:
            continue
        feet = [foot for part, link in leaving for foot in _feet(survey, part, link)]
        spots = [foot for foot in feet if foot is not None]
        if not spots or len(spots) < len(feet):
            continue
        centre = tuple(
            sum(_mass(survey, part) * float(survey.places.centre[part][i]) for part in group) / mass
            for i in (0, 1)
        )
        outside = _outside(centre, spots, survey.motion)
        if outside > 0:
            yield _beside(survey, group, outside, len(spots))


def _beside(survey: Survey, group: Sequence[str], outside: float, feet: int) -> Doubt:
    alone = len(group) == 1
    name = named(survey.bodies[group[0]]) if alone else f"The {len(group)} bodies on these feet"
    text = (
        f"{name}: the centre of gravity lies {show(outside, q.LENGTH, digits=3)} outside the {feet} mounts "
        f"that carry {'it' if alone else 'them'}, seen from above."
    )
    effect = "It would tip over, or a mount pulls; rocking modes lie elsewhere if a place is mistyped."
    return Doubt("outside the mounts", tuple(group), text, effect)


def _mass(survey: Survey, part: str) -> float:
    mass = survey.bodies[part].mass
    return 0.0 if mass is None else mass.si


def _carried_groups(survey: Survey) -> Iterator[tuple[list[str], list[tuple[str, Link]]]]:
    """Yield bodies that tilt, by what links join, with the links that leave each group and from where."""
    tilting = {body.id for body in survey.model.bodies if turns(body, survey.motion)}
    inner = Groups(part for part in survey.bodies if part in tilting)
    leaving: list[tuple[str, Link]] = []
    for link in survey.model.links:
        inside = [part for part in (link.from_.body, link.to.body) if part is not None and part in tilting]
        if len(inside) == 2:
            inner.join(*inside)
        elif inside and carries(link):
            leaving.append((inside[0], link))
    of_group: dict[str, list[tuple[str, Link]]] = {}
    for part, link in leaving:
        of_group.setdefault(inner.find(part), []).append((part, link))
    for group in inner.lists():
        yield group, of_group.get(group[0], [])


def _feet(survey: Survey, part: str, link: Link) -> Iterator[Spot | None]:
    """Yield where a link bears weight, None where it holds against tilting."""
    places = survey.places
    up = 2 if survey.motion is Motion.SPACE else 1
    tilts = ("rx", "ry") if survey.motion is Motion.SPACE else ("rz",)
    if isinstance(link, Beam | RigidLink | Shaft):
        yield None
    elif isinstance(link, Mount) and link.stiffness is not None:
        if any(getattr(link.stiffness, key) is not None for key in tilts):
            yield None
        axes = zip(("x", "y", "z"), axes_vectors(link.axes, places), strict=True)
        along = [axis for key, axis in axes if getattr(link.stiffness, key) is not None]
        if any(abs(float(axis[up])) >= ACROSS * length(axis) for axis in along):
            yield _above(acting_point(link, places))
    elif isinstance(link, Spring):
        point = places.point(link.from_ if link.from_.body == part else link.to)
        line = minus(places.point(link.to), places.point(link.from_))
        if link.direction is not None:
            line = direction_vector(link.direction, places)
        if abs(float(line[up])) >= ACROSS * length(line):
            yield _above(point)


def _above(point: Vector) -> Spot:
    return float(point[0]), float(point[1])


def _outside(centre: Sequence[float], feet: Sequence[Spot], motion: Motion) -> float:
    """Return how far a centre lies outside the base of its feet, m; not above 0 within, or without a base."""
    xs = [foot[0] for foot in feet]
    spread = max(xs) - min(xs)
    if motion is Motion.PLANE:
        beyond = max(min(xs) - centre[0], centre[0] - max(xs))
        return beyond if spread > SAME_PLACE and beyond > OUTSIDE * spread else 0.0
    corners = _hull(feet)
    if len(corners) < 3:
        return 0.0
    beyond = 0.0
    for a, b in zip(corners, [*corners[1:], corners[0]], strict=True):
        side = math.hypot(b[0] - a[0], b[1] - a[1])
        beyond = max(beyond, -_turn(a, b, centre) / side)
    return beyond if beyond > OUTSIDE * spread else 0.0


def _hull(points: Sequence[Spot]) -> list[Spot]:
    """Return the corners of the convex hull, anticlockwise.

    A. M. Andrew (1979), Information Processing Letters 9, 216-219.
    """
    ordered = sorted(set(points))
    return _half_hull(ordered) + _half_hull(ordered[::-1])


def _half_hull(ordered: Sequence[Spot]) -> list[Spot]:
    half: list[Spot] = []
    for point in ordered:
        while len(half) > 1 and _turn(half[-2], half[-1], point) <= 0:
            half.pop()
        half.append(point)
    return half[:-1]


def _turn(a: Sequence[float], b: Sequence[float], c: Sequence[float]) -> float:
    return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])
