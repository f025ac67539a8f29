"""A chart over machine speed: where speeds and values lie, grid and ticks, ranges of speeds."""

import math
from dataclasses import dataclass

import numpy as np

from modalview.drawing.axislinear import round_ticks, tick_text
from modalview.drawing.primitives import Anchor, Box, Floats, Item, Lines, Role, Size, Text
from modalview.drawing.symbols import hatched
from modalview.drawing.textsize import line_height, text_width

RPM_PER_HZ = 60.0
_TICK = 4.0  # pixels
_APART_ACROSS, _APART_UP = 26.0, 9.0  # least room between tick texts, pixels
MOST_TICKS = 12
_DECADE = (1.0, 2.0, 5.0)


@dataclass(frozen=True, slots=True)
class SpeedFrame:
    """Where a chart lies on the sheet, and what its edges stand for.

    Parameters
    ----------
    left, right, top, bottom : float
        Pixels.
    low_rpm, high_rpm : float
        Speeds at the left and right edge.
    low, high : float
        Values at the lower and upper edge.
    logarithmic : bool
        Of the values; ``low`` is above zero then.
    """

    left: float
    right: float
    top: float
    bottom: float
    low_rpm: float
    high_rpm: float
    low: float
    high: float
    logarithmic: bool = False

    def xs_of(self, rpm: Floats) -> Floats:
        """Return the pixels of speeds."""
        share = (np.asarray(rpm, dtype=float) - self.low_rpm) / (self.high_rpm - self.low_rpm)
        return np.asarray(self.left + share * (self.right - self.left))

    def ys_of(self, values: Floats) -> Floats:
        """Return the pixels of values, also of those that lie beyond the edges."""
        values = np.asarray(values, dtype=float)
        if self.logarithmic:
            logs = np.log(np.maximum(values, 1e-300))
            share = (logs - math.log(self.low)) / math.log(self.high / self.low)
        else:
            share = (values - self.low) / (self.high - self.low)
        return np.asarray(self.bottom - share * (self.bottom - self.top))

    def x_of(self, rpm: float) -> float:
        """Return the pixel of a speed."""
        return float(self.xs_of(np.array(rpm)))

    def y_of(self, value: float) -> float:
        """Return the pixel of a value."""
        return float(self.ys_of(np.array(value)))

    def rpm_at(self, x: float) -> float:
        """Return the speed at a pixel, kept on the chart.

        >>> SpeedFrame(0.0, 100.0, 0.0, 50.0, 0.0, 3000.0, 0.0, 1.0).rpm_at(50.0)
        1500.0
        """
        share = min(max((x - self.left) / (self.right - self.left), 0.0), 1.0)
        return self.low_rpm + share * (self.high_rpm - self.low_rpm)

    @property
    def box(self) -> tuple[float, float, float, float]:
        """x1, y1, x2, y2 of the chart, pixels."""
        return self.left, self.top, self.right, self.bottom


def value_ticks(low: float, high: float, most: int, *, logarithmic: bool) -> tuple[float, ...]:
    """Return round values between two, at most about so many."""
    if not logarithmic:
        return round_ticks(low, high, (high - low) / max(most, 1))
    decades = range(math.floor(math.log10(low)), math.ceil(math.log10(high)) + 1)
    every = max(1, math.ceil(len(decades) / max(most, 1)))
    fine = _DECADE if len(decades) * len(_DECADE) <= most + 2 else (1.0,)
    found = [float(f"{step}e{power}") for power in decades if power % every == 0 for step in fine]
    return tuple(one for one in found if low * 0.9999 <= one <= high * 1.0001)


def tick_room(texts: list[str], text_scale: float) -> float:
    """Return the pixels that the widest of some tick texts needs beside its axis."""
    return 10.0 + max((text_width(one, Size.SMALL, text_scale=text_scale) for one in texts), default=0.0)


def speed_ticks(frame: SpeedFrame, per_rpm: float, text_scale: float) -> tuple[float, ...]:
    """Return round ticks across, in a unit of which one rpm is ``per_rpm``; their texts stay apart."""
    low, high = frame.low_rpm * per_rpm, frame.high_rpm * per_rpm
    widest = text_width(tick_text(round(high)), Size.SMALL, text_scale=text_scale) + _APART_ACROSS
    return round_ticks(low, high, (high - low) * widest / max(frame.right - frame.left, 1.0))


def axes_items(
    frame: SpeedFrame, value_unit: str, text_scale: float, *, hertz: bool = True, drop: float = 0.0
) -> tuple[Item, ...]:
    """Draw grid, ticks and units: values at the left, rpm below, the speed in Hz above.

    Parameters
    ----------
    frame : SpeedFrame
    value_unit : str
        Stands over the left axis: "mm/s rms".
    text_scale : float
    hertz : bool
        Whether the speed stands above in Hz too.
    drop : float
        Pixels that the texts of the lower axis are moved down.
    """
    small, scale = Size.SMALL, text_scale
    rpm = speed_ticks(frame, 1.0, scale)
    values = value_ticks(frame.low, frame.high, most_ticks(frame, scale), logarithmic=frame.logarithmic)
    xs, ys = frame.xs_of(np.array(rpm)), frame.ys_of(np.array(values))
    grid = [[x, frame.top, x, frame.bottom] for x in xs] + [[frame.left, y, frame.right, y] for y in ys]
    corner = [[frame.left, frame.top, frame.left, frame.bottom]]
    corner += [[frame.left, frame.bottom, frame.right, frame.bottom]]
    items: list[Item] = [
        Lines(np.array(grid).reshape(-1, 4), Role.GRID, 1.0),
        Lines(np.array(corner), Role.MUTED, 1.2),
    ]
    foot = frame.bottom + drop + _TICK + line_height(small, text_scale=scale) / 2
    unit_left = frame.right + right_room(frame.high_rpm, scale) - 6.0
    for one, x in zip(rpm, xs.tolist(), strict=True):
        items.append(Text(x, foot, tick_text(one), Role.MUTED, small, Anchor.MIDDLE))
    items.append(Text(unit_left, foot, "rpm", Role.INK, small, Anchor.RIGHT, bold=True))
    for one, y in zip(values, ys.tolist(), strict=True):
        items.append(Text(frame.left - 6.0, y, tick_text(one), Role.MUTED, small, Anchor.RIGHT))
    head = frame.top - _TICK - line_height(small, text_scale=scale) / 2
    unit = Text(6.0, head, value_unit, Role.INK, small, bold=True)
    items.append(unit)
    if hertz:
        taken = unit.x + text_width(value_unit, small, bold=True, text_scale=scale)
        items += _hertz(frame, head, taken, scale)
        items.append(Text(unit_left, head, "Hz", Role.INK, small, Anchor.RIGHT, bold=True))
    return tuple(items)


def right_room(high_rpm: float, text_scale: float) -> float:
    """Return the pixels right of a chart that half of its last tick and the unit take."""
    last = text_width(tick_text(round(high_rpm)), Size.SMALL, text_scale=text_scale)
    return 14.0 + last / 2 + text_width("rpm", Size.SMALL, bold=True, text_scale=text_scale)


def most_ticks(frame: SpeedFrame, text_scale: float) -> int:
    """Return how many tick texts stand above each other without crowding."""
    step = line_height(Size.SMALL, text_scale=text_scale) + _APART_UP
    return min(int((frame.bottom - frame.top) / step), MOST_TICKS)


def _hertz(frame: SpeedFrame, head: float, taken: float, text_scale: float) -> list[Item]:
    """Write the speeds in Hz above, right of what is written there already."""
    items: list[Item] = []
    for one in speed_ticks(frame, 1 / RPM_PER_HZ, text_scale):
        x, text = frame.x_of(RPM_PER_HZ * one), tick_text(one)
        items.append(Lines(np.array([[x, frame.top - _TICK, x, frame.top]]), Role.MUTED, 1.0))
        if x - text_width(text, Size.SMALL, text_scale=text_scale) / 2 > taken + 8.0:
            items.append(Text(x, head, text, Role.MUTED, Size.SMALL, Anchor.MIDDLE))
    return items


def span_of(frame: SpeedFrame, low_rpm: float, high_rpm: float) -> tuple[float, float] | None:
    """Return the pixels between which a range of speeds lies on the chart; None beside it."""
    low, high = max(low_rpm, frame.low_rpm), min(high_rpm, frame.high_rpm)
    return (frame.x_of(low), frame.x_of(high)) if low <= high else None


def shaded(
    frame: SpeedFrame, low_rpm: float, high_rpm: float, role: Role, opacity: float
) -> tuple[Item, ...]:
    """Shade a range of speeds over the whole height."""
    span = span_of(frame, low_rpm, high_rpm)
    if span is None or span[0] == span[1]:
        return ()
    high = frame.bottom - frame.top
    return (Box(span[0], frame.top, span[1] - span[0], high, 0.0, None, role, 0.0, opacity),)


def struck(
    frame: SpeedFrame, low_rpm: float, high_rpm: float, role: Role, spacing: float = 9.0
) -> tuple[Item, ...]:
    """Hatch a range of speeds over the whole height."""
    span = span_of(frame, low_rpm, high_rpm)
    if span is None or span[1] - span[0] < 1.0:
        return ()
    lines = hatched(span[0], frame.top, span[1] - span[0], frame.bottom - frame.top, spacing)
    edges = np.array([[x, frame.top, x, frame.bottom] for x in span])
    return Lines(lines, role, 0.8, 0.45), Lines(edges, role, 0.8, 0.7)


def rpm_text(rpm: float) -> str:
    """Write a speed to five figures, one after the point at most, with thousands apart.

    >>> rpm_text(2950.0), rpm_text(1230.456), rpm_text(406.662), rpm_text(0.5123)
    ('2 950', '1 230.5', '406.7', '0.51')
    """
    rounded = float(f"{rpm:.5g}")
    whole = math.floor(abs(rounded))
    figures = min(max(0, 5 - len(str(whole))), 1 if whole else 2)
    rest = f"{abs(rounded) - whole:.{figures}f}"[1:].rstrip("0").rstrip(".")
    return ("−" if rounded < 0 else "") + f"{whole:,}".replace(",", " ") + rest
