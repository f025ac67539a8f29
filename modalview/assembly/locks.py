"""Gear loops whose ratios contradict each other cannot turn."""

from fractions import Fraction

from modalview.assembly.stretch import gear_ratio
from modalview.errors import Fault, ModelFaultsError
from modalview.model.parts import Gear, Model, Motion, RigidLink, Shaft


def speed_ratios(model: Model) -> dict[str, tuple[str, Fraction]]:
    """Return how fast every body turns against the first of its train: {body: (first, ratio)}.

    Followed through shafts, rigid links and gears (exact or elastic: a mesh keeps the mean ratio).

    Raises
    ------
    ModelFaultsError
        Two ways round a loop give different ratios, so that it cannot turn; names the gears.
    """
    steps: dict[str, list[tuple[str, Fraction, Gear | None]]] = {body.id: [] for body in model.bodies}
    for link in model.links:
        a, b = link.from_.body, link.to.body
        if a is None or b is None or not _turns_along(link, model.motion):
            continue
        ratio = gear_ratio(link) if isinstance(link, Gear) else Fraction(1)
        gear = link if isinstance(link, Gear) else None
        steps[a].append((b, ratio, gear))
        steps[b].append((a, 1 / ratio, gear))
    found: dict[str, tuple[str, Fraction]] = {}
    for first in steps:
        if first not in found:
            found[first] = (first, Fraction(1))
            _follow(first, steps, found)
    return found


def _turns_along(link: object, motion: Motion) -> bool:
    if isinstance(link, RigidLink):
        return link.directions is None or any(name.startswith("r") for name in link.directions)
    return isinstance(link, Gear) or (isinstance(link, Shaft) and motion is not Motion.SINGLE_AXIS)


def _follow(
    first: str,
    steps: dict[str, list[tuple[str, Fraction, Gear | None]]],
    found: dict[str, tuple[str, Fraction]],
) -> None:
    waiting = [first]
    gears: dict[str, None] = {}
    while waiting:
        body = waiting.pop()
        for other, ratio, gear in steps[body]:
            if gear is not None:
                gears[gear.id] = None
            speed = found[body][1] * ratio
            if other not in found:
                found[other] = (first, speed)
                waiting.append(other)
            elif found[other][1] != speed:
                names = ", ".join(gears)
                reason = (
                    f"the gear loop through {other} cannot turn: two ways round give speeds in the ratio "
                    f"{float(found[other][1]):g} and {float(speed):g}; check the teeth or ratios of {names}"
                )
                raise ModelFaultsError((Fault(f"gear {names}", reason),))


def gear_locks(model: Model) -> None:
    """Refuse gear loops that cannot turn."""
    if any(isinstance(link, Gear) for link in model.links):
        speed_ratios(model)
