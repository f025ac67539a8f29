"""Varied values as plain text."""

from collections.abc import Sequence

import numpy as np

from modalview.cli.cautions import CAUTION
from modalview.cli.table import WIDTH, table, wrapped
from modalview.cli.vary_documents import LOWER, UPPER, motion_unit, upper_and_middle
from modalview.resonance.results import Verdict
from modalview.study.vary_results import Grid, Meet, Samples
from modalview.units.show import significant

# So many modes fit a page beside a value and a verdict.
MOST_MODES = 6
SYMBOLS = {Verdict.CLEAR.value: ".", Verdict.NOMINAL_ONLY.value: "o", Verdict.IN_BAND.value: "#"}
MAP = ". clear, o clear at nominal only, # mode in band"


def grid_text(grid: Grid) -> str:
    """Return a grid: a table of one value, a map of two."""
    model = grid.request.model
    parts = [wrapped(f"{model.title or 'untitled'} ({model.motion}, {grid.coordinates} degrees of freedom)")]
    parts += _of_one(grid) if len(grid.axes) == 1 else _of_two(grid)
    parts.append("\n".join([*(wrapped(f"Note: {note}", "  ") for note in grid.notes), CAUTION]))
    return "\n\n".join(parts)


def _of_one(grid: Grid) -> list[str]:
    (one, numbers), *_ = grid.axes
    modes = min(grid.frequencies_hz.shape[-1], MOST_MODES)
    rows = [[one.label, *(f"mode {n + 1}" for n in range(modes)), *(["verdict"] if grid.worst else [])]]
    for number, value in enumerate(numbers.tolist()):
        hertz = grid.frequencies_hz[number, :modes]
        verdict = [grid.worst[number]] if grid.worst else []
        rows.append([one.shown(value), *(f"{significant(f, 4)} Hz" for f in hertz.tolist()), *verdict])
    parts = [table(rows, right=frozenset(range(modes + 1)))]
    left = grid.frequencies_hz.shape[-1] - modes
    if left > 0:
        parts.append(f"{left} more modes are in --json and --csv.")
    if grid.worst:
        parts.append(wrapped(_clear(grid)))
    if grid.meets:
        parts.append("\n".join(wrapped(_meet_text(grid, each), "  ") for each in grid.meets))
    return parts


def _clear(grid: Grid) -> str:
    (one, numbers), *_ = grid.axes
    if not grid.clear:
        return "No point is clear of every check."
    if len(grid.clear) == 1 and grid.clear[0] == (numbers[0], numbers[-1]):
        return "Every point is clear of every check."
    runs = [one.shown(low) if low == high else one.span(low, high) for low, high in grid.clear]
    return f"Clear of every check at the points of {', '.join(runs)}."


def _meet_text(grid: Grid, meet: Meet) -> str:
    one = grid.axes[0][0]
    first, second = meet.lines
    where = f"at {one.shown(meet.value, 3)}, {significant(meet.frequency_hz, 4)} Hz"
    if meet.crossing:
        return f"Modes {first} and {second} cross {where}; their shapes stay as they are."
    gap = significant(meet.gap_hz, 2)
    return f"Modes {first} and {second} veer {where}: they come within {gap} Hz and swap their shapes."


def _of_two(grid: Grid) -> list[str]:
    (first, rows), (second, columns) = grid.axes
    if not grid.worst:
        return [
            "There is nothing to check: give a machine its speed, orders and margin. --json has the modes."
        ]
    room = WIDTH - 24
    width = columns.size
    if width > room:
        return [f"A map of {width} columns is wider than a page: take --points {room} or fewer, or --csv."]
    symbols = "".join(SYMBOLS[one] for one in grid.worst)
    lines = [
        [first.shown(value), symbols[i * width : (i + 1) * width]] for i, value in enumerate(rows.tolist())
    ]
    head = f"{first.label} down, {second.label} across from {second.span(columns[0], columns[-1])}:"
    return [wrapped(head), table(lines, right=frozenset({0})), MAP]


def samples_text(drawn: Samples) -> str:
    """Return a sample as tables."""
    request, model = drawn.request, drawn.request.model
    head = f"{request.samples} samples of {len(drawn.drawn)} values, {request.spread}, seed {request.seed}"
    parts = [
        wrapped(
            f"{model.title or 'untitled'} ({model.motion}, {drawn.coordinates} degrees of freedom): {head}"
        ),
        _modes_table(drawn),
    ]
    if drawn.in_band:
        rows = [["check", "samples with a mode in the band", "share"]]
        rows += [[one.label, str(one.samples), f"{100 * one.share:.3g} %"] for one in drawn.in_band]
        parts.append(table(rows, right=frozenset({1, 2})))
    if drawn.amplitudes:
        parts.append(_motion_table(drawn))
    parts.append("\n".join([*(wrapped(f"Note: {note}", "  ") for note in drawn.notes), CAUTION]))
    return "\n\n".join(parts)


def _modes_table(drawn: Samples) -> str:
    proven = drawn.proven_hz
    rows = [["mode", "as typed", "95 % of the samples", "all samples"]]
    rows[0] += ["proven range"] if proven is not None else []
    for number, hertz in enumerate(drawn.frequencies_hz.T):
        lower, upper = np.percentile(hertz, (LOWER, UPPER)).tolist()
        row = [str(number + 1), f"{significant(float(drawn.nominal_hz[number]), 4)} Hz"]
        row += [_span((lower, upper)), _span((float(hertz.min()), float(hertz.max())))]
        rows.append([*row, *([_span(proven[number].tolist())] if proven is not None else [])])
    return table(rows, right=frozenset({0, 1}))


def _span(ends: Sequence[float]) -> str:
    return f"{significant(ends[0], 4)} to {significant(ends[1], 4)} Hz"


def _motion_table(drawn: Samples) -> str:
    factor, unit = (1.0, "rad/s rms") if motion_unit(drawn) == "rad/s" else (1e3, "mm/s rms")
    rows = [["largest at running speeds", "as typed", "median", "97.5 % below", "highest"]]
    for one in drawn.amplitudes:
        middle, upper = upper_and_middle(one.sampled)
        sizes = (one.nominal, middle, upper, float(one.sampled.max()))
        rows.append([one.watch, *(f"{significant(factor * size, 3)} {unit}" for size in sizes)])
    return table(rows, right=frozenset(range(1, 5)))
