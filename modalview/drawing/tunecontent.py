"""What the page of measured peaks shows of a tuning: a sentence, tables, notes and the edit."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from modalview.assembly.assemble import assemble
from modalview.assembly.chosen import Chosen, values_of
from modalview.model.differences import Rewrite
from modalview.model.parts import Model
from modalview.model.tolerance_text import typed_entry
from modalview.study.tune_results import Alone, PeakFit, TunedValue, TuneResult
from modalview.study.tune_words import in_words
from modalview.units.numbers import split_number
from modalview.units.parse import unit_of
from modalview.units.quantities import Quantity
from modalview.units.show import significant

MOST_ALONE_NAMED = 3
SIGNS = (
    "Missed by: (tuned - measured) / uncertainty; within 1.96 a peak is met. 95 %: interval from the "
    "uncertainties of the peaks alone, linearised at the tuned values; with the others: moved by the worst "
    "that the values not tuned can do within their tolerances."
)
WORTH = (
    "Worth: by how many uncertainties half the range of the combination moves the peaks; below 1.96 the "
    "peaks tell no more than the range does."
)
NEEDED = "Would have to be: what the value alone would have to be, in its range or not, to meet the peaks."


@dataclass(frozen=True, slots=True)
class ValueLine:
    """A value that can be tuned.

    Parameters
    ----------
    name, label : str
    typed : str
    span : str
        The range its tolerance gives; "" where it has none.
    quantity : Quantity
    """

    name: str
    label: str
    typed: str
    span: str
    quantity: Quantity


@dataclass(frozen=True, slots=True)
class FigureLines:
    """A table under its heading; without rows it is not shown."""

    headings: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


@dataclass(frozen=True, slots=True, eq=False)
class TuneContent:
    """A tuning for the page.

    Parameters
    ----------
    sentence : str
    peaks, values, told, alone, otherwise : FigureLines
    notes : tuple of str
    edit : Rewrite or None
    """

    sentence: str
    peaks: FigureLines
    values: FigureLines
    told: FigureLines
    alone: FigureLines
    otherwise: FigureLines
    notes: tuple[str, ...]
    edit: Rewrite | None


def tunable_values(model: Model) -> tuple[ValueLine, ...]:
    """Return the values that move undamped natural frequencies and are above zero."""
    found = values_of(model, assemble(model).parameters)
    return tuple(
        ValueLine(
            one.name,
            one.label,
            one.entry.text,
            "" if one.exact else one.span(one.low, one.high),
            one.quantity,
        )
        for one in found
        if one.family != "damping" and one.nominal > 0
    )


def wish(line: ValueLine, span: str) -> str:
    """Return what is asked of tuning: the name alone, or with a range read by the window's rule.

    Raises
    ------
    UnitError
        An end of the range cannot be read.
    """
    typed = span.rpartition("=")[2].strip()
    if not typed or typed == line.span:
        return line.name
    low, to, high = (part.strip() for part in typed.partition(" to "))
    if not to:
        return f"{line.name}={typed}"
    bare = split_number(low.replace(",", "."))
    if bare is not None and not bare[1].strip() and unit_of(high):
        low = f"{low} {unit_of(high)}"
    low, high = (typed_entry(each, line.quantity).text for each in (low, high))
    return f"{line.name}={low} to {high}"


def tune_content(found: TuneResult) -> TuneContent:
    """Return what is shown of a result."""
    notes = [SIGNS] if found.values else []
    notes += [WORTH] if found.combinations else []
    notes += [NEEDED] if found.alone else []
    notes += _pairing(found.peaks)
    if found.after is not None:
        notes += [f"After it: {found.after.sentence}", *found.after.evidence[:2]]
    return TuneContent(
        sentence=_alone_sentence(found) if "--value" in found.sentence else found.sentence,
        peaks=_peaks(found.peaks),
        values=_values(found.values),
        told=_told(found),
        alone=_alone(found.alone),
        otherwise=_otherwise(found.otherwise),
        notes=(*notes, *found.notes),
        edit=found.edit,
    )


def _hz(value: float | None) -> str:
    return "" if value is None else f"{significant(value, 4)} Hz"


def _peaks(peaks: Sequence[PeakFit]) -> FigureLines:
    tuned = any(one.after_hz is not None for one in peaks)
    alike = any(one.likeness is not None for one in peaks)
    heads = ["peak", "measured", "mode", "as typed", "missed by"]
    heads += [*(["MAC"] if alike else []), *(["tuned", "missed by"] if tuned else []), "name"]
    rows = []
    for one in peaks:
        row = [one.id, f"{significant(one.measured_hz, 4)} ±{significant(one.uncertainty_hz, 2)} Hz"]
        row += [
            "none" if one.mode is None else str(one.mode),
            _hz(one.before_hz),
            _missed(one, one.before_hz),
        ]
        row += ["" if one.likeness is None else significant(one.likeness, 2)] if alike else []
        row += [_hz(one.after_hz), _missed(one, one.after_hz)] if tuned else []
        rows.append((*row, one.mode_name))
    return FigureLines(tuple(heads), tuple(rows))


def _missed(one: PeakFit, hz: float | None) -> str:
    return "" if hz is None else f"{(hz - one.measured_hz) / one.uncertainty_hz:+.2f}"


def _pairing(peaks: Iterable[PeakFit]) -> list[str]:
    said = [f"{one.id}: {one.reason}." for one in peaks if one.reason]
    for one in peaks:
        if one.others:
            noun = "mode" if len(one.others) == 1 else "modes"
            said.append(
                f"{one.id} may be {noun} {', '.join(map(str, one.others))} as well: the frequency alone does "
                "not tell. Type the number of its mode in the table of peaks."
            )
    return said


def _values(values: Sequence[TunedValue]) -> FigureLines:
    others = any(one.with_others != one.interval for one in values)
    heads = ("value", "from → to", "95 %", *(("95 % with the others",) if others else ()))
    rows = []
    for one in values:
        shown = one.chosen.shown(one.after) + (f" ({one.at_end} end)" if one.at_end else "")
        row = [one.chosen.label, f"{one.chosen.entry.text} → {shown}", one.chosen.span(*one.interval, 3)]
        row += [one.chosen.span(*one.with_others, 3)] if others else []
        rows.append(tuple(row))
    return FigureLines(heads, tuple(rows))


def _told(found: TuneResult) -> FigureLines:
    rows = [(in_words(one), significant(one.singular, 2), one.told) for one in found.combinations]
    return FigureLines(("the peaks tell", "worth", ""), tuple(rows))


def _alone(alone: Sequence[Alone]) -> FigureLines:
    rows = []
    for one in alone:
        (value, si), *_ = one.values
        ended = " (end)" if one.at_end else ""
        needed = "nothing does" if one.needed is None else value.shown(one.needed)
        rows.append((one.label, value.entry.text, value.shown(si) + ended, significant(one.worst, 2), needed))
    return FigureLines(
        ("tuned alone", "as typed", "within its range", "missed by", "would have to be"), tuple(rows)
    )


def _alone_sentence(found: TuneResult) -> str:
    met = [one for one in found.alone if one.met and not one.at_end]
    if not met:
        return "No value alone meets the peaks within its range. Choose several, or type a wider range."
    named = ", ".join(one.label for one in met[:MOST_ALONE_NAMED])
    if len(met) == 1:
        return f"One value alone meets the peaks within its range: {named}. Choose in the list what to tune."
    more = f" and {len(met) - MOST_ALONE_NAMED} more" if len(met) > MOST_ALONE_NAMED else ""
    return (
        f"{len(met)} values alone meet the peaks within their ranges: {named}{more}. The peaks do not tell "
        "which one it is; choose in the list the one known least."
    )


def _otherwise(tried: Sequence[Alone]) -> FigureLines:
    rows = []
    for one in tried:
        values: list[tuple[Chosen, float]] = list(one.values)
        texts = ", ".join(f"{value.name} {value.shown(si)}" for value, si in values)
        rows.append(
            (
                one.label,
                texts,
                significant(one.worst, 2) + (" (met as well)" if one.met and not one.at_end else ""),
            )
        )
    return FigureLines(("otherwise", "values", "missed by"), tuple(rows))
