"""What the window shows next goes before what its threads work on: they pause meanwhile.

Threads share the interpreter: beside one that computes, the window takes twice as long to show an answer, and
each of its calls into Qt waits to get the interpreter back.
"""

from threading import Event, get_ident
from time import perf_counter

from PySide6.QtCore import QCoreApplication, QTimer

# What came is shown when the window's event loop has got round to a timer so many times: paintings, and
# layouts that follow each other, come between.
ROUNDS = 3
# A thread waits no longer than this for the window, however much goes on there.
PATIENCE_S = 0.06

_free = Event()
_free.set()
_since = 0.0
_window_thread = 0


class _Rounds(QTimer):
    """Counts rounds of the event loop; belongs to the application."""

    def __init__(self) -> None:
        super().__init__(QCoreApplication.instance())
        self.setInterval(1)
        self.setObjectName(_NAME)
        self.left = 0
        self.timeout.connect(self._on_round)

    def _on_round(self) -> None:
        self.left -= 1
        if self.left <= 0:
            self.stop()
            _free.set()


_NAME = "rounds"


def window_first() -> None:
    """Let the threads pause until what came just now is shown; called in the window's own thread."""
    global _since, _window_thread
    if _free.is_set():
        _since, _window_thread = perf_counter(), get_ident()
        _free.clear()
    rounds = QCoreApplication.instance().findChild(_Rounds, _NAME) or _Rounds()
    rounds.left = ROUNDS
    rounds.start()


def give_way() -> None:
    """Wait for the window; called by threads between pieces of their work, in its own without effect."""
    if not _free.is_set() and get_ident() != _window_thread:
        left = _since + PATIENCE_S - perf_counter()
        if left > 0:
            _free.wait(left)
