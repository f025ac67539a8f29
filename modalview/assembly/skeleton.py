"""What of a model decides its coordinates and rows: everything but the sizes of its values."""

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
    Mount,
    RigidLink,
    Shaft,
)


def skeleton(model: Model) -> tuple[Any, ...]:
    """Return a key that is equal for two models exactly when one structure serves both.

    Sizes of stiffnesses and of masses do not matter, except that bodies joined rigidly move with their
    joint centre of gravity and that skew inertia tensors turn their principal axes.
    """
    joined = {
        end.body for link in model.links if isinstance(link, RigidLink) for end in (link.from_, link.to)
    }
    names = FREEDOMS[model.motion]
    return (
        model.motion,
        tuple(_body(body, names, weigh=body.id in joined) for body in model.bodies),
        tuple((s.id, _numbers(s.position)) for s in model.supports),
        tuple(_link(link) for link in model.links),
    )


def _numbers(point: Any) -> tuple[float, ...] | None:
    return None if point is None else tuple(entry.si for entry in point)


def _body(body: Body, names: tuple[str, ...], *, weigh: bool) -> tuple[Any, ...]:
    inertia = body.inertia
    tensor = inertia if isinstance(inertia, InertiaTensor) else None
    return (
        body.id,
        body.name,
        _numbers(body.position),
        body.dof,
        tuple(has_inertia(body, name) for name in names),
        body.mass.si if weigh and body.mass else None,
        # Principal moments enter the rows' factors, so any tensor is part of the structure.
        tensor,
    )


def _end(end: End) -> tuple[Any, ...]:
    return (end.body, end.support, _numbers(end.offset))


def _link(link: Link) -> tuple[Any, ...]:
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
