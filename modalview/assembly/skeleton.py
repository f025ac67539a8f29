"""What of a model decides its coordinates and rows: everything but the sizes of its values.

Sizes of stiffnesses and of masses do not matter, except that bodies joined rigidly move with their joint
centre of gravity, and that an inertia tensor's principal axes are rows.
"""

from typing import Any

from modalview.assembly.masses import has_inertia
from modalview.model.parts import (
    FREEDOMS,
    Beam,
    Body,
    End,
    Gear,
    InertiaTensor,
    Link,
    Model,
    Motion,
    Mount,
    RigidLink,
    Shaft,
    Support,
)


def joined_bodies(model: Model) -> frozenset[str]:
    """Return the bodies that rigid links join to others: they move about a joint centre of gravity."""
    return frozenset(
        str(end.body) for link in model.links if isinstance(link, RigidLink) for end in (link.from_, link.to)
    )


def support_bones(support: Support) -> tuple[Any, ...]:
    """Return what of a support decides rows."""
    return (support.id, _numbers(support.position))


def _numbers(point: Any) -> tuple[float, ...] | None:
    return None if point is None else tuple(entry.si for entry in point)


def body_bones(body: Body, motion: Motion, *, weigh: bool) -> tuple[Any, ...]:
    """Return what of a body decides coordinates and rows; its mass where ``weigh`` says so."""
    inertia = body.inertia
    tensor = inertia if isinstance(inertia, InertiaTensor) else None
    return (
        body.id,
        body.name,
        _numbers(body.position),
        body.dof,
        inertia is None,
        tuple(has_inertia(body, name) for name in FREEDOMS[motion]),
        body.mass.si if weigh and body.mass else None,
        # Principal moments enter the rows' factors, so any tensor is part of the structure.
        tensor,
    )


def _end(end: End) -> tuple[Any, ...]:
    return (end.body, end.support, _numbers(end.offset))


def link_bones(link: Link) -> tuple[Any, ...]:
    """Return what of a link decides coordinates and rows."""
    own: tuple[Any, ...] = (getattr(link, "direction", None), link.dynamic_ratio is None)
    if isinstance(link, Mount):
        groups = (link.stiffness, link.damping)
        given = tuple(
            None if g is None else tuple(getattr(g, d) is None for d in ("x", "y", "z", "rx", "ry", "rz"))
            for g in groups
        )
        own = (*own, given, link.axes)
    elif isinstance(link, Beam):
        own = (*own, link.axes)
    elif isinstance(link, (Gear, Shaft)):
        own = (*own, link.axis)
    if isinstance(link, Gear):
        radius = link.pitch_radius
        own = (
            *own,
            link.ratio,
            link.teeth,
            link.stiffness is None,
            radius and (radius.from_.si, radius.to.si),
        )
    if isinstance(link, RigidLink):
        own = (*own, link.directions)
    return (link.id, link.kind, _end(link.from_), _end(link.to), own)
