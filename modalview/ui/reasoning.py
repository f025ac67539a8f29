"""Why a verdict is what it is: band, counts, deciding case, margin and drive of each check, in words.

Texts only, taken from the study's results; the panel shows them.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from modalview.model.parts import Machine, Model, SpeedRange
from modalview.ui.checkcard import signed_percent
from modalview.units.show import short, significant

_TURN = 6.283185307179586  # rad of one turn
_RPM = _TURN / 60
# Digits in the formulas: enough to follow the sum, fewer than rounding would show.
_DIGITS = 5
_CASES = {
    "nominal": "as given",
    "soft-heavy": "soft-heavy: every stiffness least, every mass largest",
    "stiff-light": "stiff-light: every stiffness largest, every mass least",
}
# Worst first: what has to be looked at stands on top.
_ORDER = ("mode in band", "clear at nominal only", "clear")


@dataclass(frozen=True, slots=True)
class CountLine:
    """One count: the values it was made at, the edge, and how many modes."""

    values: str
    edge: str
    number: str


@dataclass(frozen=True, slots=True)
class CheckReasoning:
    """The reasoning of one check.

    Parameters
    ----------
    title, verdict, wording : str
    band : tuple of str
        How the band follows from speed, order and margin.
    counts : tuple of CountLine
    proof : tuple of str
        What follows from the counts, and which case decides.
    margin : tuple of str
        Separations with their numbers filled in; empty before the modes are found.
    drive : tuple of str
        Whether the excitation drives the modes concerned.
    """

    title: str
    verdict: str
    wording: str
    band: tuple[str, ...]
    counts: tuple[CountLine, ...]
    proof: tuple[str, ...]
    margin: tuple[str, ...]
    drive: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Reasoning:
    """The reasoning of all checks, and what holds for all of them."""

    checks: tuple[CheckReasoning, ...]
    rests_on: tuple[str, ...]


def reasoning(outlook: Any, solution: Any = None) -> Reasoning:
    """Return why the verdict is what it is.

    Parameters
    ----------
    outlook : study.Outlook
    solution : study.Solution or None
        Of the same model, if its modes are found.
    """
    known = outlook if solution is None else solution
    modes = () if solution is None else solution.modes
    model = outlook.request.model
    checks = sorted(known.checks, key=lambda check: _ORDER.index(str(check.verdict)))
    return Reasoning(tuple(_check(model, check, modes) for check in checks), _rests_on(outlook))


def _check(model: Model, check: Any, modes: Sequence[Any]) -> CheckReasoning:
    machine = next(one for one in model.machines if one.id == check.band.machine)
    several = f" of {machine.name or machine.id}" if len(model.machines) > 1 else ""
    return CheckReasoning(
        title=f"{check.band.label}{several}",
        verdict=str(check.verdict),
        wording=check.wording,
        band=_band(machine, check.band),
        counts=tuple(_count_line(edge) for edge in sorted(check.evidence, key=_place)),
        proof=_proof(check),
        margin=_margin(check, modes),
        drive=_drive(check),
    )


def _hz(edge: float | Fraction, *, exact: bool = False) -> str:
    return f"{significant(float(edge) if exact else float(edge) / _TURN, _DIGITS)} Hz"


def _band(machine: Machine, band: Any) -> tuple[str, ...]:
    low, high = band.excitation
    below, above = (f"{significant(share, 3)}".rstrip("0").rstrip(".") for share in band.margin)
    lines = [
        _source(machine, band),
        (
            f"Band to be kept clear: {_hz(low)} × (1 − {below}) = {_hz(band.nominal[0])}"
            f" to {_hz(high)} × (1 + {above}) = {_hz(band.nominal[1])}."
        ),
    ]
    if band.tolerance != band.nominal:
        lines.append(
            f"Over the speed tolerance the band is {_hz(band.tolerance[0])} to {_hz(band.tolerance[1])}."
        )
    return tuple(lines)


def _source(machine: Machine, band: Any) -> str:
    low, high = band.excitation
    found = _hz(low) if low == high else f"{_hz(low)} to {_hz(high)}"
    if band.order is None:
        return f"Fixed frequency: {found}."
    speed = machine.speed
    ends = (speed.from_, speed.to) if isinstance(speed, SpeedRange) else (speed,)
    rpm = " to ".join(f"{short(end.si / _RPM)}" for end in ends if end is not None)
    ratio = low / (band.order * ends[0].si) if ends[0] is not None else 1.0
    geared = "" if abs(ratio - 1) < 1e-9 else f" × {significant(ratio, 4)} (through gears)"
    return f"Excitation: order {short(band.order)} × {rpm} rpm{geared} / 60 = {found}."


def _place(edge: Any) -> tuple[int, float]:
    return list(_CASES).index(edge.case), float(edge.edge)


def _count_line(edge: Any) -> CountLine:
    exact = isinstance(edge.edge, Fraction)
    number = "undecided" if edge.count.number is None else str(edge.count.number)
    return CountLine(_CASES[edge.case], f"{edge.side} {_hz(edge.edge, exact=exact)}", number)


def _proof(check: Any) -> tuple[str, ...]:
    lines = []
    if check.possible == 0:
        lines.append(_none_possible(check))
    else:
        lines += _numbers(check)
    if check.deciding_case is not None:
        lines.append(
            f"The {check.deciding_case} case decides: it is the one that brings a mode into the band."
        )
    elif str(check.verdict) == "clear at nominal only" and check.possible is not None:
        lines.append("The tolerance of the speed alone brings a mode into the band.")
    lines += [f"Left open by rounding: {one}." for one in check.undecided]
    lines.append(_edges(check))
    return tuple(lines)


def _numbers(check: Any) -> list[str]:
    """Return how many modes are in the band as given, at some and at every value, each with its sum."""
    found = {(edge.case, edge.side, float(edge.edge)): edge.count.number for edge in check.evidence}
    low, high = check.band.nominal
    least, most = check.band.tolerance
    lines = [f"In the band as given: {_sum(found, ('nominal', high), ('nominal', low), check.inside)}."]
    widened = _tolerated(found, ("nominal", most), ("nominal", least))
    if (least, most) != (low, high) and widened:
        lines.append(f"In the band widened by the speed tolerance, as given: {widened}.")
    by_values = _tolerated(found, ("soft-heavy", high), ("stiff-light", low))
    if (least, most) != (low, high) and by_values:
        lines.append(f"At the speed as given, soft-heavy less stiff-light: {by_values}.")
    if any(case == "soft-heavy" for case, _, _ in found):
        possible = _sum(found, ("soft-heavy", most), ("stiff-light", least), check.possible)
        lines.append(f"At most, soft-heavy to the upper edge less stiff-light below the lower: {possible}.")
        if check.inside != 0:
            # The other way round, with edges inward.
            certain = _sum(found, ("stiff-light", high), ("soft-heavy", low), check.certain, inward=True)
            lines.append(f"At every value, stiff-light less soft-heavy: {certain}.")
    return lines


def _tolerated(
    found: dict[tuple[str, str, float], int | None], upper: tuple[str, float], lower: tuple[str, float]
) -> str:
    """Return the sum that tells which tolerance reaches the band; "" where it was not counted."""
    one, other = found.get((upper[0], "at most", upper[1])), found.get((lower[0], "below", lower[1]))
    return "" if one is None or other is None else f"{one} − {other} = {max(0, one - other)}"


def _sum(
    found: dict[tuple[str, str, float], int | None],
    upper: tuple[str, float],
    lower: tuple[str, float],
    result: int | None,
    *,
    inward: bool = False,
) -> str:
    sides = ("below", "at most") if inward else ("at most", "below")
    one = found.get((upper[0], sides[0], upper[1]))
    other = found.get((lower[0], sides[1], lower[1]))
    if result is None:
        return "left open by rounding"
    return str(result) if one is None or other is None else f"{one} − {other} = {result}"


def _none_possible(check: Any) -> str:
    numbers = [edge.count.number for edge in check.evidence[:2]]
    sum_ = f"{numbers[0]} − {numbers[1]} = 0: " if None not in numbers and len(numbers) > 1 else ""
    cases = {edge.case for edge in check.evidence}
    where = "at any value within tolerance" if "soft-heavy" in cases else "at the values as given"
    return f"{sum_}no mode lies in the band {where}."


def _edges(check: Any) -> str:
    if check.proof == "exactly":
        return "Counted in integers, without any rounding."
    moved = [
        abs(edge.count.edge - float(edge.edge) ** 2) / max(abs(edge.count.edge), 1e-300)
        for edge in check.evidence
        if not isinstance(edge.edge, Fraction) and edge.count.edge
    ]
    share = f" by at most {short(max(moved) / 2, 1)} of the frequency" if moved else ""
    return (
        f"Counts of pivots below zero (Sylvester); edges moved outward{share}, further than rounding reaches."
    )


def _margin(check: Any, modes: Sequence[Any]) -> tuple[str, ...]:
    if check.nearest_mode is None or check.separation is None:
        return ()
    low, high = check.band.excitation
    nearest = modes[check.nearest_mode - 1]
    lines = [_separation(nearest.frequency_hz, low / _TURN, high / _TURN, nearest.number)]
    if check.worst_mode is not None and check.worst_separation is not None:
        worst = modes[check.worst_mode - 1]
        ends = " to ".join(significant(hz, _DIGITS) for hz in worst.range_hz)
        if worst.range_hz[0] < worst.range_hz[1]:
            lines.append(
                f"Over all tolerances mode {worst.number} is {ends} Hz: {_reached(check.worst_separation)}."
            )
    return tuple(lines)


def _separation(mode_hz: float, low: float, high: float, number: int) -> str:
    fn = significant(mode_hz, _DIGITS)
    if low <= mode_hz <= high:
        return f"Mode {number} at {fn} Hz lies within the excitation range: the separation is 0."
    nearest = high if mode_hz > high else low
    fe, share = significant(nearest, _DIGITS), (mode_hz - nearest) / nearest
    return f"Mode {number}: (fn − fe) / fe = ({fn} − {fe}) / {fe} = {signed_percent(share)}."


def _reached(share: float) -> str:
    return (
        f"at worst {signed_percent(share)} from the excitation"
        if share
        else "it reaches the excitation itself"
    )


def _drive(check: Any) -> tuple[str, ...]:
    lines = []
    for one in check.drives:
        share = "" if one.share is None else f" (it takes {short(100 * one.share, 2)} % of the force)"
        word = str(one.drive)
        said = {"unknown": "no point of action is given, so how strongly it is driven is not known"}.get(
            word, word
        )
        lines.append(f"Mode {one.mode}: {said}{share}.")
    if lines:
        lines.append("How strongly a mode is driven never changes the verdict.")
    return tuple(lines)


def _rests_on(outlook: Any) -> tuple[str, ...]:
    exact = [note for note in outlook.notes if note.startswith("taken as exact")]
    lines = [_sentence(note) for note in exact]
    if not outlook.toleranced:
        lines.append("No value has a tolerance: the verdict holds for the values exactly as given.")
    else:
        lines.append(
            "Natural frequencies only rise with any stiffness and only fall with any mass (Courant-Fischer): "
            "the soft-heavy and the stiff-light case enclose every combination of values within tolerance."
        )
        lines.append("It does not cover geometry, gear ratios, parts that are not modelled, and damping.")
    lines.append(
        "The margin is a share of the excitation frequency. Rigid-body modes are left out of every band."
    )
    lines += [f"Not checked: {one}." for one in outlook.not_checked]
    return tuple(lines)


def _sentence(text: str) -> str:
    return text[0].upper() + text[1:] + "."
