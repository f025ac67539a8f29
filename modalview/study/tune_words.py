"""What tuning to measured peaks found, in sentences."""

from collections.abc import Sequence

from modalview.assembly.chosen import Chosen
from modalview.study.tune_results import Alone, PeakFit, ToldCombination, TunedValue, TuneResult
from modalview.units.show import significant

NOT = "not determined"
# Beyond so many uncertainties a peak counts as missed (95 % of a normal distribution lie within).
MISSED = 1.96


def refusal(values: Sequence[Chosen], peaks: Sequence[str], told: Sequence[ToldCombination]) -> str:
    """Return why the peaks cannot determine the chosen values; empty where they can.

    >>> refusal([None] * 5, ["a", "b"], [])[:76]
    '2 peaks determine at most 2 values, and 5 are chosen: the rest would be free'
    """
    if len(values) > len(peaks):
        said = f"{_number(len(peaks), 'peak')} determine{'s' if len(peaks) == 1 else ''} at most "
        said += f"{_number(len(peaks), 'value')}, and {len(values)} are chosen: the rest would be free to be "
        said += "anything. Choose fewer, or measure more modes"
        best = next((one for one in told if one.told != NOT), None)
        if best is not None:
            said += f"; the peaks tell most of {in_words(best)}"
        return said
    lost = [one for one in told if one.told == NOT]
    if not lost:
        return ""
    if len(lost[0].values) == 1:
        return f"no peak is moved by {lost[0].values[0][0]}, so that none can tell it; choose another value"
    return (
        f"the peaks cannot tell {in_words(lost[0])}: that moves none of them, so that only the other "
        "combinations are known. Choose fewer values, or measure a mode that it moves"
    )


def in_words(one: ToldCombination) -> str:
    """Return "k1.stiffness up with k2.stiffness down"."""
    if len(one.values) == 1:
        return one.values[0][0]
    return " with ".join(f"{name} {'up' if share > 0 else 'down'}" for name, share in one.values)


def beyond(values: Sequence[TunedValue], peaks: Sequence[PeakFit], free: Alone | None) -> str:
    """Return what is told where values ran into the ends of their ranges."""
    ends = [one for one in values if one.at_end]
    said = " and ".join(f"{one.chosen.label} runs into the {one.at_end} end of its range" for one in ends)
    said += f" ({', '.join(_range(one.chosen) for one in ends)})"
    missed = [one for one in peaks if one.missed_by is not None and abs(one.missed_by) > MISSED]
    if not missed:
        named = ", ".join(one.chosen.name for one in ends)
        said += f" while the peaks are met: they hardly tell {named}"
        return f"{said}. Leave it as it is, and tune the others"
    said += f" and {', '.join(_missed(one) for one in missed)}"
    if free is not None:
        would = ", ".join(f"{one.label} {one.shown(si)}" for one, si in free.values)
        said += f". Without its range the peaks would be met by {would}: widen the range if that can be, or "
        return said + "choose another value"
    return said + ". Choose other values, or a wider range if that can be"


def _range(one: Chosen) -> str:
    return one.span(one.low, one.high)


def _missed(one: PeakFit) -> str:
    return (
        f"{one.id} is missed: {significant(one.after_hz or 0.0, 4)} Hz against "
        f"{significant(one.measured_hz, 4)} Hz measured"
    )


def sentence(found: TuneResult) -> str:
    """Return the result in one or two sentences."""
    if found.refused:
        return f"Not tuned: {found.refused}."
    if found.alone:
        return _of_alone(found)
    values = " and ".join(f"{one.chosen.label} to {one.chosen.shown(one.after)}" for one in found.values)
    used = [one for one in found.peaks if one.after_hz is not None]
    missed = [one for one in used if abs(one.missed_by or 0.0) > MISSED]
    met = ", ".join(
        f"mode {one.tuned_mode} at {significant(one.after_hz or 0.0, 4)} Hz for {one.id}"
        for one in used
        if one not in missed
    )
    said = f"Tuned {values}" + (f": {met}" if met else "") + "."
    if missed:
        said += f" But {', '.join(_missed(one) for one in missed)}: another value is off, or the pairing is."
    if any(one.met and not one.at_end for one in found.otherwise):
        said += " Other values, or another pairing, meet the peaks as well: see below."
    return said + _verdicts(found)


def _verdicts(found: TuneResult) -> str:
    if found.after is None or found.after.outlook.verdict is None or found.before.outlook.verdict is None:
        return ""
    before, after = found.before.outlook.verdict.value, found.after.outlook.verdict.value
    return f" Verdict: {after}{'' if before == after else f' (was: {before})'}."


def _of_alone(found: TuneResult) -> str:
    alone = found.alone
    off = [_off(one) for one in found.peaks if one.mode is not None]
    if max(off) <= MISSED:
        return "The peaks are met by the values as typed: nothing needs tuning."
    met = [one for one in alone if one.met and not one.at_end]
    if not met:
        return (
            "No value alone meets the peaks within its range. Choose several, or a wider range, by "
            '--value "NAME=LOW to HIGH".'
        )
    named = ", ".join(one.label for one in met[:3])
    if len(met) == 1:
        return f"One value alone meets the peaks within its range: {named}. Choose by --value what to tune."
    more = f" and {len(met) - 3} more" if len(met) > 3 else ""
    return (
        f"{len(met)} values alone would meet the peaks within their ranges: {named}{more}. The peaks do not "
        "tell which one it is; choose by --value the one known least."
    )


def _off(one: PeakFit) -> float:
    return abs((one.before_hz or 0.0) - one.measured_hz) / one.uncertainty_hz


def _number(count: int, noun: str) -> str:
    return f"{count} {noun}{'' if count == 1 else 's'}"
