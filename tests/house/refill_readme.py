"""Puts the program's present output into README.md: ``python tests/house/refill_readme.py``."""

import contextlib
import io
import re
import shlex
import textwrap
from pathlib import Path

from modalview.__main__ import main

README = Path("README.md")
SHOWN = re.compile(r"^ {4}\$ keepclear (.+)\n(?:(?: {4}.*)?\n)+", re.MULTILINE)


def present(found: re.Match[str]) -> str:
    """Return a command with what it prints now."""
    with contextlib.redirect_stdout(io.StringIO()) as output:
        main(shlex.split(found[1]))
    return textwrap.indent(f"$ keepclear {found[1]}\n{output.getvalue().strip()}\n", " " * 4) + "\n"


if __name__ == "__main__":
    README.write_text(SHOWN.sub(present, README.read_text(encoding="utf-8")), encoding="utf-8")
