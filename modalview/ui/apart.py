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
            sent, damped = await_answer(process, line, stopped, progress)
        except (CancelledError, ProcessEndedError):
            self.close()
            raise
        return replace(unpacked(sent), outlook=outlook), damped and replace(damped, outlook=outlook)

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


_SHARES = ("strain", "kinetic", "effective_mass")
_PLAIN = ("number", "name", "frequency_hz", "numerical_error_hz", "range_hz", "kind", "repeated_with")


def packed(solution: Any) -> tuple[Any, Any, Any]:
    """Return a solution as what is quick to read back: no outlook, no shapes, modes as plain tuples.

    Unpickling objects of our own classes holds the interpreter lock: 10,000 of them for a tenth of a second.
    """
    raw = replace(solution.raw, shapes=solution.raw.shapes[:, :0])
    rest = replace(solution, outlook=None, modes=(), raw=raw)
    plain = [
        (
            tuple(getattr(mode, name) for name in _PLAIN),
            tuple(
                tuple((one.id, one.label, one.fraction) for one in getattr(mode, name)[:SHARES_SENT])
                for name in _SHARES
            ),
        )
        for mode in solution.modes
    ]
    return rest, plain, _stacked(solution.modes)


def _stacked(modes: Any) -> Any:
    import numpy as np  # noqa: PLC0415  (in the other process only)

    return np.stack([mode.motion for mode in modes]) if modes else []


def unpacked(sent: tuple[Any, Any, Any]) -> Any:
    """Return the solution that was packed; sensitivities and shapes stay behind."""
    from modalview.study.results import FoundMode, Share  # noqa: PLC0415  (numpy comes later)

    rest, plain, motions = sent
    modes = []
    for (values, shares), motion in zip(plain, motions, strict=True):
        motion.setflags(write=False)
        named = {name: tuple(Share(*one) for one in some) for name, some in zip(_SHARES, shares, strict=True)}
        modes.append(
            FoundMode(**dict(zip(_PLAIN, values, strict=True)), **named, sensitivity=(), motion=motion)
        )
    return replace(rest, modes=tuple(modes))


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
            answer = "found", (packed(found), dying)
        except KeepclearError as error:
            answer = "refused", str(error)
        except Exception:  # noqa: BLE001  (the other process has nobody else to tell)
            answer = "failed", traceback.format_exc()
        line.send(answer)
