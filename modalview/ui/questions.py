"""What the pages ask of the core; each function runs in a thread, or in a process of its own.

The core is imported when it is first asked, so that the window is painted before numpy comes.
"""

from collections.abc import Callable
from dataclasses import replace
from typing import Any, NamedTuple

from modalview.errors import InputError
from modalview.model.parts import End, Model


class Looked(NamedTuple):
    """What of a response is looked at beside what the model names itself.

    ``body`` and ``direction`` of a further point (None: none, or the largest direction), and a further speed
    in rpm.
    """

    body: str | None = None
    direction: str | None = None
    speed_rpm: float | None = None


CHOSEN = "chosen"  # id of the watch at the further point


def response(model: Model, details: tuple[Any, ...], stopped: Callable[[], bool]) -> Any:
    """Return the forced response (study.response_results.ResponseResult) with what is looked at."""
    from modalview.study.response import respond  # noqa: PLC0415
    from modalview.study.response_results import ResponseRequest, Watch  # noqa: PLC0415
    from modalview.study.results import never  # noqa: PLC0415

    looked = Looked(*details)
    watches: tuple[Any, ...] = ()
    names = {body.id: body.name or body.id for body in model.bodies}
    if looked.body in names:
        label = names[looked.body] + (f", {looked.direction}" if looked.direction else "")
        watches = (Watch(CHOSEN, label, End(body=looked.body), looked.direction),)
    speeds = () if looked.speed_rpm is None else (looked.speed_rpm,)
    request = ResponseRequest(model, watches=watches, speeds_rpm=speeds, cancelled=stopped)
    result = respond(request)
    return replace(result, request=replace(request, cancelled=never))


def speeds(model: Model, details: tuple[Any, ...], stopped: Callable[[], bool]) -> Any:
    """Return what the chart of speeds shows for each machine (drawing.campbellchartcontent)."""
    from modalview.drawing.campbellchartcontent import speeds_content  # noqa: PLC0415
    from modalview.study.campbell import campbell  # noqa: PLC0415
    from modalview.study.results import Request  # noqa: PLC0415
    from modalview.study.runup import passed_on_run_up  # noqa: PLC0415
    from modalview.study.solve import solve  # noqa: PLC0415

    del details
    solution = solve(Request(model, cancelled=stopped))
    passed = passed_on_run_up(solution)
    return tuple(speeds_content(one, passed) for one in campbell(solution))


def mounts(model: Model, details: tuple[Any, ...], stopped: Callable[[], bool]) -> Any:
    """Return what the mounts carry at rest (study.isolators.MountsAtRest)."""
    from modalview.study.isolators import mounts_at_rest  # noqa: PLC0415
    from modalview.study.results import Request, never  # noqa: PLC0415

    del details
    found = mounts_at_rest(Request(model, cancelled=stopped))
    return replace(found, request=replace(found.request, cancelled=never))


class WantedAbsorber(NamedTuple):
    """An absorber that somebody wants to see among the options; its mass ratio as typed."""

    body: str
    direction: str
    mass_ratio: str
    damped: bool


def changes(model: Model, details: tuple[Any, ...], stopped: Callable[[], bool]) -> Any:
    """Return what the page of changes shows (drawing.changescontent), with an absorber that is wanted."""
    from modalview.drawing.changescontent import changes_content, clear_by  # noqa: PLC0415
    from modalview.study.changes import ChangesRequest  # noqa: PLC0415
    from modalview.study.changes import changes as look_for  # noqa: PLC0415
    from modalview.study.look import look  # noqa: PLC0415
    from modalview.study.present import present  # noqa: PLC0415
    from modalview.study.results import Request  # noqa: PLC0415

    request = Request(model, cancelled=stopped)
    outlook = look(request)
    found = look_for(ChangesRequest(request))
    others, refused = _remedies(request, outlook.checks, WantedAbsorber(*details) if details else None)
    margin = clear_by(present(request)) if found.clear_now and outlook.checks else ""
    content = changes_content(outlook, found, others, outlook.assembly.parameters, margin)
    return replace(content, notes=(*refused, *content.notes))


def _remedies(request: Any, checks: Any, wanted: WantedAbsorber | None) -> tuple[Any, tuple[str, ...]]:
    """Return absorbers, places of mounts and speeds, and why a wanted absorber cannot be."""
    from modalview.advice.absorber import Absorber  # noqa: PLC0415
    from modalview.study.remedies import RemediesRequest, absorber_frequency, remedies  # noqa: PLC0415
    from modalview.units.parse import read  # noqa: PLC0415
    from modalview.units.quantities import RATIO  # noqa: PLC0415

    if wanted is None:
        return remedies(RemediesRequest(request)), ()
    try:
        ratio, hz = read(wanted.mass_ratio, RATIO), absorber_frequency(checks)
        one = Absorber(wanted.body, wanted.direction, hz, ratio, wanted.damped)
        return remedies(RemediesRequest(request, (one,))), ()
    except InputError as error:
        return remedies(RemediesRequest(request)), (f"No absorber: {error}",)
