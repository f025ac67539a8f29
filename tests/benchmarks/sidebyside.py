"""Times two things in turn, so that a machine whose speed drifts gives honest ratios."""

from collections.abc import Callable
from dataclasses import dataclass
from statistics import median
from time import perf_counter
from typing import Any


@dataclass(frozen=True, slots=True)
class Pair:
    """Medians in seconds, and the median of the ratios pair by pair."""

    first: float
    second: float
    ratio: float

    def __str__(self) -> str:
        return f"{1e3 * self.first:9.2f} ms  {1e3 * self.second:9.2f} ms  ratio {self.ratio:.2f}"


def in_turn(first: Callable[[], Any], second: Callable[[], Any], rounds: int = 15) -> Pair:
    """Run both in turn, A B A B, after one unmeasured round."""
    first()
    second()
    pairs = [(_seconds(first), _seconds(second)) for _ in range(rounds)]
    return Pair(median(a for a, _ in pairs), median(b for _, b in pairs), median(a / b for a, b in pairs))


def _seconds(run: Callable[[], Any]) -> float:
    start = perf_counter()
    run()
    return perf_counter() - start
