"""Longest time the window does not answer while a large model is opened, checked, solved and edited.

A timer asks for a tick every millisecond; the longest gap between two ticks is a stall. On a machine busy
with other work the figures rise: the gap of an idle loop stands beside them, and in brackets, in processor
time, which other work hardly changes, the longest gap of the process (threads of the window included, the
process that studies not) and that of the window's own thread.

OPENBLAS_NUM_THREADS=1 QT_QPA_PLATFORM=offscreen python tests/benchmarks/bench_stall.py [bodies ...]
    --large chain|plane   a model of 1e5 degrees of freedom, opened and checked only
    --why                 tell what every thread did in the longest gap of each phase
"""

import argparse
import os
import sys
import tempfile
import threading
import traceback
from collections.abc import Callable
from pathlib import Path
from time import perf_counter, process_time, sleep, thread_time

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from made import chain_text, plane_model
from PySide6.QtCore import QEventLoop, QSettings, Qt, QTimer

from modalview.store import save_model
from modalview.ui.app import application
from modalview.ui.settings import Settings
from modalview.ui.window import Window
from modalview.ui.worker import Worker

PATIENCE_S = 600.0
LONG_MS = 30.0
# Of about 1e5 degrees of freedom.
LARGE = {"chain": 100_000, "plane": 33_333}


class Watch:
    """The gaps between ticks, longest first, each with what went on."""

    def __init__(self) -> None:
        self.gaps: list[tuple[float, float, float]] = []
        self.last = perf_counter()
        self._used, self._own = process_time(), thread_time()
        self._timer = QTimer(interval=1, timerType=Qt.TimerType.PreciseTimer)
        self._timer.timeout.connect(self._tick)
        self._timer.start()

    def _tick(self) -> None:
        now, used, own = perf_counter(), process_time(), thread_time()
        self.gaps.append((1000 * (now - self.last), 1000 * (used - self._used), 1000 * (own - self._own)))
        self.last, self._used, self._own = now, used, own

    def longest(self, until: Callable[[], bool], least_s: float = 0.3) -> tuple[float, float, float]:
        """Let the window run until something is there; return the longest gaps in ms.

        By the clock, in processor time, and in that of the window's own thread. A gap begins where the last
        one ended: what was called in between is part of it.
        """
        self.gaps.clear()
        start = perf_counter()
        loop = QEventLoop()
        while (not until() or perf_counter() < start + least_s) and perf_counter() < start + PATIENCE_S:
            loop.processEvents(QEventLoop.ProcessEventsFlag.WaitForMoreEvents)
        return tuple(map(max, zip(*self.gaps, strict=True)))


class Witness(threading.Thread):
    """Looks again and again at what every thread does while no tick comes; it slows them a little."""

    def __init__(self, watch: Watch) -> None:
        super().__init__(daemon=True)
        self._watch = watch
        self.seen: tuple[float, list[str]] = (0.0, [])

    def run(self) -> None:
        """Look every few milliseconds."""
        gap, stacks = 0.0, []
        while True:
            sleep(0.004)
            now = 1000 * (perf_counter() - self._watch.last)
            if now < gap:  # a tick has come
                if gap > max(LONG_MS, self.seen[0]):
                    self.seen = gap, stacks
                stacks = []
            gap = now
            if now > LONG_MS / 3:
                stacks.append(_stacks())

    def forget(self) -> None:
        """Begin anew."""
        self.seen = 0.0, []

    def tell(self, phase: str) -> None:
        """Print what was seen since the last time."""
        gap, stacks = self.seen
        self.seen = 0.0, []
        if gap:
            print(f"--- {phase}: about {gap:.0f} ms\n" + "\n ...\n".join(stacks[:: max(1, len(stacks) // 3)]))


def _stacks() -> str:
    names = {thread.ident: thread.name for thread in threading.enumerate()}
    own = threading.get_ident()
    texts = []
    for number, frame in sys._current_frames().items():
        if number != own:
            lines = traceback.format_stack(frame)[-7:]
            texts.append(f"{names.get(number, 'thread')}:\n{''.join(lines)}")
    return "".join(texts)


class Bench:
    """One window and what is measured in it."""

    def __init__(self, *, why: bool) -> None:
        self.folder = Path(tempfile.mkdtemp())
        application()
        settings = Settings(QSettings(str(self.folder / "s.ini"), QSettings.Format.IniFormat))
        self.window = Window(settings, Worker())
        self.window.analysis.automatic = False
        self.window.show()
        self.window.start_worker()
        self.watch = Watch()
        self.witness = Witness(self.watch) if why else None
        self.told: list[str] = []
        self.watch.longest(lambda: True, 3.0)  # the libraries are imported meanwhile
        self.phase("idle", lambda: True, 0.5)
        if self.witness is not None:
            self.witness.start()

    def phase(self, name: str, until: Callable[[], bool], least_s: float = 0.3) -> None:
        """Let the window run and keep the longest gap and the time it took."""
        start = perf_counter()
        longest, used, own = self.watch.longest(until, least_s)
        self.told.append(f"{name} {longest:.0f} ms ({used:.0f}, {own:.0f})")
        if perf_counter() - start > least_s + 1:
            self.told[-1] += f" in {perf_counter() - start:.1f} s"
        if self.witness is not None:
            self.witness.tell(name)

    def begin(self) -> None:
        """Leave behind what making the model took."""
        self.watch.longest(lambda: True, 0.2)
        if self.witness is not None:
            self.witness.forget()

    def open(self, path: Path) -> None:
        """Open a file and let it be checked."""
        window, analysis = self.window, self.window.analysis
        window.filing.open(path)
        self.phase("open", lambda: window.document.path == path)
        self.phase("check", lambda: analysis.outlook is not None and not analysis.looking)
        self.phase("sheet", lambda: window.sheet.settled)
        self.phase("still", lambda: True, 1.0)

    def solve_and_edit(self) -> None:
        """Find the modes, let them move, edit and undo."""
        window, analysis = self.window, self.window.analysis
        window.on_find()
        self.phase("solve", lambda: analysis.solution_current or analysis.refusal is not None)
        self.phase("moving", lambda: True, 2.0)
        window.on_next_mode()
        self.phase("next mode", lambda: True, 0.5)
        window.below.show_page("values")
        self.phase("values", lambda: True, 0.5)
        body = window.document.model.bodies[0].id
        window.document.type_value(("bodies", body, "mass"), "321 kg")
        self.phase("edit", lambda: not analysis.looking, 1.0)
        window.document.stack.undo()
        self.phase("undo", lambda: not analysis.looking, 1.0)

    def save(self) -> None:
        """Edit the title and save."""
        window = self.window
        window.document.type_value(("title",), "Saved")
        self.phase("title", lambda: not window.analysis.looking and window.sheet.settled, 0.5)
        window.on_save()
        self.phase("save", lambda: not window.filing.saving.busy, 0.5)

    def close(self) -> None:
        """Print and end."""
        number = self.window.analysis.outlook.coordinates
        print(f"{number:6d} coordinates: " + "; ".join(self.told), flush=True)
        self.window.document.stack.setClean()
        self.window.close()


def measure(bodies: int, *, why: bool) -> None:
    """Print the stalls for a plane model of so many bodies."""
    bench = Bench(why=why)
    path = bench.folder / "large.keepclear"
    save_model(plane_model(bodies, round(2.5 * bodies)), path, known=None)
    bench.begin()
    bench.open(path)
    bench.solve_and_edit()
    bench.save()
    bench.close()


def measure_large(family: str, *, why: bool) -> None:
    """Print the stalls while a model of 1e5 degrees of freedom is opened and checked."""
    bench = Bench(why=why)
    path = bench.folder / "large.keepclear"
    if family == "chain":
        path.write_text(chain_text(LARGE[family]), encoding="utf-8")
    else:
        save_model(plane_model(LARGE[family], round(2.1 * LARGE[family])), path, known=None)
    bench.begin()
    bench.open(path)
    bench.save()
    bench.close()


if __name__ == "__main__":
    parser = argparse.ArgumentParser()
    parser.add_argument("bodies", nargs="*", type=int)
    parser.add_argument("--large", choices=tuple(LARGE))
    parser.add_argument("--why", action="store_true")
    asked = parser.parse_args()
    if asked.large:
        measure_large(asked.large, why=asked.why)
    for count in [] if asked.large else asked.bodies or [20, 60, 170, 333]:
        measure(count, why=asked.why)
