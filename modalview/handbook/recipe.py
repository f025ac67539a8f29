"""One entry of the handbook: what it asks for, how it computes, where that holds and who says so."""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from typing import Any, Literal

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
Written = Literal["value", "percent", "order"]
# Says what is wrong with sizes, or "".
Check = Callable[[Sizes], str]


@dataclass(frozen=True, slots=True)
class Source:
    """Who says so, and how it is known.

    Parameters
    ----------
    citation : str
        Author, title, year; or what it follows from.
    status : str
        "formula seen in the source", "from memory", "common practice", "definition" or "check against the
        current edition".
    """

    citation: str
    status: str


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
class Made:
    """What a recipe made of the dimensions given.

    Parameters
    ----------
    text : str
        Ready for a field: "40 kN/m" with at most six digits; a plain number for an order or a ratio.
    si : float
        The same in ``quantity.si_unit``, not rounded.
    quantity : Quantity
        What it is.
    tolerance : str
        To carry along, such as "10 %"; "" where none is usual.
    notes : tuple of str
        Where the range of validity is left, what was taken as not given, how a unit was read.
    by : str
        The recipe.
    given : tuple of (str, str)
        Names and texts from which ``by`` makes the same again.
    source : str
        One line for the value's source in a file.
    """

    text: str
    si: float
    quantity: Quantity
    tolerance: str
    notes: tuple[str, ...]
    by: str
    given: tuple[tuple[str, str], ...]
    source: str


@dataclass(frozen=True, slots=True)
class Recipe:
    """An entry of the handbook.

    Parameters
    ----------
    id : str
        Unique, lower case with hyphens; stored as a value's ``by``, so it never changes.
    title, sentence : str
        What it is called, and what it is for.
    inputs : tuple of RecipeInput
        Their names are the parameters of ``compute``.
    result : Quantity
        What comes out.
    compute : callable
        From SI sizes, by name, to the result in SI.
    formula, validity : str
        In letters of the labels; where it holds.
    source : Source
        Who says so.
    tolerance : str
        To carry along with the value; "" where none is usual (a count, a definition).
    refusals, doubts : tuple of Check
        What makes it impossible; what leaves the range of validity and is told.
    remarks : tuple of str
        Told with every value.
    written : str
        How a result without unit is written: "value", "percent", or "order" for the bare number of an order.
    """

    id: str
    title: str
    sentence: str
    inputs: tuple[RecipeInput, ...]
    result: Quantity
    compute: Callable[..., float]
    formula: str
    validity: str
    source: Source
    tolerance: str = ""
    refusals: tuple[Check, ...] = ()
    doubts: tuple[Check, ...] = ()
    remarks: tuple[str, ...] = ()
    written: Written = "value"

    @property
    def makes(self) -> str:
        """What comes out, in words."""
        return "order" if self.written == "order" else self.result.name

    def evaluate(self, texts: Mapping[str, str], *, window: bool = False) -> Made:
        """Make the value from typed dimensions.

        Parameters
        ----------
        texts : mapping of str to str
            By the name of the input: {"wire": "20 mm", ...}; an empty text counts as not given.
        window : bool
            True accepts a decimal comma where it has one reading only.

        Returns
        -------
        Made
            The value, its tolerance, and what to know about it.

        Raises
        ------
        RecipeFaultsError
            With every fault at once: a name that is none, a dimension missing, unreadable or out of range,
            or dimensions that do not fit together.
        """
        sizes, given, notes = _read_all(self, texts, window=window)
        self._refuse(tuple(Fault("", told) for check in self.refusals if (told := check(sizes))))
        si = self._computed(sizes)
        notes += [told for check in self.doubts if (told := check(sizes))]
        source = f"{self.title} from dimensions: {self.source.citation} ({self.source.status})"
        return Made(
            value_text(si, self.result, percent=self.written == "percent"),
            si,
            self.result,
            self.tolerance,
            (*notes, *self.remarks),
            self.id,
            tuple(given.items()),
            source,
        )

    def _computed(self, sizes: Sizes) -> float:
        try:
            unused = {one.name for one in self.inputs if one.only_checked}
            si = float(self.compute(**{name: size for name, size in sizes.items() if name not in unused}))
        except (OverflowError, ZeroDivisionError):
            si = math.nan
        if not (si == 0 or SMALLEST <= abs(si) <= LARGEST):
            told = f"these dimensions make no {self.result.name} of a machine's size: check units and powers"
            self._refuse((Fault("", told),))
        return si

    def _refuse(self, faults: tuple[Fault, ...]) -> None:
        if faults:
            raise RecipeFaultsError(tuple(Fault(one.path or self.title, one.reason) for one in faults))


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


def _read_all(
    recipe: Recipe, texts: Mapping[str, str], *, window: bool
) -> tuple[dict[str, Any], dict[str, str], list[str]]:
    """Return sizes by name, the texts to make them again from, and notes; raise with all faults."""
    faults = [_unknown(name, recipe) for name in texts if name not in {one.name for one in recipe.inputs}]
    sizes: dict[str, Any] = {}
    given: dict[str, str] = {}
    notes: list[str] = []
    for one in recipe.inputs:
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
    return sizes, given, list(dict.fromkeys(notes))


def _unknown(name: str, recipe: Recipe) -> Fault:
    names = [one.name for one in recipe.inputs]
    close = get_close_matches(name, names, n=1, cutoff=0.6)
    meant = f"; is {close[0]} meant?" if close else ""
    return Fault(name, f"{recipe.title} does not ask for it, but for {', '.join(names)}{meant}")


def _read(one: RecipeInput, text: str, notes: list[str], *, window: bool) -> tuple[Any, str]:
    if not text:
        raise UnitError(f'it is missing; write it like "{one.example}"')
    if one.quantity is None:
        return _word(one, text), text
    parts = [part.strip() for part in text.split(BETWEEN)] if one.several else [text]
    numbers = tuple(_number(one, part, notes, window=window) for part in parts)
    kept = f"{BETWEEN} ".join(part.replace(",", ".") for part in parts)
    return (numbers if one.several else numbers[0]), kept


def _word(one: RecipeInput, text: str) -> str:
    if text not in one.choices:
        raise UnitError(f'"{text}" is none of: {", ".join(one.choices)}')
    return text


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
