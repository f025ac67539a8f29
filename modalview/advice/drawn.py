"""The doubts that need the model alone: there for a model that cannot be assembled, too."""

from modalview.advice import feet, inertias, joints, layout, magnitudes, symmetry
from modalview.advice.doubt import Doubt, few
from modalview.advice.survey import Survey
from modalview.model.parts import Model


def doubts(model: Model) -> tuple[Doubt, ...]:
    """Return what an engineer would doubt about a model as it is drawn.

    Parameters
    ----------
    model : Model
        Free of faults of the rules; it need not be one that can be analysed.

    Returns
    -------
    tuple of Doubt
        By rule, what joins nothing first; of one rule in the order of the model.

    Notes
    -----
    Cost: linear in bodies and links, about 8 microseconds each. No arrays, so that it can be asked early.
    """
    survey = Survey.of(model)
    typed = list(magnitudes.typed_values(survey))
    found = (
        joints.floating(survey),
        joints.lone_parts(survey),
        joints.loose_ends(survey),
        magnitudes.never_typed(typed),
        magnitudes.far_off(typed),
        inertias.missing(survey),
        inertias.outside_its_size(survey),
        inertias.gd2(survey),
        inertias.reflected(survey),
        feet.outside_its_feet(survey),
        layout.across_its_ends(survey),
        layout.same_place(survey),
        symmetry.partners(survey),
    )
    return tuple(doubt for rule in found for doubt in few(list(rule)))
