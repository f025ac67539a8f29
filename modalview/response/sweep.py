"""Curves over machine speed with every peak on its true place, and speeds dense where a curve bends."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]
Places = npt.NDArray[np.intp]
Evaluate = Callable[[Array], Array]

# Speeds about a resonance, in half-widths of its peak.
ABOUT = np.array([0.0, 0.2, 0.5, 0.8, 1.2, 1.8, 2.7, 4.0, 6.0, 9.0, 14.0, 25.0])
# With very many resonances a coarser choice.
MANY, COARSE = 120, np.array([0.0, 0.5, 1.0, 2.0, 5.0])
# ... and then no two speeds nearer than this share of the narrowest half-width.
THIN = 0.3
# About an undamped one, in shares of its speed.
ABOUT_UNDAMPED = np.array([0.0, 1e-6, 1e-5, 1e-4, 1e-3, 3e-3, 1e-2, 3e-2])
# Where neighbouring values differ by more than this share, a speed is put between them...
STEEP = 0.12
# ... so many times over at most, and up to so many speeds.
ROUNDS, MOST = 4, 4000
# A maximum below this share of the curve's largest value is rounding.
NO_PEAK = 1e-9
# A bracket is small enough when its ends lie below its middle by this share: the top of the parabola through
# them is then known to a hundredth of their distance.
FLAT = 1e-9
ROUGH = 1e-5
# Values that differ by less than this share of themselves are on a level.
LEVEL = 1e-12
# Speeds nearer than this share of themselves are one.
NARROW, CLOSE = 1e-12, 1e-6
STEPS = 40
ROOT_HALF = np.sqrt(0.5)


@dataclass(frozen=True, slots=True)
class Top:
    """A maximum of one row: its speed and value, and where the row falls to 1/sqrt 2 of it."""

    row: int
    speed: float
    value: float
    half_power: tuple[float | None, float | None]


@dataclass(frozen=True, slots=True, eq=False)
class Swept:
    """Rows over speeds.

    Parameters
    ----------
    speeds : array (s,)
        Ascending, every peak among them.
    values : array (r, s)
        Infinite at an undamped resonance.
    tops : tuple of Top
        By row, then by speed.
    """

    speeds: Array
    values: Array
    tops: tuple[Top, ...]


def starting_speeds(
    span: tuple[float, float],
    resonances: Sequence[tuple[float, float, bool]],
    wanted: Sequence[float] = (),
    points: int = 161,
) -> Array:
    """Return speeds to start from: even, about every resonance, and those wanted; all inside the span.

    Parameters
    ----------
    span : pair of float
        Lowest (above zero) and highest speed.
    resonances : sequence of (speed, half-width, undamped)
        Where peaks may be.
    wanted : sequence of float
        Machine speeds, edges of barred ranges.
    """
    low, high = span
    even, asked = np.linspace(low, high, points), np.asarray(wanted, dtype=float)
    # An even speed that is a wanted one but for rounding would stand beside it.
    apart = np.abs(even[:, None] - asked).min(axis=1, initial=np.inf)
    found = [even[apart > CLOSE * even], asked]
    inside = [one for one in resonances if low * 0.5 <= one[0] <= high * 2]
    about = ABOUT if len(inside) <= MANY else COARSE
    for speed, width, undamped in inside:
        steps = speed * ABOUT_UNDAMPED if undamped else width * about
        found += [speed - steps, speed + steps]
    widths = [width / speed for speed, width, undamped in inside if width > 0 and not undamped]
    crowded = len(inside) > MANY and not any(undamped for _, _, undamped in inside)
    thinned = THIN * min(widths) if crowded and widths else NARROW
    every = _told_apart(np.unique(np.concatenate(found)), asked, thinned)
    kept: Array = every[(every >= low) & (every <= high)]
    return kept


def _told_apart(speeds: Array, wanted: Array, share: float) -> Array:
    """Leave out speeds nearer than a share to the one before them; of two, a wanted one stays."""
    kept: list[float] = []
    for speed in speeds.tolist():
        if kept and speed - kept[-1] <= share * speed:
            if kept[-1] not in wanted and speed in wanted:
                kept[-1] = speed
            continue
        kept.append(speed)
    return np.array(kept)


def swept(evaluate: Evaluate, speeds: Array, sharp: Array | None = None, *, rough: bool = False) -> Swept:
    """Compute rows over speeds, find their peaks and fill in where they are steep.

    Parameters
    ----------
    evaluate : callable
        From speeds (s,) to values (r, s), not negative.
    speeds : array (s,)
        To start from, ascending.
    sharp : bool array (r,) or None
        Rows whose peaks are placed; None: all.
    rough : bool
        Where every speed is dear: place peaks to about 1e-5 of their half-width, without half-power marks.

    Returns
    -------
    Swept
        Each peak within about 1e-8 of its half-width from its true place. Peaks narrower than the distance
        of the speeds about them, where no resonance was told, may be missed.
    """
    values = evaluate(speeds)
    speeds, values = _filled(evaluate, speeds, values)
    rows = np.arange(len(values)) if sharp is None else np.flatnonzero(sharp)
    row, around = _maxima(values, rows)
    flat = ROUGH if rough else FLAT
    place, height = _placed(evaluate, row, Brackets(speeds[around], values[row[:, None], around], flat))
    new = np.setdiff1d(place, speeds)
    if new.size:
        speeds, values = _merged(speeds, values, new, evaluate(new))
    halves = _half_powers(evaluate, (speeds, values), row, place, height) if not rough else _unmarked(row)
    tops = [
        Top(int(r), float(x), float(top), half)
        for r, x, top, half in zip(row, place, height, halves, strict=True)
    ]
    tops += [Top(int(r), x, float("inf"), (None, None)) for r in rows for x in _endless(speeds, values[r])]
    return Swept(speeds, values, tuple(sorted(tops, key=lambda top: (top.row, top.speed))))


def _filled(evaluate: Evaluate, speeds: Array, values: Array) -> tuple[Array, Array]:
    """Put speeds between neighbours whose values differ much."""
    for _ in range(ROUNDS):
        finite = np.isfinite(values)
        largest = np.where(finite, values, 0.0).max(axis=1, initial=0.0, keepdims=True)
        # What lies far below the top of its row needs no smooth curve.
        logs = np.log(np.maximum(np.where(finite, values, largest), 1e-6 * largest + np.finfo(float).tiny))
        steep = np.any(np.abs(np.diff(logs, axis=1)) > STEEP, axis=0)
        between = np.flatnonzero(steep & (np.diff(speeds) > CLOSE * speeds[1:]))
        if not between.size or speeds.size + between.size > MOST:
            break
        new = (speeds[between] + speeds[between + 1]) / 2
        speeds, values = _merged(speeds, values, new, evaluate(new))
    return speeds, values


def _merged(speeds: Array, values: Array, new: Array, beside: Array) -> tuple[Array, Array]:
    order = np.argsort(np.concatenate([speeds, new]), kind="stable")
    return np.concatenate([speeds, new])[order], np.concatenate([values, beside], axis=1)[:, order]


def _maxima(values: Array, rows: Places) -> tuple[Places, Places]:
    """Return the row (m,) of each finite inner maximum and the columns left of it, at it, right of it (m, 3).

    Neighbours on a level with it but for rounding, where two speeds nearly coincide, are passed over.
    """
    here = values[rows]
    middle, left, right = here[:, 1:-1], here[:, :-2], here[:, 2:]
    finite = np.isfinite(middle) & np.isfinite(left) & np.isfinite(right)
    high = np.where(np.isfinite(here), here, 0.0).max(axis=1, initial=0.0, keepdims=True)
    row, column = np.nonzero(finite & (middle > left) & (middle >= right) & (middle > NO_PEAK * high))
    found: dict[tuple[int, int, int], int] = {}
    for r, c in zip(rows[row].tolist(), (column + 1).tolist(), strict=True):
        low, top = _lower(values[r], c, -1), _lower(values[r], c, 1)
        if low is not None and top is not None:
            found.setdefault((r, low, top), c)
    if not found:
        return np.zeros(0, dtype=np.intp), np.zeros((0, 3), dtype=np.intp)
    at = np.array([(r, low, c, top) for (r, low, top), c in found.items()], dtype=np.intp)
    return at[:, 0], at[:, 1:]


def _lower(values: Array, start: int, step: int) -> int | None:
    """Return the next place clearly below a maximum; None when the row rises above it, or ends, before."""
    i = start + step
    while 0 <= i < values.size and np.isfinite(values[i]) and values[i] <= values[start] * (1 + LEVEL):
        if values[i] < values[start] * (1 - LEVEL):
            return i
        i += step
    return None


def _endless(speeds: Array, values: Array) -> list[float]:
    """Return where a row is infinite, neighbours once."""
    at = np.flatnonzero(np.isinf(values)).tolist()
    return [float(speeds[i]) for i, before in zip(at, [-2, *at], strict=False) if i != before + 1]


@dataclass(slots=True, eq=False)
class Brackets:
    """Brackets (m, 3) of maxima: ascending speeds, the middle one the highest, and the values there."""

    x: Array
    y: Array
    enough: float = FLAT

    def tops(self) -> Array:
        """Return the top of the parabola through 1/y^2 (exact for one lightly damped mode), inside."""
        a, b, c = self.x.T
        fa, fb, fc = (
            1 / np.maximum(self.y / np.maximum(self.y[:, 1:2], np.finfo(float).tiny), 1e-100) ** 2
        ).T
        left, right = (b - a) * (fc - fb), (c - b) * (fa - fb)
        whole = left + right
        top = b + ((c - b) * right - (b - a) * left) / np.where(whole > 0, 2 * whole, 1.0)
        return np.asarray(np.where((whole > 0) & (top > a) & (top < c), top, b), dtype=float)

    def flat(self) -> npt.NDArray[np.bool_]:
        """Return which are small enough."""
        low = np.minimum(self.y[:, 0], self.y[:, 2])
        narrow = self.x[:, 2] - self.x[:, 0] <= NARROW * self.x[:, 1]
        return np.asarray((self.y[:, 1] - low <= self.enough * self.y[:, 1]) | narrow)

    def narrowed(self, at: Array, values: Array, which: Places) -> None:
        """Take further points (k, 3) of some brackets in and keep the three about the highest."""
        x = np.concatenate([self.x[which], at], axis=1)
        y = np.concatenate([self.y[which], values], axis=1)
        order = np.argsort(x, axis=1, kind="stable")
        x, y = np.take_along_axis(x, order, axis=1), np.take_along_axis(y, order, axis=1)
        best = np.clip(np.argmax(y, axis=1), 1, x.shape[1] - 2)
        around = best[:, None] + np.array([-1, 0, 1])
        self.x[which] = np.take_along_axis(x, around, axis=1)
        self.y[which] = np.take_along_axis(y, around, axis=1)


def _placed(evaluate: Evaluate, row: Places, found: Brackets) -> tuple[Array, Array]:
    """Return the speeds and values of maxima, from their brackets."""
    for _ in range(STEPS):
        wide = np.flatnonzero(~found.flat())
        if not wide.size:
            break
        a, b, c = found.x[wide].T
        top = found.tops()[wide]
        step = np.maximum(0.1 * np.abs(top - b), 1e-3 * (c - a))
        low, high = np.maximum(top - step, (a + top) / 2), np.minimum(top + step, (c + top) / 2)
        at = np.stack([low, top, high], axis=1)
        values = evaluate(at.ravel())[np.repeat(row[wide], 3), np.arange(at.size)]
        found.narrowed(at, values.reshape(at.shape), wide)
    place = found.tops()
    if not place.size:
        return place, np.zeros(0)
    height = evaluate(place)[row, np.arange(place.size)]
    better = height >= found.y[:, 1] * (1 - FLAT)
    return np.where(better, place, found.x[:, 1]), np.where(better, height, found.y[:, 1])


def _unmarked(row: Places) -> list[tuple[float | None, float | None]]:
    return [(None, None) for _ in row]


def _half_powers(
    evaluate: Evaluate, known: tuple[Array, Array], row: Places, place: Array, height: Array
) -> list[tuple[float | None, float | None]]:
    """Return where each row falls to 1/sqrt 2 of its maxima, before it rises again."""
    speeds, values = known
    sides: list[tuple[int, int, float, float]] = []
    for number, (r, x, top) in enumerate(zip(row, place, height, strict=True)):
        start = int(np.searchsorted(speeds, x))
        for side, step in ((0, -1), (1, 1)):
            end = _fallen(values[r], start, step, ROOT_HALF * top)
            if end is not None:
                sides.append((number, side, float(speeds[end - step]), float(speeds[end])))
    found: list[list[float | None]] = [[None, None] for _ in row]
    if sides:
        which = np.array([one[0] for one in sides])
        inner, outer = (np.array([one[i] for one in sides]) for i in (2, 3))
        crossed = _crossed(evaluate, row[which], ROOT_HALF * height[which], inner, outer)
        for (number, side, _, _), speed in zip(sides, crossed, strict=True):
            found[number][side] = float(speed)
    return [(low, high) for low, high in found]


def _fallen(values: Array, start: int, step: int, level: float) -> int | None:
    """Return the first place below a level on the way down from a maximum; None when the row rises first."""
    i = start
    while 0 <= i + step < values.size:
        if not np.isfinite(values[i + step]) or values[i + step] > values[i] * (1 + FLAT):
            return None
        i += step
        if values[i] <= level:
            return i
    return None


def _crossed(evaluate: Evaluate, row: Places, level: Array, high: Array, low: Array) -> Array:
    """Return where rows cross a level between two speeds, by false position with halved weights.

    M. Dowell, P. Jarratt (1971), BIT 11, 168-174 (from memory).
    """
    both = evaluate(np.concatenate([high, low]))
    index = np.arange(row.size)
    f_high = both[row, index] - level
    f_low = both[row, index + row.size] - level
    middle = high
    for _ in range(STEPS):
        whole = f_high - f_low
        middle = high + (low - high) * np.where(whole > 0, f_high / np.where(whole > 0, whole, 1.0), 0.5)
        value = evaluate(middle)[row, index] - level
        above = value > 0
        f_low, f_high = np.where(above, f_low / 2, value), np.where(above, value, f_high / 2)
        high, low = np.where(above, middle, high), np.where(above, low, middle)
        if np.all((np.abs(value) <= 1e-13 * level) | (np.abs(high - low) <= 1e-14 * middle)):
            break
    return middle
