"""What the page of measured peaks asks of the core, in a thread or in a process of its own."""

from collections.abc import Callable
from typing import Any

from modalview.model.parts import Model


def tunable(model: Model, details: tuple[Any, ...], stopped: Callable[[], bool]) -> Any:
    """Return the values that can be tuned (drawing.tunecontent.ValueLine)."""
    from modalview.drawing.tunecontent import tunable_values  # noqa: PLC0415  (numpy is late)

    del details, stopped
    return tunable_values(model)


def tuning(model: Model, details: tuple[Any, ...], stopped: Callable[[], bool]) -> Any:
    """Return what is shown of a tuning (drawing.tunecontent.TuneContent).

    Details are the values as (ValueLine, range as typed), and the peaks that stand for a given mode.
    """
    from modalview.drawing.tunecontent import tune_content, wish  # noqa: PLC0415  (numpy is late)
    from modalview.study.tune import tune  # noqa: PLC0415
    from modalview.study.tune_results import TuneRequest  # noqa: PLC0415

    values, pairs = details
    wishes = tuple(wish(line, span) for line, span in values)
    return tune_content(tune(TuneRequest(model, wishes, pairs, cancelled=stopped)))
