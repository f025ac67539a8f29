"""Keeps searches for garbage from stopping the window while a thread makes many objects."""

import gc
from collections.abc import Iterator
from contextlib import contextmanager
from threading import Lock
from time import monotonic

# Containers made in one go that are worth to be left out of all later searches for garbage.
MANY_OBJECTS = 20_000
# Work of this length may have made as many, of which only fewer are told: objects let go of meanwhile count
# against them.
LONG_S = 0.3

_change = Lock()
_inside = 0


@contextmanager
def few_collections() -> Iterator[None]:
    """Search for no garbage meanwhile, and never again in what was made, if that is much.

    A search through all objects holds the interpreter lock: 3 ms for a model of 333 bodies, a third of a
    second for one of 100,000, again and again while it is read. A model has no cycles: it goes without.
    Several threads may be inside at a time; searches begin again when the last has left.
    """
    before, start = gc.get_count()[0], monotonic()
    _step(1)
    try:
        yield
    finally:
        if gc.get_count()[0] - before > MANY_OBJECTS or monotonic() - start > LONG_S:
            gc.freeze()  # before the first search, which would go through all of it
        _step(-1)


def _step(by: int) -> None:
    global _inside  # noqa: PLW0603  (the switch is one for the whole process too)
    with _change:
        _inside += by
        if _inside:
            gc.disable()
        else:
            gc.enable()
