"""Which points a response is looked at, and which limits hold there."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from modalview.assembly.assemble import Assembly
from modalview.assembly.dampedterms import DampedTerms
from modalview.errors import ModelFaultsError, UnitError
from modalview.model.parts import Direction, End, Excitation, Limit, Machine, Model, Motion
from modalview.model.rules_records import LIMITED
from modalview.response.quantities import Point, point_at
from modalview.study.response_results import LeftOut, ResponseRequest, Watch
from modalview.units.parse import read

# Bodies looked at when a support moves and nobody said where to look.
MOST_BODIES = 6


@dataclass(frozen=True, slots=True, eq=False)
class Watched:
    """A watch with its point."""

    watch: Watch
    point: Point


@dataclass(frozen=True, slots=True)
class Held:
    """A limit that can be held against a curve: its value in SI, and the watch of its curve."""

    limit: Limit
    watch: str
    value: float


def watched_points(
    request: ResponseRequest, assembly: Assembly, terms: DampedTerms, machine: Machine
) -> tuple[list[Watched], list[Held], list[LeftOut]]:
    """Return the points looked at, the limits held there, and the limits that cannot be.

    Raises
    ------
    ModelFaultsError
        A watch that was asked for is not on a body.
    """
    model = request.model
    watches = list(request.watches)
    if not watches:
        watches = _unique(
            model, [place for one in machine.excitations for place in _at_excitation(model, one)]
        )
    found = [Watched(one, point_at(assembly, terms, one.at, one.direction, one.label)) for one in watches]
    held, left_out = [], []
    for limit in model.limits:
        try:
            value = _limit_value(model, limit)
            point = point_at(assembly, terms, limit.at, limit.direction, limit.id)
        except (UnitError, ModelFaultsError) as reason:
            left_out.append(LeftOut(limit.id, str(reason)))
            continue
        watch = next((w.watch for w in found if _same(model, w.watch, limit.at, limit.direction)), None)
        if watch is None:
            watch = _watch(model, limit.at, limit.direction, [w.watch.id for w in found])
            found.append(Watched(watch, point))
        held.append(Held(limit, watch.id, value))
    return found, held, left_out


def _at_excitation(model: Model, excitation: Excitation) -> list[tuple[End, Direction | None]]:
    """Return where an excitation is looked at: along its force, in any direction where it turns.

    Of the motion of a support: at the first bodies with mass.
    """
    if excitation.at is None:
        return []
    turns = excitation.magnitude is not None and excitation.magnitude.torque is not None
    along = None if turns or excitation.direction == "rotating" else excitation.direction
    if excitation.at.support is None:
        return [(excitation.at, along)]
    heavy = [one.id for one in model.bodies if one.mass is not None and one.mass.si > 0]
    return [(End(body=name), along) for name in heavy[:MOST_BODIES]]


def _limit_value(model: Model, limit: Limit) -> float:
    if model.motion is Motion.SHAFT_TRAIN:
        raise UnitError(f'"{limit.value}" is a limit of points that shift; a shaft train turns only')
    quantity = LIMITED.get(limit.quantity)
    if quantity is None:
        raise UnitError(f'"{limit.quantity}" is not one of {", ".join(LIMITED)}')
    return float(read(limit.value, quantity))


def _unique(model: Model, places: Iterable[tuple[End, Direction | None]]) -> list[Watch]:
    found: list[Watch] = []
    for at, direction in places:
        if at.body and not any(_same(model, one, at, direction) for one in found):
            found.append(_watch(model, at, direction, [one.id for one in found]))
    return found


def _same(model: Model, watch: Watch, at: End, direction: Direction | None) -> bool:
    one_way = model.motion in (Motion.SINGLE_AXIS, Motion.SHAFT_TRAIN)
    return watch.at.body == at.body and (
        one_way or (watch.direction == direction and _offset(watch.at) == _offset(at))
    )


def _offset(at: End) -> tuple[float, ...]:
    offset = tuple(entry.si for entry in at.offset) if at.offset else ()
    return offset if any(offset) else ()


def _watch(model: Model, at: End, direction: Direction | None, taken: Sequence[str]) -> Watch:
    names = {body.id: body.name or body.id for body in model.bodies}
    label = names.get(at.body or "", at.body or "")
    if _offset(at) and model.motion in (Motion.PLANE, Motion.SPACE) and at.offset:
        label += f" at ({', '.join(entry.text for entry in at.offset)})"
    label += f", {_direction_text(model, direction)}"
    name, number = label, 2
    while name in taken:
        name, number = f"{label} ({number})", number + 1
    return Watch(name, label, at, direction)


def _direction_text(model: Model, direction: Direction | None) -> str:
    if model.motion is Motion.SINGLE_AXIS:
        return "y"
    if model.motion is Motion.SHAFT_TRAIN:
        return "turning"
    if direction is None or direction == "rotating":
        return "any direction"
    if isinstance(direction, str):
        return direction
    return f"({', '.join(f'{one:g}' for one in direction)})"
