"""What the words of ``keepclear response`` ask for."""

import argparse
from collections.abc import Sequence
from pathlib import Path

from modalview.cli.printing import progress
from modalview.errors import UnitError, UsageError
from modalview.model.parts import FREEDOMS, End, Model, Motion
from modalview.model.values import Entry
from modalview.study.response_results import ResponseRequest, Watch
from modalview.units import quantities as q
from modalview.units.parse import read

RPM = 0.10471975511965977
OFFSET = "BODY[:x,y[,z]]"


def prepare_words(parser: argparse.ArgumentParser) -> None:
    """Declare them."""
    parser.add_argument("file", type=Path, metavar="FILE", help="a .keepclear file")
    parser.add_argument("--machine", metavar="ID", help="one machine alone (default: all)")
    parser.add_argument(
        "--speed",
        action="append",
        default=[],
        metavar='"1480 rpm"',
        help="a further speed at which all is told; may be given again",
    )
    parser.add_argument(
        "--at",
        action="append",
        default=[],
        metavar=OFFSET,
        help='a point looked at, such as "motor" or "skid:0.3 m,0.25 m" from its centre of gravity; may be '
        "given again (default: the points of limits and excitations)",
    )
    parser.add_argument("--direction", metavar="y", help="of the points (default: the larger axis of motion)")
    parser.add_argument("--csv", type=Path, metavar="OUT.csv", help="write the curves over speed as a table")
    parser.add_argument("--replace", action="store_true", help="write over a table that is there already")
    parser.add_argument("--json", action="store_true", help="print JSON: SI, with the unit in each key")


def request_of(words: argparse.Namespace, model: Model) -> ResponseRequest:
    """Return what the words ask for.

    Raises
    ------
    UsageError
        A machine or body that is not there, a speed or an offset that cannot be read.
    """
    if words.direction is not None and not words.at:
        raise UsageError("--direction goes with --at: the point that is looked at")
    known = [machine.id for machine in model.machines]
    if words.machine is not None and words.machine not in known:
        raise UsageError(f"--machine {words.machine}: there is none; the file has {_listed(known)}")
    return ResponseRequest(
        model=model,
        machine=words.machine,
        watches=tuple(
            _watch(model, text, words.direction, number) for number, text in enumerate(words.at, start=1)
        ),
        speeds_rpm=tuple(_speed(text) for text in words.speed),
        progress=progress,
    )


def _listed(names: Sequence[str]) -> str:
    return ", ".join(names) if names else "none"


def _speed(text: str) -> float:
    try:
        speed = read(text, q.SPEED)
    except UnitError as error:
        raise UsageError(f"--speed: {error}") from None
    if speed <= 0:
        raise UsageError(f"--speed wants a speed above zero; found {text!r}")
    return float(f"{speed / RPM:.12g}")


def _watch(model: Model, text: str, direction: str | None, number: int) -> Watch:
    bodies = {body.id: body.name or body.id for body in model.bodies}
    body, offset = text, None
    if text not in bodies:
        body, _, place = text.rpartition(":")
        offset = _offset(model, text, place) if body in bodies else None
    if body not in bodies:
        raise UsageError(f"--at {text}: there is no such body; the file has {_listed(list(bodies))}")
    where = "" if offset is None else f" at {', '.join(entry.text for entry in offset)}"
    label = f"{bodies[body]}{where}" + (f", {direction}" if direction else "")
    return Watch(f"at {number}", label, End(body=body, offset=offset), direction)


def _offset(model: Model, text: str, place: str) -> tuple[Entry, ...]:
    wanted = 3 if model.motion is Motion.SPACE else 2
    if model.motion not in (Motion.PLANE, Motion.SPACE):
        raise UsageError(
            f"--at {text}: in {model.motion} a body has one motion ({FREEDOMS[model.motion][0]})"
        )
    parts = place.split(",")
    if len(parts) != wanted:
        axes = ",".join("xyz"[:wanted])
        raise UsageError(f"--at {text}: an offset has {wanted} lengths here, BODY:{axes}; found {len(parts)}")
    try:
        return tuple(Entry.typed(part.strip(), q.LENGTH) for part in parts)
    except UnitError as error:
        raise UsageError(f"--at {text}: {error}") from None
