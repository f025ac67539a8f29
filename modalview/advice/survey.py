"""What the rules ask of a model as it is drawn, gathered once."""

from dataclasses import dataclass
from functools import cached_property

from modalview.assembly.groups import Groups
from modalview.assembly.kinematics import Places, places
from modalview.model.parts import FREEDOMS, Body, Damper, End, Link, Model, Motion, Mount, Support

# Stands for the ground among the ids of bodies; no id is empty.
GROUND = ""


@dataclass(frozen=True)
class Survey:
    """A model with what its links say of its bodies.

    Parameters
    ----------
    model : Model
        Free of faults; it may well be one that cannot be assembled.
    bodies, supports : dict
        By id.
    links_at : dict
        Links by the body or support they end at.
    """

    model: Model
    bodies: dict[str, Body]
    supports: dict[str, Support]
    links_at: dict[str, list[Link]]

    @classmethod
    def of(cls, model: Model) -> "Survey":
        """Gather."""
        bodies = {body.id: body for body in model.bodies}
        supports = {support.id: support for support in model.supports}
        links_at: dict[str, list[Link]] = {part: [] for part in (*bodies, *supports)}
        for link in model.links:
            for end in (link.from_, link.to):
                links_at[place_of(end)].append(link)
        return cls(model, bodies, supports, links_at)

    @property
    def motion(self) -> Motion:
        """The directions in which bodies move."""
        return self.model.motion

    @cached_property
    def places(self) -> Places:
        """Where everything is."""
        return places(self.model)

    @cached_property
    def joined(self) -> list[list[str]]:
        """Bodies by what springs, shafts, gears, beams and rigid links join; ``GROUND`` is one of them."""
        groups = Groups([GROUND, *self.bodies])
        for body in self.model.bodies:
            if not moves(body, self.motion):
                groups.join(GROUND, body.id)
        for link in self.model.links:
            if carries(link):
                groups.join(link.from_.body or GROUND, link.to.body or GROUND)
        return groups.lists()

    @cached_property
    def referred(self) -> frozenset[str]:
        """Bodies at which something acts or is measured."""
        model = self.model
        ends = [one.at for machine in model.machines for one in machine.excitations]
        ends += [peak.at for peak in model.measured]
        ends += [limit.at for limit in model.limits]
        return frozenset(end.body for end in ends if end is not None and end.body is not None)

    def far_end(self, link: Link, part: str) -> str:
        """Return the part at the other end of a link."""
        start, stop = place_of(link.from_), place_of(link.to)
        return stop if start == part else start


def place_of(end: End) -> str:
    """Return the id of the body or the support at an end."""
    return str(end.body if end.body is not None else end.support)


def carries(link: Link) -> bool:
    """Tell whether a link holds at rest: all but dashpots."""
    return not isinstance(link, Damper) and not (isinstance(link, Mount) and link.stiffness is None)


def moves(body: Body, motion: Motion) -> bool:
    """Tell whether a body has any freedom left."""
    return body.dof is None or any(name in body.dof for name in FREEDOMS[motion])


def turns(body: Body, motion: Motion) -> bool:
    """Tell whether a body can tilt in a vertical plane: rz in plane, rx or ry in space."""
    tilting = {Motion.PLANE: ("rz",), Motion.SPACE: ("rx", "ry")}.get(motion, ())
    return bool(tilting) and (body.dof is None or any(name in body.dof for name in tilting))
