"""One answer about a large model, worked out in a process of its own that ends with it."""

import multiprocessing
import signal
import traceback
from collections.abc import Callable
from multiprocessing.connection import Connection
from typing import Any

from modalview.errors import CancelledError, KeepclearError
from modalview.ui.apart import ProcessEndedError

_LOOK_ROUND_S = 0.05
_ANSWERED, _REFUSED, _FAILED = "answered", "refused", "failed"


def answer_aside(work: Callable[..., Any], arguments: tuple[Any, ...], stopped: Callable[[], bool]) -> Any:
    """Return what a function of a module answers; the process is ended when the answer is no longer wanted.

    Parameters
    ----------
    work : callable
        Called with the arguments and how to ask whether to stop.
    arguments : tuple
        Sent to the process.
    stopped : callable

    Raises
    ------
    CancelledError
        ``stopped`` said so.
    KeepclearError
        What the function refused, or that the process ended by itself.
    RuntimeError
        An error of the program, with the text of where it came up.
    """
    context = multiprocessing.get_context("spawn")
    line, theirs = context.Pipe()
    process = context.Process(target=_serve, args=(theirs, work, arguments), daemon=True)
    process.start()
    theirs.close()
    try:
        return _await(line, stopped)
    except (EOFError, OSError):
        process.join()
        raise ProcessEndedError(
            f"The process that worked it out ended by itself (status {process.exitcode}); "
            "the model may be too large for the memory."
        ) from None
    finally:
        process.terminate()
        process.join()
        line.close()


def _await(line: Connection, stopped: Callable[[], bool]) -> Any:
    while not line.poll(_LOOK_ROUND_S):
        if stopped():
            raise CancelledError("Stopped by the user.")
    ending, content = line.recv()
    if ending == _REFUSED:
        raise KeepclearError(content)
    if ending == _FAILED:
        raise RuntimeError(content)
    return content


def _serve(line: Connection, work: Callable[..., Any], arguments: tuple[Any, ...]) -> None:
    # Ctrl+C in the terminal goes to all processes; the window ends this one itself.
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    try:
        ending = _ANSWERED, work(*arguments, _never)
    except KeepclearError as error:
        ending = _REFUSED, str(error)
    except Exception:  # noqa: BLE001  (the process has nobody else to tell)
        ending = _FAILED, traceback.format_exc()
    line.send(ending)


def _never() -> bool:
    return False
