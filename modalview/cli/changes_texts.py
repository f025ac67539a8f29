"""Changes that clear a model as plain text, no wider than a page of a report."""

import math
from collections.abc import Mapping, Sequence

from modalview.advice.changes.results import Ceiling, Kind, Option, ValueWindows, Window
from modalview.cli.cautions import CAUTION
from modalview.cli.table import table, wrapped
from modalview.cli.texts import FORMULA, title_line
from modalview.resonance.results import Verdict
from modalview.resonance.wording import percent
from modalview.study import Outlook
from modalview.study.changes import NOT_LOOKED_AT, Changes
from modalview.study.remedies import Remedies
from modalview.units.show import significant

ROOM = "room: worst separation over all tolerances and load cases, less the margin wanted on that side"
ORDERS = 4  # columns of orders beside an option; with more, those with the least room
VALUES = 30  # more values that no window helps are counted, not listed


def changes_text(outlooks: Mapping[str, Outlook], found: Changes, others: Remedies) -> str:
    """Return what is not clear, the options, the windows and ceilings of each value.

    Parameters
    ----------
    outlooks : mapping of Outlook
        Of the model as it is ("") and of its load cases, by name.
    found : Changes
    others : Remedies
    """
    options = (*found.options, *others.options)
    parts = [title_line(outlooks[""]), wrapped(found.sentence), _not_clear(outlooks)]
    parts += _options(options)
    parts.append(_values(found.windows))
    parts += [wrapped(f"Tolerances: {found.narrowing.sentence}", "  ")] if found.narrowing else []
    told = [one.sentence for one in found.least if one.option is None]
    told += [one.sentence for one in found.placements]
    parts.append("\n".join(wrapped(one, "  ") for one in told))
    speeds = "\n".join(wrapped(f"  {one.sentence}", "    ") for one in others.speeds)
    parts.append(f"Other speeds instead:\n{speeds}" if speeds else "")
    notes = [*(one for one in found.notes if one != NOT_LOOKED_AT), *others.notes]
    parts.append("\n".join([*(wrapped(f"Note: {note.rstrip('.')}.", "  ") for note in notes), CAUTION]))
    return "\n\n".join(part for part in parts if part)


def _not_clear(outlooks: Mapping[str, Outlook]) -> str:
    lines = [
        wrapped(f"  {one.band.label}{f' ({case})' if case else ''}: {one.verdict}: {one.reason}.", "    ")
        for case, outlook in outlooks.items()
        for one in outlook.checks
        if one.verdict is not Verdict.CLEAR
    ]
    return "Not clear:\n" + "\n".join(lines) if lines else ""


def _options(options: Sequence[Option]) -> list[str]:
    if not options:
        return []
    lines = []
    for number, one in enumerate(options, start=1):
        lines.append(wrapped(f"{number:>3}  {one.text}{'' if one.clears else _not_all(one)}", "     "))
        lines += [wrapped(f"     {one.claim}", "       ")] if one.claim else []
        lines += [
            wrapped(f"     {cost.what}: {cost.before} to {cost.after}", "       ") for cost in one.costs
        ]
        lines += [wrapped(f"     {caution}", "       ") for caution in one.cautions]
    return ["Options, each proven anew:\n" + "\n".join(lines), f"{_effects(options)}\n{FORMULA}\n{ROOM}"]


def _not_all(one: Option) -> str:
    if one.kind is Kind.TOLERANCE:
        return " (proves what is clear at nominal only)"
    return " (does not clear everything)"


def _effects(options: Sequence[Option]) -> str:
    """Return the worst separation of every order under every option, as a table."""
    columns = _columns(options)
    rows = [["option", "least room", *(label for _, label in columns)]]
    for number, one in enumerate(options, start=1):
        known = {(effect.check, effect.case): effect for effect in one.effects}
        room = one.worst.room if one.worst is not None else None
        cells = [known.get(key) for key, _ in columns]
        rows.append(
            [
                f"{number}",
                "" if room is None else room_text(room),
                *(
                    "" if c is None or c.worst_separation is None else percent(c.worst_separation)
                    for c in cells
                ),
            ]
        )
    head = "Worst separation over all tolerances, by order:"
    return f"{head}\n{table(rows, right=frozenset(range(1, len(rows[0]))))}"


def room_text(room: float) -> str:
    """Return room in per cent to one decimal, never more than there is.

    >>> room_text(0.00996), room_text(-0.1)
    ('0.9 %', '-10.0 %')
    """
    return f"{math.floor(round(1000 * room, 6)) / 10:.1f} %"


def _columns(options: Sequence[Option]) -> list[tuple[tuple[str, str], str]]:
    """Return the orders shown, with the load case where there is one: those with the least room."""
    rooms: dict[tuple[str, str], float] = {}
    labels: dict[tuple[str, str], str] = {}
    for one in options:
        for effect in one.effects:
            key = (effect.check, effect.case)
            labels[key] = f"{effect.label} ({effect.case})" if effect.case else effect.label
            rooms[key] = min(rooms.get(key, math.inf), math.inf if effect.room is None else effect.room)
    shown = set(sorted(rooms, key=lambda key: rooms[key])[:ORDERS])
    return [(key, label) for key, label in labels.items() if key in shown]


def _values(values: Sequence[ValueWindows]) -> str:
    if not values:
        return ""
    helped = [one for one in values if one.windows]
    others = [one for one in values if not one.windows]
    shown = [*helped, *others[: max(VALUES - len(helped), 0)]]
    rows = [["value", "now", "windows that clear everything", "alone it can move"]]
    for one in (one for one in values if one in shown):
        windows = "; ".join(map(_window, one.windows)) or "none"
        rows.append([one.label, one.text or "factor 1", windows, "; ".join(map(_ceiling, one.ceilings))])
    left = len(values) - len(shown)
    more = f"\nand {left} more values without a window" if left else ""
    head = "Each value alone, its tolerance moving along:"
    return f"{head}\n{table(rows)}{more}"


def _window(one: Window) -> str:
    return one.text if one.proven else f"{one.text} (not proven)"


def _ceiling(one: Ceiling) -> str:
    """Return where a value alone can bring a mode: "mode 1 below 127.8 Hz"."""
    low, high = sorted((one.at_zero_hz, one.at_infinity_hz))
    if math.isinf(high) and low == 0:
        return f"mode {one.mode} anywhere"
    if math.isinf(high):
        return f"mode {one.mode} above {significant(low, 4)} Hz"
    if low == 0:
        return f"mode {one.mode} below {significant(high, 4)} Hz"
    return f"mode {one.mode} {significant(low, 4)} to {significant(high, 4)} Hz"
