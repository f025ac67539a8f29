"""How times grow with size, drawn as an SVG file: both axes logarithmic."""

import math
from collections.abc import Mapping, Sequence
from pathlib import Path

WIDTH, HEIGHT, EDGE = 720, 480, 70
COLOURS = ("#1b6ca8", "#c0563c", "#3d8b57", "#8a5fb0")


def draw(path: Path, title: str, series: Mapping[str, Sequence[tuple[int, float, float]]]) -> None:
    """Write (size, own seconds, other's seconds) of every family: own as a full line, the other's dashed."""
    points = [(n, t) for rows in series.values() for n, own, other in rows for t in (own, other)]
    sizes, times = [n for n, _ in points], [t for _, t in points]
    across = _scale(min(sizes), max(sizes), EDGE, WIDTH - 20)
    upward = _scale(min(times), max(times), HEIGHT - EDGE, 50)
    parts = [f'<text x="{EDGE}" y="28" font-size="16">{title}</text>']
    powers = range(math.floor(math.log10(min(sizes))), math.ceil(math.log10(max(sizes))) + 1)
    parts += [_mark(across(10**power), HEIGHT - EDGE + 20, f"1e{power}", "middle") for power in powers]
    for power in range(math.floor(math.log10(min(times))), math.ceil(math.log10(max(times))) + 1):
        y = upward(10**power)
        parts.append(f'<line x1="{EDGE}" x2="{WIDTH - 20}" y1="{y:.1f}" y2="{y:.1f}" stroke="#ddd"/>')
        parts.append(_mark(EDGE - 8, y + 4, f"1e{power} s", "end"))
    for row, (name, rows) in enumerate(series.items()):
        colour = COLOURS[row % len(COLOURS)]
        for which, dash in ((1, ""), (2, ' stroke-dasharray="5 4"')):
            line = " ".join(f"{across(entry[0]):.1f},{upward(entry[which]):.1f}" for entry in rows)
            parts.append(f'<polyline points="{line}" fill="none" stroke="{colour}" stroke-width="2"{dash}/>')
            parts += [
                f'<circle cx="{across(entry[0]):.1f}" cy="{upward(entry[which]):.1f}" r="3" fill="{colour}"/>'
                for entry in rows
            ]
        label = f"{name}{_power(rows)}"
        parts.append(f'<text x="{EDGE + 20}" y="{66 + 18 * row}" fill="{colour}">{label}</text>')
    parts.append(_mark(WIDTH / 2, HEIGHT - 20, "degrees of freedom; dashed: scipy eigsh", "middle"))
    body = "\n".join(parts)
    path.write_text(
        f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {WIDTH} {HEIGHT}" font-family="sans-serif" '
        f'font-size="13"><rect width="100%" height="100%" fill="white"/>\n{body}\n</svg>\n',
        encoding="utf-8",
    )


def _power(rows: Sequence[tuple[int, float, float]]) -> str:
    """Return the power of the size with which own and other time grow between the last two sizes."""
    if len(rows) < 2:
        return ""
    (n, own, other), (larger, longer, others) = rows[-2:]
    first, second = (math.log(b / a) / math.log(larger / n) for a, b in ((own, longer), (other, others)))
    return f": n^{first:.1f} at the end, dashed n^{second:.1f}"


def _scale(low: float, high: float, start: float, stop: float):
    bottom, top = math.floor(math.log10(low)), math.ceil(math.log10(high))
    return lambda value: start + (math.log10(value) - bottom) / max(top - bottom, 1) * (stop - start)


def _mark(x: float, y: float, text: str, anchor: str) -> str:
    return f'<text x="{x:.1f}" y="{y:.1f}" text-anchor="{anchor}">{text}</text>'
