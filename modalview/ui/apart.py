"""Solves large models in a process of their own.

Dense solves hold the interpreter lock: in a thread, a model of 2,000 coordinates would freeze the window for
seconds. Starting a process and importing takes about a second, so small models stay in the thread.
"""

import multiprocessing
import traceback
from collections.abc import Callable
from dataclasses import replace
from multiprocessing.connection import Connection
from multiprocessing.context import SpawnProcess
from typing import Any

from modalview.errors import CancelledError, KeepclearError
from modalview.model.parts import Model

# From here on a solve in the thread would hold the window up for longer than a blink.
LARGE_MODEL = 500
_LOOK_ROUND_S = 0.05


def solve_apart(outlook: Any, stopped: Callable[[], bool], progress: Callable[[str, float], None]) -> Any:
    """Return the study.Solution of an outlook's model, found in another process.

    Raises
    ------
    CancelledError
        ``stopped`` said so; the process is ended at once.
    KeepclearError
        The modes could not be found; the text tells why.
    RuntimeError
        An error of the program, with the text of where it came up.
    """
    context = multiprocessing.get_context("spawn")
    receiver, sender = context.Pipe(duplex=False)
    process = context.Process(target=_solve, args=(sender, outlook.request.model), daemon=True)
    process.start()
    sender.close()
    try:
        found = _await(receiver, process, stopped, progress)
    finally:
        process.terminate()
        process.join()
        receiver.close()
    return replace(found, outlook=outlook)


def _await(
    receiver: Connection,
    process: SpawnProcess,
    stopped: Callable[[], bool],
    progress: Callable[[str, float], None],
) -> Any:
    while not stopped():
        if not receiver.poll(_LOOK_ROUND_S):
            continue
        try:
            kind, content = receiver.recv()
        except EOFError:
            raise KeepclearError(
                f"The process that looked for the modes ended by itself (status {process.exitcode}); "
                "the model may be too large for the memory."
            ) from None
        if kind == "progress":
            progress(*content)
        elif kind == "found":
            return content
        else:
            raise (KeepclearError if kind == "refused" else RuntimeError)(content)
    raise CancelledError("Stopped by the user.")


def _solve(sender: Connection, model: Model) -> None:
    """Run in the other process: solve, and send what was found without the outlook, which is known."""
    from modalview.study import solve  # noqa: PLC0415  (in the other process only)
    from modalview.study.results import Request  # noqa: PLC0415

    request = Request(model, progress=lambda what, share: sender.send(("progress", (what, share))))
    try:
        sender.send(("found", replace(solve(request), outlook=None)))
    except KeepclearError as error:
        sender.send(("refused", str(error)))
    except Exception:  # noqa: BLE001  (the other process has nobody else to tell)
        sender.send(("failed", traceback.format_exc()))
