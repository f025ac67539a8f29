"""Studies larger models in a process of their own.

Assembling, counting and dense solves hold the interpreter lock: in a thread, a model of 300 coordinates stops
the window for half a second and one of 2,000 for many. Starting the process and importing takes about a
second, so it is kept, with what it knows of the model, and small models stay in the thread.
"""

import multiprocessing
from collections.abc import Callable
from time import monotonic
from typing import TYPE_CHECKING, Any

from modalview.errors import CancelledError, KeepclearError
from modalview.model.parts import FREEDOMS, Model
from modalview.ui import served
from modalview.ui.parcels import pieces, unpacked
from modalview.ui.studies import Find, Step, Tell

if TYPE_CHECKING:
    from multiprocessing.connection import Connection
    from multiprocessing.context import SpawnProcess

# From here on a solve in the thread would hold the window up for longer than a tenth of a second.
LARGE_MODEL = 150
# A state matrix has twice the size and no symmetry: eight times the work, or more.
LARGE_DAMPED = LARGE_MODEL // 4
# The process looks whether it was told to stop between steps; one that does not after this long is ended, and
# what it knew is lost.
STOP_PATIENCE_S = 2.0
_LOOK_ROUND_S = 0.02


def is_large(model: Model) -> bool:
    """Return whether a model is studied in the other process; by freedoms, which are quick to count."""
    freedoms = len(model.bodies) * len(FREEDOMS[model.motion])
    if freedoms <= LARGE_DAMPED:
        return False
    return freedoms > LARGE_MODEL or any(getattr(one, "damping", None) is not None for one in model.links)


class ProcessEndedError(KeepclearError):
    """The other process ended by itself."""


class Apart:
    """The other process; started when first needed."""

    def __init__(self) -> None:
        self._process: SpawnProcess | None = None
        self._line: Connection | None = None
        self._stop: Any = None
        self._sent: Model | None = None

    def work(self, model: Model, find: Find, stopped: Callable[[], bool], tell: Tell) -> None:
        """Let a model be studied; of one that was studied before only the changed parts are sent.

        Raises
        ------
        CancelledError
            ``stopped`` said so.
        KeepclearError
            The model cannot be studied; the text tells why.
        RuntimeError
            An error of the program, with the text of where it came up.
        """
        try:
            self._start()
            self._send(model, find, stopped)
            await_answers(self._receive, self._stop.set, stopped, _Unpacking(model, tell))
        except (EOFError, OSError):
            status = self._process.exitcode if self._process is not None else None
            self.close()
            raise ProcessEndedError(
                f"The process that studied the model ended by itself (status {status}); "
                "the model may be too large for the memory."
            ) from None
        except TooSlowError:
            self.close()
            raise CancelledError("Stopped by the user.") from None

    def close(self) -> None:
        """End the process, whatever it does."""
        if self._process is not None and self._line is not None:
            self._process.terminate()
            self._process.join()
            self._line.close()
        self._process = self._line = self._stop = self._sent = None

    def _start(self) -> None:
        if self._process is not None and self._process.is_alive():
            self._stop.clear()
            return
        self.close()
        context = multiprocessing.get_context("spawn")
        self._line, theirs = context.Pipe()
        self._stop = context.Event()
        self._process = context.Process(target=served.main, args=(theirs, self._stop), daemon=True)
        self._process.start()
        theirs.close()

    def _send(self, model: Model, find: Find, stopped: Callable[[], bool]) -> None:
        before, self._sent = self._sent, None
        for piece in pieces(before, model):
            if stopped():
                self._line.send(served.FORGET)
                raise CancelledError("Stopped by the user.")
            self._line.send(piece)
        self._line.send((served.STUDY, find))
        self._sent = model

    def _receive(self, seconds: float) -> Any:
        """Return the next answer, or None when none has come in so many seconds."""
        if self._line.poll(seconds):
            return self._line.recv()
        if not self._process.is_alive() and not self._line.poll(0):
            self._process.join()
            raise EOFError
        return None


class TooSlowError(Exception):
    """The process did not stop when it was told to."""


class _Unpacking:
    """Passes answers on as the window wants them."""

    def __init__(self, model: Model, tell: Tell) -> None:
        from modalview.study.results import Request  # noqa: PLC0415  (numpy comes later)

        self._request = Request(model)
        self._known: Any = None
        self._tell = tell

    def __call__(self, step: Step, content: Any) -> None:
        content = unpacked(step, content, self._known, self._request)
        if step is Step.LOOKED:
            self._known = content
        self._tell(step, content)


def await_answers(
    receive: Callable[[float], Any], stop: Callable[[], None], stopped: Callable[[], bool], tell: Tell
) -> None:
    """Pass the answers to one order on until the last has come.

    Parameters
    ----------
    receive : callable
        Given seconds to wait: the next (step, content), or None.
    stop : callable
        Tells the other side to stop.
    stopped : callable
        Whether the order is no longer wanted; its answers are dropped then.
    tell : callable

    Raises
    ------
    CancelledError, KeepclearError, RuntimeError
        What the other side answered.
    TooSlowError
    """
    end: float | None = None
    endings: list[Exception] = []
    done = False
    while not done:
        if end is None and stopped():
            end = monotonic() + STOP_PATIENCE_S
            stop()
        if end is not None and monotonic() > end:
            raise TooSlowError
        step, content = receive(_LOOK_ROUND_S) or (None, None)
        done = step == served.DONE
        if step in _ENDINGS:
            endings.append(_ENDINGS[step](content))
        elif step is not None and not done and end is None:
            tell(step, content)
    if end is not None:
        raise CancelledError("Stopped by the user.")
    if endings:
        raise endings[0]


_ENDINGS: dict[Step, Callable[[Any], Exception]] = {
    Step.STOPPED: lambda _: CancelledError("Stopped by the user."),
    Step.REFUSED: KeepclearError,
    Step.FAILED: RuntimeError,
}
