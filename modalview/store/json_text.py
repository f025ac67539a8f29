"""JSON as the file holds it, with the faults that a plain reader would swallow.

A key given twice, and NaN or Infinity, are kept in the tree, so that the walker can report them with
their place and along with every other fault.
"""

import json
from collections import Counter
from typing import Any

from modalview.errors import Fault, FileFaultsError


class JsonMap(dict[str, Any]):
    """A JSON object that remembers which of its keys came more than once."""

    __slots__ = ("repeated",)

    def __init__(self, pairs: list[tuple[str, Any]]) -> None:
        super().__init__(pairs)
        self.repeated: tuple[str, ...] = ()
        if len(self) != len(pairs):
            times = Counter(key for key, _ in pairs)
            self.repeated = tuple(key for key in self if times[key] > 1)


class NotFinite:
    """Stands for NaN, Infinity or -Infinity, which JSON does not know."""

    __slots__ = ("word",)

    def __init__(self, word: str) -> None:
        self.word = word


def decode(text: str) -> Any:
    """Return the tree of a JSON text, objects as `JsonMap`.

    Raises
    ------
    FileFaultsError
        When it is not JSON at all, with line and column.
    """
    if not text.strip():
        raise FileFaultsError((Fault("", "the file is empty; a model starts with { and ends with }"),))
    try:
        return json.loads(text, object_pairs_hook=JsonMap, parse_constant=NotFinite)
    except json.JSONDecodeError as fault:
        place = f"line {fault.lineno}, column {fault.colno}"
        raise FileFaultsError((Fault(place, f"this is not JSON: {fault.msg}"),)) from None
    except RecursionError:
        raise FileFaultsError(
            (Fault("", "objects or lists are nested far too deeply for a model"),)
        ) from None
    except ValueError as fault:  # a whole number of thousands of digits
        raise FileFaultsError((Fault("", f"a number cannot be read: {fault}"),)) from None
