"""Pictures from the command line."""

import argparse
import re

from modalview.cli.chartpictures import CHARTS, chart_drawing
from modalview.cli.printing import progress
from modalview.cli.texts import frequency_text, range_text
from modalview.drawing.complexplane import plane_drawing
from modalview.drawing.complexplanecontent import plane_content
from modalview.drawing.furniture import CAPTION, TitleLines, captioned, title_lines
from modalview.drawing.motion import moved
from modalview.drawing.palette import DARK, LIGHT
from modalview.drawing.picture import save_picture
from modalview.drawing.primitives import Drawing
from modalview.drawing.scale import scale_drawing
from modalview.drawing.scalecontent import scale_content
from modalview.drawing.sheet import sheet_drawing, sheet_geometry
from modalview.drawing.view import Viewpoint
from modalview.errors import KeepclearError, UsageError
from modalview.model.parts import Model, Motion
from modalview.study import FoundMode, Outlook, Request, Solution, look, solve
from modalview.study.damped import damped

LEAST, MOST = 400, 8000
# Pixels of the file per unit of the drawing: letters of 12 units are sharp in print.
DETAIL = 2


def write_picture(model: Model, words: argparse.Namespace) -> None:
    """Draw what the words ask for and write it.

    Raises
    ------
    UsageError
        A size or a mode number that does not fit.
    FileAccessError
        The file cannot be written.
    """
    width, height = (side // DETAIL for side in _size(words.size))
    palette = DARK if words.dark else LIGHT
    save_picture(_drawing(model, words, width, height), words.output, width, height, palette, DETAIL)


def _size(text: str) -> tuple[int, int]:
    match = re.fullmatch(r"(\d{1,5})x(\d{1,5})", text)
    if match is None or not all(
        LEAST <= int(side) <= MOST and int(side) % DETAIL == 0 for side in match.groups()
    ):
        raise UsageError(
            f"--size wants WIDTHxHEIGHT in pixels, even and {LEAST} to {MOST} each, such as 2400x1600; "
            f"found {text!r}"
        )
    return int(match[1]), int(match[2])


def _drawing(model: Model, words: argparse.Namespace, width: int, height: int) -> Drawing:
    if words.mode is not None and words.of != "mode":
        raise UsageError("--mode goes with --of mode")
    _refuse_elsewhere(words)
    viewpoint = _viewpoint(model, words)
    if words.of == "sheet":
        geometry = sheet_geometry(model, width, height, viewpoint=viewpoint)
        return sheet_drawing(geometry, _title_at_rest(model))
    if words.of in CHARTS:
        return chart_drawing(model, words, width, height)
    solution = solve(Request(model, progress=progress))
    if words.of == "plane":
        damping = damped(Request(model), solution)
        plane = plane_drawing(plane_content(solution.outlook, solution, damping), width, height - CAPTION)
        return captioned(plane, f"Complex plane · {model.title or 'untitled'}")
    if words.of == "scale":
        scale = scale_drawing(scale_content(solution.outlook, solution), width, height - CAPTION)
        return captioned(scale.drawing, f"Frequency scale · {model.title or 'untitled'}")
    mode = wanted_mode(solution, words.mode)
    geometry = sheet_geometry(model, width, height - CAPTION, viewpoint=viewpoint)
    drawing = moved(geometry, mode.motion, 1.0, 0.0, _title(solution.outlook))
    return captioned(drawing, mode_caption(mode))


def _refuse_elsewhere(words: argparse.Namespace) -> None:
    if words.machine is not None and words.of not in ("response", "speeds"):
        raise UsageError("--machine goes with --of response and --of speeds")
    if words.quantity is not None and words.of != "response":
        raise UsageError("--quantity goes with --of response")


def _viewpoint(model: Model, words: argparse.Namespace) -> Viewpoint:
    """Return from where a space model is to be seen; only a sheet or a mode of one has a choice."""
    if words.view is None:
        return Viewpoint.TURNED
    if words.of not in ("sheet", "mode"):
        raise UsageError("--view goes with the sheet and with --of mode")
    if model.motion is not Motion.SPACE:
        raise UsageError(
            f"--view {words.view}: only a model in space has several views; this one is {model.motion}"
        )
    return Viewpoint(words.view)


def _title(outlook: Outlook) -> TitleLines:
    checked = str(outlook.verdict or "nothing to check")
    return title_lines(outlook.request.model, checked=checked, freedoms=outlook.assembly.pencil().n)


def _title_at_rest(model: Model) -> TitleLines:
    """Return the title block of a sheet, which is drawn also where the model cannot be analysed."""
    try:
        return _title(look(Request(model, progress=progress)))
    except KeepclearError:
        return title_lines(model)


def wanted_mode(solution: Solution, number: int | None) -> FoundMode:
    """Return the mode of that number, or the first; of a large model some are found, not all."""
    modes = solution.modes
    found = next((mode for mode in modes if number in (None, mode.number)), None)
    if found is None:
        numbers = [mode.number for mode in modes]
        runs = len(numbers) == numbers[-1] - numbers[0] + 1 if numbers else True
        there = f"{numbers[0]} to {numbers[-1]}" if runs and numbers else ", ".join(map(str, numbers))
        what = (
            "has modes" if numbers[:1] == [1] and runs else "is large; found are the modes near excitations,"
        )
        raise UsageError(f"--mode {number}: the model {what} {there}")
    return found


def mode_caption(mode: FoundMode) -> str:
    """Return "Mode 2 · 140.99 Hz (131.7 to 150.2 Hz over tolerance) · pump against motor"."""
    low, high = mode.range_hz
    toleranced = f" ({range_text(mode)} over tolerance)" if high > low else ""
    return f"Mode {mode.number} · {frequency_text(mode)}{toleranced} · {mode.name}"
