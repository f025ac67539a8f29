"""Lets who lays a large sheet out in a thread pause it between its pieces."""

from collections.abc import Callable, Iterable, Iterator
from contextlib import contextmanager
from contextvars import ContextVar
from typing import TypeVar

T = TypeVar("T")

# Bodies or links in one piece: a third of a millisecond, about.
PIECE = 16


def _go_on() -> None:
    """Pause not at all."""


_pause: ContextVar[Callable[[], None]] = ContextVar("pause", default=_go_on)


@contextmanager
def pausing(pause: Callable[[], None]) -> Iterator[None]:
    """Let ``pause`` be called between the pieces of what is laid out in this thread meanwhile."""
    token = _pause.set(pause)
    try:
        yield
    finally:
        _pause.reset(token)


def between_pieces() -> None:
    """Pause, where whoever asked for the sheet wants it."""
    _pause.get()()


def in_pieces(items: Iterable[T]) -> Iterator[T]:
    """Yield all items, with pauses."""
    pause = _pause.get()
    for number, item in enumerate(items):
        if number % PIECE == 0:
            pause()
        yield item
