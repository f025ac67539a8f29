"""One entry of the handbook: what it asks for, how it computes, where that holds and who says so."""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Literal

from modalview.errors import Fault, RecipeFaultsError
from modalview.handbook.sizes import LARGEST, SMALLEST, RecipeInput, Sizes, read_sizes, value_text
from modalview.units.quantities import Quantity

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
        One line for the value's source in a file: who says so, and where the range of validity is left.
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
        typed = read_sizes(self.title, self.inputs, texts, window=window)
        sizes = typed.si
        self._refuse(tuple(Fault("", told) for check in self.refusals if (told := check(sizes))))
        si = self._computed(sizes)
        doubts = [told for check in self.doubts if (told := check(sizes))]
        source = f"handbook, {self.title}: {self.source.citation} ({self.source.status})"
        return Made(
            value_text(si, self.result, percent=self.written == "percent"),
            si,
            self.result,
            self.tolerance,
            (*typed.notes, *doubts, *self.remarks),
            self.id,
            tuple(typed.given.items()),
            "; ".join((source, *doubts)),
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
