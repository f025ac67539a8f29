"""Gear loops whose ratios contradict each other cannot turn."""

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, field
from fractions import Fraction

from modalview.assembly.kinematics import ROTATIONS, Vector, cross, places
from modalview.assembly.stretch import exact_ratio, rotation_axis
from modalview.errors import Fault, ModelFaultsError
from modalview.model.parts import Gear, Link, Model, Motion, RigidLink, Shaft
from modalview.units.show import short


def speed_ratios(model: Model) -> dict[str, tuple[str, Fraction]]:
    """Return how fast every body turns against the first of its train: {body: (first, ratio)}.

    Followed through gears (exact or elastic: a mesh keeps the mean ratio) and rigid links, then through
    shafts. In plane and space a shaft may also be the torsional spring that holds a gear wheel in its
    housing, so that one which contradicts the gears is passed over there.

    Raises
    ------
    ModelFaultsError
        Two ways round a loop give different ratios, so that it cannot turn; names the gears.
    """
    hard = [link for link in model.links if isinstance(link, Gear) or _joins_turns(link)]
    soft = [link for link in model.links if isinstance(link, Shaft)]
    return _Trains(model, hard, soft, strict=model.motion is Motion.SHAFT_TRAIN).found


def gear_locks(model: Model) -> None:
    """Refuse gear loops that cannot turn; in space, gears about one axis make a loop.

    Raises
    ------
    ModelFaultsError
        Names the gears.
    """
    gears = [link for link in model.links if isinstance(link, Gear)]
    if not gears:
        return
    if model.motion is not Motion.SPACE:
        speed_ratios(model)
        return
    for axis, group in _by_axis(model, gears):
        rigid = [link for link in model.links if _joins_turns(link, axis)]
        _Trains(model, [*group, *rigid], (), strict=True)


def _joins_turns(link: Link, axis: Vector | None = None) -> bool:
    """Return whether a rigid link makes its bodies turn together (about an axis, where one is given)."""
    if not isinstance(link, RigidLink):
        return False
    if link.directions is None:
        return True
    if axis is None:
        return any(name in ROTATIONS for name in link.directions)
    needed = {name for name, component in zip(ROTATIONS, axis, strict=True) if component}
    return set(link.directions) >= needed


def _by_axis(model: Model, gears: Iterable[Gear]) -> Iterator[tuple[Vector, list[Gear]]]:
    exact = places(model, exact=True)
    groups: list[tuple[Vector, list[Gear]]] = []
    for gear in gears:
        axis = rotation_axis(gear, exact)
        group = next((members for known, members in groups if not any(cross(known, axis))), None)
        if group is None:
            groups.append((axis, [gear]))
        else:
            group.append(gear)
    yield from groups


Step = tuple[str, Fraction, Gear | None]


@dataclass(slots=True)
class _Trains:
    """Speeds followed from body to body, first through what cannot give, then through what can."""

    model: Model
    hard: Sequence[Link]
    soft: Sequence[Link]
    strict: bool
    found: dict[str, tuple[str, Fraction]] = field(default_factory=dict)

    def __post_init__(self) -> None:
        hard, soft = self._steps(self.hard), self._steps(self.soft)
        for first in hard:
            if first not in self.found:
                self.found[first] = (first, Fraction(1))
                self._follow(first, hard, soft)

    def _steps(self, links: Iterable[Link]) -> dict[str, list[Step]]:
        steps: dict[str, list[Step]] = {body.id: [] for body in self.model.bodies}
        for link in links:
            a, b = link.from_.body, link.to.body
            if a is not None and b is not None:
                gear = link if isinstance(link, Gear) else None
                ratio = exact_ratio(gear) if gear else Fraction(1)
                steps[a].append((b, ratio, gear))
                steps[b].append((a, 1 / ratio, gear))
        return steps

    def _follow(self, first: str, hard: dict[str, list[Step]], soft: dict[str, list[Step]]) -> None:
        waiting, later = [first], [(first, iter(soft[first]))]
        gears: dict[str, None] = {}
        while waiting or later:
            rigid = bool(waiting)
            body, rest = (waiting.pop(), None) if rigid else later[-1]
            steps = hard[body] if rest is None else [step for step in (next(rest, None),) if step]
            if rest is not None and not steps:
                later.pop()
            for other, ratio, gear in steps:
                if gear is not None:
                    gears[gear.id] = None
                speed = self.found[body][1] * ratio
                if other not in self.found:
                    self.found[other] = (first, speed)
                    waiting.append(other)
                    later.append((other, iter(soft[other])))
                elif self.found[other][1] != speed and (rigid or self.strict):
                    raise _cannot_turn(other, self.found[other][1], speed, gears)


def _cannot_turn(body: str, one: Fraction, other: Fraction, gears: Iterable[str]) -> ModelFaultsError:
    names = ", ".join(gears)
    reason = (
        f"the gear loop through {body} cannot turn: two ways round give speeds in the ratio "
        f"{short(float(one))} and {short(float(other))}; check the teeth or ratios of {names}"
    )
    return ModelFaultsError((Fault(f"gear {names}", reason),))
