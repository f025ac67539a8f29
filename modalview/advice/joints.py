"""Doubts about what joins what: floating parts, and parts that hang on nothing."""

from collections.abc import Iterator, Sequence

from modalview.advice.doubt import Doubt, is_junction, listed, named, plain
from modalview.advice.survey import GROUND, Survey, carries, moves
from modalview.model.parts import Motion, RigidLink


def floating(survey: Survey) -> Iterator[Doubt]:
    """Yield groups of bodies that neither ground nor anything joined to it holds.

    A shaft train turns freely by nature: of several, all but the largest are told.
    """
    groups = [[part for part in group if part != GROUND] for group in survey.joined if GROUND not in group]
    grounded = len(survey.joined[0]) > 1
    if survey.motion is Motion.SHAFT_TRAIN and groups and not grounded:
        groups.remove(max(groups, key=len))
    for group in groups:
        lone = len(group) == 1 and not survey.links_at[group[0]]
        if not lone:
            yield _group_floats(survey, group)
        elif not is_junction(survey.bodies[group[0]]):
            yield Doubt(
                "floating part",
                (group[0],),
                f"{named(survey.bodies[group[0]])} floats: no link joins it to anything.",
                "The model cannot be analysed before it is linked, held still or deleted.",
            )


def _group_floats(survey: Survey, group: Sequence[str]) -> Doubt:
    one = len(group) == 1
    name = named(survey.bodies[group[0]]) if one else listed([plain(survey.bodies[part]) for part in group])
    who = f"{name[:1].upper()}{name[1:]} {'floats' if one else 'float'}"
    it = "it" if one else "them"
    if survey.motion is Motion.SHAFT_TRAIN:
        text = f"{who}: nothing joins {it} to the rest of the train."
        effect = "The trains do not act on each other: each has modes of its own."
    else:
        dashpots = any(not carries(link) for part in group for link in survey.links_at[part])
        text = f"{who}: {'only dashpots join' if dashpots else 'nothing joins'} {it} to ground."
        effect = "Drift at 0 Hz, and elastic modes as of a part that hangs free."
    return Doubt("floating part", tuple(group), text, effect)


def lone_parts(survey: Survey) -> Iterator[Doubt]:
    """Yield supports and junctions at which no link ends."""
    for support in survey.model.supports:
        if not survey.links_at[support.id]:
            text = f"{named(support)} carries nothing: no link ends at it."
            yield Doubt("lone support", (support.id,), text, "None on the numbers; a link may be missing.")
    for body in survey.model.bodies:
        if not survey.links_at[body.id] and is_junction(body) and moves(body, survey.motion):
            text = f"{named(body)} hangs on nothing: no link ends at it."
            effect = "The model cannot be analysed before it is linked or deleted."
            yield Doubt("lone junction", (body.id,), text, effect)


def loose_ends(survey: Survey) -> Iterator[Doubt]:
    """Yield links that end at a junction at which nothing else ends and nothing acts."""
    for body in survey.model.bodies:
        links = survey.links_at[body.id]
        if len(links) != 1 or not is_junction(body) or body.dof is not None or body.id in survey.referred:
            continue
        if not isinstance(links[0], RigidLink):
            text = f"{named(links[0])} ends at junction {plain(body)}, at which nothing else ends."
            effect = "Nothing pulls at that end, so the link does nothing: as if it were not there."
            yield Doubt("loose end", (links[0].id, body.id), text, effect)
