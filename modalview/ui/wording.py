"""Texts made fit for one line or for several: names on one line, numbers beside their units."""

import re

_BOUND = "\u00a0"  # no line is broken at it
# A number before its unit, a sign before its number, an order or a mode before its name.
_UNITS = re.compile(r"(?<=\d) (?=(?:%|Hz|rpm|kg|N)(?!\w))")
_ORDERS = re.compile(r"(?<=\d×) ")
_MODES = re.compile(r"\b(mode|to) (?=\d)")


def one_line(text: str) -> str:
    r"""Return a text on one line: line breaks and runs of blanks become one blank.

    >>> one_line("pump\n of  line 3")
    'pump of line 3'
    """
    return " ".join(text.split())


def kept_together(text: str) -> str:
    r"""Return a text on one line broken between a number and its unit, or an order and its name.

    >>> kept_together("mode 1 at 51.3 Hz").count("\u00a0")
    2
    """
    text = _UNITS.sub(_BOUND, one_line(text))
    return _MODES.sub(rf"\1{_BOUND}", _ORDERS.sub(_BOUND, text))
