"""Solves larger models in a process of their own.

Dense solves hold the interpreter lock: in a thread, a model of 300 coordinates stops the window for half a
second and one of 2,000 for many. Starting the process and importing takes about a second, so it is kept for
the next solve, and small models stay in the thread.
"""

import multiprocessing
import traceback
from collections.abc import Callable
from dataclasses import replace
from multiprocessing.connection import Connection
from multiprocessing.context import SpawnProcess
from typing import Any

from modalview.errors import CancelledError, KeepclearError

# From here on a solve in the thread would hold the window up for longer than a tenth of a second.
LARGE_MODEL = 150
# Of each mode the largest energy shares are sent; the window shows five.
SHARES_SENT = 5
_LOOK_ROUND_S = 0.02
_Progress = Callable[[str, float], None]


class Apart:
    """The other process; started when first needed."""

    def __init__(self) -> None:
        self._process: SpawnProcess | None = None
        self._line: Connection | None = None

    def solve(self, outlook: Any, stopped: Callable[[], bool], progress: _Progress) -> Any:
        """Return the study.Solution of an outlook's model, found in the other process, and its damped modes.

        The second is a study.damped.DampedSolution where the model has dashpots, else None.

        Raises
        ------
        CancelledError
            ``stopped`` said so; the process is ended at once.
        KeepclearError
            The modes could not be found; the text tells why.
        RuntimeError
            An error of the program, with the text of where it came up.
        """
        process, line = self._running()
        try:
            line.send(outlook.request.model)
            found, damped = await_answer(process, line, stopped, progress)
        except (CancelledError, ProcessEndedError):
            self.close()
            raise
        return replace(found, outlook=outlook), damped and replace(damped, outlook=outlook)

    def close(self) -> None:
        """End the process, whatever it does."""
        if self._process is not None and self._line is not None:
            self._process.terminate()
            self._process.join()
            self._line.close()
        self._process = self._line = None

    def _running(self) -> tuple[SpawnProcess, Connection]:
        if self._process is None or self._line is None or not self._process.is_alive():
            self.close()
            context = multiprocessing.get_context("spawn")
            self._line, theirs = context.Pipe()
            self._process = context.Process(target=serve, args=(theirs,), daemon=True)
            self._process.start()
            theirs.close()
        return self._process, self._line


class ProcessEndedError(KeepclearError):
    """The other process ended by itself."""


def await_answer(
    process: SpawnProcess, line: Connection, stopped: Callable[[], bool], progress: _Progress
) -> Any:
    """Return what the other process found, passing its progress on."""
    while not stopped():
        if not line.poll(_LOOK_ROUND_S):
            continue
        try:
            kind, content = line.recv()
        except (EOFError, OSError):
            process.join()
            raise ProcessEndedError(
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


def _lean(solution: Any) -> Any:
    """Leave out what who asked has already, and the shares nobody is shown: they are most of the sending."""
    modes = tuple(
        replace(
            mode,
            strain=mode.strain[:SHARES_SENT],
            kinetic=mode.kinetic[:SHARES_SENT],
            sensitivity=(),
        )
        for mode in solution.modes
    )
    raw = replace(solution.raw, shapes=solution.raw.shapes[:, :0])
    return replace(solution, outlook=None, modes=modes, raw=raw)


def serve(line: Connection) -> None:
    """Run in the other process: solve the models that come until the line is closed."""
    from modalview.assembly.dampedterms import has_dashpots  # noqa: PLC0415  (in the other process only)
    from modalview.study import solve  # noqa: PLC0415
    from modalview.study.damped import damped  # noqa: PLC0415
    from modalview.study.results import Request  # noqa: PLC0415

    previous = None
    while True:
        try:
            model = line.recv()
        except EOFError:
            return
        request = Request(model, progress=lambda what, share: line.send(("progress", (what, share))))
        try:
            found = solve(request, previous)
            previous = found.outlook
            dying = None
            if has_dashpots(previous.assembly):
                dying = replace(damped(request, found), outlook=None, raw=None)
            answer = "found", (_lean(found), dying)
        except KeepclearError as error:
            answer = "refused", str(error)
        except Exception:  # noqa: BLE001  (the other process has nobody else to tell)
            answer = "failed", traceback.format_exc()
        line.send(answer)
