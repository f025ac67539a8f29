"""Times two things in turn, so that a machine whose speed drifts gives honest ratios."""

from collections.abc import Callable
from dataclasses import dataclass
from statistics import median
from time import perf_counter
from typing import Any


@dataclass(frozen=True, slots=True)
class Pair:
    """Medians in seconds, the median of the ratios pair by pair, and the ratio of the shortest times."""

    first: float
    second: float
    ratio: float
    quietest: float

    def __str__(self) -> str:
        times = f"{1e3 * self.first:9.2f} ms  {1e3 * self.second:9.2f} ms"
        return f"{times}  ratio {self.ratio:.2f} (quietest {self.quietest:.2f})"


def in_turn(first: Callable[[], Any], second: Callable[[], Any], rounds: int = 15) -> Pair:
    """Run both in turn, A B A B, after one unmeasured round."""
    first()
    second()
    pairs = [(_seconds(first), _seconds(second)) for _ in range(rounds)]
    own, others = zip(*pairs, strict=True)
    return Pair(median(own), median(others), median(a / b for a, b in pairs), min(own) / min(others))


def _seconds(run: Callable[[], Any]) -> float:
    start = perf_counter()
    run()
    return perf_counter() - start
