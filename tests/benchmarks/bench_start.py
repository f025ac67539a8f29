"""From the start of a process to the first painted window, against importing the same libraries.

QT_QPA_PLATFORM=offscreen python tests/benchmarks/bench_start.py
"""

import os
import subprocess
import sys
from pathlib import Path

from sidebyside import in_turn

EXAMPLE = Path(__file__).parents[2] / "demo_models" / "1-cooling-water-pump" / "as-built.keepclear"
LIBRARIES = "import numpy, scipy.sparse.linalg, scipy.linalg; from PySide6 import QtCore, QtGui, QtWidgets"
PAINTED = f"""
import os, pathlib, sys, tempfile
os.environ["XDG_CONFIG_HOME"] = tempfile.mkdtemp()
from PySide6.QtCore import QTimer
from modalview.ui.app import application, new_window
from modalview.ui.settings import kept_settings
program = application()
window = new_window(kept_settings())
window.show()
window.filing.open(pathlib.Path({str(EXAMPLE)!r}))
window.repaint()
os._exit(0)
"""


def main() -> None:
    """Print the table."""
    os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

    def started(code: str) -> None:
        subprocess.run([sys.executable, "-c", code], check=True)

    pair = in_turn(lambda: started(PAINTED), lambda: started(LIBRARIES), rounds=7)
    print(f"start to first paint with a model | importing the libraries: {pair}")


if __name__ == "__main__":
    main()
