"""Links: pressed on one part and let go on another, or on empty ground; two clicks do as well."""

from dataclasses import dataclass, replace
from typing import Any

from modalview.errors import InputError
from modalview.model.adding import add_link, add_support, end_at
from modalview.model.parts import End, Model, Motion
from modalview.ui.sketch import depth
from modalview.ui.sketch.tool import Pointer, Tool

# Links between two bodies, never to the ground.
OF_BODIES = ("gear", "rigid link")


@dataclass(frozen=True, slots=True, eq=False)
class Grip:
    """Where an end of a link would be.

    Parameters
    ----------
    body, support : str or None
        What it would be on; neither is new ground.
    at : drawing.snap.Snapped
    """

    body: str | None
    support: str | None
    at: Any


class Join(Tool):
    """Makes a link of one kind."""

    def __init__(self, hand: Any, kind: str) -> None:
        super().__init__(hand)
        self._kind = kind
        self._from: Grip | None = None
        self._to: Grip | None = None
        self._pressed: Pointer | None = None
        self._waits = False  # the first end was a click: the next click is the other end
        # In space, of the end that is led elsewhere: its body, and its depth there.
        self.kept: tuple[str | None, float] | None = None

    @property
    def busy(self) -> bool:
        """Whether one end is made and the other not."""
        return self._from is not None

    def hover(self, at: Pointer) -> None:
        """Show what an end would be on."""
        self._to = self.grip(at)

    def press(self, at: Pointer) -> None:
        """Make the first end, or show the second where the first waits."""
        self._to = self.grip(at)
        if not self._waits:
            self._from = self._to
            self._pressed = at

    def drag(self, at: Pointer) -> None:
        """Lead the link."""
        self._to = self.grip(at)

    def release(self, at: Pointer) -> None:
        """Make the link; a click alone waits for the other end."""
        self._to = self.grip(at)
        if not self._waits and self._pressed is not None and not at.far(self._pressed):
            self._waits = True
            ground = "" if self._kind in OF_BODIES else ", or on empty ground"
            self.hand.say(f"{self._kind.capitalize()}: now click on another part{ground}. Esc leaves it off.")
            return
        why = self._why_not()
        if why:
            self.hand.say(why)
            if not self._waits:
                self.cancel()
            return
        start, stop = self._from, self._to
        away = self._along_sight()
        self.cancel()
        if away:
            self.hand.make(lambda model: self._made_away(model, start), f"Draw {self._kind}")
        else:
            self.hand.make(lambda model: self._made(model, start, stop), f"Draw {self._kind}")

    def cancel(self) -> bool:
        """Leave the link off."""
        was = self.busy
        self._from, self._pressed, self._waits = None, None, False
        return was

    def grip(self, at: Pointer) -> Grip:
        """Return where an end would be."""
        body = self.hand.body_under(at)
        start = self._from.at if self._from is not None and at.straight else None
        snapped = self.hand.snap(at, start=(start.x, start.y) if start is not None else None)
        if body is None:  # drawn to a part from close by
            body = self.hand.body_under(Pointer(snapped.x, snapped.y))
        support = None if body is not None else self.hand.foot_under(at)
        if depth.in_space(self.hand):
            snapped = self._deep(body, support, snapped)
        return Grip(body, support, snapped)

    def _deep(self, body: str | None, support: str | None, snapped: Any) -> Any:
        """Return a place with its depth: of the support it is on, of the body, or of the first end."""
        axis, first = depth.hidden(self.hand), self._from
        if support is not None:
            return depth.deep(self.hand, snapped, float(self.hand.middle_of(support)[axis]))
        told = first is not None and (first.support is not None or first.at.on_point)
        kept = float(first.at.world[axis]) if first is not None and (told or body is None) else None
        if self.kept is not None and self.kept[0] in (body, None):
            kept = self.kept[1]
        if body is not None:
            return depth.on_body(self.hand, body, snapped, kept)
        return snapped if kept is None or snapped.on_point else depth.deep(self.hand, snapped, kept)

    def _along_sight(self) -> bool:
        """Whether the link goes straight away from the eye: both ends were put at one place on a body."""
        start, stop = self._from, self._to
        if start is None or stop is None or start.body is None or start.body != stop.body:
            return False
        near = max(abs(start.at.x - stop.at.x), abs(start.at.y - stop.at.y)) <= depth.ONE_PLACE
        return near and self._waits and self.hand.geometry.view.straight

    def _why_not(self) -> str:
        start, stop = self._from, self._to
        if start is None or stop is None:
            return "a link has two ends"
        if start.body is None and stop.body is None:
            return f"a {self._kind} needs a body that moves at one end"
        if self._along_sight():
            return self._why_not_away(start)
        if start.body is not None and start.body == stop.body:
            return f"both ends are on {self.hand.name_of(start.body)}; lead the {self._kind} to another part"
        if self._kind in OF_BODIES and (start.body is None or stop.body is None):
            return f"a {self._kind} joins two bodies; the ground is not one"
        return ""

    def _why_not_away(self, start: Grip) -> str:
        behind = depth.along_sight(self.hand, start.body, start.at)[1]
        return f"a {self._kind} joins two bodies; the ground is not one" if self._needs_body(behind) else ""

    def _needs_body(self, other: str | None) -> bool:
        return self._kind in OF_BODIES and other is None

    def _made_away(self, model: Model, start: Grip) -> tuple[Model, str]:
        """Make a link along the line of sight."""
        near, behind, far = depth.along_sight(self.hand, start.body, start.at)
        one = end_at(model, start.body, self.hand.place(near))
        if behind is not None:
            other = end_at(model, behind, self.hand.place(far))
        else:
            model, support = add_support(model, self.hand.place(far))
            other = End(support=support)
        return add_link(model, self._kind, one, other, drag=self.hand.place(far - near))

    def _made(self, model: Model, start: Grip | None, stop: Grip | None) -> tuple[Model, str]:
        if start is None or stop is None:
            raise InputError("a link has two ends")
        if (
            depth.in_space(self.hand)
            and stop.body is not None
            and start.body is None
            and start.support is None
        ):
            level = float(stop.at.world[depth.hidden(self.hand)])  # new ground is as deep as what it carries
            start = replace(start, at=depth.deep(self.hand, start.at, level))
        model, one = self.end(model, start)
        model, other = self.end(model, stop)
        return add_link(model, self._kind, one, other, drag=self.hand.place(stop.at.world - start.at.world))

    def end(self, model: Model, grip: Grip) -> tuple[Model, End]:
        """Return the model, with a new support where one is needed, and the end there."""
        if grip.body is not None:
            if model.motion is Motion.SHAFT_TRAIN:
                return model, End(body=grip.body)
            return model, end_at(model, grip.body, self.hand.place(grip.at.world))
        if grip.support is not None:
            return model, End(support=grip.support)
        model, support = add_support(model, self.hand.place(grip.at.world))
        return model, End(support=support)

    def _gone_on(self) -> bool:
        """Tell whether the pointer has left the place of the first end."""
        start, stop = self._from.at, self._to.at
        return Pointer(start.x, start.y).far(Pointer(stop.x, stop.y))

    def notes(self) -> tuple[str, ...]:
        """Return what an end would be on, or why it cannot be there."""
        if self._to is None:
            return ()
        if self._from is not None and (why := self._why_not()):
            return ("now the other end",) if self._waits and not self._gone_on() else (why,)
        if self._along_sight():
            behind = depth.along_sight(self.hand, self._from.body, self._from.at)[1]
            end = "the ground" if behind is None else self.hand.name_of(behind)
            ways = {2: "down", 1: "back", 0: "back"}
            return (f"straight {ways[depth.hidden(self.hand)]} to {end}",)
        where = "ground" if self._to.body is None else self.hand.name_of(self._to.body)
        snapped = self._to.at.what
        return (where, snapped) if snapped not in ("", "grid", where) else (where,)

    def items(self) -> tuple[Any, ...]:
        """Return the link to be, what it would be joined to, and alignments."""
        from modalview.drawing import overlay  # noqa: PLC0415  (numpy comes after the first paint)

        if self._to is None:
            return ()
        items: tuple[Any, ...] = ()
        for grip in (self._from, self._to):
            if grip is not None and grip.body is not None:
                items += (
                    *overlay.target_items(self.hand.box_of(grip.body)),
                    *overlay.grip_items(grip.at.x, grip.at.y),
                )
        if self._from is None:
            return *items, *overlay.hint_items(self._to.at)
        on_ground = self._to.body is None and self._kind not in OF_BODIES
        start, stop = (self._from.at.x, self._from.at.y), (self._to.at.x, self._to.at.y)
        link = overlay.link_items(self._kind, start, stop, on_ground=on_ground)
        return *items, *link, *overlay.hint_items(self._to.at)
