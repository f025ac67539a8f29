"""Keeps searches for garbage from stopping the window while a thread makes many objects."""

import gc
from collections.abc import Iterator
from contextlib import contextmanager

# Containers made in one go that are worth to be left out of all later searches for garbage.
MANY_OBJECTS = 20_000


@contextmanager
def few_collections() -> Iterator[None]:
    """Search for no garbage meanwhile, and never again in what was made, if that is much.

    A search through all objects holds the interpreter lock: 3 ms for a model of 333 bodies, a third of a
    second for one of 100,000, again and again while it is read. A model has no cycles: it goes without.
    """
    before = gc.get_count()[0]
    gc.disable()
    try:
        yield
    finally:
        many = gc.get_count()[0] - before > MANY_OBJECTS
        gc.enable()
        if many:
            gc.freeze()
