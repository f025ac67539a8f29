"""Work that would hold the window up, done in a thread of its own: layouts of large drawings and tables."""

from collections.abc import Callable, Hashable
from threading import Lock
from typing import Any

from PySide6.QtCore import QObject, QThreadPool, QTimer, Signal, Slot

from modalview.ui.front import give_way, window_first
from modalview.ui.garbage import few_collections

# One piece of work at a time, whoever asked: each thread that computes takes its share of the interpreter
# from the window's own.
_TURN = Lock()


class Later(QObject):
    """Runs pure functions one by one; of several asked for under one key only the last is answered."""

    done = Signal(object, object)  # key, result
    _finished = Signal(object, object, object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._pool = QThreadPool(self)  # waits for its thread when it goes
        self._pool.setMaxThreadCount(1)
        self._wanted: dict[Hashable, object] = {}
        self._finished.connect(self._on_finished)

    def ask(self, key: Hashable, work: Callable[[], Any]) -> None:
        """Do a piece of work; an older one under the same key is dropped."""
        ticket = self._wanted[key] = object()

        def run() -> None:
            with _TURN:
                if self._wanted.get(key) is not ticket:
                    return
                with few_collections():
                    give_way()
                    result = work()
            self._finished.emit(key, ticket, result)

        # After what the window does just now: a thread that computes makes each of its calls into Qt wait.
        QTimer.singleShot(0, self, lambda: self._pool.start(run))

    def waits_for(self, key: Hashable) -> bool:
        """Return whether a piece of work is under way."""
        return key in self._wanted

    def forget(self) -> None:
        """Drop everything that was asked for."""
        self._wanted.clear()

    def close(self) -> None:
        """Drop everything and wait for the thread."""
        self.forget()
        self._pool.waitForDone()

    @Slot(object, object, object)
    def _on_finished(self, key: Hashable, ticket: object, result: Any) -> None:
        if self._wanted.get(key) is ticket:
            del self._wanted[key]
            window_first()
            self.done.emit(key, result)
