"""One piece of work in a thread of its own that ends with a result or an error, and can be called off."""

from collections.abc import Callable
from threading import Event
from typing import Any

from PySide6.QtCore import QObject, QThreadPool, Signal, Slot

from modalview.ui.front import give_way, window_first
from modalview.ui.garbage import few_collections

Work = Callable[[Callable[[], bool]], Any]  # is told how to ask whether it was called off
Then = Callable[[Any, Exception | None], None]  # is given the result, or what was raised


class Errand(QObject):
    """Does the piece of work that was given last; one given before is called off and its end not told."""

    busy_changed = Signal(str)  # what is being done, "" when nothing is
    _finished = Signal(object, object, object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._pool = QThreadPool(self)  # waits for its thread when it goes
        self._pool.setMaxThreadCount(1)
        self._stop: Event | None = None
        self._then: Then | None = None
        self._finished.connect(self._on_finished)

    @property
    def busy(self) -> bool:
        """Whether something is being done."""
        return self._stop is not None

    def run(self, what: str, work: Work, then: Then) -> None:
        """Do a piece of work in the thread and ``then``, in this one, whatever follows."""
        self.call_off()
        stop = self._stop = Event()
        self._then = then

        def stopped() -> bool:
            give_way()
            return stop.is_set()

        def do() -> None:
            result = error = None
            try:
                with few_collections():
                    result = work(stopped)
            except Exception as raised:  # noqa: BLE001  (it is raised again, or told, where people are)
                error = raised
            if not stop.is_set():
                self._finished.emit(stop, result, error)

        self._pool.start(do)
        self.busy_changed.emit(what)

    def call_off(self) -> None:
        """Stop what is being done; its end is not told."""
        if self._stop is not None:
            self._stop.set()
            self._stop = self._then = None
            self.busy_changed.emit("")

    def close(self) -> None:
        """Call off and wait for the thread."""
        self.call_off()
        self._pool.waitForDone()

    @Slot(object, object, object)
    def _on_finished(self, stop: Event, result: Any, error: Exception | None) -> None:
        if stop is not self._stop or self._then is None:
            return
        then = self._then
        self._stop = self._then = None
        window_first()
        self.busy_changed.emit("")
        then(result, error)
