"""Makes a moving picture of a machine being drawn: ``python -m modalview.ui.film -o out.png``."""

import argparse
import os
import sys
from collections.abc import Sequence
from pathlib import Path

from modalview.errors import InputError


def main(arguments: Sequence[str] | None = None) -> int:
    """Make the moving picture; 2 where it cannot be written."""
    parser = argparse.ArgumentParser(prog="python -m modalview.ui.film", description=__doc__)
    parser.add_argument("-o", "--out", type=Path, required=True)
    parser.add_argument("--dark", action="store_true")
    parser.add_argument("--stills", type=Path, help="a folder for each frame as a picture of its own")
    asked = parser.parse_args(arguments)
    os.environ["QT_QPA_PLATFORM"] = "offscreen"
    from modalview.ui.filming import film_drawing  # noqa: PLC0415  (Qt reads the line above)

    try:
        film_drawing(asked.out, theme="dark" if asked.dark else "light", stills=asked.stills)
    except InputError as error:
        sys.stderr.write(f"{error}\n")
        return 2
    return 0


if __name__ == "__main__":
    raise SystemExit(main())
