"""keepclear tune: chosen values tuned to measured peaks, and what the peaks cannot tell."""

import argparse
from collections.abc import Sequence
from pathlib import Path
from typing import Any

from modalview.cli.documents import head
from modalview.cli.printing import NOT_CLEAR, OK, progress, say, say_json
from modalview.cli.table import table, wrapped
from modalview.cli.texts import tail, title_line
from modalview.errors import FileAccessError, UsageError
from modalview.store import read_model, save_model
from modalview.study.tune import tune
from modalview.study.tune_results import Alone, PeakFit, TunedValue, TuneRequest, TuneResult
from modalview.study.tune_words import in_words
from modalview.units.show import significant

SIGNS = (
    "missed by: (tuned - measured) / uncertainty; within 1.96 a peak is met. 95 %: interval from the "
    "uncertainties of the peaks alone, linearised at the tuned values; with the others: moved by the worst "
    "that the values not tuned can do, linearised too."
)
TOLD = (
    "worth: by how many uncertainties half the range of the combination moves the peaks; below 1.96 the "
    "peaks tell no more than the range does."
)
NEEDED = "would have to be: what the value alone would have to be, in its range or not, to meet the peaks."


def prepare(parser: argparse.ArgumentParser) -> None:
    """Declare the words of the command."""
    parser.add_argument("file", type=Path, metavar="FILE", help="a .keepclear file with measured peaks")
    parser.add_argument(
        "--value",
        action="append",
        default=[],
        metavar='"k3=50 to 500 kN/mm"',
        help="a value to tune, within its tolerance or the range given; once for each",
    )
    parser.add_argument(
        "--pair",
        action="append",
        default=[],
        metavar='"bump 1=2"',
        help="take this peak for the mode of this number; once for each",
    )
    parser.add_argument("-o", "--output", type=Path, metavar="OUT.keepclear", help="write the tuned model")
    parser.add_argument("--json", action="store_true", help="print JSON: SI, with the unit in each key")
    parser.set_defaults(run=run)


def run(words: argparse.Namespace) -> int:
    """Print what was tuned; 0 when every chosen value was, 1 otherwise."""
    model = read_model(words.file)
    pairs = tuple(_pair(text) for text in words.pair)
    if words.output is not None and words.output.exists():
        raise FileAccessError(f"{words.output} is there already; choose another name")
    found = tune(TuneRequest(model, tuple(words.value), pairs, progress=progress))
    if words.output is not None and found.edit is not None:
        save_model(found.edit.apply(model), words.output, known=None)
    if words.json:
        say_json(tune_document(words.file, found))
    else:
        say(tune_text(found))
    return OK if found.edit is not None else NOT_CLEAR


def _pair(text: str) -> tuple[str, int]:
    peak, equals, mode = text.rpartition("=")
    if not equals or not mode.strip().isdecimal():
        raise UsageError(f'--pair wants a peak and the number of a mode, such as "bump 1=2"; found "{text}"')
    return peak.strip(), int(mode)


def tune_text(found: TuneResult) -> str:
    """Return the tuning as tables."""
    parts = [title_line(found.before.outlook), wrapped(found.sentence), _peaks_table(found.peaks)]
    parts += [wrapped(line) for line in _pairing_lines(found.peaks)]
    if found.values:
        parts += [_values_table(found.values), wrapped(SIGNS, "  ")]
    if found.combinations:
        parts += [_combinations_table(found), wrapped(TOLD, "  ")]
    if found.alone:
        parts += [_alone_table(found.alone), wrapped(NEEDED, "  ")]
    if found.otherwise:
        parts.append(_otherwise_table(found.otherwise))
    if found.after is not None:
        parts.append(wrapped(f"After it: {found.after.sentence}"))
        parts.append("\n".join(found.after.evidence[:2]))
    parts.append("\n".join(wrapped(f"Note: {note}", "  ") for note in found.notes))
    return "\n\n".join(parts) + "\n" + tail(found.before.outlook)[0]


def _hz(value: float | None) -> str:
    return "" if value is None else f"{significant(value, 4)} Hz"


def _peaks_table(peaks: Sequence[PeakFit]) -> str:
    tuned = any(one.after_hz is not None for one in peaks)
    alike = any(one.likeness is not None for one in peaks)
    rows = [["peak", "measured", "mode", "as typed"]]
    rows[0] += [*(["MAC"] if alike else []), *(["tuned", "missed by"] if tuned else []), "name"]
    for one in peaks:
        row = [one.id, f"{significant(one.measured_hz, 4)} ±{significant(one.uncertainty_hz, 2)} Hz"]
        row += ["none" if one.mode is None else str(one.mode), _hz(one.before_hz)]
        row += [significant(one.likeness, 2) if one.likeness is not None else ""] if alike else []
        if tuned:
            row += [_hz(one.after_hz), "" if one.missed_by is None else f"{one.missed_by:+.2f}"]
        rows.append([*row, one.mode_name])
    return table(rows, right=frozenset({1, 2, 3, *([4] if alike else [])}))


def _pairing_lines(peaks: Sequence[PeakFit]) -> list[str]:
    said = [f"{one.id}: {one.reason}." for one in peaks if one.reason]
    for one in peaks:
        if one.others:
            noun = "mode" if len(one.others) == 1 else "modes"
            numbers = ", ".join(map(str, one.others))
            said.append(
                f"{one.id} may be {noun} {numbers} as well: the frequency alone does not tell. Choose by "
                f'--pair "{one.id}=N", or measure its shape.'
            )
    return said


def _values_table(values: Sequence[TunedValue]) -> str:
    rows = [["value", "as typed", "tuned", "95 %"]]
    for one in values:
        shown = one.chosen.shown
        rows.append(
            [
                one.chosen.label,
                one.chosen.entry.text,
                shown(one.after) + (" (end)" if one.at_end else ""),
                _span(one.interval, one),
            ]
        )
    said = [
        wrapped(
            f"{one.chosen.label}, with the others anywhere within tolerance: {_span(one.with_others, one)}"
        )
        for one in values
        if one.with_others != one.interval
    ]
    return "\n".join([table(rows), *said])


def _span(ends: tuple[float, float], one: TunedValue) -> str:
    return one.chosen.span(*ends, 3)


def _combinations_table(found: TuneResult) -> str:
    rows = [["the peaks tell", "worth", ""]]
    rows += [[in_words(one), significant(one.singular, 2), one.told] for one in found.combinations]
    return table(rows, right=frozenset({1}))


def _alone_table(alone: Sequence[Alone]) -> str:
    rows = [["tuned alone", "as typed", "within its range", "missed by", "would have to be"]]
    for one in alone:
        (value, si), *_ = one.values
        rows.append(
            [
                one.label,
                value.entry.text,
                value.shown(si) + (" (end)" if one.at_end else ""),
                significant(one.worst, 2),
                "nothing does" if one.needed is None else value.shown(one.needed),
            ]
        )
    return table(rows, right=frozenset({3}))


def _otherwise_table(tried: Sequence[Alone]) -> str:
    rows = [["otherwise", "values", "missed by"]]
    rows += [
        [
            one.label,
            ", ".join(f"{value.name} {value.shown(si)}" for value, si in one.values),
            significant(one.worst, 2) + (" (met as well)" if one.met and not one.at_end else ""),
        ]
        for one in tried
    ]
    return table(rows)


def tune_document(path: Path, found: TuneResult) -> dict[str, Any]:
    """Return the tuning for JSON."""
    return {
        **head(path, found.before.outlook),
        "sentence": found.sentence,
        "tuned": found.edit is not None,
        "refused": found.refused or None,
        "peaks": [_peak_document(one) for one in found.peaks],
        "values": [_value_document(one) for one in found.values],
        "combinations": [
            {
                "values": [{"value": name, "share": share} for name, share in one.values],
                "worth": one.singular,
                "told": one.told,
            }
            for one in found.combinations
        ],
        "alone": [_tried_document(one) for one in found.alone],
        "otherwise": [_tried_document(one) for one in found.otherwise],
        "verdict": found.after.outlook.verdict if found.after else None,
        "modes_hz": [mode.frequency_hz for mode in found.after.modes] if found.after else None,
        "notes": list(found.notes),
    }


def _peak_document(one: PeakFit) -> dict[str, Any]:
    return {
        "peak": one.id,
        "measured_hz": one.measured_hz,
        "uncertainty_hz": one.uncertainty_hz,
        "uncertainty_assumed": one.assumed,
        "mode": one.mode,
        "frequency_hz": one.before_hz,
        "likeness": one.likeness,
        "may_be_modes": list(one.others),
        "reason": one.reason or None,
        "tuned_mode": one.tuned_mode,
        "tuned_hz": one.after_hz,
        "missed_by": one.missed_by,
    }


def _value_document(one: TunedValue) -> dict[str, Any]:
    return {
        "value": one.chosen.name,
        "unit": one.chosen.quantity.si_unit,
        "as_typed": one.chosen.nominal,
        "tuned_to": one.after,
        "range": [one.chosen.low, one.chosen.high],
        "interval_95": list(one.interval),
        "interval_with_others": list(one.with_others),
        "at_end": one.at_end or None,
    }


def _tried_document(one: Alone) -> dict[str, Any]:
    return {
        "label": one.label,
        "values": [{"value": value.name, "tuned_to": si} for value, si in one.values],
        "missed_by": one.worst,
        "met": one.met,
        "at_end": one.at_end,
        "needed": one.needed,
    }
