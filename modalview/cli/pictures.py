"""Pictures from the command line."""

import argparse
import re

from modalview.drawing.complexplane import plane_drawing
from modalview.drawing.complexplanecontent import plane_content
from modalview.drawing.furniture import title_lines
from modalview.drawing.motion import moved
from modalview.drawing.palette import DARK, LIGHT
from modalview.drawing.picture import save_picture
from modalview.drawing.primitives import Drawing
from modalview.drawing.scale import scale_drawing
from modalview.drawing.scalecontent import scale_content
from modalview.drawing.sheet import sheet_drawing, sheet_geometry
from modalview.errors import UsageError
from modalview.model.parts import Model
from modalview.study import Request, solve
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
    if words.of == "sheet":
        return sheet_drawing(sheet_geometry(model, width, height), title_lines(model))
    solution = solve(Request(model))
    if words.of == "plane":
        damping = damped(Request(model), solution)
        return plane_drawing(plane_content(solution.outlook, solution, damping), width, height)
    if words.of == "scale":
        return scale_drawing(scale_content(solution.outlook, solution), width, height).drawing
    number = 1 if words.mode is None else words.mode
    if not 1 <= number <= len(solution.modes):
        raise UsageError(f"--mode {number}: the model has modes 1 to {len(solution.modes)}")
    mode = solution.modes[number - 1]
    return moved(sheet_geometry(model, width, height), mode.motion, 1.0, 0.0, title_lines(model))
