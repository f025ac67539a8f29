"""keepclear response: steady motion under the excitations, forces into supports, limits."""

import argparse
from pathlib import Path

from modalview.assembly.assemble import assemble
from modalview.cli.printing import NOT_CLEAR, OK, clear_progress, one_line, progress, say, say_json
from modalview.cli.response_document import curves_table, response_document
from modalview.cli.response_texts import response_text
from modalview.cli.response_words import prepare_words, request_of
from modalview.errors import FileAccessError, InputError
from modalview.response.dynamic import LARGEST_BY_MODES
from modalview.store import read_model
from modalview.store.saving import put_in_place
from modalview.study import Request, solve
from modalview.study.response import respond
from modalview.study.response_results import ResponseResult
from modalview.study.runup import passed_on_run_up


def prepare(parser: argparse.ArgumentParser) -> None:
    """Declare the words of the command."""
    prepare_words(parser)
    parser.set_defaults(run=run)


def run(words: argparse.Namespace) -> int:
    """Print the response; 0 when every limit of the file is kept, 1 otherwise."""
    model = read_model(words.file)
    request = request_of(words, model)
    assembly = assemble(model)
    solution = None
    if assembly.pencil().modes <= LARGEST_BY_MODES and any(one.speed for one in model.machines):
        solution = solve(Request(model, progress=progress))
    result = respond(request, solution)
    passed = passed_on_run_up(solution) if solution is not None else None
    if words.csv is not None:
        _write_table(words.csv, result, replace=words.replace)
    if words.json:
        say_json(response_document(words.file, result, passed or (), assembly.n))
    else:
        say(response_text(result, passed or ()))
        if words.csv is not None:
            say(f"\n{one_line(str(words.csv))} written: the curves over speed")
    exceeded = any(limit.exceeded for one in result.machines for limit in one.limits)
    return NOT_CLEAR if exceeded else OK


def _write_table(target: Path, result: ResponseResult, *, replace: bool) -> None:
    clear_progress()
    if all(one.running_rpm is None for one in result.machines):
        raise InputError("--csv: no machine has a speed, so there are no curves over it")
    if target.exists() and not replace:
        raise FileAccessError(f"{target} is there already; choose another name, or say --replace")
    try:
        put_in_place(target, curves_table(result).encode("utf-8"))
    except (OSError, ValueError) as fault:
        why = getattr(fault, "strerror", None) or str(fault)
        raise FileAccessError(f"{target} was not written: {why}") from fault
