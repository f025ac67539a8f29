"""How much room a text takes, without Qt; widths err on the wide side, so that what fits here fits."""

from modalview.drawing.primitives import Size

# Height of the font's em square in pixels at text scale 1.
PIXELS: dict[Size, float] = {Size.SMALL: 11.0, Size.NORMAL: 13.0}
LINE_HEIGHT = 1.3  # of the em, from line to line
BOLD = 1.12  # width of bold over regular

# Widths in em of a wide sans serif face, by group of characters; measured on DejaVu Sans, the widest of
# the faces that desktops install.
_NARROW = frozenset("ijlI.,:;|!' ·()[]")
_WIDE = frozenset("mwMW%@±×→")


def text_width(text: str, size: Size = Size.NORMAL, *, bold: bool = False, text_scale: float = 1.0) -> float:
    """Return the width of one line of text in pixels, seldom below its true width.

    >>> text_width("pump") < text_width("pump pedestal")
    True
    """
    em = sum(map(_advance, text))
    return em * PIXELS[size] * text_scale * (BOLD if bold else 1.0)


def line_height(size: Size = Size.NORMAL, *, text_scale: float = 1.0) -> float:
    """Return the height of one line of text in pixels."""
    return PIXELS[size] * LINE_HEIGHT * text_scale


def _advance(character: str) -> float:
    if character in _NARROW:
        return 0.37
    if character in _WIDE:
        return 0.92
    if character.isupper():
        return 0.71
    return 0.64 if character.isdigit() else 0.62
