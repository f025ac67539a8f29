"""Parts that hang on nothing are refused before anything is computed."""

from modalview.assembly.parameters import shown_name
from modalview.errors import Fault, ModelFaultsError
from modalview.model.parts import FREEDOMS, Model


def require_links(model: Model) -> None:
    """Refuse a model with nothing in it, or with a body that moves but is joined to nothing.

    Raises
    ------
    ModelFaultsError
        Names every such body and what to do.
    """
    if not model.bodies:
        raise ModelFaultsError((Fault("bodies", "the model has no bodies; add at least one mass"),))
    touched = {end.body for link in model.links for end in (link.from_, link.to)}
    faults = []
    for body in model.bodies:
        moves = body.dof is None or any(name in body.dof for name in FREEDOMS[model.motion])
        if moves and body.id not in touched:
            kind = (
                "massless junction" if not (body.mass and body.mass.si) and body.inertia is None else "body"
            )
            reason = (
                f"the {kind} {shown_name(body)} floats: no link joins it to anything; link it, "
                "hold it still (dof: []) or delete it"
            )
            faults.append(Fault(f'body "{body.id}"', reason))
    if faults:
        raise ModelFaultsError(tuple(faults))
