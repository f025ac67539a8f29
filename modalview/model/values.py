"""Values as a person types them, kept as typed, with their tolerance and where they come from."""

from dataclasses import dataclass
from typing import Any

from modalview.errors import UnitError
from modalview.units.parse import read
from modalview.units.quantities import LENGTH, RATIO, Quantity
from modalview.units.show import short

# No number of a machine is beyond these in SI; squares and products of those within stay floating-point
# numbers, so that nothing computed from a typed value can overflow or vanish.
SMALLEST, LARGEST = 1e-30, 1e30
# Ends nearer to each other than 1e-9 of their coordinates have no direction: to this reach, in m, that is
# a tenth of a millimetre. Coordinates of a survey are larger; a model's are counted from its own zero.
FARTHEST = 1e5

# Source of a value that a new part was drawn with and that nobody has typed yet.
STARTING = "starting value, not given yet"


def is_sane(number: float) -> bool:
    """Tell whether a number is zero or of a size that can be computed with.

    >>> is_sane(0.0), is_sane(-4e8), is_sane(1e300), is_sane(float("nan"))
    (True, True, False, False)
    """
    return number == 0 or SMALLEST <= abs(number) <= LARGEST


@dataclass(frozen=True, slots=True)
class Entry:
    """A number as it was typed, with the number it means.

    Parameters
    ----------
    text : str
        As typed: "4.2 kN/mm".
    si : float
        The same in the SI unit of its quantity.
    """

    text: str
    si: float

    @classmethod
    def typed(cls, text: str, quantity: Quantity) -> "Entry":
        """Read ``text`` as ``quantity``; raise UnitError when it is not one, or of no machine's size."""
        si = read(text, quantity)
        if not is_sane(si):
            size = short(si) if quantity.si_unit == "1" else f"{short(si)} {quantity.si_unit}"
            raise UnitError(
                f'"{text}" is {size}; no machine has such a {quantity.name}: check unit and power'
            )
        if quantity == LENGTH and abs(si) > FARTHEST:
            raise UnitError(
                f'"{text}" is {short(si)} m; a length is at most {short(FARTHEST)} m, beyond which small '
                "distances would be lost: check unit and power, or count positions from a nearer zero"
            )
        return cls(text, si)


@dataclass(frozen=True, slots=True)
class Tolerance:
    """How far a value may lie from its nominal, to both sides.

    One of three ways of writing it: ``both`` ("10 %"), ``minus`` and ``plus`` ("10 %", "20 %"),
    or ``low`` and ``high`` (the file's from and to) in the value's own unit.
    """

    both: Entry | None = None
    minus: Entry | None = None
    plus: Entry | None = None
    low: Entry | None = None
    high: Entry | None = None

    @classmethod
    def symmetric(cls, text: str) -> "Tolerance":
        """Read "10 %" as plus and minus ten per cent."""
        return cls(both=Entry.typed(text, RATIO))

    def limits(self, nominal: float) -> tuple[float, float]:
        """Return the lowest and the highest value, in the unit of ``nominal``."""
        if self.low is not None and self.high is not None:
            return self.low.si, self.high.si
        minus = self.minus or self.both
        plus = self.plus or self.both
        return (
            nominal * (1 - (minus.si if minus else 0.0)),
            nominal * (1 + (plus.si if plus else 0.0)),
        )


class JsonObject(tuple[tuple[str, Any], ...]):
    """A JSON object as its pairs: hashable and immutable, and still told from a list of lists."""

    __slots__ = ()


@dataclass(frozen=True, slots=True)
class Value:
    """A typed value with what is known about it.

    Parameters
    ----------
    entry : Entry
        The number as typed and in SI.
    tolerance : Tolerance or None
        Of this value alone; None leaves it to the part or the model.
    source, status : str or None
        Where it comes from, and "datasheet", "measured" or "assumed".
    by, given : str or None, JsonObject or None
        The handbook entry it was computed by, and that entry's dimensions: any JSON, with lists as tuples.
    """

    entry: Entry
    tolerance: Tolerance | None = None
    source: str | None = None
    status: str | None = None
    by: str | None = None
    given: JsonObject | None = None

    @property
    def si(self) -> float:
        """Nominal value in SI."""
        return self.entry.si

    @property
    def text(self) -> str:
        """As typed."""
        return self.entry.text

    @classmethod
    def typed(cls, text: str, quantity: Quantity, tolerance: str | None = None) -> "Value":
        """Read ``text``, with a symmetric tolerance such as "10 %" if given."""
        return cls(
            Entry.typed(text, quantity),
            tolerance=Tolerance.symmetric(tolerance) if tolerance else None,
        )
