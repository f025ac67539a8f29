"""What each part contributes to an assembly, kept from edit to edit.

An edit replaces the one part it touches and leaves the others the very same objects, so their
contributions serve again.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any, TypeVar

from modalview.assembly.masses import mass_parameters
from modalview.assembly.parameters import Parameter, parameter
from modalview.assembly.skeleton import body_bones, joined_bodies, link_bones, support_bones
from modalview.model.parts import Body, DefaultTolerance, Link, Model, Support
from modalview.model.values import Value

Found = TypeVar("Found")
Part = Body | Support | Link

SINGLE_VALUES = ("stiffness", "damping", "E", "A", "I", "Iy", "Iz", "G", "J", "dynamic_ratio")
MOUNT_DIRECTIONS = ("x", "y", "z", "rx", "ry", "rz")


@dataclass(frozen=True, slots=True, eq=False)
class PerPart:
    """Contributions of every body, support and link, in the order of the model.

    Parameters
    ----------
    model : Model
    joined : frozenset of str
        Bodies that rigid links join to others.
    parameters : tuple of tuple of Parameter
    bones : tuple
        What of each part decides coordinates and rows; see ``skeleton``.
    """

    model: Model
    joined: frozenset[str]
    parameters: tuple[tuple[Parameter, ...], ...]
    bones: tuple[tuple[Any, ...], ...]


def per_part(model: Model, previous: PerPart | None) -> PerPart:
    """Return the contributions of every part; those of untouched parts are taken over."""
    joined = joined_bodies(model)
    default = model.default_tolerance
    alike = (
        previous is not None
        and previous.model.motion is model.motion
        and previous.model.default_tolerance == default
        and previous.joined == joined
    )
    before = previous if alike else None

    def parameters(part: Part) -> tuple[Parameter, ...]:
        if isinstance(part, Body):
            return tuple(mass_parameters(part, default, model.motion))
        return () if isinstance(part, Support) else tuple(link_parameters(part, default))

    def bones(part: Part) -> tuple[Any, ...]:
        if isinstance(part, Body):
            return body_bones(part, model.motion, weigh=part.id in joined)
        return support_bones(part) if isinstance(part, Support) else link_bones(part)

    parts = _parts(model)
    old = _parts(before.model) if before else ()
    return PerPart(
        model=model,
        joined=joined,
        parameters=_taken_over(parts, old, before.parameters if before else (), parameters),
        bones=_taken_over(parts, old, before.bones if before else (), bones),
    )


def _parts(model: Model) -> tuple[Part, ...]:
    return (*model.bodies, *model.supports, *model.links)


def _taken_over(
    parts: Sequence[Part], old: Sequence[Part], kept: Sequence[Found], compute: Callable[[Part], Found]
) -> tuple[Found, ...]:
    if len(parts) != len(old):
        return tuple(compute(part) for part in parts)
    return tuple(
        found if part is before else compute(part)
        for part, before, found in zip(parts, old, kept, strict=True)
    )


def link_parameters(link: Link, default: DefaultTolerance | None) -> list[Parameter]:
    """Return the parameters of a link; the dynamic ratio has a tolerance of its own or none."""
    fallback = (link.tolerance, default.stiffness if default else None)
    return [
        parameter(link, key, value, family, () if key == "dynamic_ratio" else fallback)
        for key, value, family in link_values(link)
    ]


def link_values(link: Link) -> list[tuple[str, Value, str]]:
    """Return the typed values of a link that enter its terms: (key, value, family)."""
    found = []
    for name in SINGLE_VALUES:
        value = getattr(link, name, None)
        family = "damping" if name == "damping" else "stiffness"
        if isinstance(value, Value):
            found.append((name, value, family))
        elif value is not None:
            found += [
                (f"{name}.{direction}", part, family)
                for direction in MOUNT_DIRECTIONS
                if (part := getattr(value, direction)) is not None
            ]
    return found
