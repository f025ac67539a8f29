"""keepclear vary: frequencies and verdicts over one or two values, or at values drawn at random."""

import argparse
import csv
from collections.abc import Iterable, Sequence
from concurrent.futures import Executor
from contextlib import AbstractContextManager, nullcontext
from functools import partial
from pathlib import Path

from modalview.cli.printing import OK, progress, say, say_json
from modalview.cli.vary_documents import grid_document, grid_rows, sample_rows, samples_document
from modalview.cli.vary_texts import grid_text, samples_text
from modalview.errors import FileAccessError, UsageError
from modalview.model.parts import Model
from modalview.store import read_model
from modalview.study.sampling import sample
from modalview.study.vary import vary
from modalview.study.vary_results import (
    EVEN,
    RATIO,
    TRIANGULAR,
    UNIFORM,
    GridRequest,
    SampleRequest,
)
from modalview.study.workers import cluster_workers, local_workers

POINTS = 21


def _whole(text: str) -> int:
    try:
        return int(text)
    except ValueError:
        raise argparse.ArgumentTypeError(f"wants a whole number, such as 2; found {text!r}") from None


def prepare(parser: argparse.ArgumentParser) -> None:
    """Declare the words of the command."""
    parser.add_argument("file", type=Path, metavar="FILE", help="a .keepclear file")
    parser.add_argument(
        "--value",
        action="append",
        default=[],
        metavar='"k3=50 to 500 kN/mm"',
        help="a value and its range (default: its tolerance); once for each",
    )
    parser.add_argument("--points", type=_whole, metavar="21", help="along each value (default: 21)")
    parser.add_argument("--by-ratio", action="store_true", help="equal ratios from point to point")
    parser.add_argument("--samples", type=_whole, metavar="10000", help="draw so many samples instead")
    parser.add_argument("--seed", type=_whole, metavar="1", help="of the samples (default: 0)")
    parser.add_argument("--triangular", action="store_true", help="draw most often near the value as typed")
    parser.add_argument("--response", action="store_true", help="with samples: the motion at running speeds")
    parser.add_argument("--workers", type=_whole, metavar="4", help="so many processes side by side")
    parser.add_argument("--cluster", metavar="tcp://HOST:8786", help="workers of a dask scheduler")
    parser.add_argument("--csv", type=Path, metavar="OUT.csv", help="write every point or sample as a table")
    parser.add_argument("--json", action="store_true", help="print JSON: SI, with the unit in each key")
    parser.set_defaults(run=run)


def run(words: argparse.Namespace) -> int:
    """Print the grid or the samples."""
    _check(words)
    model, path = read_model(words.file), words.file
    with _executor(words) as executor:
        if words.samples is None:
            grid = vary(_grid_request(words, model, executor))
            document, text, rows = (
                partial(grid_document, path, grid),
                partial(grid_text, grid),
                grid_rows(grid),
            )
        else:
            drawn = sample(_sample_request(words, model, executor))
            document, text = partial(samples_document, path, drawn), partial(samples_text, drawn)
            rows = sample_rows(drawn)
    if words.csv is not None:
        _write(words.csv, rows)
    if words.json:
        say_json(document())
    else:
        say(text())
    return OK


def _grid_request(words: argparse.Namespace, model: Model, executor: Executor | None) -> GridRequest:
    spacing = RATIO if words.by_ratio else EVEN
    points = POINTS if words.points is None else words.points
    return GridRequest(model, tuple(words.value), points, spacing, executor, progress=progress)


def _sample_request(words: argparse.Namespace, model: Model, executor: Executor | None) -> SampleRequest:
    return SampleRequest(
        model=model,
        values=tuple(words.value),
        samples=words.samples,
        seed=words.seed or 0,
        spread=TRIANGULAR if words.triangular else UNIFORM,
        response=words.response,
        executor=executor,
        progress=progress,
    )


def _check(words: argparse.Namespace) -> None:
    if words.samples is None:
        for name, given in (
            ("--seed", words.seed is not None),
            ("--triangular", words.triangular),
            ("--response", words.response),
        ):
            if given:
                raise UsageError(f"{name} goes with --samples: values drawn at random")
        if not words.value:
            raise UsageError('say which value is varied, --value "k3=50 to 500 kN/mm", or --samples 10000')
    elif words.points is not None or words.by_ratio:
        raise UsageError("--points and --by-ratio belong to a grid; samples are drawn at random")
    if words.workers is not None and words.cluster is not None:
        raise UsageError("--workers are processes here, --cluster those elsewhere: give one of them")
    if words.csv is not None and words.csv.exists():
        raise FileAccessError(f"{words.csv} is there already; choose another name")


def _executor(words: argparse.Namespace) -> AbstractContextManager[Executor | None]:
    if words.workers is not None:
        return local_workers(words.workers)
    return nullcontext() if words.cluster is None else cluster_workers(words.cluster)


def _write(path: Path, rows: Iterable[Sequence[object]]) -> None:
    try:
        with path.open("x", encoding="utf-8", newline="") as file:
            csv.writer(file).writerows(rows)
    except OSError as error:
        raise FileAccessError(f"{path} cannot be written: {error.strerror or error}") from None
