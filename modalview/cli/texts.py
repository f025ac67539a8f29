"""Results as plain text."""

from collections.abc import Sequence
from pathlib import Path

from modalview.cli.cautions import CAUTION
from modalview.cli.table import table
from modalview.resonance.results import Check, Drive
from modalview.resonance.wording import band_text, hz_range, percent
from modalview.study import FoundMode, Outlook, Share, Solution
from modalview.units.show import shown_digits, significant

FORMULA = "separation = (natural frequency - excitation frequency) / excitation frequency"
MOST_SHARES = 3


def bounds_text(outlook: Outlook) -> str:
    """Return what is known before a solve."""
    bounds = outlook.bounds
    parts = [
        _title(outlook),
        table(
            [
                ["lowest elastic mode", _span(bounds.lowest_hz)],
                ["highest mode", _span(bounds.highest_hz)],
                ["rigid-body modes", str(bounds.rigid_body_modes)],
            ]
        ),
    ]
    if outlook.checks:
        head = ["check", "avoidance band", "modes inside", "possible", "certain"]
        rows = [
            [c.band.label, band_text(c.band), _count(c.inside), _count(c.possible), _count(c.certain)]
            for c in outlook.checks
        ]
        parts.append(table([head, *rows], right=frozenset({2, 3, 4})))
    parts += [outlook.sentence, "\n".join(bounds.notes)]
    return "\n\n".join(parts + _tail(outlook))


def modes_text(solution: Solution) -> str:
    """Return the modes as a table, with the evidence."""
    head = ["mode", "frequency", "over tolerance", "name", "strain energy", "kinetic energy"]
    rows = [
        [
            str(mode.number),
            _frequency(mode),
            _range(mode),
            mode.name,
            _shares(mode.strain),
            _shares(mode.kinetic),
        ]
        for mode in solution.modes
    ]
    parts = [_title(solution.outlook), table([head, *rows], right=frozenset({0, 1}))]
    parts.append("\n".join(solution.evidence))
    return "\n\n".join(parts + _tail(solution.outlook))


def check_text(path: Path, solution: Solution) -> str:
    """Return the verdicts, what decides them, and what was not checked."""
    outlook = solution.outlook
    verdict = outlook.verdict.value if outlook.verdict else "nothing to check"
    parts = [f"{path}: {verdict.upper()}", solution.sentence]
    if solution.checks:
        head = ["check", "excitation", "verdict", "nearest mode", "separation", "worst", "drives it"]
        parts.append(table([head, *(_check_row(check, solution.modes) for check in solution.checks)]))
        parts.append("\n".join(f"{check.band.label}: {check.reason}." for check in solution.checks))
        parts.append(f"{FORMULA}; worst: over all tolerances, 0 once the range overlaps the excitation")
    parts.append("Not checked:\n" + "\n".join(f"  {line}" for line in outlook.not_checked))
    return "\n\n".join(parts + _tail(outlook))


def _check_row(check: Check, modes: Sequence[FoundMode]) -> list[str]:
    mode = next((m for m in modes if m.number == check.nearest_mode), None)
    return [
        check.band.label,
        hz_range(*check.band.excitation),
        check.wording,
        "none" if mode is None else f"{mode.number} at {significant(mode.frequency_hz, 4)} Hz",
        "" if check.separation is None else percent(check.separation),
        "" if check.worst_separation is None else percent(check.worst_separation),
        drive_text(check),
    ]


def drive_text(check: Check) -> str:
    """Return whether the excitation drives the modes concerned: "mode 4: hardly excited (share 0.0001)"."""
    if not check.drives:
        return ""
    if all(drive.drive is Drive.UNKNOWN for drive in check.drives):
        return "unknown: no point given"
    return ", ".join(
        f"mode {d.mode}: {d.drive.value}" + ("" if d.share is None else f" (share {_share(d.share)})")
        for d in check.drives
    )


def _share(share: float) -> str:
    return f"{share:.2g}" if share >= 1e-6 else "0"


def _title(outlook: Outlook) -> str:
    model = outlook.request.model
    return f"{model.title or 'untitled'} ({model.motion}, {outlook.assembly.n} degrees of freedom)"


def _tail(outlook: Outlook) -> list[str]:
    notes = [f"Note: {note}." for note in outlook.notes]
    return ["\n".join([*notes, CAUTION])]


def _span(span: tuple[float, float] | None) -> str:
    return "none" if span is None else f"{significant(span[0], 4)} to {significant(span[1], 4)} Hz"


def _count(number: int | None) -> str:
    return "undecided" if number is None else str(number)


def _frequency(mode: FoundMode) -> str:
    if mode.kind == "rigid-body":
        return "0 Hz"
    digits = shown_digits(mode.frequency_hz, mode.numerical_error_hz)
    return f"{significant(mode.frequency_hz, digits)} Hz"


def _range(mode: FoundMode) -> str:
    low, high = mode.range_hz
    return "as given" if low == high else f"{significant(low, 4)} to {significant(high, 4)} Hz"


def _shares(shares: Sequence[Share]) -> str:
    leading = [share for share in shares[:MOST_SHARES] if share.fraction >= 0.005]
    return ", ".join(f"{share.label} {100 * share.fraction:.0f} %" for share in leading)
