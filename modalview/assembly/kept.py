"""What of the coordinates serves again where places changed or links came and went."""

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

from modalview.assembly.coordinates import Coordinates
from modalview.assembly.kinematics import Vector, as_typed
from modalview.assembly.perpart import PerPart
from modalview.model.parts import Body, Gear, Model, RigidLink

# Where ``skeleton.body_bones`` holds the position.
POSITION = 2


def coordinates_again(by_part: PerPart, before: PerPart, known: Coordinates) -> Coordinates | None:
    """Return the coordinates known from before, the bodies where they are now; None where they may differ.

    Parameters
    ----------
    by_part, before : PerPart
        Of the model as it is, and as it was.
    known : Coordinates
        Of the model as it was.

    Notes
    -----
    Places and links matter only to rigid clusters, gears and massless directions. Without any of these every
    freedom of a body that is not held is a coordinate of its own, whatever joins it.
    """
    model, old = by_part.model, before.model
    plain = not (known.massless.any() or known.released.shape[1] or known.substitutions)
    if not plain or model.motion is not old.motion or len(model.bodies) != len(old.bodies):
        return None
    if _couples(model) or _couples(old):
        return None
    centres = dict(known.centres)
    pairs = zip(
        model.bodies, by_part.bones, before.bones, strict=False
    )  # bones go on with supports and links
    for body, bones, earlier in pairs:
        if bones is not earlier and bones != earlier:
            if not _differ_in_place(bones, earlier):
                return None
            centres[body.id] = _centre(body)
    return replace(known, centres=centres)


def _couples(model: Model) -> bool:
    return any(isinstance(link, Gear | RigidLink) for link in model.links)


def _differ_in_place(bones: Sequence[Any], earlier: Sequence[Any]) -> bool:
    """Whether nothing but the position differs."""
    return bones[:POSITION] == earlier[:POSITION] and bones[POSITION + 1 :] == earlier[POSITION + 1 :]


def _centre(body: Body) -> Vector:
    x, y, z = (*(entry.si for entry in body.position or ()), 0.0, 0.0, 0.0)[:3]
    return as_typed(x), as_typed(y), as_typed(z)
