"""The verdict in one sentence, for the top of the window and the command line."""

import math
from collections.abc import Sequence

from modalview.model.parts import Machine, Model, SpeedRange
from modalview.resonance.results import Check, Drive, Verdict
from modalview.resonance.separation import nearest, separation
from modalview.resonance.wording import hz_range, margin_text, percent
from modalview.study.results import FoundMode
from modalview.units.show import short, significant

NOTHING_TO_CHECK = "Nothing to check: give a machine its speed, its orders and the margin wanted."


def sentence(model: Model, checks: Sequence[Check], modes: Sequence[FoundMode] = ()) -> str:
    """Return the verdict in words: the deciding check first, then the others.

    Parameters
    ----------
    model : Model
    checks : sequence of Check
    modes : sequence of FoundMode
        Empty before the solve.
    """
    if not checks:
        return NOTHING_TO_CHECK
    order = list(Verdict)
    ranked = sorted(checks, key=lambda check: -order.index(check.verdict))
    bad = [check for check in ranked if check.verdict is not Verdict.CLEAR]
    said = [_in_full(model, check, modes) for check in bad]
    said += _clear(model, [check for check in ranked if check.verdict is Verdict.CLEAR], alone=not bad)
    return " ".join(said)


def excitation_text(model: Model, check: Check) -> str:
    """Return "1× of 2950 rpm (49.2 Hz)"."""
    band = check.band
    machine = next(m for m in model.machines if m.id == band.machine)
    if band.order is None:
        return band.label
    excitation = next(e for e in machine.excitations if e.id == band.excitation_id)
    if excitation.of is not None and excitation.of != machine.on:
        return f"{band.label} ({hz_range(*band.excitation)} at {speed_text(machine)})"
    return f"{band.label} of {speed_text(machine)} ({hz_range(*band.excitation)})"


def speed_text(machine: Machine) -> str:
    """Return the speed or range of a machine, in rpm."""
    rpm = 2 * math.pi / 60
    if isinstance(machine.speed, SpeedRange):
        return f"{short(machine.speed.from_.si / rpm, 5)} to {short(machine.speed.to.si / rpm, 5)} rpm"
    return f"{short(machine.speed.si / rpm, 5)} rpm" if machine.speed else "no speed"


def _in_full(model: Model, check: Check, modes: Sequence[FoundMode]) -> str:
    head = excitation_text(model, check)
    at_nominal = check.verdict is Verdict.IN_BAND
    mode = _deciding_mode(check, modes)
    if mode is None or check.undecided:
        return f"{head}: {check.reason}."
    found = f"mode {mode.number} at {significant(mode.frequency_hz, 3)} Hz"
    low, high = mode.range_hz
    if high > low:
        found += f" ({significant(low, 3)} to {significant(high, 3)} over tolerance)"
    place = _place(check, mode)
    wanted = f"{margin_text(check.band.margin)} is wanted"
    if at_nominal:
        others = f", one of {check.inside} modes in the band" if check.inside and check.inside > 1 else ""
        return f"{head}: {found} {place}{others}{_faint(check)}; {wanted}."
    return f"{head}: {found} {place}, but {_reach(check)}; {wanted}."


def _deciding_mode(check: Check, modes: Sequence[FoundMode]) -> FoundMode | None:
    """Return the mode that a verdict rests on.

    Of those in the band the nearest; a mode nearer still may lie outside where the margins are uneven.
    """
    number = check.worst_mode
    if check.verdict is Verdict.IN_BAND:
        low, high = (edge / (2 * math.pi) for edge in check.band.nominal)
        inside = [
            (m.number, (m.frequency_hz, m.frequency_hz))
            for m in modes
            if m.kind == "elastic" and low <= m.frequency_hz <= high
        ]
        found = nearest(inside, _excitation_hz(check))
        number = found[0] if found else check.nearest_mode
    return next((m for m in modes if m.number == number), None)


def _excitation_hz(check: Check) -> tuple[float, float]:
    low, high = check.band.excitation
    return low / (2 * math.pi), high / (2 * math.pi)


def _place(check: Check, mode: FoundMode) -> str:
    low, high = _excitation_hz(check)
    apart = separation((mode.frequency_hz, mode.frequency_hz), (low, high))
    if apart == 0:
        return "lies within the excitation range" if high > low else "lies on it"
    return f"is {abs(100 * apart):.1f} % {'above' if apart > 0 else 'below'}"


def _reach(check: Check) -> str:
    if check.deciding_case is None:
        return "the speed tolerance alone brings it into the band"
    if check.worst_separation:
        return f"over tolerance it comes to {percent(check.worst_separation)} ({check.deciding_case})"
    return f"over tolerance it reaches the excitation itself ({check.deciding_case})"


def _faint(check: Check) -> str:
    """Say when the force hardly drives any mode concerned; it does not change the verdict."""
    if check.drives and all(drive.drive is Drive.HARDLY for drive in check.drives):
        return ", though this excitation hardly drives it"
    return ""


def _clear(model: Model, checks: Sequence[Check], *, alone: bool) -> list[str]:
    if not checks:
        return []
    groups: dict[str, list[str]] = {}
    for check in checks:
        name = excitation_text(model, check) if alone else check.band.label
        groups.setdefault(check.wording, []).append(name)
    parts = [
        f"{', '.join(names)} {'is' if len(names) == 1 else 'are'} {word}" for word, names in groups.items()
    ]
    return [", ".join(parts) + "."]
