"""keepclear changes: what clears every check, over all tolerances and in all load cases."""

import argparse
import math
from pathlib import Path

from modalview.advice.absorber import MASS_RATIO, Absorber, directions
from modalview.cli.changes_document import changes_document
from modalview.cli.changes_texts import changes_text
from modalview.cli.printing import NOT_CLEAR, OK, progress, say, say_json
from modalview.errors import InputError, UnitError, UsageError
from modalview.model.loadcases import in_load_case
from modalview.model.parts import Model
from modalview.store import read_model
from modalview.study import Request
from modalview.study.changes import ChangesRequest, Place, changes
from modalview.study.look import look
from modalview.study.remedies import RemediesRequest, absorber_frequency, remedies
from modalview.units import quantities as q
from modalview.units.parse import read
from modalview.units.quantities import Quantity

RAD_PER_HZ = 2 * math.pi
NOTHING_TO_CHECK = (
    "There is nothing to clear: give a machine its speed, its orders and the margin wanted; or name a mode "
    "to be placed (--place)."
)


def prepare(parser: argparse.ArgumentParser) -> None:
    """Declare the words of the command."""
    parser.add_argument("file", type=Path, metavar="FILE", help="a .keepclear file")
    parser.add_argument(
        "--value",
        action="append",
        default=[],
        metavar="k3.stiffness",
        help="a value that may change, by its id; may be given again (default: all that make sense)",
    )
    parser.add_argument(
        "--together",
        action="append",
        default=[],
        metavar="k3.stiffness",
        help="a value that may change together with the others named so, for the least change of all",
    )
    parser.add_argument(
        "--place",
        action="append",
        nargs=3,
        default=[],
        metavar=("MODE", '"60 Hz"', "k3.stiffness"),
        help="put a mode at a frequency by one value; may be given again",
    )
    parser.add_argument("--absorber", metavar="BODY", help="a tuned absorber on this body")
    parser.add_argument("--direction", metavar="y", help="of the absorber (default: the first of the motion)")
    parser.add_argument(
        "--tuned-to",
        metavar='"1180 rpm"',
        help="frequency of the absorber (default: the first fixed excitation that is not clear); with "
        "--damped that of the mode nearest to it",
    )
    parser.add_argument(
        "--mass-ratio",
        metavar='"10 %%"',
        help="mass of the absorber over the mass it works on (default: 10 %%)",
    )
    parser.add_argument("--damped", action="store_true", help="give the absorber Den Hartog's best damper")
    parser.add_argument("--json", action="store_true", help="print JSON: SI, with the unit in each key")
    parser.set_defaults(run=run)


def run(words: argparse.Namespace) -> int:
    """Print the changes; 0 when everything is clear already or some option clears it, 1 otherwise."""
    model = read_model(words.file)
    outlooks = {"": look(Request(model))}
    for case in model.load_cases:
        outlooks[case.name or case.id] = look(Request(in_load_case(model, case)))
    if not outlooks[""].checks and not words.place:
        raise InputError(NOTHING_TO_CHECK)
    absorbers = _absorbers(words, model)
    asked = ChangesRequest(
        Request(model, progress=_Stretch(0.0, 0.7)),
        values=tuple(words.value),
        together=tuple(words.together),
        places=tuple(_place(*one) for one in words.place),
    )
    found = changes(asked)
    others = remedies(RemediesRequest(Request(model, progress=_Stretch(0.7, 1.0)), absorbers))
    if words.json:
        say_json(changes_document(words.file, outlooks, found, others))
    else:
        say(changes_text(outlooks, found, others))
    clears = any(one.clears for one in (*found.options, *others.options))
    return OK if found.clear_now or clears else NOT_CLEAR


class _Stretch:
    """Progress of one part of the work as a share of all of it; it never goes back."""

    def __init__(self, low: float, high: float) -> None:
        self._low, self._high, self._reached = low, high, low

    def __call__(self, what: str, share: float) -> None:
        self._reached = max(self._reached, self._low + (self._high - self._low) * share)
        progress(what, self._reached)


def _place(mode: str, frequency: str, value: str) -> Place:
    try:
        number = int(mode)
    except ValueError:
        raise UsageError(f"--place wants the number of a mode, such as 2; found {mode!r}") from None
    hz = _number("--place", frequency, q.FREQUENCY) / RAD_PER_HZ
    if number < 1 or hz <= 0:
        raise UsageError(f"--place wants a mode from 1 and a frequency above zero; found {mode} {frequency}")
    return Place(number, hz, value)


def _absorbers(words: argparse.Namespace, model: Model) -> tuple[Absorber, ...]:
    if words.absorber is None:
        for name in ("direction", "tuned_to", "mass_ratio"):
            if getattr(words, name) is not None:
                raise UsageError(f"--{name.replace('_', '-')} goes with --absorber: the body it sits on")
        if words.damped:
            raise UsageError("--damped goes with --absorber: the body it sits on")
        return ()
    ratio = MASS_RATIO if words.mass_ratio is None else _number("--mass-ratio", words.mass_ratio, q.RATIO)
    direction = words.direction or directions(model)[0]
    return (Absorber(words.absorber, direction, _tuned_to(words, model), ratio, words.damped),)


def _tuned_to(words: argparse.Namespace, model: Model) -> float:
    if words.tuned_to is not None:
        return _number("--tuned-to", words.tuned_to, q.FREQUENCY) / RAD_PER_HZ
    checks = look(Request(model)).checks
    single = any(one.band.excitation[0] == one.band.excitation[1] for one in checks)
    if not single and not words.damped:
        raise UsageError('--absorber wants --tuned-to "1180 rpm": no excitation has a single frequency')
    return absorber_frequency(checks)


def _number(word: str, text: str, quantity: Quantity) -> float:
    try:
        return read(text, quantity)
    except UnitError as error:
        raise UsageError(f"{word}: {error}") from None
