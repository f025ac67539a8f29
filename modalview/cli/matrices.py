"""The commands on matrices of others: --stiffness and --mass in place of a file."""

import argparse
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from modalview.cli import documents, texts
from modalview.cli.matrices_document import modes_document, near_document
from modalview.cli.near_document import history_text
from modalview.cli.printing import OK, progress, say, say_json, verdict_code
from modalview.errors import UnitError, UsageError
from modalview.model.parts import Excitation, Machine, Model, SpeedRange
from modalview.model.rules import faults
from modalview.model.values import Entry
from modalview.store.matrices import read_pair
from modalview.study import MatrixRequest, look_at_matrices, solve_matrices
from modalview.study.completed import RAD_PER_HZ
from modalview.study.matrices import require_modes, solve_matrices_near
from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.show import short

Run = Callable[[argparse.Namespace], int]

MACHINE = "machine"
# Modes near a frequency, where their number is not given.
NEAR = 6
_NOTHING = (
    "Nothing to check: name what is to be kept clear by --orders with --speed (or --speed-from and "
    "--speed-to), or by --frequencies, and the distance wanted by --margin."
)
_PLAIN = re.compile(r"[+-]?(\d{1,9}\.?\d{0,9}|\.\d{1,9})", re.ASCII)


@dataclass(frozen=True, slots=True)
class Word:
    """One option that goes with --stiffness.

    Parameters
    ----------
    name : str
        Without dashes.
    example : str
        Shown in its place.
    about : str
        For --help.
    quantity : Quantity or None
        What is typed; None for a file or a list.
    """

    name: str
    example: str
    about: str
    quantity: Quantity | None = None


STIFFNESS = Word("stiffness", "K.mtx", "a stiffness matrix in Matrix Market form (.mtx, .mtx.gz), N/m")
WORDS = (
    Word("mass", "M.mtx", "its mass matrix, kg; without one, 1 kg at every coordinate"),
    Word("speed", '"2950 rpm"', "speed of the machine", q.SPEED),
    Word("speed-from", '"600 rpm"', "lowest speed, with --speed-to", q.SPEED),
    Word("speed-to", '"1480 rpm"', "highest speed, with --speed-from", q.SPEED),
    Word("speed-tolerance", '"2 %"', "how far the speed may lie off to either side", q.RATIO),
    Word("orders", "1,2,7", "multiples of the speed to be kept clear"),
    Word("frequencies", '"100 Hz,200 Hz"', "fixed frequencies to be kept clear"),
    Word("margin", '"15 %"', "distance wanted on either side of each; it has no default", q.RATIO),
    Word("tolerance-k", '"10 %"', "how far the whole stiffness matrix may lie off, by one factor", q.RATIO),
    Word("tolerance-m", '"3 %"', "how far the whole mass matrix may lie off, by one factor", q.RATIO),
)
FILES = ("stiffness", "mass")


def add_words(parser: argparse.ArgumentParser) -> None:
    """Add the options of matrices to a command."""
    group = parser.add_argument_group(
        "matrices of others", "in place of FILE; SI is assumed; what needs parts (names, shares) is absent"
    )
    for word in (STIFFNESS, *WORDS):
        kind = Path if word.name in FILES else str
        about = word.about.replace("%", "%%")
        group.add_argument(f"--{word.name}", type=kind, metavar=word.example, help=about)


def either(of_file: Run, of_matrices: Run) -> Run:
    """Return a command that runs on a file or on matrices, whichever the words name."""

    def run(words: argparse.Namespace) -> int:
        named = words.files if "files" in words else words.file
        if words.stiffness is None:
            lone = [word.name for word in WORDS if _given(words, word.name) is not None]
            if lone:
                raise UsageError(f"--{lone[0]} goes with --stiffness; a .keepclear file holds its own values")
            if not named:
                raise UsageError("name a FILE (.keepclear), or a stiffness matrix by --stiffness K.mtx")
            return of_file(words)
        if named:
            raise UsageError("a .keepclear file and --stiffness are two models; name one of them")
        if getattr(words, "exact", False):
            raise UsageError("--exact goes with a .keepclear file: entries of matrices are rounded already")
        return of_matrices(words)

    return run


def run_bounds(words: argparse.Namespace) -> int:
    """Print what is known of matrices before a solve."""
    outlook = look_at_matrices(request_of(words))
    _print(
        words, lambda: documents.bounds_document(words.stiffness, outlook), lambda: texts.bounds_text(outlook)
    )
    return OK


def run_modes(words: argparse.Namespace) -> int:
    """Print the modes of matrices, all or those near a frequency."""
    if words.near is not None:
        return _run_near(words)
    if words.count is not None:
        raise UsageError("--count goes with --near: how many modes near that frequency")
    solution = solve_matrices(request_of(words))
    raw = require_modes(solution)
    _print(words, lambda: modes_document(words.stiffness, solution, raw), lambda: texts.modes_text(solution))
    return OK


def near_frequency(words: argparse.Namespace) -> float:
    """Return the frequency of ``--near``, Hz."""
    entry = _entry("near", words.near, q.FREQUENCY)
    if entry.si < 0:
        raise UsageError(f'--near must not be negative; found "{entry.text}"')
    return entry.si / RAD_PER_HZ


def _run_near(words: argparse.Namespace) -> int:
    frequency = near_frequency(words)
    count = NEAR if words.count is None else words.count
    request = request_of(words)
    solution, found = solve_matrices_near(request, frequency, count)
    path = words.stiffness
    _print(words, lambda: near_document(path, solution, found), lambda: texts.modes_text(solution))
    if words.history and not words.json:
        say("\n" + history_text(found))
    return OK


def run_check(words: argparse.Namespace) -> int:
    """Print the verdicts on matrices."""
    path, solution = words.stiffness, solve_matrices(request_of(words))
    if not solution.checks:
        solution = replace(solution, sentence=_NOTHING)
    _print(words, lambda: documents.check_document(path, solution), lambda: texts.check_text(path, solution))
    return verdict_code(solution.outlook.verdict)


def _print(words: argparse.Namespace, document: Callable[[], Any], text: Callable[[], str]) -> None:
    if words.json:
        say_json(document())
    else:
        say(text())


def request_of(words: argparse.Namespace) -> MatrixRequest:
    """Return what the words ask for.

    Raises
    ------
    UsageError
        Naming the option, what is wrong with it and what to do.
    FileFaultsError, FileAccessError
        A matrix cannot be read.
    """
    machines = _machines(words)
    tolerance_k, tolerance_m = _share(words, "tolerance-k"), _share(words, "tolerance-m")
    pair = read_pair(words.stiffness, words.mass)
    return MatrixRequest(pair, machines, tolerance_k, tolerance_m, progress=progress)


def _machines(words: argparse.Namespace) -> tuple[Machine, ...]:
    excitations = (*_orders(words), *_frequencies(words))
    speed = _speed(words)
    if not excitations:
        idle = [name for name in ("speed", "speed-from", "margin") if _given(words, name) is not None]
        if idle:
            raise UsageError(f"--{idle[0]} needs --orders or --frequencies: what is to be kept clear")
        return ()
    _check_given(words, speed)
    machine = Machine(
        id=MACHINE,
        speed=speed,
        speed_tolerance=_typed(words, "speed-tolerance", q.RATIO),
        margin=_typed(words, "margin", q.RATIO),
        excitations=excitations,
    )
    broken = faults(Model(machines=(machine,)))
    if broken:
        ranged = isinstance(speed, SpeedRange)
        raise UsageError(
            "; ".join(f"{_option(fault.path, ranged=ranged)} {fault.reason}" for fault in broken)
        )
    return (machine,)


def _check_given(words: argparse.Namespace, speed: Entry | SpeedRange | None) -> None:
    """Name the option that is missing, where the rules would speak of the file."""
    if words.orders is not None and speed is None:
        raise UsageError("--orders are multiples of a speed: give --speed, or --speed-from and --speed-to")
    if words.margin is None:
        raise UsageError(
            '--margin is missing: the distance wanted, such as --margin "15 %"; it has no default'
        )


def _option(path: str, *, ranged: bool) -> str:
    """Return the option that a fault of the machine belongs to."""
    if "excitations[" in path:
        return "--frequencies:" if path.endswith("frequency") else "--orders:"
    key = path.rsplit('" . ', 1)[-1]
    if key == "speed" and ranged:
        return "--speed-from and --speed-to:"
    names = {"speed . from": "speed-from", "speed . to": "speed-to", "speed_tolerance": "speed-tolerance"}
    return f"--{names.get(key, key)}"


def _speed(words: argparse.Namespace) -> Entry | SpeedRange | None:
    one, low, high = (_typed(words, name, q.SPEED) for name in ("speed", "speed-from", "speed-to"))
    if (low is None) != (high is None):
        raise UsageError("a speed range has both ends: --speed-from and --speed-to")
    if one is not None and low is not None:
        raise UsageError("--speed is one speed, --speed-from and --speed-to are a range; give one of them")
    return SpeedRange(from_=low, to=high) if low is not None and high is not None else one


def _orders(words: argparse.Namespace) -> list[Excitation]:
    found = []
    for text in _listed(words, "orders"):
        if not _PLAIN.fullmatch(text):
            raise UsageError(f"--orders wants numbers, such as 1,2,7; found {text!r}")
        order = float(text)
        found.append(Excitation(id=f"{short(order, 12)}x", order=order))
    return found


def _frequencies(words: argparse.Namespace) -> list[Excitation]:
    texts = _listed(words, "frequencies")
    if any(_PLAIN.fullmatch(text) for text in texts):
        raise UsageError(
            "--frequencies wants numbers with a unit, parted by commas and with decimal points, such as "
            f'"99.5 Hz,200 Hz"; found "{words.frequencies}"'
        )
    return [Excitation(id=text, frequency=_entry("frequencies", text, q.FREQUENCY)) for text in texts]


def _listed(words: argparse.Namespace, name: str) -> Sequence[str]:
    given = _given(words, name)
    return [] if given is None else [part.strip() for part in given.split(",")]


def _share(words: argparse.Namespace, name: str) -> float:
    entry = _typed(words, name, q.RATIO)
    if entry is None:
        return 0.0
    if not 0 <= entry.si < 1:
        meant = f'; write "{entry.text} %"' if entry.text.strip().isdecimal() and entry.si < 100 else ""
        raise UsageError(f"--{name} is a share from 0 % to below 100 %; found {entry.text!r}{meant}")
    return entry.si


def _typed(words: argparse.Namespace, name: str, quantity: Quantity) -> Entry | None:
    text = _given(words, name)
    return None if text is None else _entry(name, text, quantity)


def _entry(name: str, text: str, quantity: Quantity) -> Entry:
    try:
        return Entry.typed(text, quantity)
    except UnitError as error:
        raise UsageError(f"--{name}: {error}") from None


def _given(words: argparse.Namespace, name: str) -> Any:
    return getattr(words, name.replace("-", "_"))
