"""What the commands print with, and the codes they end with."""

import json
import re
import shutil
import sys
from dataclasses import dataclass
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
    clear_progress()
    sys.stdout.write(shown(text.rstrip("\n")) + "\n")


def say_json(document: Any) -> None:
    """Print JSON; a number that is none cannot pass."""
    say(json.dumps(document, indent=2, ensure_ascii=False, allow_nan=False))


def complain(message: str) -> None:
    """Print a failure on the error stream."""
    clear_progress()
    sys.stderr.write(f"keepclear: {shown(message)}\n")
    sys.stderr.flush()


def progress(what: str, share: float) -> None:
    """Tell how far long work is, on a screen only; the line goes before anything else is printed."""
    if sys.stderr is None or not sys.stderr.isatty():
        return
    room = shutil.get_terminal_size().columns - 1  # a full line would scroll
    line = f"{100 * share:3.0f} %  {what}"[:room]
    sys.stderr.write("\r" + line.ljust(min(_progress_line.width, room)))
    sys.stderr.flush()
    _progress_line.width = len(line)


def clear_progress() -> None:
    """Take away the line that ``progress`` left."""
    if _progress_line.width:
        sys.stderr.write("\r" + " " * _progress_line.width + "\r")
        sys.stderr.flush()
        _progress_line.width = 0


@dataclass(slots=True)
class _ProgressLine:
    """What stands on the line of the cursor: of the process, as its screen is."""

    width: int = 0


_progress_line = _ProgressLine()
