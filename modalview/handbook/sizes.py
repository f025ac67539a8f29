"""What an entry of the handbook asks for, and how what is typed becomes sizes in SI."""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from typing import Any

from modalview.errors import Fault, RecipeFaultsError, UnitError
from modalview.units import quantities as q
from modalview.units.parse import read_noted
from modalview.units.quantities import Quantity
from modalview.units.show import short, show

# Digits of a value that is handed over: more than any dimension is known to, and short enough to read.
DIGITS = 6
# The sizes that a model accepts, too.
SMALLEST, LARGEST = 1e-30, 1e30
# Between the values of an input that takes several.
BETWEEN = ";"
_HZ = 2 * math.pi

Sizes = Mapping[str, Any]


@dataclass(frozen=True, slots=True)
class RecipeInput:
    """One thing that a recipe asks for.

    Parameters
    ----------
    name : str
        The argument of the recipe's function, and the option of the command line (with hyphens).
    label : str
        For people, with the letter of the formula: "wire diameter d".
    quantity : Quantity or None
        What it is; None for a word out of ``choices``.
    example : str
        A correct entry.
    low, high : float
        In SI. What lies outside is refused; ``low`` itself is, unless ``low_counts``.
    low_counts : bool
        Whether ``low`` itself is accepted.
    default : str
        What is taken, and told, where nothing is given; "" where it must be given.
    choices : tuple of str
        The words to choose from.
    several : bool
        Whether it takes one or more values, parted by ";".
    whole : bool
        Whether only whole numbers count.
    only_checked : bool
        Whether it may be left out: the checks of validity look at it, the formula does not.
    """

    name: str
    label: str
    quantity: Quantity | None
    example: str
    low: float = 0.0
    high: float = math.inf
    low_counts: bool = False
    default: str = ""
    choices: tuple[str, ...] = ()
    several: bool = False
    whole: bool = False
    only_checked: bool = False

    @property
    def option(self) -> str:
        """As the command line writes it."""
        return "--" + self.name.replace("_", "-")


@dataclass(frozen=True, slots=True)
class TypedSizes:
    """Sizes as they were read.

    Parameters
    ----------
    si : dict
        By name: a number in SI, several of them, or a word.
    given : dict of str to str
        Texts from which the same is read again.
    notes : tuple of str
        How units were read, and what was taken as not given.
    """

    si: dict[str, Any]
    given: dict[str, str]
    notes: tuple[str, ...]


def value_text(si: float, quantity: Quantity, *, percent: bool = False) -> str:
    """Return a value as it is handed over: at most six digits, read back by ``units``.

    >>> value_text(40000.0, q.STIFFNESS), value_text(7.0, q.RATIO), value_text(1084.9, q.FREQUENCY)
    ('40 N/mm', '7', '172.667 Hz')
    """
    if quantity == q.RATIO and not percent:
        return short(si, DIGITS)
    if quantity == q.FREQUENCY:
        return f"{short(si / _HZ, DIGITS)} Hz"
    return show(si, quantity, digits=DIGITS)


def read_sizes(
    title: str, inputs: tuple[RecipeInput, ...], texts: Mapping[str, str], *, window: bool
) -> TypedSizes:
    """Read what was typed for the inputs of an entry.

    Parameters
    ----------
    title : str
        Of the entry, for messages.
    inputs : tuple of RecipeInput
        What it asks for.
    texts : mapping of str to str
        By name; an empty text counts as not given.
    window : bool
        True accepts a decimal comma where it has one reading only.

    Raises
    ------
    RecipeFaultsError
        With every fault at once.
    """
    names = [one.name for one in inputs]
    faults = [_unknown(name, title, names) for name in texts if name not in names]
    sizes: dict[str, Any] = {}
    given: dict[str, str] = {}
    notes: list[str] = []
    for one in inputs:
        text = texts.get(one.name, "").strip()
        if not text and one.only_checked:
            continue
        try:
            if not text and one.default:
                notes.append(f"{one.label} not given, taken as {one.default}")
            sizes[one.name], given[one.name] = _read(one, text or one.default, notes, window=window)
        except UnitError as error:
            faults.append(Fault(one.name, f"{one.label}: {error}"))
    if faults:
        raise RecipeFaultsError(tuple(faults))
    return TypedSizes(sizes, given, tuple(dict.fromkeys(notes)))


def _unknown(name: str, title: str, names: list[str]) -> Fault:
    close = get_close_matches(name, names, n=1, cutoff=0.6)
    meant = f"; is {close[0]} meant?" if close else ""
    return Fault(name, f"{title} does not ask for it, but for {', '.join(names)}{meant}")


def _read(one: RecipeInput, text: str, notes: list[str], *, window: bool) -> tuple[Any, str]:
    if not text:
        raise UnitError(f'it is missing; write it like "{one.example}"')
    if one.quantity is None:
        chosen = _word(one, text)
        return chosen, chosen
    parts = [part.strip() for part in text.split(BETWEEN)] if one.several else [text]
    numbers = tuple(_number(one, part, notes, window=window) for part in parts)
    kept = f"{BETWEEN} ".join(part.replace(",", ".") for part in parts)
    return (numbers if one.several else numbers[0]), kept


def _word(one: RecipeInput, text: str) -> str:
    chosen = next((choice for choice in one.choices if choice.casefold() == text.casefold()), None)
    if chosen is None:
        raise UnitError(f'"{text}" is none of: {", ".join(one.choices)}')
    return chosen


def _number(one: RecipeInput, text: str, notes: list[str], *, window: bool) -> float:
    assert one.quantity is not None  # noqa: S101  (words are read by ``_word``)
    reading = read_noted(text, one.quantity, window=window)
    si = reading.si
    if not (one.low < si <= one.high or (one.low_counts and si == one.low)):
        raise UnitError(f'"{text}" is out of range; it must be {_range_text(one)}')
    if one.whole and si != round(si):
        raise UnitError(f'"{text}" is no whole number')
    if si != 0 and not SMALLEST <= abs(si) <= LARGEST:
        raise UnitError(f'"{text}" is of no machine\'s size: check unit and power')
    notes.extend(f"{one.label}: {note}" for note in reading.notes)
    return si


def _range_text(one: RecipeInput) -> str:
    assert one.quantity is not None  # noqa: S101  (words have no range)
    low, high = (value_text(edge, one.quantity) for edge in (one.low, one.high))
    if one.low == 0:
        low = "zero"
    above = "" if one.low == -math.inf else f"{'at least' if one.low_counts else 'above'} {low}"
    below = "" if one.high == math.inf else f"at most {high}"
    return " and ".join(part for part in (above, below) if part) or "a finite number"
