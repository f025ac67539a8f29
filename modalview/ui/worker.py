"""The one thread that studies models: a frozen order in, answers by a queued signal out.

The study and the libraries below it are imported in that thread, so that the window is painted first.
"""

from collections.abc import Callable
from dataclasses import dataclass, field
from enum import Enum
from threading import Event
from typing import Any

from PySide6.QtCore import QObject, QThread, Signal, Slot

from modalview.errors import CancelledError, KeepclearError
from modalview.model.parts import Model
from modalview.ui.apart import LARGE_MODEL, Apart
from modalview.ui.studydoor import Study, load_study

# Models of at most so many coordinates find their modes after each edit, unless switched off: below, all
# modes take a few hundredths of a second.
SMALL_MODEL = 300
# Regions of the roots need singular values of a dense matrix: to this size, less than a second.
PLANE_LIMIT = 400


class Find(Enum):
    """Whether the modes are wanted."""

    NEVER = "only what is known before"
    IF_SMALL = "where the model is small"
    ALWAYS = "the person asked"


@dataclass(frozen=True, slots=True)
class Order:
    """What is to be studied; ``stop`` is set by who no longer wants it."""

    number: int
    model: Model
    find: Find
    stop: Event = field(default_factory=Event, compare=False)


class Step(Enum):
    """What an answer tells; in brackets its content."""

    LOOKED = "known before any solve (Outlook)"
    FINDING = "the solve begins (nothing)"
    PROGRESSED = "the solve goes on (what is done, share done)"
    SOLVED = "modes found (Solution)"
    DAMPED = "damped modes and complex plane (DampedSolution or None, content or None, why not)"
    REFUSED = "the model cannot be studied (KeepclearError)"
    FAILED = "an error of the program (Exception)"
    STOPPED = "the person stopped it (nothing)"


@dataclass(frozen=True, slots=True)
class Answer:
    """One answer to an order."""

    number: int
    step: Step
    content: Any = None


class _Desk(QObject):
    """Lives in the thread and works through the orders one by one."""

    answered = Signal(object)

    def __init__(self, load: Callable[[], Study]) -> None:
        super().__init__()
        self._load = load
        self._previous: Any = None
        self._apart = Apart()

    @Slot()
    def on_started(self) -> None:
        """Import while nobody waits."""
        self._load()

    def close(self) -> None:
        """End the other process; called when the thread has ended."""
        self._apart.close()

    @Slot(object)
    def on_ordered(self, order: Order) -> None:
        """Study one order and answer; nothing is raised into the thread's event loop."""
        try:
            self._work(order)
        except CancelledError:
            self._answer(order, Step.STOPPED)
        except KeepclearError as error:
            self._answer(order, Step.REFUSED, error)
        except Exception as error:  # noqa: BLE001  (a thread has nobody else to tell)
            self._answer(order, Step.FAILED, error)

    def _answer(self, order: Order, step: Step, content: Any = None) -> None:
        self.answered.emit(Answer(order.number, step, content))

    def _work(self, order: Order) -> None:
        if order.stop.is_set():
            raise CancelledError
        study = self._load()
        request = study.request(
            order.model,
            number=order.number,
            cancelled=order.stop.is_set,
            progress=lambda what, share: self._answer(order, Step.PROGRESSED, (what, share)),
        )
        outlook = self._previous = study.look(request, self._previous)
        self._answer(order, Step.LOOKED, outlook)
        found = damped = None
        small = outlook.assembly.pencil().n <= SMALL_MODEL
        if order.find is Find.ALWAYS or (order.find is Find.IF_SMALL and small):
            self._answer(order, Step.FINDING)
            found, damped = self._solve(study, request, outlook)
            self._answer(order, Step.SOLVED, found)
        if not order.stop.is_set():
            self._answer(order, Step.DAMPED, _plane(study, outlook, found, damped))

    def _solve(self, study: Study, request: Any, outlook: Any) -> tuple[Any, Any]:
        """Return the modes, and the damped ones where there are dashpots."""
        dashpots = study.dashpots(outlook)
        # A state matrix has twice the size and no symmetry: eight times the work, or more.
        if outlook.assembly.pencil().n > (LARGE_MODEL // 4 if dashpots else LARGE_MODEL):
            return self._apart.solve(outlook, request.cancelled, request.progress)
        found = study.solve(request, outlook)
        return found, study.damped(request, found) if dashpots else None


def _plane(study: Study, outlook: Any, found: Any, damped: Any) -> tuple[Any, Any, str]:
    """Return damped modes, content of the complex plane, and why there is none."""
    number = outlook.assembly.pencil().n
    if study.dashpots(outlook) and number > PLANE_LIMIT:
        return (
            damped,
            None,
            f"The regions of the roots are drawn to {PLANE_LIMIT} coordinates; this has {number}.",
        )
    return damped, study.plane(outlook, found, damped), ""


class Worker(QObject):
    """Runs the orders of the window in one thread; of several orders only the latest is answered."""

    answered = Signal(object)
    _ordered = Signal(object)

    def __init__(self, parent: QObject | None = None, load: Callable[[], Study] = load_study) -> None:
        super().__init__(parent)
        self._latest = Order(0, Model(), Find.NEVER)
        self._closed = False
        self._thread = QThread()
        self._thread.setObjectName("study")
        self._desk = _Desk(load)
        self._desk.moveToThread(self._thread)
        self._thread.started.connect(self._desk.on_started)
        self._ordered.connect(self._desk.on_ordered)
        self._desk.answered.connect(self._on_answered)

    def start(self) -> None:
        """Start the thread, unless it was closed already; orders given before wait for it."""
        if not self._closed:
            self._thread.start()

    def order(self, model: Model, find: Find) -> None:
        """Ask for a study; an earlier order is stopped and its answers are dropped."""
        self._latest.stop.set()
        self._latest = Order(self._latest.number + 1, model, find)
        self._ordered.emit(self._latest)

    def stop(self) -> None:
        """Stop the order that runs; it answers with ``STOPPED``."""
        self._latest.stop.set()

    def close(self) -> None:
        """Stop and wait for the thread to end."""
        self._closed = True
        self.stop()
        self._thread.quit()
        self._thread.wait()
        self._desk.close()

    @Slot(object)
    def _on_answered(self, answer: Answer) -> None:
        if answer.number == self._latest.number:
            self.answered.emit(answer)
