"""The frequency scale: bands, counts, bounds and found modes on one logarithmic axis."""

from dataclasses import dataclass

import numpy as np

from modalview.drawing.axis import Axis, merged, spread
from modalview.drawing.captions import in_two, shortened
from modalview.drawing.labels import Board, Line, Spot, extent
from modalview.drawing.primitives import Anchor, Box, Circles, Drawing, Item, Lines, Role, Size, Text
from modalview.drawing.scalecontent import ScaleBand, ScaleContent, ScaleCount, ScaleMode
from modalview.drawing.symbols import arrow, dashed, hatched
from modalview.drawing.textsize import BOLD, text_width
from modalview.resonance.results import Verdict
from modalview.units.show import significant

# A band this many times beyond the modes is off the scale, and marked at its edge.
NEAR = 4.0
# Bounds reach further than this from every band only on stiff models; the axis stays with the bands.
FAR = 30.0
PAD = 1.15  # of the axis beyond what it shows
LEAST_SPAN = 3.0  # highest over lowest frequency of the axis

# Columns as shares of the width between the two axes.
_LABELS = 0.475
_DISCS = (0.49, 0.57)
_BOUND, _COUNT = 0.61, 0.70
_MODE = (0.79, 0.91)
HAIR = np.array([0.0, -1.0, 0.0, 1.0])  # what a level line takes, pixels
FAR_LABEL = 120.0  # pixels at most from what a label names
LEAST_STEP = 6.0  # pixels that a mode has gone, for an arrow
MANY = 60  # discs or modes: more are drawn together
LEAST_COLUMNS = 84.0  # pixels right of the labels; with less, the discs are folded away

_RANGE_ROLE = {Verdict.IN_BAND: Role.BAD, Verdict.NOMINAL_ONLY: Role.WARN}


@dataclass(frozen=True, slots=True, eq=False)
class Scale:
    """A frequency scale and the axis it is drawn along."""

    drawing: Drawing
    axis: Axis


@dataclass(frozen=True, slots=True)
class _Frame:
    """Where things stand: the axis, the two sides, and the place for labels."""

    axis: Axis
    left: float
    right: float
    text_scale: float
    board: Board
    widest: str  # of the labels of the bounds

    @property
    def labels(self) -> float:
        """Right-hand end of the label column: large texts widen it at the cost of the others."""
        need = 12.0 + text_width(self.widest, Size.SMALL, text_scale=self.text_scale)
        wide = self.right - self.left
        return self.left + min(max(need, _LABELS * wide), 0.62 * wide)

    def x(self, share: float) -> float:
        """Pixel of a share of the width; shares beyond the labels follow their end."""
        beyond = (share - _LABELS) / (1 - _LABELS)
        return self.labels + beyond * (self.right - self.labels)


def scale_drawing(
    content: ScaleContent, width: float, height: float, *, text_scale: float = 1.0, discs: bool = True
) -> Scale:
    """Draw the frequency scale.

    Parameters
    ----------
    content : ScaleContent
    width, height : float
        Pixels.
    text_scale : float
    discs : bool
        Whether the Gershgorin bars are shown or folded.
    """
    low, high = axis_range(content)
    axis = Axis(low, high, 30.0 * text_scale, max(height - 58.0 * text_scale, 60.0 * text_scale))
    frame = _Frame(
        axis,
        12.0 + text_width("4 000", Size.SMALL, text_scale=text_scale),
        width - 14.0 - text_width("240 000", Size.SMALL, text_scale=text_scale),
        text_scale,
        Board(width, height, text_scale),
        max(("highest mode", *(_pair(one) for one in (content.lowest, content.highest) if one)), key=len),
    )
    discs = discs and frame.right - frame.labels >= LEAST_COLUMNS and len(content.discs) > 0
    pale = _discs(frame, content) if discs else ()
    items = _axes(frame) + _bands(frame, content.bands) + pale
    items += _bounds(frame, content) + _counts(frame, content.counts)
    items += _before(frame, content) + _modes(frame, content.modes)
    items += _foretold(frame, content.foretold)
    items += _titles(frame, content, discs=discs)
    return Scale(Drawing(items, (0.0, 0.0, width, height), text_scale), axis)


def axis_range(content: ScaleContent) -> tuple[float, float]:
    """Return the lowest and the highest frequency of the axis in Hz, fitted to the model."""
    known = [hz for pair in (content.lowest, content.highest) if pair is not None for hz in pair]
    every = (*content.modes, *content.foretold, *content.before)
    known += [hz for mode in every for hz in (mode.low, mode.high)]
    known = [hz for hz in known if 0 < hz < np.inf]
    bands = [hz for band in content.bands for hz in (band.low, band.high)]
    low, high = min(known or bands or [1.0]), max(known or bands or [100.0])
    if bands:
        low, high = max(low, min(bands) / FAR), min(high, max(bands) * FAR)
        near = [hz for band in content.bands if _is_near(band, low, high) for hz in (band.low, band.high)]
        low, high = min([low, *near]), max([high, *near])
    low, high = low / PAD, high * PAD
    wider = max(1.0, np.sqrt(LEAST_SPAN * low / high))
    return float(low / wider), float(high * wider)


def _is_near(band: ScaleBand, low: float, high: float) -> bool:
    return band.high >= low / NEAR and band.low <= high * NEAR


def _axes(frame: _Frame) -> tuple[Item, ...]:
    """Draw the ticks, hertz at the left and revolutions per minute at the right."""
    apart = 19.0 * frame.text_scale
    ticks = frame.axis.ticks(apart)
    rows = [(frame.axis.y_of(hz), hz) for hz in ticks]
    lines = np.array([[frame.left, y, frame.right, y] for y, _ in rows]).reshape(-1, 4)
    items: list[Item] = [Lines(lines, Role.GRID, 1.0)]
    for y, hz in rows:
        items.append(Text(frame.left - 6, y, grouped(hz), Role.MUTED, Size.SMALL, Anchor.RIGHT))
        items.append(Text(frame.right + 6, y, grouped(60 * hz), Role.MUTED, Size.SMALL))
    y = 10.0 * frame.text_scale
    items.append(Text(frame.left - 6, y, "Hz", Role.INK, Size.SMALL, Anchor.RIGHT, bold=True))
    items.append(Text(frame.right + 6, y, "rpm", Role.INK, Size.SMALL, bold=True))
    return tuple(items)


def grouped(number: float) -> str:
    """Write a round number with its thousands apart.

    >>> grouped(24000.0), grouped(0.5)
    ('24 000', '0.5')
    """
    if number < 1000:
        return f"{number:.4g}"
    return f"{number:,.0f}".replace(",", " ")


def _bands(frame: _Frame, bands: tuple[ScaleBand, ...]) -> tuple[Item, ...]:
    axis = frame.axis
    shown = [band for band in bands if band.high > axis.low_hz and band.low < axis.high_hz]
    items: list[Item] = []
    own: dict[int, slice] = {}
    for band in shown:
        top, bottom = axis.y_of(band.high), axis.y_of(band.low)
        box = (frame.left, top, frame.right - frame.left, bottom - top)
        items.append(Box(*box, 0.0, None, Role.WARN, 0.0, 0.05))
        items.append(Lines(hatched(*box), Role.WARN, 0.8, 0.28))
        items.append(Box(*box, 0.0, Role.WARN, None, 0.7))
        edges = sorted({band.from_, band.to})
        lines = [
            [frame.left, axis.y_of(hz), frame.right, axis.y_of(hz)]
            for hz in edges
            if axis.low_hz <= hz <= axis.high_hz
        ]
        items.append(Lines(np.array(lines).reshape(-1, 4), Role.WARN, 1.8))
        taken = np.array([[frame.left, y - 1.0, frame.right, y + 1.0] for y in (top, bottom)])
        own[id(band)] = frame.board.take(np.vstack([taken, np.array(lines).reshape(-1, 4) + HAIR]))
    written = {id(band): _band_label(frame, band, own[id(band)]) for band in _from_above(shown)}
    for band in _from_above(shown):  # what stands elsewhere takes no room from what stands at its line
        items += written[id(band)] or _band_label_near(frame, band)
    return tuple(items) + _off_scale(frame, [band for band in bands if band not in shown])


def _band_label(frame: _Frame, band: ScaleBand, lines: slice) -> list[Item]:
    """Write a band's name beside its line; else on it, on paper; shortened, or in two lines; else nothing."""
    text_scale = frame.text_scale
    room = (frame.labels - frame.left - 8) / BOLD
    most = (frame.x(_COUNT) - 14.0 * text_scale - frame.left - 8) / BOLD
    whole, short = (_bold(shortened(band.label, wide, Size.SMALL, text_scale)) for wide in (most, room))
    y = frame.axis.y_of(band.to)
    two = _two_lines(frame, band)
    for label in ((whole,), two, (short,)):
        if label == two and any(line.text.endswith("…") for line in two):
            continue
        placed = frame.board.place(label, _beside_line(frame, y, label))
        if placed:
            return [*placed]
        placed = frame.board.place(label, [Spot(frame.left + 8, y, 1, 0)], over=lines)
        if placed:
            x1, y1, x2, y2 = extent(placed, text_scale)
            return [Box(x1 - 3, y1, x2 - x1 + 6, y2 - y1, 0.0, None, Role.PAPER, 0.0), *placed]
    return []


def _band_label_near(frame: _Frame, band: ScaleBand) -> list[Item]:
    """Write a band's name as near to its line as there is room."""
    two = _two_lines(frame, band)
    return [*_labelled(frame, two, frame.axis.y_of(band.to) - frame.board.size(two)[1] / 2)]


def _two_lines(frame: _Frame, band: ScaleBand) -> tuple[Line, ...]:
    room = (frame.labels - frame.left - 8) / BOLD
    parts = in_two(band.label, room, frame.text_scale)
    return tuple(_bold(shortened(part, room, Size.SMALL, frame.text_scale)) for part in parts)


def _from_above(bands: list[ScaleBand]) -> list[ScaleBand]:
    return sorted(bands, key=lambda band: -band.to)


def _bold(text: str) -> Line:
    return Line(text, Role.WARN, Size.SMALL, bold=True)


def _beside_line(frame: _Frame, y: float, lines: tuple[Line, ...]) -> list[Spot]:
    gap = 2.5 + frame.board.size(lines)[1] / 2
    return [Spot(frame.left + 6, y - gap, 1, 0), Spot(frame.left + 6, y + gap, 1, 0)]


def _labelled(frame: _Frame, lines: tuple[Line, ...], y: float) -> list[Text]:
    """Write into the label column, as near to a height as there is room."""
    high = frame.board.size(lines)[1] / 2
    low, top = frame.axis.bottom - high, frame.axis.top + high
    reach = round(FAR_LABEL * frame.text_scale)
    steps = sorted(range(-reach, reach + 1, 3), key=abs)
    spots = [Spot(frame.left + 6, min(max(y + step, top), low), 1, 0) for step in steps]
    return frame.board.place(lines, spots)


def _off_scale(frame: _Frame, bands: list[ScaleBand]) -> tuple[Item, ...]:
    """Mark bands beyond the axis at its edge, with an arrow towards them."""
    items: list[Item] = []
    for band in bands:
        above = band.low >= frame.axis.high_hz
        y = frame.axis.top + 9 * frame.text_scale if above else frame.axis.bottom - 9 * frame.text_scale
        span = sorted({grouped(float(f"{hz:.3g}")) for hz in (band.from_, band.to)}, key=len)
        line = Line(f"{band.label} {' to '.join(span)} Hz", Role.WARN, Size.SMALL, bold=True)
        room = frame.x(_COUNT) - 12.0 * frame.text_scale - frame.left - 22
        line = Line(
            shortened(line.text, room / BOLD, Size.SMALL, frame.text_scale), Role.WARN, Size.SMALL, bold=True
        )
        steps = range(0, 200, 4) if above else range(0, -200, -4)
        placed = frame.board.place((line,), [Spot(frame.left + 22, y + step, 1, 0) for step in steps])
        if placed:
            start, up = placed[0].y + (5.0 if above else -5.0), -11.0 if above else 11.0
            shaft = arrow(np.array([[frame.left + 11, start]]), np.array([[0.0, up]]), 5.0)
            items += [Lines(shaft, Role.WARN, 1.6), *placed]
    return tuple(items)


def _discs(frame: _Frame, content: ScaleContent) -> tuple[Item, ...]:
    """Draw the Gershgorin bars, thin and pale, side by side."""
    first, last = frame.x(_DISCS[0]), frame.x(_DISCS[1])
    if len(content.discs) > MANY:  # one bar for discs that overlap: thinner ones could not be told apart
        ends = frame.axis.ys_of(merged(content.discs[:, 0], content.discs[:, 2]))
        across = np.full(len(ends), (first + last) / 2)
        frame.board.take(np.stack([across - 5, ends.min(axis=1), across + 5, ends.max(axis=1)], axis=1))
        return (Lines(np.stack([across, ends[:, 0], across, ends[:, 1]], axis=1), Role.MUTED, 8.0, 0.4),)
    ordered = content.discs[np.argsort(content.discs[:, 1])]
    pitch = min(8.0, (last - first) / max(len(ordered) - 1, 1))
    x = (first + last) / 2 + (np.arange(len(ordered)) - (len(ordered) - 1) / 2) * pitch
    bottom, middle, top = frame.axis.ys_of(ordered).T
    bars = np.stack([x, bottom, x, top], axis=1)
    dots = np.stack([x, middle], axis=1)
    width = min(3.0, 0.7 * pitch) if len(ordered) > 1 else 3.0
    frame.board.take(np.stack([x - 3, top, x + 3, bottom], axis=1))
    return (
        Lines(bars, Role.MUTED, width, 0.55),
        Circles(dots, min(2.4, width), None, Role.MUTED, 0.0),
    )


def _bounds(frame: _Frame, content: ScaleContent) -> tuple[Item, ...]:
    """Draw the bounds of the lowest and of the highest mode as thick short bars, with their numbers."""
    items: list[Item] = []
    x = frame.x(_BOUND)
    for name, pair, below in (
        ("lowest mode", content.lowest, True),
        ("highest mode", content.highest, False),
    ):
        if pair is None:
            continue
        low, high = (frame.axis.y_of(hz) for hz in pair)
        middle = (low + high) / 2
        if low - high < 3.0:
            low, high = middle + 1.5, middle - 1.5
        items.append(Lines(np.array([[x, low, x, high]]), Role.INK, 4.0))
        lines = (Line(name, Role.INK, Size.SMALL), Line(_pair(pair), Role.INK, Size.SMALL))
        items += _labelled(
            frame, lines, low + 20 * frame.text_scale if below else high - 20 * frame.text_scale
        )
    return tuple(items)


def _pair(pair: tuple[float, float]) -> str:
    """Write both ends with the digits of the modes beside them, none of which may seem to lie beyond."""
    return f"{significant(pair[0], 4)} to {significant(pair[1], 4)}"


def _counts(frame: _Frame, counts: tuple[ScaleCount, ...]) -> tuple[Item, ...]:
    """Draw a bracket over every interval with the number of modes in a circle."""
    axis = frame.axis
    shown = [count for count in counts if count.high > axis.low_hz and count.low < axis.high_hz]
    radius = 9.0 * frame.text_scale
    middles = [(axis.y_of(count.low) + axis.y_of(count.high)) / 2 for count in shown]
    order = sorted(range(len(shown)), key=middles.__getitem__)
    wanted = [middles[number] for number in order]
    placed = spread(wanted, 2 * radius + 2, axis.top + radius, axis.bottom - radius)
    items: list[Item] = []
    reached = 0.0
    for number, count in enumerate(shown):
        overlapping = count.low < reached * (1 - 1e-9)
        reached = max(reached, count.high)
        x = frame.x(_COUNT) + (6.0 if overlapping else 0.0)
        items.append(_bracket(x, axis.y_of(count.low) - 1.5, axis.y_of(count.high) + 1.5, _role(count)))
        items += _circle(count, frame.x(_COUNT), placed[order.index(number)], radius)
    items.sort(key=lambda item: not isinstance(item, Lines))  # the circles lie on the brackets
    return tuple(items)


def _role(count: ScaleCount) -> Role:
    if not count.in_band:
        return Role.INK
    if count.number is None:
        return Role.WARN
    return Role.BAD if count.number > 0 else Role.INK


def _bracket(x: float, low: float, high: float, role: Role) -> Lines:
    foot = 6.0
    return Lines(np.array([[x, low, x, high], [x, low, x + foot, low], [x, high, x + foot, high]]), role, 1.5)


def _circle(count: ScaleCount, x: float, y: float, radius: float) -> list[Item]:
    role = _role(count)
    text = "?" if count.number is None else str(count.number)
    marked = role is not Role.INK
    return [
        Circles(np.array([[x, y]]), radius, role, Role.PAPER, 2.4 if marked else 1.2),
        Text(x, y, text, role, Size.SMALL, Anchor.MIDDLE, bold=marked),
    ]


def _modes(frame: _Frame, modes: tuple[ScaleMode, ...]) -> tuple[Item, ...]:
    """Draw found modes as ticks with their tolerance range and number."""
    axis = frame.axis
    shown = sorted((m for m in modes if axis.low_hz <= m.hz <= axis.high_hz), key=lambda mode: -mode.hz)
    widest = max((str(mode.number) for mode in shown), key=len, default="")
    room = 8.0 + text_width(widest, Size.SMALL, bold=True, text_scale=frame.text_scale)
    left, right = frame.x(_MODE[0]), min(frame.x(_MODE[1]), frame.right - room)
    items: list[Item] = []
    for role in dict.fromkeys(_mode_role(mode) for mode in shown):
        alike = [mode for mode in shown if _mode_role(mode) is role]
        ranges = np.array([(mode.low, mode.high) for mode in alike])
        if len(shown) > MANY:  # ranges that overlap are one
            ranges = merged(ranges[:, 0], ranges[:, 1])
        for bottom, top in axis.ys_of(ranges).tolist():
            items.append(Box(left, top, right - left, max(bottom - top, 1.0), 2.0, None, role, 0.0, 0.2))
        ticks = axis.ys_of(np.array([mode.hz for mode in alike]))
        across = np.stack([0 * ticks + left, ticks, 0 * ticks + right, ticks], axis=1)
        items.append(Lines(across, role, 2.4 if len(shown) <= MANY else 1.0))
    return tuple(items) + _numbers(frame, shown, right + 5)


def _foretold(frame: _Frame, modes: tuple[ScaleMode, ...]) -> tuple[Item, ...]:
    """Draw modes that are foretold, not found: pale and dashed, their numbers beside."""
    axis = frame.axis
    shown = sorted((m for m in modes if axis.low_hz <= m.hz <= axis.high_hz), key=lambda mode: -mode.hz)
    if not shown:
        return ()
    room = 8.0 + text_width(max((str(mode.number) for mode in shown), key=len), Size.SMALL)
    left, right = frame.x(_MODE[0]), min(frame.x(_MODE[1]), frame.right - room * frame.text_scale)
    ticks = axis.ys_of(np.array([mode.hz for mode in shown]))
    across = np.stack([0 * ticks + left, ticks, 0 * ticks + right, ticks], axis=1)
    numbers = _numbers(frame, shown, right + 5, Role.MUTED)
    return Lines(dashed(across, 4.0, 3.0), Role.MUTED, 1.6), *numbers


def _before(frame: _Frame, content: ScaleContent) -> tuple[Item, ...]:
    """Draw the modes before a change as pale ticks, and how far each has gone beside them."""
    axis = frame.axis
    shown = [mode for mode in content.before if axis.low_hz <= mode.hz <= axis.high_hz]
    if not shown:
        return ()
    left, right = frame.x(_MODE[0]), frame.x(_MODE[1])
    ticks = axis.ys_of(np.array([mode.hz for mode in shown]))
    across = np.stack([0 * ticks + left - 8.0, ticks, 0 * ticks + right, ticks], axis=1)
    items: list[Item] = [Lines(across, Role.MUTED, 1.8, 0.55)]
    now = {mode.number: axis.y_of(mode.hz) for mode in content.modes or content.foretold}
    pairs = [(y, now.get(mode.number, y)) for mode, y in zip(shown, ticks.tolist(), strict=True)]
    gone = [(old, new) for old, new in pairs if abs(new - old) > LEAST_STEP]
    if gone and len(shown) <= MANY:
        start = np.array([[left - 5.0, old] for old, _ in gone])
        step = np.array([[0.0, new - old] for old, new in gone])
        items.append(Lines(arrow(start, step, 4.0), Role.MUTED, 1.3))
    return tuple(items)


def _numbers(frame: _Frame, shown: list[ScaleMode], x: float, role: Role | None = None) -> tuple[Item, ...]:
    """Write the modes' numbers beside their ticks; of too many, every second, third, ..."""
    axis, apart = frame.axis, 14.5 * frame.text_scale
    every = max(1, int(np.ceil(len(shown) * apart / (axis.bottom - axis.top))))
    written = shown[::every]
    places = spread([axis.y_of(mode.hz) for mode in written], apart, axis.top, axis.bottom)
    return tuple(
        Text(x, y, str(mode.number), role or _mode_role(mode), Size.SMALL, Anchor.LEFT, bold=role is None)
        for mode, y in zip(written, places, strict=True)
    )


def _mode_role(mode: ScaleMode) -> Role:
    return Role.ACCENT if mode.verdict is None else _RANGE_ROLE.get(mode.verdict, Role.ACCENT)


def _titles(frame: _Frame, content: ScaleContent, *, discs: bool) -> tuple[Item, ...]:
    """Write what the columns show, under them; rigid-body modes are at zero, below every axis."""
    size, text_scale = Size.SMALL, frame.text_scale
    columns = [(frame.x(_COUNT), ("modes", "inside"))]
    if content.modes or content.foretold:
        word = "found" if content.modes else "foretold"
        columns.append((frame.x(sum(_MODE) / 2), (word, "modes")))
    widths = [max(text_width(line, size, text_scale=text_scale) for line in lines) for _, lines in columns]
    apart = 8.0 + max(widths[0], sum(widths) / len(widths))
    places = spread([x for x, _ in columns], apart, frame.left, frame.right + apart / 2)
    titles = [(x, Anchor.MIDDLE, lines) for x, (_, lines) in zip(places, columns, strict=True)]
    if discs:
        titles.append((places[0] - apart / 2 - 8.0 * text_scale, Anchor.RIGHT, ("Gershgorin", "bounds")))
    items: list[Item] = [
        Text(x, frame.axis.bottom + (13.0 + 14.5 * row) * text_scale, line, Role.MUTED, size, anchor)
        for x, anchor, lines in titles
        for row, line in enumerate(lines)
    ]
    if content.rigid_body_modes:
        number = content.rigid_body_modes
        text = f"and {number} rigid-body mode{'s' if number > 1 else ''} at 0 Hz"
        text = shortened(text, frame.board.sheet[0] - 12, size, text_scale)
        items.append(Text(6.0, frame.axis.bottom + 46.0 * text_scale, text, Role.MUTED, size))
    return tuple(items)
