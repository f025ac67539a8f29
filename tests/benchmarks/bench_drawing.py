"""Every edit and every frame while somebody draws: 60 bodies and 150 links, 1,000 and 3,000.

Aims: verdict and frame within 16 ms for the small model; for the large ones the verdict within 150 ms (plane)
and 100 ms (single axis), a frame within 33 ms. Figures are the least of several runs, by the clock and in
processor time of the process; other work on the machine raises the first much and the second little.

    OPENBLAS_NUM_THREADS=1 QT_QPA_PLATFORM=offscreen python tests/benchmarks/bench_drawing.py
        --only core|window|memory
        --why        print where the time goes
"""

import argparse
import cProfile
import gc
import os
import pstats
import tempfile
import tracemalloc
from collections.abc import Callable, Iterator
from itertools import count
from pathlib import Path
from time import perf_counter, process_time

os.environ["OPENBLAS_NUM_THREADS"] = "1"
os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from made import braced_chain, plane_model
from PySide6.QtCore import QCoreApplication, QEvent, QEventLoop, QPointF, QSettings, Qt, QTimer
from PySide6.QtGui import QImage, QMouseEvent, QPainter

from modalview.drawing import motion
from modalview.drawing.paint import paint
from modalview.drawing.palette import LIGHT
from modalview.model.adding import add_link
from modalview.model.differences import checked_edit
from modalview.model.edits import Edit, set_value_text
from modalview.model.moving import moved
from modalview.model.parts import End, Model, Motion
from modalview.model.removing import without
from modalview.study import Request, look
from modalview.ui.app import application
from modalview.ui.document import Document
from modalview.ui.settings import Settings
from modalview.ui.window import Window
from modalview.ui.worker import Worker

MODELS: dict[str, Callable[[], Model]] = {
    "plane 60/150": plane_model,
    "plane 1000/3000": lambda: plane_model(1000, 3000),
    "single axis 1000/3000": braced_chain,
}
ROUNDS = {60: 40, 1000: 8}
SHOWN = 25
FRAMES, EDITS = 10_000, 10_000


def edits(model: Model) -> Iterator[tuple[str, Callable[[Model, int], Edit]]]:
    """Yield kinds of edits, each with what makes the one of a number of the model as it is."""
    link, body = model.links[len(model.links) // 2].id, model.bodies[len(model.bodies) // 2].id
    address = ("links", link, "stiffness", *(() if model.motion is Motion.SINGLE_AXIS else ("y",)))
    other = model.bodies[len(model.bodies) // 2 + 2].id
    kind = "spring" if model.motion is Motion.SINGLE_AXIS else "mount"

    def one_more(now: Model, number: int) -> Edit:
        if number % 2:
            return checked_edit(now, without(now, (now.links[-1].id,)), "delete")
        return checked_edit(now, add_link(now, kind, End(body=body), End(body=other))[0], "draw")

    yield "stiffness", lambda now, number: set_value_text(now, address, f"{1 + 0.01 * number} MN/m")
    yield "mass", lambda now, number: set_value_text(now, ("bodies", body, "mass"), f"{100 + number} kg")
    yield (
        "body moved",
        lambda now, _number: checked_edit(now, moved(now, (body,), (0.003, 0.01)), "move"),
    )
    yield "link drawn or deleted", one_more


class Least:
    """The least time of several runs, by the clock and in processor time."""

    def __init__(self, *, why: bool) -> None:
        self.wall = self.used = float("inf")
        self._why = why
        self.profile = cProfile.Profile()

    def run(self, do: Callable[[], object]) -> None:
        """Run once; profiled runs are told, not measured."""
        if self._why:
            self.profile.runcall(do)
        wall, used = perf_counter(), process_time()
        do()
        self.wall = min(self.wall, perf_counter() - wall)
        self.used = min(self.used, process_time() - used)

    def tell(self, what: str, aim: float) -> None:
        """Print a line of the table, and where the time went."""
        verdict = "" if 1e3 * self.wall <= aim else "   NOT MET"
        print(
            f"{what:58} {1e3 * self.wall:7.1f} ms ({1e3 * self.used:6.1f} ms)   aim {aim:g} ms{verdict}",
            flush=True,
        )
        if self._why:
            pstats.Stats(self.profile).sort_stats("tottime").print_stats(SHOWN)


def core(name: str, model: Model, aim: float, *, why: bool) -> None:
    """Time edit and study without a window."""
    for what, make in edits(model):
        now, outlook, numbers = model, look(Request(model)), count()
        studied, rules = Least(why=why), Least(why=False)
        for _ in range(ROUNDS[len(model.bodies)]):
            number = next(numbers)
            rules.run(lambda: make(now, number))
            now = make(now, number).apply(now)
            found = []
            before = outlook

            def study() -> None:
                found[:] = [look(Request(now), before)]

            if not why:
                studied.run(study)
            else:  # counts are kept: only the first study of an edit is one
                studied.profile.runcall(study)
                studied.wall = studied.used = 0.0
            outlook = found[0]
        rules.tell(f"{name}: {what}: the edit and its rules", aim)
        studied.tell(f"{name}: {what}: verdict", aim)


class Bench:
    """One window with a model in it."""

    def __init__(self, model: Model) -> None:
        folder = Path(tempfile.mkdtemp())
        application()
        self._tick = QTimer(interval=1, timerType=Qt.TimerType.PreciseTimer)
        self._tick.start()
        settings = Settings(QSettings(str(folder / "s.ini"), QSettings.Format.IniFormat))
        self.window = Window(settings, Worker())
        self.window.resize(1400, 950)
        self.window.show()
        self.window.start_worker()
        self.window.document.start(model)
        self.wait(lambda: self.analysis.outlook is not None and not self.analysis.looking)
        self.wait(lambda: self.window.sheet.settled)

    @property
    def analysis(self):
        """What is known in the window."""
        return self.window.analysis

    def wait(self, until: Callable[[], bool]) -> None:
        """Let the window run until something is there; asleep between events, as a program is."""
        end, loop = perf_counter() + 120, QEventLoop()
        while True:
            loop.processEvents(QEventLoop.ProcessEventsFlag.WaitForMoreEvents)
            if until() or perf_counter() > end:
                return

    def edit(self, make: Callable[[Model, int], Edit], number: int) -> None:
        """Make an edit and wait until its verdict is shown."""
        self.window.document.push(make(self.window.document.model, number))
        self.wait(lambda: not self.analysis.looking)

    def mouse(self, kind: QEvent.Type, at: QPointF) -> None:
        """Let the mouse do something on the sheet."""
        pressed = (
            Qt.MouseButton.NoButton if kind == QEvent.Type.MouseButtonRelease else Qt.MouseButton.LeftButton
        )
        button = Qt.MouseButton.NoButton if kind == QEvent.Type.MouseMove else Qt.MouseButton.LeftButton
        event = QMouseEvent(kind, at, at, button, pressed, Qt.KeyboardModifier.NoModifier)
        QCoreApplication.sendEvent(self.window.sheet, event)

    def frame(self, at: QPointF) -> None:
        """Move the mouse and paint the sheet."""
        self.mouse(QEvent.Type.MouseMove, at)
        self.window.sheet.repaint()

    def grip(self) -> QPointF:
        """Return where the body in the middle is on the sheet."""
        geometry = self.window.sheet.geometry
        x, y = geometry.points.rest[geometry.centres[len(geometry.centres) // 2]].tolist()
        return QPointF(x, y)

    def close(self) -> None:
        """End."""
        self.window.document.stack.setClean()
        self.window.close()
        self.wait(lambda: True)


def window(name: str, model: Model, aims: tuple[float, float], *, why: bool) -> None:
    """Time verdicts and frames in the window."""
    bench = Bench(model)
    rounds = ROUNDS[len(model.bodies)]
    for automatic in (False, True):
        bench.analysis.automatic = automatic
        for what, make in edits(model):
            least = Least(why=why and not automatic)
            for number in range(8 if automatic else rounds):
                least.run(lambda: bench.edit(make, number))
                bench.wait(lambda: bench.window.sheet.settled and not bench.analysis.finding)
            least.tell(f"{name}: {what}: push to verdict shown{', modes too' if automatic else ''}", aims[0])
    frames(bench, name, aims[1], rounds, why=why)
    bench.close()


def frames(bench: Bench, name: str, aim: float, rounds: int, *, why: bool) -> None:
    """Time the frames of a drag, of the row of tools, and of a moving mode."""
    start = bench.grip()
    bench.mouse(QEvent.Type.MouseButtonPress, start)
    least, loop = Least(why=why), Least(why=False)
    for number in range(2, rounds):
        at = start + QPointF(5 * number, 3 * (number % 5))
        least.run(lambda: bench.frame(at))
        loop.run(lambda: bench.wait(lambda: True))
        bench.wait(lambda: not bench.analysis.looking)
    bench.mouse(QEvent.Type.MouseButtonRelease, at)
    bench.wait(lambda: bench.window.sheet.settled and not bench.analysis.looking)
    least.tell(f"{name}: frame of a drag: move and paint", aim)
    bench.window.sketching.hand.take("spring")
    least = Least(why=why)
    for number in range(2, rounds):
        least.run(lambda: bench.frame(start + QPointF(7 * number, 3 * number)))
    least.tell(f"{name}: frame with a link in hand", aim)
    bench.window.sketching.hand.take("choose")
    moving(bench, name, aim, rounds, why=why)


def moving(bench: Bench, name: str, aim: float, rounds: int, *, why: bool) -> None:
    """Time the frames of a moving mode: computed and painted."""
    window = bench.window
    window.on_find()
    bench.wait(lambda: bench.analysis.solution_current or bench.analysis.refusal is not None)
    window.sketching.hand.choose(())
    bench.wait(lambda: window.sheet.settled)
    mode = bench.analysis.solution.modes[min(6, len(bench.analysis.solution.modes) - 1)]
    posed = motion.pose(window.sheet.geometry, mode.motion)
    image = QImage(window.sheet.size(), QImage.Format.Format_ARGB32_Premultiplied)

    def frame() -> None:
        painter = QPainter(image)
        paint(painter, motion.frame(window.sheet.geometry, posed, 0.5), LIGHT)
        painter.end()

    least = Least(why=why)
    for _ in range(rounds):
        least.run(frame)
    least.tell(f"{name}: frame of a moving mode", aim)


def memory(model: Model) -> None:
    """Tell what edits add to the undo stack, and whether frames add anything."""
    document = Document()
    document.start(model)
    for what, make in edits(model):
        gc.collect()
        tracemalloc.start()
        before = tracemalloc.get_traced_memory()[0]
        for number in range(EDITS // 20):
            document.push(make(document.model, number))
        gc.collect()
        grown = tracemalloc.get_traced_memory()[0] - before
        tracemalloc.stop()
        print(f"undo stack, {what}: {grown / (EDITS // 20):.0f} bytes an edit", flush=True)
    document.stack.clear()
    bench = Bench(model)
    start = bench.grip()
    bench.mouse(QEvent.Type.MouseButtonPress, start)
    for number in range(2, FRAMES):
        bench.frame(start + QPointF(5 + number % 150, number % 7))
        if number % 10 == 0:
            bench.wait(lambda: True)
        if number % (FRAMES // 5) == 0:
            bench.wait(lambda: not bench.analysis.looking)
            print(f"resident after {number} frames of a drag: {_resident():.0f} MB", flush=True)
    bench.mouse(QEvent.Type.MouseButtonRelease, start)
    make = dict(edits(model))["body moved"]
    for number in range(EDITS):
        bench.window.document.push(make(bench.window.document.model, number))
        bench.wait(lambda: True)
        if number % (EDITS // 5) == EDITS // 5 - 1:
            bench.wait(lambda: not bench.analysis.looking)
            print(f"resident after {number + 1} edits: {_resident():.0f} MB", flush=True)
    bench.close()


def _resident() -> float:
    text = Path("/proc/self/status").read_text(encoding="ascii")
    return int(next(line for line in text.splitlines() if line.startswith("VmRSS")).split()[1]) / 1024


AIMS = {
    "plane 60/150": (16.0, 16.0),
    "plane 1000/3000": (150.0, 33.0),
    "single axis 1000/3000": (100.0, 33.0),
}


def main() -> None:
    """Print the tables."""
    parser = argparse.ArgumentParser()
    parser.add_argument("--only", choices=("core", "window", "memory"))
    parser.add_argument("--model", choices=tuple(MODELS))
    parser.add_argument("--why", action="store_true")
    asked = parser.parse_args()
    for name, make in MODELS.items():
        if asked.model in (None, name):
            if asked.only in (None, "core"):
                core(name, make(), AIMS[name][0], why=asked.why)
            if asked.only in (None, "window"):
                window(name, make(), AIMS[name], why=asked.why)
    if asked.only in (None, "memory"):
        memory(plane_model())


if __name__ == "__main__":
    main()
