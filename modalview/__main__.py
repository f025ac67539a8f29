"""Starts the program: the window, or the command line where the first word asks for it.

Nothing heavy is imported before that is known.
"""

import os
import sys
from collections.abc import Sequence
from pathlib import Path

COMMANDS = (
    "bounds",
    "modes",
    "check",
    "speeds",
    "response",
    "changes",
    "mounts",
    "tune",
    "vary",
    "values",
    "import",
    "picture",
)
HELP = ("-h", "--help", "--version")
_NO_SCREEN = """\
keepclear: there is no screen here to open a window on.
These commands work without one:
  keepclear bounds FILE                 what is known before a solve
  keepclear modes FILE                  the natural frequencies, with tolerance ranges
  keepclear check FILE...               is every speed and order clear of every mode
  keepclear speeds FILE                 which speeds are clear of every mode
  keepclear response FILE               motion and forces under the excitations
  keepclear changes FILE                what clears every check
  keepclear mounts FILE                 what springs and mounts carry at rest
  keepclear tune FILE                   values tuned to measured peaks
  keepclear vary FILE                   values varied over ranges or at random
  keepclear picture FILE -o out.png     the sheet, a mode, the scale or the complex plane as a picture
  keepclear values                      stiffness, mass, inertia and orders from dimensions
  keepclear import ... -o FILE          make a model of a table of nodes and a table of springs
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run what the words ask for and return the exit status."""
    words = list(sys.argv[1:] if arguments is None else arguments)
    try:
        return _run(words)
    except KeyboardInterrupt:  # while the libraries are loaded; a command tells it by itself
        sys.stderr.write("keepclear: stopped\n")
        return 2


def _run(words: list[str]) -> int:
    if words and (words[0] in (*COMMANDS, *HELP) or words[0].startswith("-") or len(words) > 1):
        from modalview.cli import main as command_line  # noqa: PLC0415  (only what is asked for is loaded)

        return command_line(words)
    return _window(Path(words[0]) if words else None)


def has_screen() -> bool:
    """Whether a window can be shown: on Linux a display is named, or Qt was told another way."""
    if sys.platform in ("win32", "darwin") or os.environ.get("QT_QPA_PLATFORM"):
        return True
    return bool(os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY"))


def _window(file: Path | None) -> int:
    if not has_screen():
        sys.stderr.write(_NO_SCREEN)
        return 2
    try:
        from modalview.ui.app import run  # noqa: PLC0415  (only what is asked for is loaded)
    except ImportError as error:  # a system library that Qt needs is missing
        sys.stderr.write(f"keepclear: the window cannot be opened: {error}\n{_NO_SCREEN}")
        return 2
    return run(file, _NO_SCREEN)


if __name__ == "__main__":
    raise SystemExit(main())
