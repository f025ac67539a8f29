"""Modes passed on run-up, and speeds, as text and as JSON."""

import math
from collections.abc import Sequence
from typing import Any

from modalview.cli.table import table, wrapped
from modalview.response.runup import Passage
from modalview.study.runup import QUASI_STEADY
from modalview.units.show import short, significant

RPM = 2 * math.pi / 60
# More modes than this are not listed one by one.
MOST_PASSED = 24


def rpm_text(speed: float) -> str:
    """Return a machine speed (rad/s) to four digits, or to whole rpm."""
    rpm = speed / RPM
    return short(rpm, 4) if rpm < 9999.5 else short(round(rpm))


def rpm_range(speeds: tuple[float, float]) -> str:
    """Return "1324 to 1733 rpm"."""
    return f"{rpm_text(speeds[0])} to {rpm_text(speeds[1])} rpm"


def run_up_text(passed: Sequence[Passage] | None) -> str:
    """Return a table of the modes passed on run-up; empty where there are none."""
    if passed is None:
        return "Modes passed on run-up are not told: of so many modes only those near excitations are found."
    if not passed:
        return ""
    timed = any(one.cycles is not None for one in passed)
    head = ["passed on run-up", "mode", "at", "over tolerance"]
    rows = [[*head, "in its half-power band"] if timed else head]
    rows += [_row(one, timed=timed) for one in passed[:MOST_PASSED]]
    told = [table(rows, right=frozenset({1, 2}))]
    if len(passed) > MOST_PASSED:
        told.append(f"and {len(passed) - MOST_PASSED} more: --json lists all.")
    told.append(wrapped("From standstill to the lowest speed; without a verdict.", "  "))
    if not all(one.at_nominal for one in passed):
        told.append("In brackets: passed at some values within tolerance, not at nominal ones.")
    if timed:
        told.append(wrapped(f"{QUASI_STEADY}.", "  "))
    return "\n".join(told)


def _row(one: Passage, *, timed: bool) -> list[str]:
    toleranced = one.speeds[1] > one.speeds[0] * (1 + 1e-9)
    cells = [
        one.label,
        str(one.mode),
        f"{rpm_text(one.speed)} rpm" if one.at_nominal else f"({rpm_text(one.speed)} rpm)",
        rpm_range(one.speeds) if toleranced else "as given",
    ]
    return [*cells, _haste(one)] if timed else cells


def _haste(one: Passage) -> str:
    """Return how a mode is passed: "7.0 cycles in 0.14 s: fast"."""
    if one.cycles is None or one.seconds is None:
        return "no damping given"
    word = "slow" if one.quasi_steady else "fast"
    return f"{significant(one.cycles, 2)} cycles in {significant(one.seconds, 2)} s: {word}"


def run_up_document(passed: Sequence[Passage] | None) -> list[dict[str, Any]] | None:
    """Return the modes passed on run-up for JSON; null where not all modes are known."""
    if passed is None:
        return None
    return [passage_document(one) for one in passed]


def passage_document(one: Passage) -> dict[str, Any]:
    """Return one mode passed on run-up for JSON."""
    return {
        "check": one.check,
        "mode": one.mode,
        "speed_rpm": one.speed / RPM,
        "range_rpm": rpm_pair(one.speeds),
        "at_nominal": one.at_nominal,
        "damping_ratio": one.damping_ratio,
        "half_power_s": one.seconds,
        "half_power_cycles": one.cycles,
        "quasi_steady": one.quasi_steady,
    }


def rpm_pair(speeds: tuple[float, float]) -> list[float]:
    """Return two speeds (rad/s) in rpm."""
    return [speed / RPM for speed in speeds]
