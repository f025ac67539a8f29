"""Pictures of the response, the speeds and the mounts from the command line."""

import argparse
from collections.abc import Sequence

from modalview.cli.printing import progress
from modalview.drawing.campbellchart import speeds_chart
from modalview.drawing.campbellchartcontent import speeds_content
from modalview.drawing.furniture import CAPTION, captioned
from modalview.drawing.mountschart import mounts_chart
from modalview.drawing.mountschartcontent import mounts_content
from modalview.drawing.primitives import Drawing
from modalview.drawing.responsechart import response_chart
from modalview.drawing.responsechartcontent import Choice, response_content
from modalview.errors import InputError, UsageError
from modalview.model.parts import Model
from modalview.study import Request, solve
from modalview.study.campbell import campbell
from modalview.study.isolators import mounts_at_rest
from modalview.study.near import require_all_modes
from modalview.study.response import respond
from modalview.study.response_results import VELOCITY, ResponseRequest
from modalview.study.runup import passed_on_run_up

CHARTS = ("response", "speeds", "mounts")


def chart_drawing(model: Model, words: argparse.Namespace, width: int, height: int) -> Drawing:
    """Draw the response, the speeds or the mounts of a model, named below.

    Raises
    ------
    UsageError
        A machine that is not there.
    InputError
        There is nothing to draw; says what is missing.
    """
    room = height - CAPTION
    if words.of == "mounts":
        content = mounts_content(mounts_at_rest(Request(model, progress=progress)), model.units or "SI")
        return captioned(mounts_chart(content, width, room), f"Mounts at rest · {_title(model)}")
    machine = _machine(model, words.machine)
    if words.of == "speeds":
        return captioned(_speeds(model, machine, width, room), f"Speeds · {_title(model)}")
    quantity = words.quantity or VELOCITY
    return captioned(_response(model, machine, quantity, (width, room)), f"Response · {_title(model)}")


def _title(model: Model) -> str:
    return model.title or "untitled"


def _machine(model: Model, wanted: str | None) -> str | None:
    known = [one.id for one in model.machines]
    if wanted is not None and wanted not in known:
        there = ", ".join(known) if known else "none"
        raise UsageError(f"--machine {wanted}: there is none; the file has {there}")
    return wanted


def _speeds(model: Model, machine: str | None, width: float, height: float) -> Drawing:
    require_all_modes(model)
    solution = solve(Request(model, progress=progress))
    found = [one for one in campbell(solution) if machine in (None, one.machine.id)]
    if not found:
        raise InputError("No machine has both a speed and an excitation: give one its speed and its orders.")
    return speeds_chart(speeds_content(found[0], passed_on_run_up(solution)), width, height).drawing


def _response(model: Model, machine: str | None, quantity: str, size: Sequence[float]) -> Drawing:
    result = respond(ResponseRequest(model, machine=machine, progress=progress))
    found = result.machines[0]
    watch = found.watches[0].id if found.watches else ""
    content = response_content(result, Choice(found.machine, watch, quantity, model.units or "SI"))
    if content is None:
        raise InputError(
            f"{found.label} has no speed, so there is nothing to draw over it: keepclear response tells "
            "its amplitudes."
        )
    return response_chart(content, size[0], size[1]).drawing
