"""The commands: each reads its words, asks the study, and prints text or JSON."""

import argparse
from collections.abc import Callable
from pathlib import Path

from modalview.cli import (
    changes,
    documents,
    imports,
    matrices,
    mounts,
    near,
    response,
    speeds,
    texts,
    tune,
    values,
    vary,
)
from modalview.cli.damped import damped_document, damped_text
from modalview.cli.printing import (
    OK,
    UNUSABLE,
    complain,
    failure_text,
    one_line,
    progress,
    say,
    say_json,
    verdict_code,
)
from modalview.errors import KeepclearError, UsageError
from modalview.model.parts import Model
from modalview.store import read_model
from modalview.study import Request, Solution, look, solve
from modalview.study.damped import damped
from modalview.study.near import require_all_modes

Prepare = Callable[[argparse.ArgumentParser], None]
PICTURES = ("sheet", "scale", "mode", "plane", "response", "speeds", "mounts")
QUANTITIES = ("displacement peak", "displacement peak-to-peak", "velocity rms", "acceleration rms")
VIEWS = ("turned", "front", "side", "top")


def _file(words: argparse.Namespace) -> tuple[Path, Model]:
    return words.file, read_model(words.file)


def _solved(model: Model, *, exact: bool = False) -> Solution:
    return solve(Request(model, progress=progress, exact=exact))


def whole(text: str) -> int:
    """Return a whole number typed on the command line."""
    try:
        return int(text)
    except ValueError:
        raise argparse.ArgumentTypeError(f"wants a whole number, such as 2; found {text!r}") from None


def _prepare_file(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("file", type=Path, nargs="?", metavar="FILE", help="a .keepclear file")
    parser.add_argument("--json", action="store_true", help="print JSON: SI, with the unit in each key")


def _prepare_bounds(parser: argparse.ArgumentParser) -> None:
    _prepare_file(parser)
    matrices.add_words(parser)
    parser.set_defaults(run=matrices.either(run_bounds, matrices.run_bounds))


def run_bounds(words: argparse.Namespace) -> int:
    """Print what is known before a solve."""
    path, model = _file(words)
    outlook = look(Request(model))
    if words.json:
        say_json(documents.bounds_document(path, outlook))
    else:
        say(texts.bounds_text(outlook))
    return OK


def _prepare_modes(parser: argparse.ArgumentParser) -> None:
    _prepare_file(parser)
    parser.add_argument("--near", metavar='"1480 rpm"', help="only the modes nearest to this frequency")
    parser.add_argument("--count", type=whole, metavar="6", help="how many of them (default: 6)")
    parser.add_argument("--history", action="store_true", help="with --near: how the residuals fell")
    matrices.add_words(parser)
    parser.set_defaults(run=matrices.either(run_modes, matrices.run_modes))


def run_modes(words: argparse.Namespace) -> int:
    """Print the modes."""
    if words.near is None and (words.count is not None or words.history):
        raise UsageError("--count and --history go with --near: the modes near a frequency")
    path, model = _file(words)
    if words.near is not None:
        return near.run_near(words, path, model)
    require_all_modes(model)
    solution = _solved(model)
    damping = damped(Request(model, progress=progress), solution)
    if words.json:
        say_json({**documents.modes_document(path, solution), **damped_document(damping)})
    else:
        say(texts.modes_text(solution, damped_text(damping)))
    return OK


def _prepare_check(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("files", type=Path, nargs="*", metavar="FILE", help="one or more .keepclear files")
    parser.add_argument("--json", action="store_true", help="print JSON: SI, with the unit in each key")
    parser.add_argument("--exact", action="store_true", help="prove every verdict without any rounding")
    matrices.add_words(parser)
    parser.set_defaults(run=matrices.either(run_check, matrices.run_check))


def run_check(words: argparse.Namespace) -> int:
    """Print the verdicts; the exit code is the worst of the files."""
    found, codes = [], []
    for path in words.files:
        try:
            solution = _solved(read_model(path), exact=words.exact)
            found.append(documents.check_document(path, solution))
            codes.append(verdict_code(solution.outlook.verdict))
            if not words.json:
                say(texts.check_text(path, solution))
        except KeepclearError as error:
            if len(words.files) == 1:
                raise
            found.append({"file": str(path), "error": str(error)})
            codes.append(UNUSABLE)
            complain(failure_text(error, path))
        if not words.json and path is not words.files[-1]:
            say("")
    if words.json:
        say_json(found[0] if len(words.files) == 1 else found)
    return max(codes)


def _prepare_picture(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("file", type=Path, metavar="FILE", help="a .keepclear file")
    parser.add_argument("-o", "--output", type=Path, required=True, metavar="OUT.png", help="where it goes")
    parser.add_argument("--of", choices=PICTURES, default="sheet", help="what it shows (default: sheet)")
    parser.add_argument("--mode", type=whole, metavar="N", help="the mode shown, from 1 (with --of mode)")
    parser.add_argument("--machine", metavar="ID", help="whose response or speeds (default: the first)")
    parser.add_argument(
        "--quantity",
        choices=QUANTITIES,
        metavar='"velocity rms"',
        help="with --of response; or " + ", ".join(f'"{one}"' for one in QUANTITIES if one != "velocity rms"),
    )
    parser.add_argument("--size", default="2400x1600", metavar="WxH", help="in pixels (default: 2400x1600)")
    parser.add_argument("--dark", action="store_true", help="dark colours")
    parser.add_argument("--view", choices=VIEWS, help="of a model in space (default: turned)")
    parser.set_defaults(run=run_picture)


def run_picture(words: argparse.Namespace) -> int:
    """Write a picture of the sheet, a mode, the scale or the complex plane, without a screen."""
    from modalview.cli.pictures import write_picture  # noqa: PLC0415  (Qt is loaded only for a picture)

    _, model = _file(words)
    write_picture(model, words)
    say(f"{one_line(str(words.output))} written")
    return OK


COMMANDS: dict[str, tuple[str, Prepare]] = {
    "bounds": ("tell what is known of the modes before any solve", _prepare_bounds),
    "modes": ("find the modes, with their range over all tolerances", _prepare_modes),
    "check": ("prove whether any speed or order meets a mode, over all tolerances", _prepare_check),
    "speeds": ("tell which speeds are clear of every mode, over all tolerances", speeds.prepare),
    "response": ("compute the motion and the forces that the excitations cause", response.prepare),
    "changes": ("find what clears every check, over all tolerances and load cases", changes.prepare),
    "mounts": ("tell what every spring and mount carries at rest", mounts.prepare),
    "tune": ("tune chosen values to measured peaks, and tell what the peaks cannot tell", tune.prepare),
    "vary": ("vary one or two values, or draw all at random within their tolerances", vary.prepare),
    "values": ("make stiffness, mass, inertia and orders from dimensions, with their source", values.prepare),
    "import": ("make a model file of a table of nodes and a table of springs", imports.prepare),
    "picture": ("draw the sheet, a mode, the scale or the complex plane, without a screen", _prepare_picture),
}
