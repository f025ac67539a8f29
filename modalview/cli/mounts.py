"""keepclear mounts: what every spring and mount carries at rest."""

import argparse
from pathlib import Path
from typing import Any

from modalview.cli.cautions import CAUTION
from modalview.cli.printing import NOT_CLEAR, OK, progress, say, say_json
from modalview.cli.table import table, wrapped
from modalview.response.isolators import AtRest, Carried, Foot, Sag
from modalview.response.weight import GRAVITY
from modalview.store import read_model
from modalview.study import Request
from modalview.study.isolators import MountsAtRest, mounts_at_rest
from modalview.units import quantities as q
from modalview.units.show import show, significant

# Shown as no tilt and no offset: far below what any level or tape can tell.
NO_TILT, NO_OFFSET = 1e-9, 1e-9
LEVEL_AXES = ("x", "y")


def prepare(parser: argparse.ArgumentParser) -> None:
    """Declare the words of the command."""
    parser.add_argument("file", type=Path, metavar="FILE", help="a .keepclear file")
    parser.add_argument("--json", action="store_true", help="print JSON: SI, with the unit in each key")
    parser.set_defaults(run=run)


def run(words: argparse.Namespace) -> int:
    """Print the mounts under weight; 0 when none is overloaded or pulled, 1 otherwise."""
    told = mounts_at_rest(Request(read_model(words.file), progress=progress))
    if words.json:
        say_json(mounts_document(words.file, told))
    else:
        say(mounts_text(told))
    return OK if told.sound else NOT_CLEAR


def mounts_text(told: MountsAtRest) -> str:
    """Return the mounts and what they carry as tables."""
    model, found = told.request.model, told.found
    parts = [
        wrapped(f"{model.title or 'untitled'} ({model.motion}): weight {show(found.weight, q.FORCE)}"),
        wrapped(told.sentence),
        _feet_table(found),
        _balance(found),
        _sags_table(found),
    ]
    parts += ["\n".join(_carried_text(one) for one in found.carried)] if found.carried else []
    parts.append("\n".join(wrapped(line, "  ") for line in told.evidence))
    parts.append("\n".join([*(wrapped(f"Note: {note.rstrip('.')}.", "  ") for note in told.notes), CAUTION]))
    return "\n\n".join(parts)


def _feet_table(found: AtRest) -> str:
    rated = any(foot.rated is not None for foot in found.feet)
    rows = [["mount", "carries", "on", "load", "deflection", *(["of rated load"] if rated else [])]]
    for foot in found.feet:
        row = [foot.label, foot.carried, foot.on, show(foot.load, q.FORCE), _mm(foot.deflection)]
        rows.append([*row, _use(foot)] if rated else row)
    return table(rows, right=frozenset({3, 4, 5} if rated else {3, 4}))


def _use(foot: Foot) -> str:
    share = foot.of_rated
    return "" if share is None else f"{100 * share:.1f} %{' OVERLOADED' if foot.overloaded else ''}"


def _mm(length: float) -> str:
    return f"{significant(1e3 * length, 3)} mm"


def _balance(found: AtRest) -> str:
    said = f"Links to ground carry {show(found.on_ground, q.FORCE)} of {show(found.weight, q.FORCE)}"
    held = f"; {show(found.held, q.FORCE)} hang on directions that are held still" if found.held else ""
    return wrapped(f"{said}{held}.")


def _sags_table(found: AtRest) -> str:
    names = [name for name, _ in found.sags[0].tilt]
    rows = [["body", "comes down", *(f"tilt {name}" for name in names)]]
    rows += [[one.label, _mm(one.down), *(_tilt(turn) for _, turn in one.tilt)] for one in found.sags]
    return table(rows, right=frozenset(range(1, len(names) + 2)))


def _tilt(turn: float) -> str:
    return "0 mm/m" if abs(turn) < NO_TILT else f"{significant(1e3 * turn, 3)} mm/m"


def _carried_text(one: Carried) -> str:
    named = one.labels[0] if len(one.labels) == 1 else f"{one.labels[0]} and {len(one.labels) - 1} more"
    away = ", ".join(f"{axis} {_offset(part)}" for axis, part in zip(LEVEL_AXES, one.offset, strict=False))
    return wrapped(
        f"{named}: the centre of gravity lies {away} from the stiffness-weighted centroid of its "
        f"{len(one.feet)} mounts, and {show(abs(one.height), q.LENGTH, digits=3)} "
        f"{'above' if one.height >= 0 else 'below'} them.",
        "  ",
    )


def _offset(part: float) -> str:
    return "0 mm" if abs(part) < NO_OFFSET else f"{significant(1e3 * part, 3)} mm"


def mounts_document(path: Path, told: MountsAtRest) -> dict[str, Any]:
    """Return the mounts under weight for JSON."""
    found = told.found
    return {
        "file": str(path),
        "title": told.request.model.title,
        "degrees_of_freedom": told.coordinates,
        "sound": told.sound,
        "sentence": told.sentence,
        "gravity_m_per_s2": GRAVITY,
        "weight_n": found.weight,
        "on_ground_n": found.on_ground,
        "held_n": found.held,
        "mounts": [_foot(foot, found) for foot in found.feet],
        "bodies": [_sag(one) for one in found.sags],
        "carried": [_carried(one) for one in found.carried],
        "evidence": list(told.evidence),
        "notes": list(told.notes),
    }


def _foot(foot: Foot, found: AtRest) -> dict[str, Any]:
    return {
        "id": foot.link,
        "name": foot.label,
        "carries": foot.carried,
        "on": foot.on,
        "to_ground": foot.grounded,
        "point_m": list(foot.point),
        "stiffness_n_per_m": foot.stiffness,
        "load_n": foot.load,
        "deflection_m": foot.deflection,
        "rated_load_n": foot.rated,
        "held_against_rated_n": foot.strain,
        "of_rated_percent": None if foot.of_rated is None else 100 * foot.of_rated,
        "overloaded": foot.overloaded,
        "pulled": foot in found.lifted,
    }


def _sag(one: Sag) -> dict[str, Any]:
    return {
        "id": one.body,
        "name": one.label,
        "down_m": one.down,
        "tilt_rad": dict(one.tilt),
    }


def _carried(one: Carried) -> dict[str, Any]:
    return {
        "bodies": list(one.bodies),
        "mounts": list(one.feet),
        "mass_kg": one.mass,
        "centre_of_gravity_m": list(one.centre),
        "centroid_of_mounts_m": list(one.centroid),
        "offset_m": list(one.offset),
        "height_m": one.height,
    }
