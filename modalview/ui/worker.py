"""The one thread that studies models: a frozen order in, answers by a queued signal out.

The study and the libraries below it are imported in that thread, so that the window is painted first.
"""

from collections.abc import Callable
from dataclasses import dataclass, field
from threading import Event
from typing import Any

from PySide6.QtCore import QObject, QThread, Signal, Slot

from modalview.errors import CancelledError, KeepclearError
from modalview.model.parts import Model
from modalview.ui.apart import Apart, is_large
from modalview.ui.front import give_way, window_first
from modalview.ui.garbage import few_collections
from modalview.ui.studies import SMALL_MODEL, Find, Step, Studies
from modalview.ui.studydoor import Study, load_drawing, load_study

__all__ = ["SMALL_MODEL", "Answer", "Find", "Order", "Step", "Worker"]


@dataclass(frozen=True, slots=True)
class Order:
    """What is to be studied; ``stop`` is set by who no longer wants it."""

    number: int
    model: Model
    find: Find
    stop: Event = field(default_factory=Event, compare=False)


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
        self._studies: Studies | None = None
        self._apart = Apart()

    @Slot()
    def on_started(self) -> None:
        """Import while nobody waits; searches for garbage leave out what the libraries made."""
        with few_collections():
            load_drawing()
            self._studies = Studies(self._load())

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
        if self._studies is None:
            self._studies = Studies(self._load())
        place = self._apart if is_large(order.model) else self._studies

        def stopped() -> bool:
            give_way()
            return order.stop.is_set()

        place.work(
            order.model,
            order.find,
            stopped,
            lambda step, content: self._answer(order, step, content),
        )


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
            window_first()
            self.answered.emit(answer)
