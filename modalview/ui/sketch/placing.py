"""Bodies and supports: a click puts one of the usual size, a drag draws its outline."""

from typing import Any

from modalview.model.adding import add_body, add_support
from modalview.model.parts import Motion
from modalview.ui.sketch import depth
from modalview.ui.sketch.tool import Number, Pointer, Tool
from modalview.units import quantities as q

# Of a body put by a click, pixels; rounded to the grid of the paper.
USUAL = {"mass": (132.0, 48.0), "body": (150.0, 90.0), "disc": (26.0, 96.0), "junction": (10.0, 10.0)}
# A disc is round where it is seen from the front.
ROUND = 76.0


class PlaceBody(Tool):
    """Draws a mass, a rigid body, a disc or a junction."""

    def __init__(self, hand: Any, kind: str) -> None:
        super().__init__(hand)
        self._kind = kind
        self._at: Any = None  # snapped
        self._start: Any = None
        self._pressed: Pointer | None = None
        self._typed: dict[str, float] = {}
        self._drawn = False

    @property
    def busy(self) -> bool:
        """Whether an outline is being drawn."""
        return self._start is not None

    def hover(self, at: Pointer) -> None:
        """Show where it would stand."""
        self._at = self.hand.snap(at)

    def press(self, at: Pointer) -> None:
        """Begin the outline."""
        self._start = self._at = self.hand.snap(at)
        self._pressed, self._drawn = at, False
        self._typed = {}

    def drag(self, at: Pointer) -> None:
        """Draw the outline."""
        self._at = self.hand.snap(at)
        self._drawn = self._drawn or (self._pressed is not None and at.far(self._pressed))

    def release(self, at: Pointer) -> None:
        """Put it there."""
        self.drag(at)
        if self._start is None:
            return
        centre, seen = self._box()
        size = (
            seen if seen is None or not self._straight() else depth.model_size(self.hand.axes_shown(), seen)
        )
        self.cancel()
        self.hand.make(
            lambda model: add_body(model, self._kind, self.hand.place(centre), size), f"Draw {self._kind}"
        )

    def cancel(self) -> bool:
        """Leave the outline off."""
        was = self.busy
        self._start, self._pressed, self._typed = None, None, {}
        return was

    def put(self, label: str, si: float) -> None:
        """Take a typed width or height."""
        self._typed[label] = si
        self._drawn = True

    def _drawn_size(self) -> tuple[float, float]:
        """Return width and height in metres as drawn, or the usual ones."""
        view = self.hand.geometry.view
        if self._drawn and self._kind != "junction":
            wide = abs(self._at.x - self._start.x) / view.scale_x
            high = abs(self._at.y - self._start.y) / view.scale_y
            size = max(wide, self.hand.grid(0)), max(high, self.hand.grid(1))
        else:
            width, height = USUAL[self._kind]
            if self._kind == "disc" and self.hand.model.motion is not Motion.SHAFT_TRAIN:
                width = height = ROUND
            if self._straight() and depth.hidden(self.hand) == 0:
                width *= depth.DEPTH
            size = (
                self.hand.gridded(width / view.scale_x, 0),
                self.hand.gridded(height / view.scale_y, 1),
            )
        across, up = self._labels()
        size = self._typed.get(across, size[0]), self._typed.get(up, size[1])
        if self._straight():
            size = depth.seen_size(self.hand.axes_shown(), *size)
        return float(f"{size[0]:.6g}"), float(f"{size[1]:.6g}")

    def _straight(self) -> bool:
        return bool(self.hand.geometry.view.straight)

    def _labels(self) -> tuple[str, str]:
        """Return what the two sides are called that are seen."""
        if not self._straight():
            return "width", "height"
        return tuple({0: "width", 1: "depth", 2: "height"}[axis] for axis in self.hand.axes_shown())

    def _box(self) -> tuple[Any, tuple[float, float] | None]:
        """Return centre (world) and size in metres."""
        size = self._drawn_size()
        if self._kind == "junction":
            return self._start.world, None
        if not self._drawn:
            return self._start.world, size
        view = self.hand.geometry.view
        right = 1.0 if self._at.x >= self._start.x else -1.0
        down = 1.0 if self._at.y >= self._start.y else -1.0
        x = self._start.x + right * size[0] * view.scale_x / 2
        y = self._start.y + down * size[1] * view.scale_y / 2
        return self.hand.world(x, y, self._start.world), size

    def numbers(self) -> tuple[Number, ...]:
        """Width and height while drawing."""
        if self._start is None or self._kind == "junction":
            return ()
        size = self._drawn_size()
        across, up = self._labels()
        numbers = (Number(across, size[0], q.LENGTH), Number(up, size[1], q.LENGTH))
        return numbers[:1] if up == "depth" else numbers  # its depth follows from the width

    def notes(self) -> tuple[str, ...]:
        """Return what the pointer is drawn to."""
        return (self._at.what,) if self._at is not None and self._at.what not in ("", "grid") else ()

    def items(self) -> tuple[Any, ...]:
        """Return the outline, and alignments."""
        from modalview.drawing import overlay  # noqa: PLC0415  (numpy comes after the first paint)

        if self._at is None:
            return ()
        hints = overlay.hint_items(self._at)
        if self._start is None:
            return hints
        view = self.hand.geometry.view
        centre, size = self._box()
        x, y = view.to_pixels(centre[None])[0].tolist()
        wide, high = (size[0] * view.scale_x, size[1] * view.scale_y) if size else (10.0, 10.0)
        shape = "point" if self._kind == "junction" else "box"
        start, stop = (x - wide / 2, y - high / 2), (x + wide / 2, y + high / 2)
        return *overlay.body_items(start, stop, shape), *hints


class PlaceSupport(Tool):
    """Puts a place on the ground, for links to stand on."""

    def __init__(self, hand: Any) -> None:
        super().__init__(hand)
        self._at: Any = None

    def hover(self, at: Pointer) -> None:
        """Show where it would be."""
        self._at = self.hand.snap(at)

    def press(self, at: Pointer) -> None:
        """Wait for the release."""
        self.hover(at)

    def drag(self, at: Pointer) -> None:
        """Follow."""
        self.hover(at)

    def release(self, at: Pointer) -> None:
        """Put it there."""
        self.hover(at)
        place = self.hand.place(self._at.world)
        self.hand.make(lambda model: add_support(model, place), "Draw support", form=False)

    def notes(self) -> tuple[str, ...]:
        """Return what the pointer is drawn to."""
        return (self._at.what,) if self._at is not None and self._at.what not in ("", "grid") else ()

    def items(self) -> tuple[Any, ...]:
        """Return the ground to be, and alignments."""
        from modalview.drawing import overlay  # noqa: PLC0415  (see above)

        if self._at is None:
            return ()
        above = (self._at.x, self._at.y - 1.0)
        ground = overlay.link_items("gear", above, (self._at.x, self._at.y), on_ground=True)
        return *ground, *overlay.hint_items(self._at)
