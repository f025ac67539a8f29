"""Forces: where on a body a machine's order, or a fixed frequency, acts."""

from typing import Any

from modalview.ui.sketch import depth
from modalview.ui.sketch.tool import Pointer, Tool


class Push(Tool):
    """Asks for an excitation at the place that is clicked."""

    def __init__(self, hand: Any) -> None:
        super().__init__(hand)
        self._at: Any = None
        self._body: str | None = None

    def hover(self, at: Pointer) -> None:
        """Show where it would act."""
        self._body = self.hand.body_under(at)
        self._at = self.hand.snap(at)
        if self._body is not None:
            self._at = depth.on_body(self.hand, self._body, self._at)

    def press(self, at: Pointer) -> None:
        """Wait for the release."""
        self.hover(at)

    def drag(self, at: Pointer) -> None:
        """Follow."""
        self.hover(at)

    def release(self, at: Pointer) -> None:
        """Ask what acts here."""
        self.hover(at)
        if self._body is None:
            self.hand.say("a force acts on a body: click on one")
        else:
            self.hand.ask_force(self._body, self._at)

    def notes(self) -> tuple[str, ...]:
        """Where it would act."""
        if self._at is None:
            return ()
        return (f"on {self.hand.name_of(self._body)}",) if self._body else ("click on a body",)

    def items(self) -> tuple[Any, ...]:
        """Return the body and the place on it."""
        from modalview.drawing import overlay  # noqa: PLC0415  (numpy comes after the first paint)

        if self._at is None or self._body is None:
            return ()
        return *overlay.target_items(self.hand.box_of(self._body)), *overlay.grip_items(
            self._at.x, self._at.y
        )
