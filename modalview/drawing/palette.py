"""The colours of the roles, on light and on dark paper."""

from collections.abc import Mapping
from types import MappingProxyType

from modalview.drawing.primitives import Role

Palette = Mapping[Role, str]

# Contrast of every text role against paper is at least 4.5:1 (WCAG 2.2, criterion 1.4.3); a test
# holds it. Verdict colours differ in lightness too, and never stand without a word, symbol or pattern.
LIGHT: Palette = MappingProxyType(
    {
        Role.INK: "#1b2733",
        Role.MUTED: "#55616b",
        Role.GHOST: "#8b959d",
        Role.ACCENT: "#0b5a8a",
        Role.BAD: "#9e1c20",
        Role.GOOD: "#2b7145",
        Role.WARN: "#a85200",
        Role.PAPER: "#fcfbf6",
        Role.GRID: "#efece2",
    }
)

DARK: Palette = MappingProxyType(
    {
        Role.INK: "#e8ebed",
        Role.MUTED: "#a9b3bb",
        Role.GHOST: "#75818a",
        Role.ACCENT: "#6fbdec",
        Role.BAD: "#ff8f8a",
        Role.GOOD: "#7fcf9b",
        Role.WARN: "#f2a65a",
        Role.PAPER: "#171d23",
        Role.GRID: "#232b33",
    }
)

TEXT_ROLES = (Role.INK, Role.MUTED, Role.ACCENT, Role.BAD, Role.GOOD, Role.WARN)
LEAST_CONTRAST = 4.5


def luminance(colour: str) -> float:
    """Return the relative luminance of ``#rrggbb``, 0 black to 1 white (WCAG 2.2, definitions)."""
    channels = [int(colour[i : i + 2], 16) / 255 for i in (1, 3, 5)]
    linear = [c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in channels]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def contrast(one: str, other: str) -> float:
    """Return the contrast ratio of two colours ``#rrggbb``, 1 to 21 (WCAG 2.2, definitions).

    >>> round(contrast("#000000", "#ffffff"))
    21
    """
    low, high = sorted((luminance(one), luminance(other)))
    return (high + 0.05) / (low + 0.05)
