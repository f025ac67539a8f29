"""The chart of speeds: orders over modes, where they meet, and which speeds remain."""

from dataclasses import dataclass

import numpy as np

from modalview.drawing.axis import spread
from modalview.drawing.axislinear import tick_text
from modalview.drawing.campbellchartcontent import SpeedsContent, SpeedsMeeting, SpeedsMode, SpeedsOrder
from modalview.drawing.curves import clipped, dashed_along
from modalview.drawing.flowing import SAMPLE, Sample, flowing
from modalview.drawing.primitives import (
    Anchor,
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
from modalview.drawing.textsize import line_height, text_width
from modalview.units.show import significant

STRIP = 9.0  # height of the strip of what remains, pixels
REACH = 9.0  # a meeting is read within so many pixels
NAMED_MODES = 24  # with more, every second, third, ... is named
_MARK = 4.0
_LEADER = 14.0  # from the end of a line to its name, pixels


@dataclass(frozen=True, slots=True, eq=False)
class SpeedsChart:
    """A chart and how to read it.

    Parameters
    ----------
    drawing : Drawing
    frame : SpeedFrame
        Values are Hz.
    content : SpeedsContent
    """

    drawing: Drawing
    frame: SpeedFrame
    content: SpeedsContent

    def nearest(self, x: float, y: float) -> SpeedsMeeting | None:
        """Return the meeting within reach of a pixel, or None."""
        found = [
            (np.hypot(self.frame.x_of(one.rpm) - x, self.frame.y_of(one.hz) - y), at)
            for at, one in enumerate(self.content.meetings)
        ]
        distance, at = min(found, default=(REACH, 0))
        return self.content.meetings[at] if distance < REACH else None


def speeds_chart(
    content: SpeedsContent, width: float, height: float, *, text_scale: float = 1.0
) -> SpeedsChart:
    """Draw speeds across (rpm) and frequencies up (Hz), both linear.

    Parameters
    ----------
    content : SpeedsContent
    width, height : float
        Pixels.
    text_scale : float
    """
    step = line_height(Size.SMALL, text_scale=text_scale)
    legend, reached = flowing(_legend(content), width, 4.0 + step / 2, text_scale)
    frame = _frame(content, (width, height), reached + step / 2, text_scale)
    drop = STRIP * text_scale + 4.0
    items = _ranges(frame, content) + axes_items(frame, "Hz", text_scale, hertz=False, drop=drop)
    items += _modes(frame, content) + _bands(frame, content) + _orders(frame, content)
    items += _strip(frame, content, text_scale) + _meetings(frame, content)
    items += _names_beside(frame, content, text_scale) + _names_above(frame, content, text_scale)
    items += (*_title(frame, content, text_scale), *legend)
    return SpeedsChart(Drawing(items, (0.0, 0.0, width, height), text_scale), frame, content)


def chosen_items(chart: SpeedsChart, meeting: SpeedsMeeting) -> tuple[Item, ...]:
    """Return the marks of a meeting that is read: lines to both axes."""
    x, y = chart.frame.x_of(meeting.rpm), chart.frame.y_of(meeting.hz)
    frame = chart.frame
    across = np.array([[frame.left, y, x, y], [x, y, x, frame.bottom]])
    return (
        Lines(dashed_along(across, (3.0, 3.0)), Role.INK, 1.0),
        Circles(np.array([[x, y]]), 7.0, Role.INK, None, 2.0),
    )


def _frame(
    content: SpeedsContent, size: tuple[float, float], reached: float, text_scale: float
) -> SpeedFrame:
    step = line_height(Size.SMALL, text_scale=text_scale)
    rows = 2 if sum(_end(content, one) > content.highest_hz for one in content.orders) > 1 else 1
    top, bottom = reached + rows * step + 10.0, size[1] - step - STRIP * text_scale - 14.0
    bottom = max(bottom, top + 40.0)
    ticks = value_ticks(
        0.0, content.highest_hz, min(int((bottom - top) / (step + 9.0)), MOST_TICKS), logarithmic=False
    )
    left = tick_room([tick_text(one) for one in ticks], text_scale)
    names = [one.label for one in content.orders if _end(content, one) <= content.highest_hz]
    names += [mode_text(one) for one in content.modes]
    widest = max(
        (text_width(one, Size.SMALL, bold=True, text_scale=text_scale) for one in names), default=0.0
    )
    room = max(widest + _LEADER + 6.0, right_room(content.highest_rpm, text_scale))
    right = max(size[0] - room, left + 40.0)
    return SpeedFrame(left, right, top, bottom, 0.0, content.highest_rpm, 0.0, content.highest_hz)


def _ranges(frame: SpeedFrame, content: SpeedsContent) -> tuple[Item, ...]:
    """Shade the speed range, and hatch what the user barred."""
    low, high = content.speeds_rpm
    items = shaded(frame, low, high, Role.INK, 0.07)
    for barred in content.barred_rpm:
        items += struck(frame, *barred, Role.INK, 6.0)
    return items


def _modes(frame: SpeedFrame, content: SpeedsContent) -> tuple[Item, ...]:
    """Draw modes as level lines in a band of their range over tolerances."""
    items: list[Item] = []
    for one in content.modes:
        top, bottom = (max(frame.y_of(hz), frame.top) for hz in (one.high_hz, one.low_hz))
        if bottom > frame.top and bottom - top > 0.5:
            items.append(
                Box(
                    frame.left, top, frame.right - frame.left, bottom - top, 0.0, None, Role.ACCENT, 0.0, 0.14
                )
            )
    levels = [frame.y_of(one.hz) for one in content.modes if one.hz <= content.highest_hz]
    lines = np.array([[frame.left, y, frame.right, y] for y in levels]).reshape(-1, 4)
    return (*items, Lines(lines, Role.ACCENT, 1.6 if len(levels) <= NAMED_MODES else 0.8))


def _bands(frame: SpeedFrame, content: SpeedsContent) -> tuple[Item, ...]:
    """Draw the margin wanted around each order: thin, from dashed edge to dashed edge."""
    items: list[Item] = []
    for one in content.orders:
        edges = [_line(frame, content, one, 1 + share) for share in (-one.margin[0], one.margin[1])]
        corners = np.array([edges[0][:2], edges[0][2:], edges[1][2:], edges[1][:2]])
        inside = _cut(corners, frame)
        if len(inside) > 2:
            items.append(Polygons(inside[None], None, Role.WARN, 0.0, 0.09))
        shown = [dashed_along(clipped(edge[None], frame.box), (4.0, 4.0)) for edge in edges]
        items.append(Lines(np.vstack(shown), Role.WARN, 0.8, 0.8))
    return tuple(items)


def _line(frame: SpeedFrame, content: SpeedsContent, one: SpeedsOrder, times: float) -> Floats:
    ends = np.array([0.0, content.highest_rpm])
    xs, ys = frame.xs_of(ends), frame.ys_of(times * (one.hz_per_rpm * ends + one.fixed_hz))
    return np.array([xs[0], ys[0], xs[1], ys[1]])


def _cut(corners: Floats, frame: SpeedFrame) -> Floats:
    """Return what of an outline (n, 2) lies below the upper edge (Sutherland, Hodgman 1974)."""
    found: list[Floats] = []
    for one, other in zip(corners, np.roll(corners, -1, axis=0), strict=True):
        if one[1] >= frame.top:
            found.append(one)
        if (one[1] >= frame.top) != (other[1] >= frame.top):
            found.append(one + (frame.top - one[1]) / (other[1] - one[1]) * (other - one))
    return np.array(found).reshape(-1, 2)


def _orders(frame: SpeedFrame, content: SpeedsContent) -> tuple[Item, ...]:
    lines = [clipped(_line(frame, content, one, 1.0)[None], frame.box) for one in content.orders]
    return (Lines(np.vstack([np.zeros((0, 4)), *lines]), Role.WARN, 1.8),)


def _strip(frame: SpeedFrame, content: SpeedsContent, text_scale: float) -> tuple[Item, ...]:
    """Show below the axis what is left of the speeds, what is met and what is barred."""
    top, high = frame.bottom + 3.0, STRIP * text_scale
    items: list[Item] = []
    for run in content.runs:
        span = span_of(frame, run.low, run.high)
        if span is not None and span[1] > span[0]:
            state = "barred" if run.barred else "left" if run.proven else "met"
            items += _strip_items(state, (span[0], top, span[1] - span[0], high))
    return tuple(items)


def _strip_items(state: str, box: tuple[float, float, float, float]) -> tuple[Item, ...]:
    if state == "left":
        return (Box(*box, 0.0, Role.GOOD, Role.GOOD, 1.0, 0.75),)
    role, spacing = (Role.INK, 3.5) if state == "barred" else (Role.BAD, 5.0)
    return Box(*box, 0.0, role, Role.PAPER, 1.0), Lines(hatched(*box, spacing), role, 1.0)


def _meetings(frame: SpeedFrame, content: SpeedsContent) -> tuple[Item, ...]:
    """Mark meetings: filled where the machine runs, hollow elsewhere."""
    items: list[Item] = []
    for inside in (False, True):
        places = [
            [frame.x_of(one.rpm), frame.y_of(one.hz)]
            for one in content.meetings
            if one.inside is inside and one.rpm <= content.highest_rpm and one.hz <= content.highest_hz
        ]
        if places:
            items.append(_spots(np.array(places), inside=inside))
    return tuple(items)


def _spots(places: Floats, *, inside: bool) -> Circles:
    role, fill = (Role.BAD, Role.BAD) if inside else (Role.WARN, Role.PAPER)
    return Circles(places, _MARK, role, fill, 1.6)


def _names_beside(frame: SpeedFrame, content: SpeedsContent, text_scale: float) -> tuple[Item, ...]:
    """Name modes and orders where their lines end at the right; of too many modes every second, third, ..."""
    step = line_height(Size.SMALL, text_scale=text_scale)
    named = [
        (frame.y_of(end), one.label, Role.WARN)
        for one in content.orders
        if (end := _end(content, one)) <= content.highest_hz
    ]
    modes = [one for one in content.modes if one.hz <= content.highest_hz]
    free = max((frame.bottom - frame.top) / (step + 1.0) - len(named), 1.0)
    every = max(1, int(np.ceil(len(modes) / free)))
    named += [(frame.y_of(one.hz), mode_text(one), Role.ACCENT) for one in modes[::every]]
    named.sort()
    places = spread([y for y, _, _ in named], step + 1.0, frame.top, frame.bottom)
    items: list[Item] = []
    for (level, text, role), y in zip(named, places, strict=True):
        leader = np.array([[frame.right, level, frame.right + _LEADER - 3.0, y]])
        items.append(Lines(leader, role, 0.8))
        items.append(Text(frame.right + _LEADER, y, text, role, Size.SMALL, bold=role is Role.WARN))
    return tuple(items)


def mode_text(one: SpeedsMode) -> str:
    """Name a mode: "mode 2: 141.0 Hz"."""
    return f"mode {one.number}: {significant(one.hz, 4)} Hz"


def _end(content: SpeedsContent, one: SpeedsOrder) -> float:
    return one.hz_per_rpm * content.highest_rpm + one.fixed_hz


def _names_above(frame: SpeedFrame, content: SpeedsContent, text_scale: float) -> tuple[Item, ...]:
    """Name orders that leave through the upper edge, in two rows where one is too short."""
    step = line_height(Size.SMALL, text_scale=text_scale)
    unit = 14.0 + text_width("Hz", Size.SMALL, bold=True, text_scale=text_scale)
    above = sorted(
        (frame.x_of((content.highest_hz - one.fixed_hz) / one.hz_per_rpm), one.label)
        for one in content.orders
        if _end(content, one) > content.highest_hz and one.hz_per_rpm > 0
    )
    reached = [unit, unit][: len(above)]
    items: list[Item] = []
    for x, label in above:
        half = text_width(label, Size.SMALL, bold=True, text_scale=text_scale) / 2
        row = min(range(len(reached)), key=lambda at: max(reached[at] + half - x, 0.0))
        middle = max(x, reached[row] + half)
        reached[row] = middle + half + 8.0
        y = frame.top - 4.0 - step / 2 - row * step
        items.append(Text(middle, y, label, Role.WARN, Size.SMALL, Anchor.MIDDLE, bold=True))
        if row or middle > x:
            items.append(Lines(np.array([[middle, y + step / 2, x, frame.top]]), Role.WARN, 0.8))
    return tuple(items)


def _legend(content: SpeedsContent) -> list[Sample]:
    """Return what the marks stand for, as far as they occur."""
    found: list[Sample] = []
    states = {("barred" if run.barred else "left" if run.proven else "met") for run in content.runs}
    box = (0.0, -4.5, SAMPLE, 9.0)
    for state, text in (("left", "remains clear"), ("met", "meets a mode"), ("barred", "barred by you")):
        if state in states:
            found.append(Sample(text, _strip_items(state, box)))
    margins = (
        Box(*box, 0.0, None, Role.WARN, 0.0, 0.15),
        Lines(dashed_along(np.array([[0.0, y, SAMPLE, y] for y in (-4.5, 4.5)]), (4.0, 4.0)), Role.WARN, 0.8),
    )
    found.append(Sample("margin wanted", margins))
    if any(one.high_hz > one.low_hz for one in content.modes):
        found.append(Sample("mode over tolerance", (Box(*box, 0.0, None, Role.ACCENT, 0.0, 0.2),)))
    for inside, text in ((True, "meeting that reaches its speeds"), (False, "other meeting")):
        if any(one.inside is inside for one in content.meetings):
            found.append(Sample(text, (_spots(np.array([[SAMPLE / 2, 0.0]]), inside=inside),)))
    return found


def _title(frame: SpeedFrame, content: SpeedsContent, text_scale: float) -> tuple[Item, ...]:
    """Say at what the machine runs, inside the chart at its foot."""
    low, high = content.speeds_rpm
    text = (
        f"runs at {rpm_text(low)} rpm" if low == high else f"runs at {rpm_text(low)} to {rpm_text(high)} rpm"
    )
    wide = text_width(text, Size.SMALL, text_scale=text_scale)
    x1, x2 = frame.x_of(low), frame.x_of(high)
    step = line_height(Size.SMALL, text_scale=text_scale)
    y = frame.bottom - step / 2 - 4.0
    left = (x1 + x2 - wide) / 2 if x2 - x1 > wide + 8.0 else min(x2 + 5.0, frame.right - wide - 4.0)
    edges = np.array([[x, frame.top, x, frame.bottom] for x in dict.fromkeys((x1, x2))])
    return (
        Lines(edges, Role.INK, 1.4),
        Box(left - 2.0, y - step / 2, wide + 4.0, step, 2.0, None, Role.PAPER, 0.0, 0.8),
        Text(left, y, text, Role.INK, Size.SMALL),
    )
