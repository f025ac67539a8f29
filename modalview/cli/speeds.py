"""keepclear speeds: which speeds of a machine its orders leave clear, and where each order meets a mode."""

import argparse
from collections.abc import Sequence
from pathlib import Path
from typing import Any

from modalview.cli.documents import head
from modalview.cli.printing import NOT_CLEAR, OK, progress, say, say_json
from modalview.cli.speedtexts import RPM, rpm_pair, rpm_range, rpm_text, run_up_document
from modalview.cli.table import table, wrapped
from modalview.cli.texts import tail, title_line
from modalview.errors import InputError
from modalview.resonance.meetings import Meeting, OrderLine
from modalview.resonance.results import Check, Verdict
from modalview.resonance.speedruns import State
from modalview.resonance.wording import margin_text
from modalview.store import read_model
from modalview.study import FoundMode, Request, Solution, solve
from modalview.study.campbell import Campbell, ProvenRun, campbell, is_left
from modalview.study.near import require_all_modes
from modalview.study.runup import passed_on_run_up
from modalview.units.show import short, significant

RAD_PER_HZ = 60 * RPM
NOTHING = (
    "No machine has both a speed and an excitation: there is nothing to hold against the modes. Give one its "
    "speed and its orders."
)
FORMULA = (
    "over tolerance: speeds at which the order is on the mode; within margin: speeds whose band holds the "
    "mode at nominal values; keep clear of: the same at any values within tolerance"
)


def prepare(parser: argparse.ArgumentParser) -> None:
    """Declare the words of the command."""
    parser.add_argument("file", type=Path, metavar="FILE", help="a .keepclear file")
    parser.add_argument("--json", action="store_true", help="print JSON: SI, with the unit in each key")
    parser.set_defaults(run=run)


def run(words: argparse.Namespace) -> int:
    """Print what is left of each machine's speeds; 0 when all of it is clear, 1 otherwise."""
    model = read_model(words.file)
    require_all_modes(model)
    solution = solve(Request(model, progress=progress))
    found = campbell(solution)
    if not found:
        raise InputError(NOTHING)
    if words.json:
        say_json(speeds_document(words.file, solution, found))
    else:
        say(speeds_text(solution, found))
    return OK if _worst(found) is Verdict.CLEAR else NOT_CLEAR


def _worst(found: Sequence[Campbell]) -> Verdict:
    order = list(Verdict)
    return max((one.verdict or Verdict.CLEAR for one in found), key=order.index)


def speeds_text(solution: Solution, found: Sequence[Campbell]) -> str:
    """Return the speeds of every machine as tables."""
    parts = [title_line(solution.outlook)]
    for one in found:
        parts += [wrapped(one.sentence), _runs_table(one), wrapped(_rule(one), "  ")]
        near = _near(one)
        if near:
            parts += [_meetings_table(one, near), wrapped(FORMULA, "  ")]
        if one.fixed:
            parts.append(_fixed_table(one.fixed))
    return "\n\n".join(parts + tail(solution.outlook))


def _rule(one: Campbell) -> str:
    """Say what was divided and how ends are rounded."""
    own, looked = one.speeds_rpm, one.considered_rpm
    around = ""
    if own[0] == own[1]:
        around = f"Looked at: {short(looked[0])} to {short(looked[1])} rpm, around the one speed given. "
    return (
        f"{around}Clear: proven by counts for every order over the whole run, at any values within "
        "tolerance. Ends are rounded so that less is clear, never more."
    )


def _runs_table(one: Campbell) -> str:
    rows = [["speeds", "verdict", "what meets there"]]
    rows += [[_run_speeds(each), each.wording, _names(each.run.meetings)] for each in one.runs]
    return table(rows)


def _run_speeds(each: ProvenRun) -> str:
    low, high = short(each.run.low), short(each.run.high)
    return f"{low} rpm" if low == high else f"{low} to {high} rpm"


def _names(meetings: Sequence[Meeting]) -> str:
    modes: dict[str, list[str]] = {}
    for one in meetings:
        modes.setdefault(one.label, []).append(str(one.mode))
    return "; ".join(
        f"{label} and mode{'s' if len(numbers) > 1 else ''} {', '.join(numbers)}"
        for label, numbers in modes.items()
    )


def _near(one: Campbell) -> list[Meeting]:
    """Return the meetings that reach into the speeds looked at; those below are passed on run-up."""
    low, high = one.considered_rpm
    return [each for each in one.meetings if each.reach[1] / RPM >= low and each.reach[0] / RPM <= high]


def _meetings_table(one: Campbell, near: Sequence[Meeting]) -> str:
    modes = {mode.number: mode for mode in one.modes}
    rows = [["order", "mode", "meet at", "over tolerance", "within margin", "keep clear of"]]
    rows += [
        [
            each.label,
            _mode(each.mode, modes),
            f"{rpm_text(each.speed)} rpm",
            rpm_range(each.over_tolerance),
            rpm_range(each.within_margin),
            rpm_range(each.reach),
        ]
        for each in near
    ]
    return table(rows, right=frozenset({2}))


def _mode(number: int, modes: dict[int, FoundMode]) -> str:
    mode = modes.get(number)
    return str(number) if mode is None else f"{number} at {significant(mode.frequency_hz, 4)} Hz"


def _fixed_table(fixed: Sequence[Check]) -> str:
    rows = [["fixed frequency", "margin", "verdict at every speed"]]
    return table([*rows, *([c.band.label, margin_text(c.band.margin), c.wording] for c in fixed)])


def speeds_document(path: Path, solution: Solution, found: Sequence[Campbell]) -> dict[str, Any]:
    """Return the speeds of every machine for JSON."""
    passed = run_up_document(passed_on_run_up(solution)) or []
    return {
        **head(path, solution.outlook),
        "verdict": _worst(found).value,
        "machines": [_machine(one, passed) for one in found],
        "notes": list(solution.outlook.notes),
    }


def _machine(one: Campbell, passed: Sequence[dict[str, Any]]) -> dict[str, Any]:
    checks = {line.check for line in one.lines}
    return {
        "machine": one.machine.id,
        "verdict": one.verdict.value if one.verdict else None,
        "sentence": one.sentence,
        "speed_rpm": list(one.speeds_rpm),
        "considered_rpm": list(one.considered_rpm),
        "left_rpm": one.left_rpm,
        "lines": [_line(line) for line in one.lines],
        "modes": [
            {"number": m.number, "frequency_hz": m.frequency_hz, "range_hz": list(m.range_hz)}
            for m in one.modes
        ],
        "meetings": [_meeting(each) for each in one.meetings],
        "runs": [_run(each) for each in one.runs],
        "fixed": [{"check": c.band.check, "verdict": c.verdict.value, "reason": c.reason} for c in one.fixed],
        "run_up": [each for each in passed if each["check"] in checks],
    }


def _line(line: OrderLine) -> dict[str, Any]:
    fixed = line.order is None
    return {
        "check": line.check,
        "label": line.label,
        "order": line.order,
        "hz_per_rpm": None if fixed else line.rate / 60,
        "frequency_hz": line.fixed / RAD_PER_HZ if fixed else None,
        "margin_percent": [100 * side for side in line.margin],
    }


def _meeting(one: Meeting) -> dict[str, Any]:
    return {
        "check": one.check,
        "mode": one.mode,
        "speed_rpm": one.speed / RPM,
        "range_rpm": rpm_pair(one.over_tolerance),
        "within_margin_rpm": rpm_pair(one.within_margin),
        "keep_clear_rpm": rpm_pair(one.reach),
    }


def _run(each: ProvenRun) -> dict[str, Any]:
    return {
        "from_rpm": each.run.low,
        "to_rpm": each.run.high,
        "verdict": each.verdict.value,
        "wording": each.wording,
        "left": is_left(each),
        "barred": each.run.state is State.BARRED,
        "meets": [{"check": one.check, "mode": one.mode} for one in each.run.meetings],
    }
