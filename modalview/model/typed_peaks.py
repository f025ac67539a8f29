"""Measured peaks as texts of a table: read, added from a spreadsheet's lines, retyped and removed."""

import re
from collections.abc import Collection, Sequence
from dataclasses import replace

from modalview.errors import InputError
from modalview.model.composites import composite_text, read_composite
from modalview.model.differences import Rewrite, checked_edit
from modalview.model.ids import fresh_id
from modalview.model.parts import End, Excitation, MeasuredPeak, Model
from modalview.model.tolerance_text import typed_entry
from modalview.units.numbers import split_number
from modalview.units.quantities import FREQUENCY, LENGTH

COLUMNS = ("peak", "frequency", "uncertainty", "body", "direction")
ID, FREQUENCY_AT, UNCERTAINTY, BODY, DIRECTION = range(len(COLUMNS))
STEM = "peak "
_AT = " at "  # between a body and the point on it, from its centre of gravity


def peak_texts(model: Model, peak: MeasuredPeak) -> tuple[str, ...]:
    """Return what the columns show of a peak."""
    uncertainty = peak.uncertainty.text if peak.uncertainty is not None else ""
    direction = composite_text(Excitation, "direction", peak.direction) if peak.direction is not None else ""
    return peak.id, peak.frequency.text, uncertainty, _place_text(model, peak.at), direction or ""


def _place_text(model: Model, at: End | None) -> str:
    if at is None:
        return ""
    if at.body is not None:
        name = next((one.name or one.id for one in model.bodies if one.id == at.body), at.body)
    else:
        name = next((one.name or one.id for one in model.supports if one.id == at.support), at.support or "")
    return f"{name}{_AT}{'; '.join(one.text for one in at.offset)}" if at.offset else name


def retyped_peak(model: Model, number: int, column: int, text: str) -> Rewrite:
    """Return the edit that types a text into one column of a peak, from 0.

    The point on the body and the shape are kept where they still hold.

    Raises
    ------
    InputError
        The text cannot be read, or breaks a rule.
    """
    old = model.measured[number]
    new = _retyped(model, old, column, text.strip())
    after = replace(model, measured=(*model.measured[:number], new, *model.measured[number + 1 :]))
    return checked_edit(model, after, f"type {COLUMNS[column]} of {old.id}")


def _retyped(model: Model, peak: MeasuredPeak, column: int, text: str) -> MeasuredPeak:
    if column == ID:
        if not text:
            raise InputError("a peak needs a name of its own")
        return replace(peak, id=text)
    if column == FREQUENCY_AT:
        return replace(peak, frequency=typed_entry(text, FREQUENCY))
    if column == UNCERTAINTY:
        return replace(peak, uncertainty=typed_entry(text, FREQUENCY) if text else None)
    if column == BODY:
        return peak if text == _place_text(model, peak.at) else replace(peak, at=_place(model, text))
    return replace(peak, direction=read_composite(Excitation, "direction", text) if text else None)


def _place(model: Model, text: str) -> End | None:
    if not text:
        return None
    body, at, point = text.rpartition(_AT)
    if at and not any(text in (one.id, one.name) for one in model.bodies):
        offset = tuple(typed_entry(one, LENGTH) for one in re.split(r";|,\s", point))
        return End(body=_body(model, body.strip()), offset=offset)
    return End(body=_body(model, text))


def _body(model: Model, text: str) -> str:
    wanted = text.casefold()
    found = [one.id for one in model.bodies if one.id == text]
    found = found or [
        one.id for one in model.bodies if wanted in (one.id.casefold(), (one.name or "").casefold())
    ]
    if len(found) == 1:
        return found[0]
    if found:
        raise InputError(f'"{text}" names several bodies: write one of the ids {", ".join(found)}')
    names = ", ".join(one.name or one.id for one in model.bodies[:12])
    more = f" and {len(model.bodies) - 12} more" if len(model.bodies) > 12 else ""
    raise InputError(f'there is no body "{text}"; there are {names}{more}')


def with_peak(model: Model, texts: Sequence[str]) -> Model:
    """Return the model with one more peak, not yet held against the rules; without a name it gets one.

    Raises
    ------
    InputError
        A text cannot be read; names the column.
    """
    cells = [text.strip() for text in (*texts, *[""] * len(COLUMNS))[: len(COLUMNS)]]
    try:
        peak = MeasuredPeak(
            id=cells[ID] or fresh_id(model, STEM), frequency=typed_entry(cells[FREQUENCY_AT], FREQUENCY)
        )
        for column in (UNCERTAINTY, BODY, DIRECTION):
            peak = _retyped(model, peak, column, cells[column])
    except InputError as reason:
        raise InputError(f"{cells[ID] or 'the new peak'}: {reason}") from reason
    return replace(model, measured=(*model.measured, peak))


def added_peak(model: Model, texts: Sequence[str]) -> Rewrite:
    """Return the edit that adds one peak; InputError as for `with_peak`, or where it breaks a rule."""
    after = with_peak(model, texts)
    return checked_edit(model, after, f"add {after.measured[-1].id}")


def pasted_peaks(model: Model, lines: Sequence[Sequence[str]]) -> tuple[Rewrite | None, tuple[str, ...]]:
    """Return the one edit that adds a spreadsheet's lines as peaks, and why lines are left out.

    The columns are those of the table; a line may begin at the frequency. A first line without any digit is a
    heading: a unit in its brackets holds for bare numbers below.

    >>> from modalview.model.parts import Body
    >>> edit, refused = pasted_peaks(Model(), [["Frequency (Hz)"], ["17,5"], ["loud"]])
    >>> [(one.id, one.frequency.text) for one in edit.apply(Model()).measured], len(refused)
    ([('peak 1', '17.5 Hz')], 1)
    """
    units: list[str] = []
    first = 0
    if lines and not any(re.search(r"\d", cell) for cell in lines[0]):
        units, first = [_unit_in(cell) for cell in lines[0]], 1
    after, refused = model, []
    for number, line in enumerate(lines[first:], first + 1):
        if not any(cell.strip() for cell in line):
            continue
        cells = [_with_unit(cell, units, at) for at, cell in enumerate(line)]
        try:
            tried = with_peak(after, cells if not _is_frequency(cells[0]) else ["", *cells])
            checked_edit(after, tried, "")
        except InputError as reason:
            refused.append(f"line {number}, {reason}")
            continue
        after = tried
    count = len(after.measured) - len(model.measured)
    text = f"paste {count} peak{'' if count == 1 else 's'}"
    return (checked_edit(model, after, text) if count else None), tuple(refused)


def _unit_in(heading: str) -> str:
    found = re.search(r"[(\[]([^)\]]+)[)\]]", heading)
    return found[1].strip() if found else ""


def _with_unit(cell: str, units: Sequence[str], at: int) -> str:
    bare = split_number(cell.strip().replace(",", "."))
    needs = bare is not None and not bare[1].strip() and at < len(units) and units[at]
    return f"{cell.strip()} {units[at]}" if needs else cell


def _is_frequency(cell: str) -> bool:
    try:
        typed_entry(cell, FREQUENCY)
    except InputError:
        return False
    return True


def without_peaks(model: Model, numbers: Collection[int]) -> Rewrite:
    """Return the edit that removes peaks by their places, from 0."""
    gone = [one.id for at, one in enumerate(model.measured) if at in numbers]
    left = tuple(one for at, one in enumerate(model.measured) if at not in numbers)
    what = gone[0] if len(gone) == 1 else f"{len(gone)} peaks"
    return checked_edit(model, replace(model, measured=left), f"remove {what}")
