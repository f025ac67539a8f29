"""The other process: studies the models that come over the line."""

import signal
import traceback
from collections.abc import Callable
from multiprocessing.connection import Connection
from multiprocessing.synchronize import Event
from typing import Any

from modalview.errors import CancelledError, KeepclearError
from modalview.model.parts import Model
from modalview.ui.parcels import Piece, packed, put_together
from modalview.ui.studies import Find, Step, Studies
from modalview.ui.studydoor import load_study

# What is sent to the process, beside pieces of a model.
STUDY, FORGET = "study", "forget"
# What ends the answers to one order.
DONE = "done"


def main(line: Connection, stop: Event) -> None:
    """Run in the other process until the line is closed."""
    # Ctrl+C in the terminal goes to all processes; the window ends this one itself.
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    serve(line, stop.is_set)


def serve(line: Connection, stopped: Callable[[], bool]) -> None:
    """Study the models that come until the line is closed."""
    studies = Studies(load_study())
    model: Model | None = None
    received: list[Piece] = []
    while True:
        try:
            message = line.recv()
        except EOFError:
            return
        if message == FORGET:
            model, received = None, []
        elif message[0] == STUDY:
            model, received = put_together(model, received), []
            _answer(line, studies, model, message[1], stopped)
        else:
            received.append(message)


def _answer(
    line: Connection, studies: Studies, model: Model, find: Find, stopped: Callable[[], bool]
) -> None:
    def tell(step: Step, content: Any) -> None:
        line.send((step, packed(step, content)))

    try:
        studies.work(model, find, stopped, tell)
    except CancelledError:
        line.send((Step.STOPPED, None))
    except KeepclearError as error:
        line.send((Step.REFUSED, str(error)))
    except Exception:  # noqa: BLE001  (the other process has nobody else to tell)
        line.send((Step.FAILED, traceback.format_exc()))
    line.send((DONE, None))
