"""The check bank: cases with expected figures, their tolerances and sources (README.md here)."""

import json
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

BANK = Path(__file__).with_name("checks.json")

GROUPS = ("A", "B", "C", "D", "E", "F", "G", "H", "I")


@dataclass(frozen=True, slots=True)
class Figure:
    """One expected figure of a case."""

    case: dict[str, Any]
    name: str
    expected: Any
    tolerance: dict[str, Any]

    @property
    def id(self) -> str:
        return f"{self.case['id']}-{self.name}"

    def check(self, found: Any) -> None:
        """Fail unless ``found`` is within tolerance, telling the source of what was expected."""
        source = self.case["source"]
        told = (
            f"{self.case['id']} {self.case['title']}: {self.name}\n"
            f"expected {self.expected}\n   found {found}\n"
            f"tolerance {self.tolerance}: {self.case['tolerance_reason']}\n"
            f"source: {source['citation']} ({source['status']})"
        )
        assert self._agrees(self.expected, found), told

    def _agrees(self, expected: Any, found: Any) -> bool:
        if isinstance(expected, list):
            return (
                isinstance(found, Sequence)
                and len(found) == len(expected)
                and all(self._agrees(one, other) for one, other in zip(expected, found, strict=True))
            )
        if self.tolerance.get("exact"):
            return type(expected) is type(found) and bool(expected == found)
        allowed = self.tolerance.get("abs", 0.0) + self.tolerance.get("rel", 0.0) * abs(expected)
        return bool(abs(found - expected) <= allowed)


@cache
def cases() -> dict[str, dict[str, Any]]:
    """Return every case by its id."""
    return {case["id"]: case for case in json.loads(BANK.read_text(encoding="utf-8"))}


def figures(group: str) -> list[Figure]:
    """Return every expected figure of the cases of a group."""
    return [
        Figure(case, one["name"], one["value"], one["tolerance"])
        for case in cases().values()
        if case["group"] == group
        for one in case["expected"]
    ]
