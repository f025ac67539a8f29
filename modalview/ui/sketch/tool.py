"""What every tool is asked by the hand that holds it."""

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from modalview.units.quantities import Quantity

if TYPE_CHECKING:
    from modalview.ui.sketch.hand import Hand

# A pointer that moved less than this between press and release was a click, pixels.
CLICK = 5.0


@dataclass(frozen=True, slots=True)
class Pointer:
    """Where the pointer is, and what is held with it.

    Parameters
    ----------
    x, y : float
        Pixels of the sheet.
    straight : bool
        Shift: keep straight across or up.
    add : bool
        Ctrl: add to what is chosen.
    free : bool
        Alt: be drawn to nothing.
    """

    x: float
    y: float
    straight: bool = False
    add: bool = False
    free: bool = False

    def far(self, other: "Pointer") -> bool:
        """Tell whether two places are further apart than a click shakes."""
        return abs(self.x - other.x) > CLICK or abs(self.y - other.y) > CLICK


@dataclass(frozen=True, slots=True)
class Number:
    """A number beside a drag, which can be typed over."""

    label: str
    si: float
    quantity: Quantity


class Tool:
    """A tool in hand; the window's hand passes on what mouse and keyboard do."""

    cursor = "cross"

    def __init__(self, hand: "Hand") -> None:
        self.hand = hand

    def hover(self, at: Pointer) -> None:
        """Follow the pointer with no button pressed."""

    def press(self, at: Pointer) -> None:
        """Begin."""

    def drag(self, at: Pointer) -> None:
        """Go on with the button held."""

    def release(self, at: Pointer) -> None:
        """Make it."""

    def cancel(self) -> bool:
        """Leave off what was begun; tell whether anything was."""
        return False

    @property
    def busy(self) -> bool:
        """Whether something was begun and neither made nor left off."""
        return False

    def numbers(self) -> tuple[Number, ...]:
        """Return the numbers of what was begun."""
        return ()

    def put(self, label: str, si: float) -> None:
        """Take a typed number in the place of the pointer's."""

    def notes(self) -> tuple[str, ...]:
        """Return short lines for beside the pointer: what it is drawn to, why something cannot be."""
        return ()

    def items(self) -> tuple[Any, ...]:
        """Return what is drawn over the sheet (drawing.primitives.Item)."""
        return ()
