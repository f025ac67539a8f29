"""The doors of the core, imported when first needed."""

import gc
from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from importlib import import_module
from typing import Any

from modalview.model.parts import Body, End, Model, Spring, Support
from modalview.model.values import Entry, Value
from modalview.units.quantities import LENGTH, MASS, STIFFNESS


@dataclass(frozen=True, slots=True)
class Study:
    """What the worker calls: Request, look(request, previous), solve(request, outlook).

    ``foretell(solution, outlook)``, the lowest frequencies by their numbers after an edit; ``damped(request,
    solution)`` where there are dashpots; and ``plane(outlook, solution, damped)``, the content of the complex
    plane.
    """

    request: Callable[..., Any]
    look: Callable[[Any, Any], Any]
    solve: Callable[[Any, Any], Any]
    foretell: Callable[[Any, Any], dict[int, float]]
    damped: Callable[[Any, Any], Any]
    plane: Callable[[Any, Any, Any], Any]


@cache
def load_study() -> Study:
    """Import the study; takes some tenths of a second the first time."""
    # numpy and scipy come after the first paint
    from modalview.drawing.complexplanecontent import plane_content  # noqa: PLC0415
    from modalview.study import look, solve  # noqa: PLC0415
    from modalview.study.damped import damped  # noqa: PLC0415
    from modalview.study.preview import foretell  # noqa: PLC0415
    from modalview.study.results import Request  # noqa: PLC0415

    # What loads itself on first use is loaded now, while nobody waits.
    solve(Request(_smallest()))
    # The libraries stay for good: looking through their objects for garbage stopped the window for a tenth of
    # a second each time.
    gc.freeze()
    return Study(Request, look, solve, foretell, damped, plane_content)


def load_drawing() -> None:
    """Import what draws, so that the first sheet has not to wait for it."""
    for name in _DRAWING:
        import_module(f"modalview.drawing.{name}")


_DRAWING = ("hits", "modepicture", "motion", "overlay", "paint", "scale", "sheet", "snap", "toolicons")


def _smallest() -> Model:
    def point(text: str) -> tuple[Entry, Entry]:
        return Entry.typed("0 m", LENGTH), Entry.typed(text, LENGTH)

    return Model(
        bodies=(Body(id="m", mass=Value.typed("1 kg", MASS), position=point("1 m")),),
        supports=(Support(id="g", position=point("0 m")),),
        links=(
            Spring(
                id="k", from_=End(body="m"), to=End(support="g"), stiffness=Value.typed("1 N/m", STIFFNESS)
            ),
        ),
    )
