"""Reads the words of the command line, runs the command, turns every failure into a message."""

import argparse
import io
import logging
import os
import sys
from collections.abc import Sequence
from contextlib import suppress
from difflib import get_close_matches
from pathlib import Path
from typing import Any, NoReturn, TextIO

from modalview import __version__
from modalview.cli.cautions import CAUTION
from modalview.cli.commands import COMMANDS
from modalview.cli.printing import UNUSABLE, complain, failure_text, one_line, shown
from modalview.errors import FaultsError, KeepclearError

_DESCRIPTION = (
    "Keeps a machine's speeds clear of its natural frequencies. "
    "Without a command it opens the window: keepclear [FILE]"
)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command and return its exit code.

    Returns
    -------
    int
        0 done (``check``: all clear), 1 ``check`` found something not clear, 2 unusable input or nothing
        to check.
    """
    _replace_closed_streams()
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(encoding="utf-8", errors="replace")
    words = _parser().parse_args(arguments)
    try:
        return _flushed(int(words.run(words)))
    except FaultsError as error:
        _complain(failure_text(error, _file(words)))
    except KeepclearError as error:
        _complain(str(error))
    except KeyboardInterrupt:
        _complain("stopped")
    except BrokenPipeError:
        _forget(sys.stdout)  # whoever read the output has gone; nothing is left to be said
    except OSError as error:  # files of the user are guarded where they are read and written
        _forget(sys.stdout)
        _complain(f"the output cannot be written: {error.strerror or error}")
    except Exception as error:  # the last resort of the command line: a message, never a traceback
        logging.getLogger(__name__).debug("unexpected failure", exc_info=True)
        _complain(f"an unexpected error, which is a fault of the program: {type(error).__name__}: {error}")
    return UNUSABLE


def _flushed(code: int) -> int:
    """Write what is still held, so that a full disk is told here and not by the interpreter at its end."""
    sys.stdout.flush()
    return code


def _complain(message: str) -> None:
    try:
        complain(message)
    except OSError:  # nobody can be told; the exit code still is
        _forget(sys.stderr)


def _file(words: argparse.Namespace) -> Path | None:
    """Return the one file that the words name, if there is one."""
    files = getattr(words, "files", None) or [getattr(words, "file", None)]
    return files[0] if len(files) == 1 else None


def _replace_closed_streams() -> None:
    """Give a program whose streams are closed (``>&-``) some that lead nowhere; the exit code still tells."""
    for name in ("stdout", "stderr"):
        if getattr(sys, name) is None:
            setattr(sys, name, io.StringIO())


def _forget(stream: TextIO) -> None:
    """Send what a stream still holds nowhere; written at the end, it would fail again and change the code."""
    with suppress(OSError, AttributeError):  # a stream without a file holds nothing for the end
        nowhere = os.open(os.devnull, os.O_WRONLY)
        try:
            os.dup2(nowhere, stream.fileno())
        finally:
            os.close(nowhere)


class _Parser(argparse.ArgumentParser):
    """Exits with 2 and one line, as every other unusable input; options are written in full."""

    def __init__(self, **settings: Any) -> None:
        super().__init__(**settings, allow_abbrev=False)

    def error(self, message: str) -> NoReturn:
        self.exit(UNUSABLE, f"keepclear: {shown(one_line(message))}; see {self.prog} --help\n")

    def parse_known_args(self, args: Any = None, namespace: Any = None) -> Any:
        """Refuse words that are left over where the command is known, not at the top."""
        words, left = super().parse_known_args(args, namespace)
        if left:
            self.error(self._left_over(left[0]))
        return words, left

    def _left_over(self, word: str) -> str:
        if not word.startswith("-"):
            return f"{word!r} is one word too many"
        options = [name for name in self._option_string_actions if name.startswith("--")]
        close = get_close_matches(word.partition("=")[0], options, n=1, cutoff=0.7)
        return f"there is no option {word}" + (f" (did you mean {close[0]}?)" if close else "")


def _parser() -> argparse.ArgumentParser:
    parser = _Parser(prog="keepclear", description=_DESCRIPTION, epilog=CAUTION)
    parser.add_argument("--version", action="version", version=f"keepclear {__version__}")
    commands = parser.add_subparsers(metavar="COMMAND", required=True)
    for name, (about, prepare) in COMMANDS.items():
        long = f"{about[0].upper()}{about[1:]}."
        command = commands.add_parser(name, help=about, description=long, epilog=CAUTION)
        prepare(command)
    return parser
