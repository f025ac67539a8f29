"""Work in chunks, here or by any executor of ``concurrent.futures``, with progress and a way to stop it."""

from collections.abc import Callable, Sequence
from concurrent.futures import FIRST_COMPLETED, Executor, Future, wait
from dataclasses import dataclass
from typing import TypeVar

from modalview.eigen.threads import one_blas_thread
from modalview.errors import CancelledError
from modalview.study.results import never

Task = TypeVar("Task")
Found = TypeVar("Found")

# How often a person's wish to stop is looked for while others compute, s.
LOOKED_FOR = 0.1


@dataclass(frozen=True, slots=True)
class Errand:
    """How chunks are worked on.

    Parameters
    ----------
    what : str
        For progress.
    cancelled : callable
        Asked between chunks.
    progress : callable or None
        Told (what is done, share done 0..1).
    executor : Executor or None
        None: here, one after the other.
    """

    what: str
    cancelled: Callable[[], bool] = never
    progress: Callable[[str, float], None] | None = None
    executor: Executor | None = None

    def done(self, share: float) -> None:
        """Tell the share done; raise CancelledError where the person stopped it."""
        if self.cancelled():
            raise CancelledError(f"Stopped by the user: {self.what}.")
        if self.progress is not None:
            self.progress(self.what, share)


def in_chunks(errand: Errand, work: Callable[[Task], Found], tasks: Sequence[Task]) -> list[Found]:
    """Return what ``work`` makes of every task, in their order.

    Parameters
    ----------
    errand : Errand
    work : callable
        A pure function of a module, so that it can be sent to another process; like its tasks.
    tasks : sequence

    Raises
    ------
    CancelledError
        Tasks that were not begun are called off.
    """
    errand.done(0.0)
    if errand.executor is None:
        found = []
        for number, task in enumerate(tasks, 1):
            found.append(_alone(work, task))
            errand.done(number / len(tasks))
        return found
    futures = [errand.executor.submit(_alone, work, task) for task in tasks]
    try:
        _wait(errand, futures)
        return [future.result() for future in futures]
    finally:
        for future in futures:
            future.cancel()


def _wait(errand: Errand, futures: Sequence[Future[Found]]) -> None:
    left = set(futures)
    while left:
        finished, left = wait(left, timeout=LOOKED_FOR, return_when=FIRST_COMPLETED)
        for future in finished:
            future.result()  # a failure ends the errand at once
        errand.done(1 - len(left) / len(futures))


def _alone(work: Callable[[Task], Found], task: Task) -> Found:
    # Workers share the cores among themselves.
    with one_blas_thread():
        return work(task)
