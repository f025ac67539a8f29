"""Makes a picture of the window: ``python -m modalview.ui.shot FILE -o out.png``."""

import argparse
import os
import sys
from collections.abc import Sequence
from pathlib import Path

from modalview.errors import InputError


def main(arguments: Sequence[str] | None = None) -> int:
    """Make one picture; 2 where the file cannot be used."""
    asked = _parser().parse_args(arguments)
    os.environ["QT_QPA_PLATFORM"] = "offscreen"
    from modalview.ui.picture import Look, window_picture  # noqa: PLC0415  (Qt reads the line above)

    try:
        width, height = (int(one) for one in asked.size.split("x"))
    except ValueError:
        sys.stderr.write(f'--size is "{asked.size}"; write it like 1280x800\n')
        return 2
    look = Look(
        width=width,
        height=height,
        theme="dark" if asked.dark else "light",
        mode=asked.mode,
        automatic=not asked.no_auto,
        page=asked.page,
        why=asked.why,
        text_percent=asked.text,
        view=asked.view,
    )
    try:
        window_picture(asked.file, asked.out, look)
    except InputError as error:
        sys.stderr.write(f"{error}\n")
        return 2
    return 0


_VIEWS = ("turned", "front", "side", "top")
_PAGES = (
    "sheet",
    "modes",
    "damped",
    "plane",
    "values",
    "changes",
    "response",
    "speeds",
    "mounts",
    "measured",
)


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(prog="python -m modalview.ui.shot", description=__doc__)
    parser.add_argument("file", nargs="?", type=Path, help="a model; without one the empty window")
    parser.add_argument("-o", "--out", type=Path, required=True)
    parser.add_argument("--size", default="1280x800")
    parser.add_argument("--dark", action="store_true")
    parser.add_argument("--mode", type=int, help="number of the mode on the sheet")
    parser.add_argument("--no-auto", action="store_true", help="do not find modes")
    parser.add_argument("--page", choices=_PAGES, default="modes", help="what stands under the sheet")
    parser.add_argument("--why", action="store_true", help="unfold the reasoning")
    parser.add_argument("--text", type=int, default=100, help="size of text in per cent")
    parser.add_argument("--view", choices=_VIEWS, default="turned", help="of a space model")
    return parser


if __name__ == "__main__":
    raise SystemExit(main())
