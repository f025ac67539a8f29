"""Doubts about single values: far off those of their kind, or never typed."""

from bisect import bisect_left
from collections.abc import Iterator
from dataclasses import dataclass
from operator import attrgetter
from typing import NamedTuple

from modalview.advice.doubt import Doubt, listed, named, plain
from modalview.advice.survey import Survey
from modalview.model.parts import Beam, Body, Damper, Gear, InertiaTensor, Link, Motion, Mount, Shaft, Spring
from modalview.model.values import STARTING, Value
from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.show import show, significant

# A value so many times the median of its kind, or so small a part of it, is doubted; common practice, no
# source: a slipped prefix (kN for N, mm for m) is a factor of a thousand.
FAR = 1000.0


@dataclass(frozen=True, slots=True)
class Kind:
    """Values that are compared with each other.

    Parameters
    ----------
    many : str
        "springs", "masses".
    quantity : Quantity
    large, small : str
        What a value far above, or far below, would mean.
    """

    many: str
    quantity: Quantity
    large: str
    small: str


_RIGID = "It acts as rigid: no loss where that is meant, but a slipped power of ten hides a soft spring."
_ABSENT = "It acts almost as if it were not there."
_HEAVY = "It hardly moves, almost like ground, and the lowest modes lie low."
_LIGHT = "Its own mode may lie far above all others, or far off where it should be."
_DAMPED = "It locks or hardly damps: the damped modes hang on it, the verdict does not."
SPRINGS = Kind("springs", q.STIFFNESS, _RIGID, _ABSENT)
SHAFTS = Kind("shafts", q.TORSIONAL_STIFFNESS, _RIGID, _ABSENT)
TURNING = Kind("turning stiffnesses of mounts", q.TORSIONAL_STIFFNESS, _RIGID, _ABSENT)
MASSES = Kind("masses", q.MASS, _HEAVY, _LIGHT)
INERTIAS = Kind("moments of inertia", q.INERTIA, _HEAVY, _LIGHT)
# Of bodies with mass the inertia for that mass is compared: it grows with mass and with size squared.
GYRATION = Kind("moments of inertia by mass", q.INERTIA, _HEAVY, _LIGHT)
DASHPOTS = Kind("dashpots", q.DAMPING, _DAMPED, _DAMPED)
TURN_DASHPOTS = Kind("torsional dashpots", q.TORSIONAL_DAMPING, _DAMPED, _DAMPED)
_BEAMS = {
    key: Kind(f"{words} of beams", quantity, _RIGID, _ABSENT)
    for key, words, quantity in (
        ("E", "elastic moduli", q.MODULUS),
        ("G", "shear moduli", q.MODULUS),
        ("A", "areas", q.AREA),
        ("I", "second moments", q.SECOND_MOMENT),
        ("Iy", "second moments Iy", q.SECOND_MOMENT),
        ("Iz", "second moments Iz", q.SECOND_MOMENT),
        ("J", "torsion constants", q.SECOND_MOMENT),
    )
}
_MOUNT = ("x", "y", "z", "rx", "ry", "rz")
_of_all = attrgetter(*_MOUNT)
_MOUNT_STIFFNESS = tuple((f"stiffness {key}", TURNING if "r" in key else SPRINGS) for key in _MOUNT)
_MOUNT_DAMPING = tuple((f"damping {key}", TURN_DASHPOTS if "r" in key else DASHPOTS) for key in _MOUNT)


class Typed(NamedTuple):
    """One value of a part, what it is there ("mass", "stiffness z"), and what it is compared by."""

    kind: Kind
    part: Body | Link
    what: str
    value: Value
    per: float = 1.0


def typed_values(survey: Survey) -> Iterator[Typed]:
    """Yield every value of the model that its modes depend on."""
    for body in survey.model.bodies:
        if body.mass is not None:
            yield Typed(MASSES, body, "mass", body.mass)
        mass = body.mass.si if body.mass is not None else 0.0
        kind, per = (GYRATION, mass) if mass > 0 else (INERTIAS, 1.0)
        if isinstance(body.inertia, InertiaTensor):
            for key in ("Ixx", "Iyy", "Izz"):
                yield Typed(kind, body, key, getattr(body.inertia, key), per)
        elif body.inertia is not None:
            yield Typed(kind, body, "inertia", body.inertia, per)
    for link in survey.model.links:
        yield from _of_link(link, survey.motion)


def _of_link(link: Link, motion: Motion) -> Iterator[Typed]:
    if isinstance(link, Spring):
        yield Typed(SPRINGS, link, "stiffness", link.stiffness)
    elif isinstance(link, Shaft):
        yield Typed(SHAFTS, link, "stiffness", link.stiffness)
    elif isinstance(link, Damper):
        turning = motion is Motion.SHAFT_TRAIN
        yield Typed(TURN_DASHPOTS if turning else DASHPOTS, link, "damping", link.damping)
    elif isinstance(link, Gear) and link.stiffness is not None:
        yield Typed(SPRINGS, link, "mesh stiffness", link.stiffness)
    elif isinstance(link, Beam):
        for key, kind in _BEAMS.items():
            if (value := getattr(link, key)) is not None:
                yield Typed(kind, link, key, value)
    elif isinstance(link, Mount):
        yield from _of_mount(link)


def _of_mount(link: Mount) -> Iterator[Typed]:
    for group, words in ((link.stiffness, _MOUNT_STIFFNESS), (link.damping, _MOUNT_DAMPING)):
        if group is not None:
            for value, (what, kind) in zip(_of_all(group), words, strict=True):
                if value is not None:
                    yield Typed(kind, link, what, value)


def far_off(values: list[Typed]) -> Iterator[Doubt]:
    """Yield values a thousand times the median of the others of their kind, or below a thousandth of it."""
    kinds: dict[str, list[Typed]] = {}
    for one in values:
        if one.value.si > 0 and one.value.source != STARTING:
            kinds.setdefault(one.kind.many, []).append(one)
    for group in kinds.values():
        if len(group) == 2:
            yield from _far_apart(*sorted(group, key=_size))
        elif len(group) > 2 and max(map(_size, group)) > FAR * min(map(_size, group)):
            sizes = sorted(map(_size, group))
            # The median of any others lies between these two.
            low, high = sizes[(len(sizes) - 2) // 2], sizes[len(sizes) // 2 + (len(sizes) % 2)]
            for one in group:
                if high / FAR <= _size(one) <= low * FAR:
                    continue
                middle = _median_without(sizes, _size(one))
                if not middle / FAR <= _size(one) <= middle * FAR:
                    yield _far(one, middle, len(group) - 1)


def _size(one: Typed) -> float:
    return one.value.si / one.per


def _median_without(ordered: list[float], one: float) -> float:
    """Return the median of ascending numbers without one of them.

    >>> _median_without([1.0, 2.0, 9.0], 9.0), _median_without([1.0, 2.0, 3.0, 9.0], 1.0)
    (1.5, 3.0)
    """
    place = bisect_left(ordered, one)
    last = len(ordered) - 1
    low, high = ((at + (at >= place)) for at in ((last - 1) // 2, last // 2))
    return (ordered[low] + ordered[high]) / 2


def _far(one: Typed, middle: float, others: int) -> Doubt:
    large = _size(one) > middle
    times = _size(one) / middle if large else middle / _size(one)
    share = f"{_round(times)} times" if large else f"1/{_round(times)} of"
    text = (
        f"{named(one.part)}: {one.what} {one.value.text} is {share} the median of the other {others} "
        f"{one.kind.many}, {show(middle * one.per, one.kind.quantity)}; a power of ten?"
    )
    return Doubt("value far off", (one.part.id,), text, one.kind.large if large else one.kind.small)


def _far_apart(small: Typed, large: Typed) -> Iterator[Doubt]:
    times = _size(large) / _size(small)
    if times > FAR:
        text = (
            f"{named(large.part)}: {large.what} {large.value.text} is {_round(times)} times that of "
            f"{plain(small.part)}, {small.value.text}; a power of ten in one of them?"
        )
        yield Doubt("value far off", (large.part.id, small.part.id), text, large.kind.large)


def _round(number: float) -> str:
    """Return two digits of a number: "3000"."""
    return significant(number, 2)


def never_typed(values: list[Typed]) -> Iterator[Doubt]:
    """Yield values that still are what the program put there when the part was drawn."""
    found: dict[str, list[Typed]] = {}
    for one in values:
        if one.value.source == STARTING:
            found.setdefault(one.part.id, []).append(one)
    for part, group in found.items():
        told = listed([f"{one.what} {one.value.text}" for one in group])
        verb, nobody = ("is a starting value", "it") if len(group) == 1 else ("are starting values", "them")
        yield Doubt(
            "starting value",
            (part,),
            f"{named(group[0].part)}: {told} {verb}; nobody has given {nobody} yet.",
            f"Frequencies and verdicts that hang on {nobody} say nothing of your machine yet.",
        )
