"""Positions for parts that have none, as the sheet shows them, so that what is drawn stays where it is."""

from dataclasses import replace

from modalview.drawing.layout import GROUND, layout
from modalview.model.entries import point_of
from modalview.model.parts import Model, Motion


def positioned(model: Model) -> Model:
    """Return the model with a position for every body and every support that carries something.

    Only models along or about one axis may lack them; their numbers do not depend on positions.
    """
    missing = any(one.position is None for one in model.bodies) or any(
        one.position is None for one in model.supports
    )
    if not missing:
        return model
    count = 3 if model.motion is Motion.SPACE else 2
    places = layout(model)
    bodies = tuple(
        replace(body, position=point_of(places.centres[number].tolist()[:count]))
        for number, body in enumerate(model.bodies)
    )
    feet: dict[str, tuple[float, ...]] = {}
    for number, link in enumerate(model.links):
        for side, end in enumerate((link.from_, link.to)):
            if end.support is not None and places.end_bodies[number, side] == GROUND:
                feet.setdefault(end.support, tuple(places.ends[number, side].tolist()[:count]))
    supports = tuple(
        replace(support, position=point_of(feet[support.id]))
        if support.position is None and support.id in feet
        else support
        for support in model.supports
    )
    return replace(model, bodies=bodies, supports=supports)
