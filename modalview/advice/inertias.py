"""Doubts about moments of inertia: missing, of another size than the body, GD2, reflected already."""

import math
from collections import Counter
from collections.abc import Iterator

from modalview.advice.doubt import Doubt, named
from modalview.advice.survey import Survey, carries
from modalview.assembly.groups import Groups
from modalview.model.gears import gear_ratio
from modalview.model.parts import Beam, Body, Gear, InertiaTensor, Link, Motion, Mount, Shaft
from modalview.model.values import STARTING, Value
from modalview.units import quantities as q
from modalview.units.show import show

# Radius of gyration over the drawn size: no body within its outline exceeds 0.71, a slender one seen along
# its axis goes far down. Beyond these, drawing or value is doubted; common practice, no source.
WIDEST, NARROWEST = 2.0, 1 / 20
# GD2 is four times the moment of inertia (G the weight as mass, D twice the radius of gyration); within
# a sixth of that, a value is taken for one. Common practice, no source.
GD2, NEAR_GD2 = 4.0, 1 / 6
# Of bodies alike in mass and outline, a factor this near to 4 is told whatever the estimate says.
ALIKE = 0.02
# A train's faster side is doubted where its inertia as typed is above this share of the slower side's and,
# times the ratio squared, so many times it; below this ratio squared either is plausible. Common practice,
# no source.
OWN_SHARE, REFLECTED, LEAST_SQUARED = 0.3, 5.0, 2.0
_OTHER_FORMS = ("GD", "WR", "WK")


def outside_its_size(survey: Survey) -> Iterator[Doubt]:
    """Yield bodies whose radius of gyration does not fit how large they are drawn."""
    if survey.motion not in (Motion.PLANE, Motion.SPACE):
        return
    for body in survey.model.bodies:
        size, inertia = drawn_size(body), _largest(body)
        if size is None or not inertia or body.mass is None or body.mass.si == 0 or _starting(body):
            continue
        radius = math.sqrt(inertia / body.mass.si)
        if NARROWEST * size <= radius <= WIDEST * size:
            continue
        text = (
            f"{named(body)}: its radius of gyration is {show(radius, q.LENGTH, digits=3)}, it is drawn "
            f"{show(size, q.LENGTH, digits=3)} large; check mass, inertia and drawn size."
        )
        wrong, way = ("large", "low") if radius > size else ("small", "high")
        effect = (
            f"Rocking modes lie too {way} if the inertia is too {wrong}; "
            "no effect if only the drawing is not to scale."
        )
        yield Doubt("radius of gyration", (body.id,), text, effect)


def drawn_size(body: Body) -> float | None:
    """Return the larger of a body's drawn width and height, m; None where it is not drawn to any size."""
    drawn = body.drawn
    known = [] if drawn is None else [side.si for side in (drawn.width, drawn.height) if side is not None]
    return max(known, default=0.0) or None


def _starting(body: Body) -> bool:
    """Tell whether mass or inertia is one that nobody has typed: that is told, and no more of it."""
    tensor = body.inertia
    moments = (tensor.Ixx, tensor.Iyy, tensor.Izz) if isinstance(tensor, InertiaTensor) else (tensor,)
    return any(value is not None and value.source == STARTING for value in (body.mass, *moments))


def _largest(body: Body) -> float | None:
    inertia = body.inertia
    if isinstance(inertia, InertiaTensor):
        return max(inertia.Ixx.si, inertia.Iyy.si, inertia.Izz.si)
    return None if inertia is None else inertia.si


def missing(survey: Survey) -> Iterator[Doubt]:
    """Yield bodies with mass and without inertia at which links turn them."""
    if survey.motion not in (Motion.PLANE, Motion.SPACE):
        return
    for body in survey.model.bodies:
        if body.inertia is not None or body.mass is None or body.mass.si == 0:
            continue
        if body.dof is not None and not any(name.startswith("r") for name in body.dof):
            continue
        turned = next((link for link in survey.links_at[body.id] if _turns_it(link, body)), None)
        if turned is not None:
            text = (
                f"{named(body)} has {show(body.mass.si, q.MASS)} but no moment of inertia, "
                f"although {named(turned)[:1].lower()}{named(turned)[1:]} turns it."
            )
            effect = "It turns without resistance of its own: its rocking modes are missing."
            yield Doubt("no inertia", (body.id,), text, effect)


def _turns_it(link: Link, body: Body) -> bool:
    """Tell whether a link holds a body against turning, other than by the end of a slender beam."""
    if not carries(link) or isinstance(link, Beam):
        return False
    if isinstance(link, Shaft | Gear):
        return True
    if isinstance(link, Mount) and link.stiffness is not None:
        stiffness = link.stiffness
        if stiffness.rx is not None or stiffness.ry is not None or stiffness.rz is not None:
            return True
    end = link.from_ if link.from_.body == body.id else link.to
    return end.offset is not None and any(entry.si for entry in end.offset)


def gd2(survey: Survey) -> Iterator[Doubt]:
    """Yield inertias about four times what mass and drawn size, or a body of the same make, tell."""
    alike: dict[tuple[float, ...], list[tuple[Body, Value]]] = {}
    for body in survey.model.bodies:
        inertia = body.inertia
        if not isinstance(inertia, Value) or body.mass is None or body.mass.si * inertia.si == 0:
            continue
        estimate = solid_inertia(body, survey.motion)
        if estimate is None or _starting(body):
            continue
        if abs(inertia.si / estimate / GD2 - 1) < NEAR_GD2 and _typed_plainly(inertia):
            yield _gd2_doubt(body, inertia, estimate, "what a solid body of its mass and drawn size has")
        else:
            alike.setdefault((body.mass.si, estimate), []).append((body, inertia))
    for group in alike.values():
        _, least = min(group, key=lambda one: one[1].si)
        for body, inertia in group:
            if abs(inertia.si / least.si / GD2 - 1) < ALIKE and _typed_plainly(inertia):
                yield _gd2_doubt(body, inertia, least.si, "that of a body of the same mass and drawn size")


def solid_inertia(body: Body, motion: Motion) -> float | None:
    """Return the inertia about z of a solid body of this mass and drawn size, kg m2.

    A cylinder m d**2 / 8, in a shaft train drawn from the side with its diameter upright, or a block
    m (w**2 + h**2) / 12; from memory.
    """
    drawn = body.drawn
    if motion not in (Motion.SHAFT_TRAIN, Motion.PLANE) or drawn is None or body.mass is None:
        return None
    width, height = (0.0 if side is None else side.si for side in (drawn.width, drawn.height))
    if motion is Motion.SHAFT_TRAIN:
        return body.mass.si * height**2 / 8 or None
    if drawn.shape == "disc":
        return body.mass.si * max(width, height) ** 2 / 8 or None
    return body.mass.si * (width**2 + height**2) / 12 if width * height else None


def _typed_plainly(inertia: Value) -> bool:
    text = inertia.text.upper()
    return not any(form in text for form in _OTHER_FORMS)


def _gd2_doubt(body: Body, inertia: Value, expected: float, than: str) -> Doubt:
    text = (
        f"{named(body)}: inertia {inertia.text} is {inertia.si / expected:.1f} times {than}, "
        f"{show(expected, q.INERTIA, digits=3)}; is it GD2?"
    )
    effect = 'GD2 is four times the moment of inertia (type "GD2 184 kgf m2"): its mode lies low by up to 2.'
    return Doubt("GD2", (body.id,), text, effect)


def reflected(survey: Survey) -> Iterator[Doubt]:
    """Yield gears whose faster side holds inertias that look as if seen through the gear already.

    Where a shaft meets several gears nothing is said: what it carries is not on it alone.
    """
    if survey.motion is not Motion.SHAFT_TRAIN:
        return
    gears = [link for link in survey.model.links if isinstance(link, Gear)]
    if not gears:
        return
    shafts = Groups(survey.bodies)
    for link in survey.model.links:
        if not isinstance(link, Gear) and carries(link) and link.from_.body and link.to.body:
            shafts.join(link.from_.body, link.to.body)
    total: dict[str, float] = {}
    for body in survey.model.bodies:
        inertia = _largest(body) or 0.0
        total[shafts.find(body.id)] = total.get(shafts.find(body.id), 0.0) + inertia
    at = Counter(shafts.find(end.body) for gear in gears for end in (gear.from_, gear.to) if end.body)
    for gear in gears:
        if all(end.body and at[shafts.find(end.body)] == 1 for end in (gear.from_, gear.to)):
            yield from _reflected_at(survey, gear, shafts, total)


def _reflected_at(
    survey: Survey, gear: Gear, shafts: Groups[str], total: dict[str, float]
) -> Iterator[Doubt]:
    ratio = gear_ratio(gear)
    if ratio is None or gear.from_.body is None or gear.to.body is None:
        return
    slow, fast = gear.from_.body, gear.to.body
    squared = float(ratio) ** 2
    if squared < 1:
        slow, fast, squared = fast, slow, 1 / squared
    low, high = total[shafts.find(slow)], total[shafts.find(fast)]
    if squared < LEAST_SQUARED or high < OWN_SHARE * low or high * squared < REFLECTED * low or low == 0:
        return
    text = (
        f"{named(gear)}: the faster side holds {show(high, q.INERTIA, digits=3)}, the slower one "
        f"{show(low, q.INERTIA, digits=3)}; times the ratio squared, {squared:.3g}, the faster one is "
        f"{high * squared / low:.2g} times the slower. Are its inertias reflected already?"
    )
    effect = (
        "Inertias and stiffnesses are typed at their own speed; reflected twice, torsional modes lie low."
    )
    faster = (one for one in survey.bodies if shafts.find(one) == shafts.find(fast))
    yield Doubt("reflected inertia", (gear.id, *faster), text, effect)
