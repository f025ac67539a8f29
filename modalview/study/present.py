"""What every check says of a model as it is, in all of its load cases, with the room that is left."""

from modalview.advice.changes.effects import effects
from modalview.advice.changes.options import base_of
from modalview.advice.changes.results import Effect
from modalview.study.results import Request


def present(request: Request) -> tuple[Effect, ...]:
    """Return every check of every load case, with the mode that comes nearest over all tolerances.

    Raises
    ------
    ModelFaultsError
    InputError
        The model is too large for all of its modes.
    """
    base = base_of(request.model)
    return effects(base.states, base.checks, base.checks)
