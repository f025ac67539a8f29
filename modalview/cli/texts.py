"""Results as plain text, no wider than a page of a report."""

from collections.abc import Iterable, Sequence
from decimal import ROUND_CEILING, ROUND_FLOOR, Context, Decimal
from pathlib import Path

from modalview.advice.doubt import Doubt
from modalview.bounds.before import to_hz
from modalview.bounds.discs import Group
from modalview.cli.cautions import CAUTION
from modalview.cli.printing import one_line
from modalview.cli.speedtexts import run_up_text
from modalview.cli.table import table, wrapped
from modalview.resonance.results import Check, Drive
from modalview.resonance.wording import band_text, hz_range, percent
from modalview.study import FoundMode, MatrixOutlook, MatrixSolution, Outlook, Share, Solution
from modalview.study.runup import passed_on_run_up
from modalview.units.show import shown_digits, significant

FORMULA = "separation = (natural frequency - excitation frequency) / excitation frequency"
WORST = "worst: over all tolerances, 0 once the range overlaps the excitation"
MOST_SHARES = 3


def bounds_text(outlook: Outlook | MatrixOutlook) -> str:
    """Return what is known before a solve."""
    bounds = outlook.bounds
    parts = [
        title_line(outlook),
        table(
            [
                ["lowest elastic mode", _span(bounds.lowest_hz)],
                ["highest mode", _span(bounds.highest_hz)],
                ["rigid-body modes", _count(bounds.rigid_body_modes)],
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
    parts += [_separated(bounds.separated)] if bounds.separated else []
    parts += [wrapped(outlook.sentence), wrapped_lines(bounds.notes)]
    doubts = outlook.doubts if isinstance(outlook, Outlook) else ()
    if doubts:
        parts.append(doubts_text(doubts))
    return "\n\n".join(parts + tail(outlook))


def doubts_text(doubts: Sequence[Doubt]) -> str:
    """Return what is doubted about the model, each with what it would mean."""
    lines = [wrapped(f"  {one.text}", "    ") + "\n" + wrapped(f"    {one.effect}", "    ") for one in doubts]
    return "Doubts:\n" + "\n".join(lines)


def _separated(groups: Sequence[Group]) -> str:
    """Return the groups of modes that discs prove, in Hz, rounded outward."""
    rows = [
        [
            f"{group.number} mode{'s' if group.number > 1 else ''}",
            _span((to_hz(group.low, up=False), to_hz(group.high, up=True))),
        ]
        for group in groups
    ]
    return "Modes that scaled Gershgorin discs keep apart:\n" + table(rows, right=frozenset({0}))


def modes_text(solution: Solution | MatrixSolution, more: str = "") -> str:
    """Return the modes as a table, with the evidence and what more there is to tell."""
    head = ["mode", "frequency", "over tolerance", "name"]
    rows = [[str(mode.number), frequency_text(mode), range_text(mode), mode.name] for mode in solution.modes]
    parts = [title_line(solution.outlook), table([head, *rows], right=frozenset({0, 1}))]
    parts += [
        f"{head}\n" + "\n".join(_listed(f"{number:>4}  ", shares) for number, shares in found)
        for head, found in (
            ("Strain energy of each mode, by link:", _energies((m.number, m.strain) for m in solution.modes)),
            (
                "Kinetic energy of each mode, by body:",
                _energies((m.number, m.kinetic) for m in solution.modes),
            ),
        )
        if found
    ]
    parts += [text for text in (wrapped_lines(solution.evidence), more) if text]
    return "\n\n".join(parts + tail(solution.outlook))


def check_text(path: Path, solution: Solution | MatrixSolution) -> str:
    """Return the verdicts, what decides them, and what was not checked."""
    outlook = solution.outlook
    verdict = outlook.verdict.value if outlook.verdict else "nothing to check"
    parts = [f"{one_line(str(path))}: {verdict.upper()}", wrapped(solution.sentence)]
    if solution.checks:
        head = ["check", "excitation", "verdict", "nearest mode", "separation", "worst"]
        rows = [_check_row(check, solution.modes, _no_nearest(solution)) for check in solution.checks]
        parts.append(table([head, *rows], right=frozenset({4, 5})))
        parts.append(f"{FORMULA}\n{WORST}")
        parts.append("\n".join(wrapped(f"{c.band.label}: {c.reason}.", "  ") for c in solution.checks))
        driven = [wrapped(f"{c.band.label}: {drive_text(c)}", "  ") for c in solution.checks if c.drives]
        if driven:
            parts.append("What each excitation drives:\n" + "\n".join(driven))
    passed = run_up_text(passed_on_run_up(solution)) if solution.checks else ""
    parts += [passed] if passed else []
    parts.append("Not checked:\n" + "\n".join(wrapped(f"  {line}", "    ") for line in outlook.not_checked))
    return "\n\n".join(parts + tail(outlook))


def _no_nearest(solution: Solution | MatrixSolution) -> str:
    """Say why no mode is named: there is none, or counts did not prove which of very many it is."""
    return "not told" if isinstance(solution, MatrixSolution) and solution.raw is None else "none"


def _check_row(check: Check, modes: Sequence[FoundMode], missing: str) -> list[str]:
    mode = next((m for m in modes if m.number == check.nearest_mode), None)
    return [
        check.band.label,
        hz_range(*check.band.excitation),
        check.wording,
        missing if mode is None else f"{mode.number} at {significant(mode.frequency_hz, 4)} Hz",
        "" if check.separation is None else percent(check.separation),
        "" if check.worst_separation is None else percent(check.worst_separation),
    ]


def drive_text(check: Check) -> str:
    """Return whether the excitation drives the modes concerned: "mode 4 hardly excited, share 0.0001"."""
    if not check.drives:
        return ""
    if all(drive.drive is Drive.UNKNOWN for drive in check.drives):
        return "unknown: no point given"
    return "; ".join(
        f"mode {d.mode} {d.drive.value}" + ("" if d.share is None else f", share {_share(d.share)}")
        for d in check.drives
    )


def _share(share: float) -> str:
    return f"{share:.2g}" if share >= 1e-6 else "0"


def title_line(outlook: Outlook | MatrixOutlook) -> str:
    """Return what a result is of."""
    n = outlook.pencil.n if isinstance(outlook, MatrixOutlook) else outlook.assembly.n
    freedoms = f"{n} degree{'' if n == 1 else 's'} of freedom"
    if isinstance(outlook, MatrixOutlook):
        return wrapped(f"{outlook.request.pair.words} ({freedoms})")
    model = outlook.request.model
    return wrapped(f"{model.title or 'untitled'} ({model.motion}, {freedoms})")


def tail(outlook: Outlook | MatrixOutlook) -> list[str]:
    """Return what stands under a result: notes and the caution."""
    notes = [wrapped(f"Note: {note}.", "  ") for note in outlook.notes]
    return ["\n".join([*notes, CAUTION])]


def wrapped_lines(texts: Iterable[str]) -> str:
    """Return texts one below the other, none wider than a page."""
    return "\n".join(wrapped(text, "  ") for text in texts)


def _span(span: tuple[float, float] | None) -> str:
    """Return a bracket to four digits, rounded outward: it must go on holding what it holds."""
    if span is None:
        return "none"
    low, high = (
        Context(prec=4, rounding=rounding).create_decimal(Decimal(edge))
        for edge, rounding in zip(span, (ROUND_FLOOR, ROUND_CEILING), strict=True)
    )
    return f"{significant(float(low), 4)} to {significant(float(high), 4)} Hz"


def _count(number: int | None) -> str:
    return "undecided" if number is None else str(number)


def frequency_text(mode: FoundMode) -> str:
    """Return a mode's frequency to the digits that its numerical error leaves."""
    if mode.kind == "rigid-body":
        return "0 Hz"
    digits = shown_digits(mode.frequency_hz, mode.numerical_error_hz)
    return f"{significant(mode.frequency_hz, digits)} Hz"


def range_text(mode: FoundMode) -> str:
    """Return its range over all tolerances: "44.12 to 57.78 Hz"."""
    low, high = mode.range_hz
    if mode.kind == "rigid-body":
        return ""
    return "as given" if low == high else f"{significant(low, 4)} to {significant(high, 4)} Hz"


def _energies(found: Iterable[tuple[int, Sequence[Share]]]) -> list[tuple[int, Sequence[Share]]]:
    return [(number, shares) for number, shares in found if shares]


def _listed(head: str, shares: Sequence[Share]) -> str:
    leading = [share for share in shares[:MOST_SHARES] if share.fraction >= 0.005]
    text = "; ".join(f"{share.label} {100 * share.fraction:.0f} %" for share in leading)
    return wrapped(head + text, " " * len(head))
