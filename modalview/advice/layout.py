"""Doubts about where things are drawn: bodies on top of each other, springs across their ends."""

import math
from collections.abc import Iterator

from modalview.advice.doubt import Doubt, named, plain
from modalview.advice.survey import Survey
from modalview.assembly.directions import direction_vector, length
from modalview.assembly.kinematics import TRANSLATIONS, Vector, dot, minus
from modalview.model.parts import Damper, Motion, Spring

# Two parts nearer than this are at one place, m: positions are typed, not measured.
SAME_PLACE = 1e-6
# A spring that acts this nearly square to the line of its ends is doubted, and one this nearly level carries
# no weight; common practice, no source.
ACROSS = math.sin(math.radians(10))


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
