"""The response chart: an amplitude over machine speed, the damping it rests on, what it is held against."""

from dataclasses import dataclass

import numpy as np

from modalview.drawing.axislinear import tick_text
from modalview.drawing.curves import chained, clipped, dashed_along
from modalview.drawing.flowing import SAMPLE, Sample, flowing
from modalview.drawing.labels import Board, Line, Spot, extent
from modalview.drawing.overlay import wrapped
from modalview.drawing.primitives import (
    Box,
    Circles,
    Drawing,
    Floats,
    Item,
    Lines,
    Polygons,
    Role,
    Size,
    Text,
)
from modalview.drawing.responsechartcontent import ResponseContent, Series
from modalview.drawing.responsecharttable import at_speed, figure, worst_of
from modalview.drawing.speedaxes import (
    MOST_TICKS,
    SpeedFrame,
    axes_items,
    right_room,
    rpm_text,
    shaded,
    span_of,
    struck,
    tick_room,
    value_ticks,
)
from modalview.drawing.symbols import hatched
from modalview.drawing.textsize import line_height

# Over the largest value that is shown there is this much room, for names of peaks and limits.
HEADROOM = 1.22
LOG_DECADES = 4.0  # below the largest value
# Where nothing damps a peak, the chart ends at this many times the amplitude that most speeds stay below.
CALM_SHARE, CALM_TIMES = 0.9, 4.0
MOST_PEAKS = 6  # named; all are marked
# Dashes and colours that tell excitations apart, also in grey.
PATTERNS: tuple[tuple[float, ...], ...] = ((7.0, 4.0), (2.0, 3.0), (10.0, 3.0, 2.0, 3.0), (16.0, 5.0))
ROLES = (Role.WARN, Role.GOOD, Role.INK, Role.MUTED)
_MOST_DAMPING = 3  # lines of text
_COLUMN = 5.0  # pixels across in which a curve is kept free of names


@dataclass(frozen=True, slots=True, eq=False)
class ResponseChart:
    """A chart and how to read it.

    Parameters
    ----------
    drawing : Drawing
    frame : SpeedFrame
    content : ResponseContent
    """

    drawing: Drawing
    frame: SpeedFrame
    content: ResponseContent


def response_chart(
    content: ResponseContent,
    width: float,
    height: float,
    *,
    text_scale: float = 1.0,
    logarithmic: bool = False,
    titled: bool = True,
) -> ResponseChart:
    """Draw a response chart.

    Parameters
    ----------
    content : ResponseContent
    width, height : float
        Pixels.
    text_scale : float
    logarithmic : bool
        Amplitudes by their logarithm, over four decades at most.
    titled : bool
        Whether what is shown where stands above; damping and unit always do.
    """
    head, reached = _head(content, width, text_scale, titled=titled)
    frame = _frame(content, (width, height), reached, text_scale, logarithmic=logarithmic)
    names = _Names(frame, content, (width, height), text_scale)
    items = _ranges(frame, content) + axes_items(frame, content.unit, text_scale)
    items += _band(frame, content) + _curves(frame, content)
    items += _running(frame, content, names) + _limits(frame, content, names) + _peaks(frame, content, names)
    return ResponseChart(Drawing(head + items, (0.0, 0.0, width, height), text_scale), frame, content)


def style_of(content: ResponseContent, number: int) -> tuple[Role, tuple[float, ...], float]:
    """Return colour, dashes and width of a curve."""
    if content.series[number].total:
        return Role.ACCENT, (), 2.0
    return ROLES[number % len(ROLES)], PATTERNS[number % len(PATTERNS)], 1.5


def reading_items(chart: ResponseChart, rpm: float) -> tuple[Item, ...]:
    """Return a line at a speed with a dot on every curve."""
    frame, content = chart.frame, chart.content
    x = frame.x_of(rpm)
    items: list[Item] = [Lines(np.array([[x, frame.top, x, frame.bottom]]), Role.INK, 1.0)]
    for number, one in enumerate(content.series):
        y = frame.y_of(at_speed(content.speeds_rpm, one.values, rpm))
        if frame.top <= y <= frame.bottom:
            role = style_of(content, number)[0]
            items.append(Circles(np.array([[x, y]]), 4.0, role, Role.PAPER, 2.0))
    return tuple(items)


def reading_text(content: ResponseContent, rpm: float) -> str:
    """Say what every curve reads at a speed: "2 950 rpm (49.2 Hz): 1× unbalance 4.1 mm/s rms"."""
    read = [f"{one.label} {figure(at_speed(content.speeds_rpm, one.values, rpm))}" for one in content.series]
    return f"{rpm_text(rpm)} rpm ({rpm / 60:.4g} Hz): {', '.join(read)} {content.unit}"


def stops(content: ResponseContent) -> tuple[float, ...]:
    """Return the speeds worth reading, ascending: ends of the running range, peaks and half-power speeds."""
    found = {*content.running_rpm, *(peak.rpm for peak in content.peaks)}
    found |= {edge for peak in content.peaks for edge in peak.half_power_rpm if edge is not None}
    low, high = float(content.speeds_rpm[0]), float(content.speeds_rpm[-1])
    return tuple(sorted(rpm for rpm in found if low <= rpm <= high))


def _head(
    content: ResponseContent, width: float, text_scale: float, *, titled: bool
) -> tuple[tuple[Item, ...], float]:
    """Write what is shown, the damping and the legend; return where the chart may begin."""
    step = line_height(Size.SMALL, text_scale=text_scale)
    y = 4.0 - step / 2
    items: list[Item] = []
    if titled:
        y += step
        title = f"{content.quantity} of {content.place}, {content.unit}"
        items.append(Text(8.0, y, title, Role.INK, Size.SMALL, bold=True))
    named = "damping" in content.damping.lower()
    damping = content.damping if named or not content.damping else f"Damping: {content.damping}"
    rows = wrapped(damping, width - 20.0, text_scale) if damping else []
    for row in rows[:_MOST_DAMPING]:
        y += step
        items.append(Text(8.0, y, row, Role.MUTED, Size.SMALL))
    entries, y = flowing(_legend(content), width, y + step, text_scale)
    return (*items, *entries), y + step / 2


def _legend(content: ResponseContent) -> list[Sample]:
    """Return a sample and a name for each curve and each range."""
    samples: list[Sample] = []
    for number, one in enumerate(content.series):
        role, pattern, wide = style_of(content, number)
        line = dashed_along(np.array([[0.0, 0.0, SAMPLE, 0.0]]), pattern)
        samples.append(Sample(one.label, (Lines(line, role, wide),)))
    if content.band is not None:
        box = Box(0.0, -4.5, SAMPLE, 9.0, 0.0, None, Role.ACCENT, 0.0, 0.2)
        samples.append(Sample("half to double the damping", (box,)))
    if any(content.margin):
        hatch = Lines(hatched(0.0, -4.5, SAMPLE, 9.0, 6.0), Role.WARN, 0.9, 0.6)
        samples.append(Sample(f"margin wanted, {margin_text(content.margin)}", (hatch,)))
    if content.barred_rpm:
        hatch = Lines(hatched(0.0, -4.5, SAMPLE, 9.0, 4.0), Role.INK, 0.9, 0.6)
        samples.append(Sample("barred by you", (hatch,)))
    return samples


def margin_text(margin: tuple[float, float]) -> str:
    """Write a margin.

    >>> margin_text((0.15, 0.15)), margin_text((0.1, 0.2))
    ('±15 %', '−10 % and +20 %')
    """
    below, above = (f"{100 * share:.3g} %" for share in margin)
    return f"±{below}" if margin[0] == margin[1] else f"−{below} and +{above}"


def _frame(
    content: ResponseContent,
    size: tuple[float, float],
    reached: float,
    text_scale: float,
    *,
    logarithmic: bool,
) -> SpeedFrame:
    step = line_height(Size.SMALL, text_scale=text_scale)
    high = HEADROOM * _highest(content)
    low = high * 10.0**-LOG_DECADES if logarithmic else 0.0
    if logarithmic:
        least = min(
            (float(one.values[one.values > 0].min(initial=high)) for one in content.series), default=low
        )
        low, high = max(low, 0.7 * least), high * 1.6
    top, bottom = reached + step + 8.0, size[1] - step - 10.0
    bottom = max(bottom, top + 40.0)
    ticks = value_ticks(
        low, high, min(int((bottom - top) / (step + 9.0)), MOST_TICKS), logarithmic=logarithmic
    )
    left = tick_room([tick_text(one) for one in ticks], text_scale)
    speeds = content.speeds_rpm
    right = size[0] - right_room(float(speeds[-1]), text_scale)
    return SpeedFrame(
        left,
        max(right, left + 40.0),
        top,
        bottom,
        float(speeds[0]),
        max(float(speeds[-1]), float(speeds[0]) + 1e-9),
        low,
        high,
        logarithmic,
    )


def _highest(content: ResponseContent) -> float:
    """Return the largest value that is shown: of an undamped resonance only its flanks are."""
    speeds, total = content.speeds_rpm, content.total.values
    even = np.linspace(speeds[0], speeds[-1], 400)
    shown = [one.value for one in content.limits]
    if np.isfinite(total).all():
        shown.append(float(total.max(initial=0.0)))
        if content.band is not None:
            shown.append(min(float(np.nanmax(content.band[0])), 1.6 * shown[-1]))
    else:
        finite = np.isfinite(total)
        calm = np.interp(even, speeds[finite], total[finite]) if finite.any() else np.ones(1)
        shown.append(CALM_TIMES * float(np.quantile(calm, CALM_SHARE)))
    found = max(shown, default=0.0)
    return found if found > 0 else 1.0


def _ranges(frame: SpeedFrame, content: ResponseContent) -> tuple[Item, ...]:
    """Shade the speeds at which the machine runs, hatch the margin beside them and what is barred."""
    low, high = content.running_rpm
    items = shaded(frame, low, high, Role.INK, 0.07)
    below, above = content.margin
    for edges in ((low * (1 - below), low), (high, high * (1 + above))):
        items += tuple(
            one for one in struck(frame, *edges, Role.WARN) if isinstance(one, Lines) and edges[0] < edges[1]
        )
    for barred in content.barred_rpm:
        items += struck(frame, *barred, Role.INK, 5.0)
    return items


def _band(frame: SpeedFrame, content: ResponseContent) -> tuple[Item, ...]:
    if content.band is None:
        return ()
    xs = frame.xs_of(content.speeds_rpm)
    edges = [np.clip(np.nan_to_num(frame.ys_of(one)), frame.top, frame.bottom) for one in content.band]
    outline = np.concatenate(
        [np.stack([xs, edges[0]], axis=1), np.stack([xs, edges[1]], axis=1)[::-1]],
    )
    return (Polygons(outline[None], None, Role.ACCENT, 0.0, 0.2),)


def _path(frame: SpeedFrame, content: ResponseContent, one: Series) -> Floats:
    return clipped(chained(frame.xs_of(content.speeds_rpm), frame.ys_of(one.values)), frame.box)


def _curves(frame: SpeedFrame, content: ResponseContent) -> tuple[Item, ...]:
    items: list[Item] = []
    for number, one in enumerate(content.series):
        role, pattern, wide = style_of(content, number)
        items.append(Lines(dashed_along(_path(frame, content, one), pattern), role, wide))
    return tuple(items)


class _Names:
    """Puts names on the chart: beside each other, and beside the curve where there is room for that."""

    def __init__(
        self, frame: SpeedFrame, content: ResponseContent, size: tuple[float, float], scale: float
    ) -> None:
        self.frame, self.text_scale = frame, scale
        self.board = Board(*size, scale)
        self.curve = self.board.take(_columns(_path(frame, content, content.total)))

    def write(self, lines: tuple[Line, ...], spots: list[Spot]) -> tuple[Item, ...]:
        """Write a text over paper, so that what lies behind does not cross it."""
        frame = self.frame
        within = (frame.left, frame.top, frame.right - frame.left, frame.bottom - frame.top)
        texts = self.board.place(lines, spots, within=within)
        texts = texts or self.board.place(lines, spots, within=within, over=self.curve)
        if not texts:
            return ()
        left, top, right, bottom = extent(texts, self.text_scale)
        under = Box(left - 2.0, top, right - left + 4.0, bottom - top, 2.0, None, Role.PAPER, 0.0, 0.8)
        return (under, *texts)


def _columns(segments: Floats) -> Floats:
    """Return boxes (n, 4) that a curve lies in, one for each few pixels across."""
    if not len(segments):
        return np.zeros((0, 4))
    column = np.floor(segments[:, [0, 2]].mean(axis=1) / _COLUMN).astype(int)
    places = np.unique(column)
    low, high = segments[:, [1, 3]].min(axis=1), segments[:, [1, 3]].max(axis=1)
    found = [
        [_COLUMN * at, low[column == at].min() - 1, _COLUMN * (at + 1), high[column == at].max() + 1]
        for at in places
    ]
    return np.array(found)


def _limits(frame: SpeedFrame, content: ResponseContent, names: _Names) -> tuple[Item, ...]:
    items: list[Item] = []
    for one in content.limits:
        y = frame.y_of(one.value)
        if not frame.top <= y <= frame.bottom:
            continue
        line = np.array([[frame.left, y, frame.right, y]])
        items.append(Lines(dashed_along(line, (9.0, 4.0)), Role.BAD, 1.6))
        word = " (exceeded)" if one.exceeded else ""
        offered = [
            Spot(x, y + down * 3.0, right, down)
            for down in (-1, 1)
            for x, right in ((frame.right - 4.0, -1), (frame.left + 6.0, 1))
        ]
        items += names.write((Line(one.label + word, Role.BAD, Size.SMALL),), offered)
    return tuple(items)


def _peaks(frame: SpeedFrame, content: ResponseContent, names: _Names) -> tuple[Item, ...]:
    """Mark peaks with value and speed, and where the curve has fallen to 1/sqrt 2 of them."""
    items: list[Item] = []
    ranked = sorted(content.peaks, key=lambda one: -one.value)
    shown = [one for one in ranked if frame.low_rpm <= one.rpm <= frame.high_rpm]
    step = line_height(Size.SMALL, text_scale=names.text_scale)
    for number, one in enumerate(shown):
        x, infinite = frame.x_of(one.rpm), not np.isfinite(one.value)
        y = frame.top if infinite else max(frame.y_of(one.value), frame.top)
        if y > frame.bottom:
            continue
        items += _mark(frame, x, y, beyond=infinite or frame.y_of(one.value) < frame.top)
        half_y = frame.y_of(one.value / np.sqrt(2)) if not infinite else None
        if half_y is not None:
            items += _half_power(frame, one.half_power_rpm, half_y)
        if number >= MOST_PEAKS:
            continue
        text = (
            f"without bound at {rpm_text(one.rpm)} rpm"
            if infinite
            else f"{figure(one.value)} at {rpm_text(one.rpm)} rpm"
        )
        spots = [
            Spot(x + right * 9.0, y + down, right, 0)
            for down in (2.0, *(share * step for share in (-0.6, 1.0, -1.6, 2.0, -2.6, 3.0, 4.0)))
            for right in (1, -1)
        ]
        items += names.write((Line(text, Role.BAD if infinite else Role.ACCENT, Size.SMALL),), spots)
    return tuple(items)


def _mark(frame: SpeedFrame, x: float, y: float, *, beyond: bool) -> list[Item]:
    if beyond:  # an arrow: it goes on above the chart
        y = frame.top
        return [Lines(np.array([[x, y + 1, x - 5, y + 9], [x, y + 1, x + 5, y + 9]]), Role.BAD, 2.0)]
    return [Circles(np.array([[x, y]]), 3.5, Role.ACCENT, Role.PAPER, 1.8)]


def _half_power(frame: SpeedFrame, edges: tuple[float | None, float | None], y: float) -> list[Item]:
    if not frame.top <= y <= frame.bottom:
        return []
    xs = [frame.x_of(one) for one in edges if one is not None and frame.low_rpm <= one <= frame.high_rpm]
    items: list[Item] = [Lines(np.array([[x, y - 4, x, y + 4] for x in xs]).reshape(-1, 4), Role.ACCENT, 1.4)]
    if len(xs) == 2:
        items.append(Lines(np.array([[xs[0], y, xs[1], y]]), Role.ACCENT, 0.9, 0.8))
    return items


def _running(frame: SpeedFrame, content: ResponseContent, names: _Names) -> tuple[Item, ...]:
    """Name the speed the machine runs at with the amplitude there, or its range with the worst in it."""
    low, high = content.running_rpm
    span = span_of(frame, low, high)
    if span is None:
        return ()
    edges = np.array([[x, frame.top, x, frame.bottom] for x in dict.fromkeys(span)])
    worst, at = worst_of(content, content.total)
    texts: tuple[str, ...] = (
        f"runs at {rpm_text(low)} to {rpm_text(high)} rpm:",
        f"worst {figure(worst)} at {rpm_text(at)}",
    )
    if low == high:
        texts = (f"{rpm_text(low)} rpm: {figure(worst)}",)
    step = line_height(Size.SMALL, text_scale=names.text_scale)
    middle = (span[0] + span[1]) / 2
    sides = ((span[0], -1), (span[1], 1), (middle, 0), (span[0], 1), (span[1], -1))
    spots = [
        Spot(x + right * 5.0, frame.top + 3.0 + level * step, right, 1)
        for level in range(12)
        for x, right in sides
    ]
    lines = tuple(Line(one, Role.WARN, Size.SMALL) for one in texts)
    whole = (Line(" ".join(texts), Role.WARN, Size.SMALL),)
    return (Lines(edges, Role.WARN, 1.8), *(names.write(whole, spots) or names.write(lines, spots)))
