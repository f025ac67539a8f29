"""Changes that clear a model as JSON: stable keys, SI; null where a value or a frequency has no end."""

import math
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from modalview.advice.changes.results import (
    Ceiling,
    Cost,
    Effect,
    LeastChange,
    Narrowing,
    Option,
    Placement,
    ValueChange,
    ValueWindows,
    Window,
)
from modalview.cli.documents import head
from modalview.resonance.results import Verdict
from modalview.study import Outlook
from modalview.study.changes import Changes
from modalview.study.remedies import BarredSpeeds, Remedies


def changes_document(
    path: Path, outlooks: Mapping[str, Outlook], found: Changes, others: Remedies
) -> dict[str, Any]:
    """Return what clears a model.

    Parameters
    ----------
    path : Path
    outlooks : mapping of Outlook
        Of the model as it is ("") and of its load cases, by name.
    found : Changes
        Of its values.
    others : Remedies
        Absorbers, places of mounts, barred speeds.
    """
    return {
        **head(path, outlooks[""]),
        "clear_now": found.clear_now,
        "sentence": found.sentence,
        "not_clear": [
            {
                "check": one.band.check,
                "case": case or None,
                "label": one.band.label,
                "verdict": one.verdict,
                "reason": one.reason,
            }
            for case, outlook in outlooks.items()
            for one in outlook.checks
            if one.verdict is not Verdict.CLEAR
        ],
        "options": [_option(one) for one in (*found.options, *others.options)],
        "values": [_value(one) for one in found.windows],
        "least": [_least(one) for one in found.least],
        "narrowing": None if found.narrowing is None else _narrowing(found.narrowing),
        "placements": [_placement(one) for one in found.placements],
        "speeds": [_speeds(one) for one in others.speeds],
        "notes": [*found.notes, *others.notes],
    }


def _option(one: Option) -> dict[str, Any]:
    worst = one.worst
    return {
        "kind": one.kind,
        "text": one.text,
        "clears": one.clears,
        "claim": one.claim or None,
        "amount": one.amount,
        "changes": [_change(change) for change in one.changes],
        "effects": [_effect(effect) for effect in one.effects],
        "least_room_percent": None if worst is None else _percent(worst.room),
        "costs": [_cost(cost) for cost in one.costs],
        "cautions": list(one.cautions),
    }


def _change(one: ValueChange) -> dict[str, Any]:
    return {
        "value": one.value,
        "label": one.label,
        "before": one.before,
        "after": one.after,
        "before_si": one.before_si,
        "after_si": one.after_si,
    }


def _effect(one: Effect) -> dict[str, Any]:
    return {
        "check": one.check,
        "case": one.case or None,
        "label": one.label,
        "verdict_before": one.before,
        "verdict": one.verdict,
        "wording": one.wording,
        "nearest_mode": one.nearest_mode,
        "nearest_range_hz": None if one.nearest_hz is None else list(one.nearest_hz),
        "separation_percent": _percent(one.separation),
        "worst_separation_percent": _percent(one.worst_separation),
        "room_percent": _percent(one.room),
    }


def _cost(one: Cost) -> dict[str, Any]:
    return {
        "what": one.what,
        "before": one.before,
        "after": one.after,
        "before_si": one.before_si,
        "after_si": one.after_si,
    }


def _value(one: ValueWindows) -> dict[str, Any]:
    return {
        "value": one.value,
        "label": one.label,
        "unit": one.unit,
        "nominal": one.nominal,
        "typed": one.text or None,
        "clear_now": one.clear_now,
        "limits": [_end(end) for end in one.limits],
        "windows": [_window(window) for window in one.windows],
        "ceilings": [_ceiling(ceiling) for ceiling in one.ceilings],
    }


def _window(one: Window) -> dict[str, Any]:
    return {
        "from": _end(one.low),
        "to": _end(one.high),
        "text": one.text,
        "exact": [_end(end) for end in one.exact],
        "bound_by": [name or None for name in one.bound_by],
        "proven": one.proven,
    }


def _ceiling(one: Ceiling) -> dict[str, Any]:
    return {
        "mode": one.mode,
        "now_hz": one.now_hz,
        "at_zero_hz": _end(one.at_zero_hz),
        "at_infinity_hz": _end(one.at_infinity_hz),
    }


def _least(one: LeastChange) -> dict[str, Any]:
    return {
        "values": list(one.values),
        "status": one.status,
        "limits": [[_end(end) for end in pair] for pair in one.limits],
        "factors": list(one.factors),
        "amount": _end(one.amount),
        "least_amount": _end(one.least),
        "boxes": one.boxes,
        "sentence": one.sentence,
    }


def _narrowing(one: Narrowing) -> dict[str, Any]:
    return {
        "for_checks": list(one.checks),
        "possible": one.possible,
        "smallest": one.smallest,
        "options": [_option(option) for option in one.options],
        "sentence": one.sentence,
    }


def _placement(one: Placement) -> dict[str, Any]:
    return {
        "value": one.value,
        "label": one.label,
        "mode": one.mode,
        "wanted_hz": one.wanted_hz,
        "reach_hz": [_end(end) for end in one.reach_hz],
        "factor": one.factor,
        "sentence": one.sentence,
    }


def _speeds(one: BarredSpeeds) -> dict[str, Any]:
    return {
        "machine": one.machine,
        "bar_rpm": [list(pair) for pair in one.bar_rpm],
        "left_rpm": [list(pair) for pair in one.left_rpm],
        "considered_rpm": list(one.whole_rpm),
        "sentence": one.sentence,
    }


def _end(number: float) -> float | None:
    return number if math.isfinite(number) else None


def _percent(share: float | None) -> float | None:
    return None if share is None else 100 * share
