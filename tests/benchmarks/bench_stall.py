"""Longest time the window does not answer while a large model is opened, checked, solved and edited.

A timer asks for a tick every millisecond; the longest gap between two ticks is a stall. On a machine busy
with other work the figures rise: the gap of an idle loop stands beside them.

QT_QPA_PLATFORM=offscreen python tests/benchmarks/bench_stall.py [bodies ...]
"""

import os
import sys
import tempfile
from collections.abc import Callable
from pathlib import Path
from time import perf_counter

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from made import plane_model
from PySide6.QtCore import QEventLoop, QSettings, Qt, QTimer

from modalview.store import save_model
from modalview.ui.app import application
from modalview.ui.settings import Settings
from modalview.ui.window import Window
from modalview.ui.worker import Worker

PATIENCE_S = 180.0


class Watch:
    """The gaps between ticks, longest first, each with what went on."""

    def __init__(self) -> None:
        self.gaps: list[float] = []
        self._last = perf_counter()
        self._timer = QTimer(interval=1, timerType=Qt.TimerType.PreciseTimer)
        self._timer.timeout.connect(self._tick)
        self._timer.start()

    def _tick(self) -> None:
        now = perf_counter()
        self.gaps.append(1000 * (now - self._last))
        self._last = now

    def longest(self, until: Callable[[], bool], least_s: float = 0.3) -> float:
        """Let the window run until something is there; return the longest gap in ms."""
        self.gaps.clear()
        self._last = start = perf_counter()
        loop = QEventLoop()
        while (not until() or perf_counter() < start + least_s) and perf_counter() < start + PATIENCE_S:
            loop.processEvents(QEventLoop.ProcessEventsFlag.WaitForMoreEvents)
        return max(self.gaps, default=0.0)


def measure(bodies: int) -> None:
    """Print the stalls for a model of so many bodies."""
    folder = Path(tempfile.mkdtemp())
    path = folder / "large.keepclear"
    save_model(plane_model(bodies, round(2.5 * bodies)), path, known=None)
    application()
    window = Window(Settings(QSettings(str(folder / "s.ini"), QSettings.Format.IniFormat)), Worker())
    window.analysis.automatic = False
    window.show()
    window.start_worker()
    watch, analysis = Watch(), window.analysis
    idle = watch.longest(lambda: True, 3.0)  # the libraries are imported meanwhile
    idle = watch.longest(lambda: True, 0.5)
    start = perf_counter()
    window.document.open(path)
    opened = 1000 * (perf_counter() - start)
    check = watch.longest(lambda: analysis.outlook is not None and not analysis.looking)
    start = perf_counter()
    window.on_find()
    solve = watch.longest(lambda: analysis.solution_current or analysis.refusal is not None)
    took = perf_counter() - start
    moving = watch.longest(lambda: True, 2.0)
    window.document.type_value(("bodies", "b0", "mass"), "321 kg")
    edit = watch.longest(lambda: not analysis.looking, 1.0)
    number = analysis.outlook.assembly.pencil().n
    print(
        f"{number:5d} coordinates: idle {idle:5.1f} ms; open {opened:6.1f}; check {check:6.1f}; "
        f"solve ({took:.1f} s) {solve:6.1f}; moving {moving:5.1f}; edit {edit:6.1f}"
    )
    window.document.stack.setClean()
    window.close()


if __name__ == "__main__":
    for count in [int(word) for word in sys.argv[1:]] or [20, 60, 100, 333]:
        measure(count)
