"""Doubts about where things are drawn: bodies on top of each other, springs across their ends, tipping."""

import math
from collections.abc import Iterator, Sequence

from modalview.advice.doubt import Doubt, named, plain
from modalview.advice.survey import GROUND, Survey, carries, turns
from modalview.assembly.directions import axes_vectors, direction_vector, length
from modalview.assembly.groups import Groups
from modalview.assembly.kinematics import TRANSLATIONS, Vector, dot, minus
from modalview.assembly.stretch import acting_point
from modalview.model.parts import Beam, Damper, Link, Motion, Mount, RigidLink, Shaft, Spring
from modalview.units import quantities as q
from modalview.units.show import show

# Two parts nearer than this are at one place, m: positions are typed, not measured.
SAME_PLACE = 1e-6
# A spring that acts this nearly square to the line of its ends is doubted, and one this nearly level carries
# no weight; common practice, no source.
ACROSS = math.sin(math.radians(10))
# A frame of more bodies than this may well lean out over its feet; common practice, no source.
MOST_CARRIED = 30
# The centre of gravity may lie so far outside the feet, as a share of their spread, before it is told.
OUTSIDE = 1e-6


def same_place(survey: Survey) -> Iterator[Doubt]:
    """Yield bodies drawn at one place that no link joins to each other."""
    there: dict[tuple[int, ...], str] = {}
    for body in survey.model.bodies:
        if body.position is None:
            continue
        place = tuple(round(one.si / SAME_PLACE) for one in body.position)
        first = there.setdefault(place, body.id)
        if first == body.id or any(
            survey.far_end(link, body.id) == first for link in survey.links_at[body.id]
        ):
            continue
        where = ", ".join(one.text for one in body.position)
        text = f"{named(body)} is drawn at the same place as {plain(survey.bodies[first])}, ({where})."
        if survey.motion in (Motion.PLANE, Motion.SPACE):
            effect = (
                "One hides the other; springs at it act with the wrong arms if its place was never given."
            )
        else:
            effect = "One hides the other on the sheet; none on the numbers."
        yield Doubt("same place", (body.id, first), text, effect)


def across_its_ends(survey: Survey) -> Iterator[Doubt]:
    """Yield springs and dashpots with a direction nearly square to the line of their ends.

    Not where another link of the same two parts acts along that line, as then it is the lateral one of a
    pair, nor where the ends cannot move along it, as the floors of a building that only sway.
    """
    if survey.motion not in (Motion.PLANE, Motion.SPACE):
        return
    places = survey.places
    for link in survey.model.links:
        if not isinstance(link, Spring | Damper) or link.direction is None:
            continue
        line = minus(places.point(link.to), places.point(link.from_))
        direction = direction_vector(link.direction, places)
        cosine = _cosine(line, direction)
        if cosine is None or cosine >= ACROSS or not _moves_along(survey, link, line):
            continue
        if _has_partner_along(survey, link, line):
            continue
        said = link.direction if isinstance(link.direction, str) else list(link.direction)
        off = math.degrees(math.acos(cosine))
        text = f"{named(link)} acts along {said}, {off:.0f} deg off the line of its ends; is that meant?"
        effect = "It resists motion across its ends only, and nothing along them."
        yield Doubt("direction across", (link.id,), text, effect)


def _moves_along(survey: Survey, link: Spring | Damper, line: Vector) -> bool:
    """Tell whether an end is on a body that is free along the line, other than by turning."""
    size = length(line)
    along = [name for name, part in zip(TRANSLATIONS, line, strict=True) if abs(float(part)) > ACROSS * size]
    bodies = [survey.bodies[end.body] for end in (link.from_, link.to) if end.body is not None]
    return any(body.dof is None or any(name in body.dof for name in along) for body in bodies)


def _has_partner_along(survey: Survey, link: Spring | Damper, line: Vector) -> bool:
    part = survey.places.part(link.from_)
    other = survey.far_end(link, part)
    fewer = min((survey.links_at[part], survey.links_at[other]), key=len)
    for partner in fewer:
        ends = {survey.places.part(partner.from_), survey.places.part(partner.to)}
        if partner is not link and ends == {part, other}:
            if not isinstance(partner, Spring | Damper) or partner.direction is None:
                return True
            cosine = _cosine(line, direction_vector(partner.direction, survey.places))
            if cosine is not None and cosine >= ACROSS:
                return True
    return False


def _cosine(a: Vector, b: Vector) -> float | None:
    """Return the size of the cosine between two vectors; None where one has no length."""
    product = length(a) * length(b)
    return abs(float(dot(a, b))) / product if product else None


def outside_its_feet(survey: Survey) -> Iterator[Doubt]:
    """Yield what is carried by feet between which its centre of gravity does not lie, seen from above.

    Carried is what tilts as one group of linked bodies; feet are where links that bear weight leave it for
    ground, or for a body that cannot tilt. Nothing is said where a foot holds against tilting by itself, as
    a beam does, or where the feet span no base.
    """
    if survey.motion not in (Motion.PLANE, Motion.SPACE):
        return
    feet = _Feet(survey)
    for group in feet.groups:
        base = feet.of_group.get(group[0])
        mass = sum(_mass(survey, part) for part in group)
        if not base or None in base or mass == 0 or len(group) > MOST_CARRIED:
            continue
        spread = [point for point in base if point is not None]
        centre = tuple(
            sum(_mass(survey, part) * survey.places.centre[part][i] for part in group) / mass for i in (0, 1)
        )
        outside = _outside(centre, spread, survey.motion)
        if outside > 0:
            name = (
                named(survey.bodies[group[0]])
                if len(group) == 1
                else f"The {len(group)} bodies on these feet"
            )
            text = (
                f"{name}: the centre of gravity lies {show(outside, q.LENGTH, digits=3)} outside the "
                f"{len(spread)} mounts that carry {'it' if len(group) == 1 else 'them'}, seen from above."
            )
            effect = (
                "It would tip over, or a mount pulls; rocking modes lie elsewhere if a place is mistyped."
            )
            yield Doubt("outside the mounts", tuple(group), text, effect)


def _mass(survey: Survey, part: str) -> float:
    mass = survey.bodies[part].mass
    return 0.0 if mass is None else mass.si


class _Feet:
    """Groups of bodies that tilt, and the places of their feet; None among these holds against tilting."""

    def __init__(self, survey: Survey) -> None:
        self._survey = survey
        self._tilting = {body.id for body in survey.model.bodies if turns(body, survey.motion)}
        inner = Groups(body for body in survey.bodies if body in self._tilting)
        leaving = []
        for link in survey.model.links:
            start, stop = (self._carried(end.body) for end in (link.from_, link.to))
            if start and stop:
                inner.join(start, stop)
            elif start != stop and carries(link):
                leaving.append((start or stop, link))
        self.groups = inner.lists()
        self.of_group: dict[str, list[tuple[float, float] | None]] = {}
        for part, link in leaving:
            self.of_group.setdefault(inner.find(part), []).extend(self._places(part, link))

    def _carried(self, part: str | None) -> str:
        return part if part is not None and part in self._tilting else GROUND

    def _places(self, part: str, link: Link) -> Iterator[tuple[float, float] | None]:
        """Yield where a link bears weight, None where it holds against tilting."""
        survey, places = self._survey, self._survey.places
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


def _above(point: Vector) -> tuple[float, float]:
    return float(point[0]), float(point[1])


def _outside(centre: Sequence[float], feet: Sequence[tuple[float, float]], motion: Motion) -> float:
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


def _hull(points: Sequence[tuple[float, float]]) -> list[tuple[float, float]]:
    """Return the corners of the convex hull, anticlockwise.

    A. M. Andrew (1979), Information Processing Letters 9, 216-219.
    """
    ordered = sorted(set(points))
    return _half_hull(ordered) + _half_hull(ordered[::-1])


def _half_hull(ordered: Sequence[tuple[float, float]]) -> list[tuple[float, float]]:
    half: list[tuple[float, float]] = []
    for point in ordered:
        while len(half) > 1 and _turn(half[-2], half[-1], point) <= 0:
            half.pop()
        half.append(point)
    return half[:-1]


def _turn(a: Sequence[float], b: Sequence[float], c: Sequence[float]) -> float:
    return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])
