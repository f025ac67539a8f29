"""Reads the words of the command line, runs the command, turns every failure into a message."""

import argparse
import logging
import sys
from collections.abc import Sequence
from typing import NoReturn

from modalview import __version__
from modalview.cli.cautions import CAUTION
from modalview.cli.commands import COMMANDS
from modalview.cli.printing import UNUSABLE
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
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(encoding="utf-8", errors="replace")
    words = _parser().parse_args(arguments)
    try:
        return int(words.run(words))
    except FaultsError as error:
        noun = "fault" if len(error.faults) == 1 else "faults"
        _complain(f"{len(error.faults)} {noun}:\n" + "\n".join(f"  {fault}" for fault in error.faults))
    except KeepclearError as error:
        _complain(str(error))
    except KeyboardInterrupt:
        _complain("stopped")
    except BrokenPipeError:
        sys.stderr.close()  # whoever read the output has gone; nothing is left to be said
    except OSError as error:  # files of the user are guarded where they are read and written
        _complain(f"the output cannot be written: {error.strerror or error}")
    except Exception as error:  # the last resort of the command line: a message, never a traceback
        logging.getLogger(__name__).debug("unexpected failure", exc_info=True)
        _complain(f"an unexpected error, which is a fault of the program: {type(error).__name__}: {error}")
    return UNUSABLE


def _complain(message: str) -> None:
    sys.stderr.write(f"keepclear: {message}\n")


class _Parser(argparse.ArgumentParser):
    """Exits with 2 and one line, as every other unusable input."""

    def error(self, message: str) -> NoReturn:
        self.exit(UNUSABLE, f"keepclear: {message}; see {self.prog} --help\n")


def _parser() -> argparse.ArgumentParser:
    parser = _Parser(prog="keepclear", description=_DESCRIPTION, epilog=CAUTION)
    parser.add_argument("--version", action="version", version=f"keepclear {__version__}")
    commands = parser.add_subparsers(metavar="COMMAND", required=True)
    for name, (about, prepare) in COMMANDS.items():
        long = f"{about[0].upper()}{about[1:]}."
        command = commands.add_parser(name, help=about, description=long, epilog=CAUTION)
        prepare(command)
    return parser
