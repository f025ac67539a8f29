"""Rules of ids, names and titles: plain text that stands on one line, on a sheet and in a terminal."""

import unicodedata

from modalview.model.rules_context import Findings

# What turns the direction of reading: a name that holds it shows the text around it in another order.
_TURNING = frozenset("\u061c\u200e\u200f\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069")
# Control characters, and what ends a line or a paragraph.
_OBEYED = frozenset({"Cc", "Zl", "Zp"})
_WORDS = {"\n": "a line break", "\r": "a line break", "\t": "a tab", "\x1b": "an escape sign (U+001B)"}


def plain_id(key: str, text: str) -> Findings:
    """Yield what is wrong with an id: those that look alike are alike, so nothing invisible stands in it."""
    if not text.strip():
        yield key, "must not be empty"
    elif not text.isprintable():
        place = next(at for at, sign in enumerate(text) if not sign.isprintable())
        told = f"holds {_named(text[place])} as character {place + 1}"
        yield key, f"{told}; an id is one line of visible characters: leave it out, or put it into the name"


def plain_name(key: str, text: str | None) -> Findings:
    """Yield what is wrong with a name or a title; joiners, as in emoji and many scripts, may stand in it."""
    if text is None or text.isprintable():
        return
    place = next((at for at, sign in enumerate(text) if _breaks_the_line(sign)), None)
    if place is not None:
        told = f"holds {_named(text[place])} as character {place + 1}"
        advice = "write a space instead" if text[place].isspace() else "leave it out"
        yield key, f"{told}; it must stand on one line: {advice}"


def _breaks_the_line(sign: str) -> bool:
    return sign in _TURNING or unicodedata.category(sign) in _OBEYED


def _named(sign: str) -> str:
    """Return a character in words: "a line break", "the invisible character U+200D (zero width joiner)"."""
    name = unicodedata.name(sign, "").lower()
    what = "control" if unicodedata.category(sign) == "Cc" else "invisible"
    told = f"the {what} character U+{ord(sign):04X}" + (f" ({name})" if name else "")
    return _WORDS.get(sign, told)
