"""What the commands print with, and the codes they end with."""

import json
import sys
from typing import Any

from modalview.resonance.results import Verdict

OK, NOT_CLEAR, UNUSABLE = 0, 1, 2


def verdict_code(verdict: Verdict | None) -> int:
    """Return the exit code of a check."""
    if verdict is None:
        return UNUSABLE
    return OK if verdict is Verdict.CLEAR else NOT_CLEAR


def say(text: str) -> None:
    """Print text and one newline."""
    sys.stdout.write(text.rstrip("\n") + "\n")


def say_json(document: Any) -> None:
    """Print JSON; a number that is none cannot pass."""
    say(json.dumps(document, indent=2, ensure_ascii=False, allow_nan=False))


def progress(what: str, share: float) -> None:
    """Tell how far long work is, on a screen only."""
    if sys.stderr.isatty():
        sys.stderr.write(f"\r{100 * share:3.0f} %  {what:<40.40}")
        if share >= 1:
            sys.stderr.write("\r" + " " * 48 + "\r")
        sys.stderr.flush()
