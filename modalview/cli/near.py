"""The modes of a model near a frequency."""

import argparse
from pathlib import Path

from modalview.cli import documents, texts
from modalview.cli.matrices import NEAR, near_frequency
from modalview.cli.near_document import history_text, near_keys
from modalview.cli.printing import OK, progress, say, say_json
from modalview.model.parts import Model
from modalview.study import Request
from modalview.study.near import solve_near


def run_near(words: argparse.Namespace, path: Path, model: Model) -> int:
    """Print the modes of a model nearest to a frequency."""
    count = NEAR if words.count is None else words.count
    solution, near = solve_near(Request(model, progress=progress), near_frequency(words), count)
    if words.json:
        say_json({**documents.modes_document(path, solution), **near_keys(near)})
    else:
        say(texts.modes_text(solution))
        if words.history:
            say("\n" + history_text(near))
    return OK
