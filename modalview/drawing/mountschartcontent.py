"""What the sketch and the table of mounts at rest show, taken from the study."""

import math
from dataclasses import dataclass

from modalview.model.parts import Motion
from modalview.response.isolators import Carried, Foot, Sag
from modalview.study.isolators import MountsAtRest
from modalview.units import quantities as q
from modalview.units.show import short, show, significant

# A tilt is told as millimetres per metre, as it is read off a level.
_MM_PER_M = 1e3
_ROUNDING = 1e-9  # m and rad: less is rounding, far below what can be measured


@dataclass(frozen=True, slots=True)
class MountMark:
    """One mount on the sketch.

    Parameters
    ----------
    label : str
    x, y : float
        Level place, m; in a plane model ``y`` is upright; 0 in a single axis.
    load : float
        N; below zero it is pulled.
    share : float or None
        Of the rated load.
    load_text, deflection_text : str
    overloaded, lifted : bool
    """

    label: str
    x: float
    y: float
    load: float
    share: float | None
    load_text: str
    deflection_text: str
    overloaded: bool
    lifted: bool


@dataclass(frozen=True, slots=True)
class CentreMark:
    """A centre of gravity and the centroid of the mounts under it, m on the sketch."""

    label: str
    centre: tuple[float, float]
    centroid: tuple[float, float]
    text: str


@dataclass(frozen=True, slots=True)
class MountsContent:
    """Mounts at rest.

    Parameters
    ----------
    motion : Motion
        Space is seen from above, a plane from the side; of a single axis only loads are drawn.
    mounts : tuple of MountMark
    centres : tuple of CentreMark
    headings, rows
        Of the table of mounts.
    settled : tuple of (str, str, str)
        Body, how far it comes down, its tilt.
    sentence : str
    sound : bool
    notes : tuple of str
    """

    motion: Motion
    mounts: tuple[MountMark, ...]
    centres: tuple[CentreMark, ...]
    headings: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    settled: tuple[tuple[str, str, str], ...]
    sentence: str
    sound: bool
    notes: tuple[str, ...]


HEADINGS = ("mount", "load", "deflection", "rated load", "of rated")
SETTLED_HEADINGS = ("body", "comes down", "tilt")


def mounts_content(found: MountsAtRest, system: str = "SI") -> MountsContent:
    """Take what is shown, in a system of units."""
    model, rest = found.request.model, found.found
    lifted = {foot.link for foot in rest.lifted}
    marks = tuple(_mark(foot, model.motion, system, lifted=foot.link in lifted) for foot in rest.feet)
    rows = tuple(
        (
            mark.label,
            mark.load_text + (", pulled up" if mark.lifted else ""),
            mark.deflection_text,
            "" if foot.rated is None else show(foot.rated, q.FORCE, system),
            _share(foot),
        )
        for foot, mark in zip(rest.feet, marks, strict=True)
    )
    return MountsContent(
        motion=model.motion,
        mounts=marks,
        centres=tuple(_centre(one, model.motion, system) for one in rest.carried),
        headings=HEADINGS,
        rows=rows,
        settled=tuple(_settled(one, system) for one in rest.sags),
        sentence=found.sentence,
        sound=found.sound,
        notes=(*found.evidence, *found.notes),
    )


def _mark(foot: Foot, motion: Motion, system: str, *, lifted: bool) -> MountMark:
    x, y = (foot.point[0], foot.point[1]) if motion is not Motion.SINGLE_AXIS else (0.0, 0.0)
    return MountMark(
        label=foot.label,
        x=x,
        y=y,
        load=foot.load,
        share=foot.of_rated,
        load_text=show(foot.load, q.FORCE, system, digits=3),
        deflection_text=show(foot.deflection, q.LENGTH, system, digits=3),
        overloaded=foot.overloaded,
        lifted=lifted,
    )


def _share(foot: Foot) -> str:
    if foot.of_rated is None:
        return "none given"
    return f"{significant(100 * foot.of_rated, 3)} %" + (", overloaded" if foot.overloaded else "")


def _centre(one: Carried, motion: Motion, system: str) -> CentreMark:
    names = ("x",) if motion is Motion.PLANE else ("x", "y")
    off = ", ".join(
        f"{name} {show(step, q.LENGTH, system, digits=3) if abs(step) > _ROUNDING else 0}"
        for name, step in zip(names, one.offset, strict=True)
    )
    centre = (one.centre[0], one.centre[1])
    level = one.centre[1] - one.height
    centroid = (one.centroid[0], level) if motion is Motion.PLANE else (one.centroid[0], one.centroid[1])
    label = one.labels[0] if len(one.labels) == 1 else f"{one.labels[0]} and {len(one.labels) - 1} more"
    height = show(one.height, q.LENGTH, system, digits=3)
    text = f"{label}: centre of gravity off the centroid of its mounts by {off}; {height} above them"
    return CentreMark(label, centre, centroid, text)


def _settled(one: Sag, system: str) -> tuple[str, str, str]:
    tilts = [f"{name} {_tilt(angle)}" for name, angle in one.tilt]
    return one.label, show(one.down, q.LENGTH, system, digits=3), ", ".join(tilts)


def _tilt(angle: float) -> str:
    """Write a small angle.

    >>> _tilt(0.0012)
    '1.2 mm/m (0.0688 deg)'
    """
    if abs(angle) < _ROUNDING:
        return "0"
    return f"{short(_MM_PER_M * angle, 3)} mm/m ({short(math.degrees(angle), 3)} deg)"
