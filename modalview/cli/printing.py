"""What the commands print with, and the codes they end with."""

import json
import re
import sys
from pathlib import Path
from typing import Any

from modalview.errors import FaultsError, FileAccessError, KeepclearError
from modalview.resonance.results import Verdict

OK, NOT_CLEAR, UNUSABLE = 0, 1, 2
# What a terminal obeys instead of showing it: control characters, and marks that turn the reading direction.
_OBEYED = re.compile("[\x00-\x08\x0b-\x1f\x7f-\x9f\u200e\u200f\u202a-\u202e\u2066-\u2069]")

_BREAKS = frozenset("\t\n\r\u2028\u2029")


def verdict_code(verdict: Verdict | None) -> int:
    """Return the exit code of a check."""
    if verdict is None:
        return UNUSABLE
    return OK if verdict is Verdict.CLEAR else NOT_CLEAR


def shown(text: str) -> str:
    r"""Return text with what a terminal would obey written out, such as ``\u001b``; also valid in JSON."""
    return _OBEYED.sub(lambda found: f"\\u{ord(found[0]):04x}", text)


def failure_text(error: KeepclearError, path: Path | None) -> str:
    """Return a failure with the file it belongs to, each fault on a line of its own."""
    if isinstance(error, FaultsError):
        noun = "fault" if len(error.faults) == 1 else "faults"
        told = f"{len(error.faults)} {noun}:\n" + "\n".join(f"  {one_line(str(one))}" for one in error.faults)
    else:
        told = str(error)
    return told if path is None or isinstance(error, FileAccessError) else f"{one_line(str(path))}: {told}"


def one_line(text: str) -> str:
    r"""Return text with its line breaks and tabs written out, such as ``\u000a``."""
    return "".join(f"\\u{ord(sign):04x}" if sign in _BREAKS else sign for sign in text)


def say(text: str) -> None:
    """Print text and one newline."""
    sys.stdout.write(shown(text.rstrip("\n")) + "\n")


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
