"""Choosing parts, moving and sizing them, and leading the ends of links elsewhere."""

from typing import Any

from modalview.drawing import hits
from modalview.drawing.snap import Wish
from modalview.model.moving import moved, reattached, resized, slid
from modalview.model.parts import Model
from modalview.ui.sketch import depth
from modalview.ui.sketch.joining import Grip, Join
from modalview.ui.sketch.tool import Number, Pointer, Tool
from modalview.ui.sketch.trial import Trial
from modalview.units import quantities as q

_AXES = "xyz"


class Choose(Tool):
    """The tool that is in hand when no other is."""

    cursor = "arrow"

    def __init__(self, hand: Any) -> None:
        super().__init__(hand)
        self._pressed: Pointer | None = None
        self._work: Tool | None = None  # what a drag turned out to be
        self._begin: Any = None
        self._before: tuple[str, ...] = ()  # chosen when the button went down
        self.clicked: str | None = None  # what the last click was on

    @property
    def busy(self) -> bool:
        """Whether something is being dragged."""
        return self._work is not None

    def press(self, at: Pointer) -> None:
        """Choose what is under the pointer, and be ready to drag it."""
        self._pressed = at
        self._before = self.hand.chosen
        self.clicked = None
        self._begin = self._beginning(at)

    def _beginning(self, at: Pointer) -> Any:
        hand = self.hand
        grip = hits.handle_at(hand.geometry, hand.chosen, at.x, at.y)
        if grip is not None:
            if grip.name in ("from", "to"):
                return lambda: Lead(hand, grip.part, grip.name)
            return lambda: Resize(hand, grip.part, grip.name)
        part = hand.part_under(at)
        if part is None:
            return lambda: Band(hand, at)
        if not at.add:  # one that was reached by repeated clicks stays in hand
            part = next((one for one in hand.parts_under(at) if one in hand.chosen), part)
        self.clicked = part
        if at.add:
            hand.toggle(part)
        elif part not in hand.chosen:
            hand.choose((part,))
        if part not in hand.chosen:
            return None
        if hand.movable():
            return lambda: Move(hand, at, part)
        return (lambda: Slide(hand, at, part)) if hand.slides() else None

    def drag(self, at: Pointer) -> None:
        """Begin to drag once it is no click, then go on."""
        if self._work is None and self._pressed is not None and at.far(self._pressed) and self._begin:
            self._work = self._begin()
        if self._work is not None:
            self._work.drag(at)

    def release(self, at: Pointer) -> None:
        """End a drag; a click on nothing chooses nothing."""
        work, pressed = self._work, self._pressed
        self._work = self._pressed = None
        if work is not None:
            work.release(at)
        elif pressed is not None and not at.add and self.hand.part_under(at) is None:
            if hits.handle_at(self.hand.geometry, self.hand.chosen, at.x, at.y) is None:
                self.hand.choose(())
        elif pressed is not None and not at.add and len(self.hand.chosen) > 1:
            part = self.hand.part_under(at)
            if part is not None:
                self.hand.choose((part,))
        elif pressed is not None and not at.add and self.clicked is not None:
            self._next_behind(at)

    def _next_behind(self, at: Pointer) -> None:
        """Choose the next of what lies one behind the other, where the click was on what is chosen."""
        parts = self.hand.parts_under(at)
        if len(parts) > 1 and self._before == (self.clicked,) and self.clicked in parts:
            following = parts[(parts.index(self.clicked) + 1) % len(parts)]
            self.hand.choose((following,))
            self.hand.say(f"{self.hand.name_of(following)} is chosen, {len(parts)} parts lie here")

    def cancel(self) -> bool:
        """Give back what was dragged."""
        work, self._work, self._pressed = self._work, None, None
        if work is not None:
            work.cancel()
        return work is not None

    def numbers(self) -> tuple[Number, ...]:
        """Those of what is dragged."""
        return self._work.numbers() if self._work is not None else ()

    def put(self, label: str, si: float) -> None:
        """Pass it on to what is dragged."""
        if self._work is not None:
            self._work.put(label, si)

    def notes(self) -> tuple[str, ...]:
        """Those of what is dragged."""
        return self._work.notes() if self._work is not None else ()

    def items(self) -> tuple[Any, ...]:
        """Those of what is dragged."""
        return self._work.items() if self._work is not None else ()


class Band(Tool):
    """A rubber band: chooses what lies wholly inside."""

    def __init__(self, hand: Any, start: Pointer) -> None:
        super().__init__(hand)
        self._start = self._stop = start
        self._before: tuple[str, ...] = hand.chosen if start.add else ()

    def drag(self, at: Pointer) -> None:
        """Choose as it goes."""
        self._stop = at
        band = (self._start.x, self._start.y, at.x, at.y)
        found = hits.within(self.hand.geometry, band)
        self.hand.choose(tuple(dict.fromkeys((*self._before, *found))))

    def release(self, at: Pointer) -> None:
        """Keep what is chosen."""
        self.drag(at)

    def items(self) -> tuple[Any, ...]:
        """Return the band."""
        from modalview.drawing import overlay  # noqa: PLC0415  (numpy comes after the first paint)

        return overlay.band_items((self._start.x, self._start.y), (self._stop.x, self._stop.y))


class Move(Tool):
    """Moves what is chosen, with the part that was gripped drawn to grid and neighbours."""

    def __init__(self, hand: Any, start: Pointer, part: str) -> None:
        super().__init__(hand)
        self._trial = Trial(hand.document, hand.placed_model())
        self._part = part
        # Everything is measured from the geometry at the press: the sheet is laid out anew meanwhile.
        self._geometry = hand.geometry
        self._ids = hand.chosen
        self._base = self._place_of(part)
        x, y = self._geometry.view.to_pixels(self._base[None])[0].tolist()
        self._grab = start.x - x, start.y - y
        self._from = (x, y)
        self._leave_out = frozenset(hand.chosen)
        self._at: Any = None
        self._typed: dict[str, float] = {}
        self._frames = hits.frames_of(self._geometry, self._leave_out)

    def drag(self, at: Pointer) -> None:
        """Move as far as the pointer is drawn."""
        where = Pointer(at.x - self._grab[0], at.y - self._grab[1], at.straight, at.add, at.free)
        self._at = self.hand.snap(
            where,
            start=self._from if at.straight else None,
            wish=Wish(self._leave_out, at.free, None),
            through=self._base,
            geometry=self._geometry,
        )
        self._show()

    def _show(self) -> None:
        target = self._at.world.copy()
        for label, si in self._typed.items():
            target[_AXES.index(label)] = si
        step = self.hand.place(target - self._base)
        self._trial.show(self._moved(step))

    def _place_of(self, part: str) -> Any:
        """Return what of a part is drawn to the grid: where a body or support is in the world."""
        return self.hand.middle_of(part)

    def _moved(self, step: tuple[float, ...]) -> Model:
        return moved(self._trial.base, self._ids, step)

    def release(self, at: Pointer) -> None:
        """Settle it."""
        if not self._typed:
            self.drag(at)
        self.hand.said(self._trial.settle(f"Move {self.hand.named(self._ids)}"))

    def cancel(self) -> bool:
        """Give it back."""
        self._trial.give_back()
        return True

    def numbers(self) -> tuple[Number, ...]:
        """Where the gripped part is."""
        if self._at is None:
            return ()
        axes = self.hand.axes_shown()
        return tuple(
            Number(_AXES[axis], self._typed.get(_AXES[axis], float(self._at.world[axis])), q.LENGTH)
            for axis in axes
        )

    def put(self, label: str, si: float) -> None:
        """Take a typed coordinate."""
        self._typed[label] = si
        self._show()

    def notes(self) -> tuple[str, ...]:
        """Return what it is drawn to."""
        return (self._at.what,) if self._at is not None and self._at.what not in ("", "grid") else ()

    def items(self) -> tuple[Any, ...]:
        """Alignments, and where the bodies are while the sheet has still to be laid out with them there."""
        from modalview.drawing import overlay  # noqa: PLC0415  (numpy comes after the first paint)

        hints = overlay.hint_items(self._at)
        if self._at is None or self._typed or self.hand.geometry.model is self.hand.model:
            return hints
        step = self._at.x - self._from[0], self._at.y - self._from[1]
        return *overlay.carried_items(self._frames, *step), *hints


class Slide(Move):
    """Moves links along on the bodies that they join, a foot of their own going along."""

    def _place_of(self, part: str) -> Any:
        return self.hand.end_of(part)

    def _moved(self, step: tuple[float, ...]) -> Model:
        return slid(self._trial.base, self._ids, step)


class Resize(Tool):
    """Draws a body larger or smaller about its centre of gravity: no number of the model changes."""

    def __init__(self, hand: Any, part: str, corner: str) -> None:
        super().__init__(hand)
        self._trial = Trial(hand.document, hand.placed_model())
        self._part = part
        self._across, self._up = hits.CORNERS[corner]
        self._geometry = hand.geometry
        x1, y1, x2, y2 = hand.box_of(part)
        self._middle = (x1 + x2) / 2, (y1 + y2) / 2
        view = self._geometry.view
        self._size = [(x2 - x1) / view.scale_x, (y2 - y1) / view.scale_y]
        self._shown = ("width", "height")
        if view.straight:
            self._size, self._middle = depth.drawn_size(self._geometry, part)
            seen = (("width", 0), ("height", 2))
            self._shown = tuple(label for label, axis in seen if axis != depth.hidden(hand))
        self._typed: dict[str, float] = {}

    def drag(self, at: Pointer) -> None:
        """Follow the pointer, on the grid."""
        view = self._geometry.view
        for axis, along, middle, scale in (
            (0, self._across, self._middle[0], view.scale_x),
            (1, self._up, self._middle[1], view.scale_y),
        ):
            if along:
                half = abs((at.x, at.y)[axis] - middle) / scale
                size = 2 * half if at.free else self.hand.gridded(2 * half, axis)
                self._size[axis] = max(size, self.hand.grid(axis))
        self._show()

    def _show(self) -> None:
        wide = self._typed.get("width", self._size[0])
        high = self._typed.get("height", self._size[1])
        self._trial.show(resized(self._trial.base, self._part, wide, high))

    def release(self, at: Pointer) -> None:
        """Settle it."""
        if not self._typed:
            self.drag(at)
        self.hand.said(self._trial.settle(f"Size {self.hand.name_of(self._part)}"))

    def cancel(self) -> bool:
        """Give it back."""
        self._trial.give_back()
        return True

    def numbers(self) -> tuple[Number, ...]:
        """Width and height."""
        sizes = dict(zip(("width", "height"), self._size, strict=True))
        return tuple(Number(label, self._typed.get(label, sizes[label]), q.LENGTH) for label in self._shown)

    def put(self, label: str, si: float) -> None:
        """Take a typed width or height."""
        self._typed[label] = si
        self._show()

    def notes(self) -> tuple[str, ...]:
        """Say what does not change."""
        return ("drawn size only",)


class Lead(Tool):
    """Leads one end of a link to another part, or elsewhere on the same one."""

    def __init__(self, hand: Any, link: str, side: str) -> None:
        super().__init__(hand)
        self._link, self._side = link, side
        self._kind = next(one.kind for one in hand.model.links if one.id == link)
        self._join = Join(hand, self._kind)
        self._join.kept = depth.of_end(hand, link, side)
        number = next(n for n, one in enumerate(hand.geometry.model.links) if one.id == link)
        self._other: list[float] = hand.geometry.link_ends[number, 1 if side == "from" else 0].tolist()
        self._at: Grip | None = None

    def drag(self, at: Pointer) -> None:
        """Show what the end would be on."""
        self._join.hover(at)
        self._at = self._join.grip(at)

    def release(self, at: Pointer) -> None:
        """Make it so."""
        self.drag(at)
        grip = self._join.grip(at)

        def lead(model: Model) -> tuple[Model, str]:
            model, end = self._join.end(model, grip)
            return reattached(model, self._link, self._side, end), self._link

        self.hand.make(lead, f"Lead {self.hand.name_of(self._link)} elsewhere", form=False)

    def notes(self) -> tuple[str, ...]:
        """Return what the end would be on."""
        return self._join.notes()

    def items(self) -> tuple[Any, ...]:
        """Return the link as it would be, and the part and place it would be joined to."""
        from modalview.drawing import overlay  # noqa: PLC0415  (numpy comes after the first paint)

        if self._at is None:
            return ()
        start, stop = (self._other[0], self._other[1]), (self._at.at.x, self._at.at.y)
        on_ground = self._at.body is None
        return *self._join.items(), *overlay.link_items(self._kind, start, stop, on_ground=on_ground)
