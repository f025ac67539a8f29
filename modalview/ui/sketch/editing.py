"""What the Edit menu does with the parts that are chosen."""

from collections.abc import Callable
from typing import Any

from PySide6.QtCore import QObject
from PySide6.QtGui import QGuiApplication, QKeyEvent, QKeySequence
from PySide6.QtWidgets import QWidget

from modalview.errors import InputError
from modalview.model.copying import duplicated, fragment, pasted
from modalview.model.moving import aligned, span, spread
from modalview.model.parts import Body, Model, Motion, Support
from modalview.model.tolerance_text import typed_entry
from modalview.model.turning import mirrored, rotated
from modalview.store import dump_model, parse_model
from modalview.ui.sketch.asking import AskText, FindPart
from modalview.ui.sketch.hand import Hand
from modalview.ui.sketch.kinds import kind_of
from modalview.units import quantities as q

# Copies stand so many steps of the grid beside what they are copies of.
ASIDE = 2


class Editing(QObject):
    """Every change that a menu makes of parts on the sheet; each is one step to undo."""

    def __init__(self, hand: Hand, sheet: QWidget) -> None:
        super().__init__(sheet)
        self._hand, self._sheet = hand, sheet
        self._copied = ""  # in this window
        self._copies = 0  # pastes of the same parts stand further and further aside

    # Choosing

    def choose_all(self) -> None:
        """Choose every part."""
        model = self._hand.model
        if model is not None:
            groups = (model.bodies, model.supports, model.links)
            self._hand.choose(tuple(one.id for group in groups for one in group))

    def choose_alike(self) -> None:
        """Choose all parts of the kinds that are chosen."""
        model = self._hand.model
        kinds = {kind_of(model, part) for part in self._hand.chosen} if model is not None else set()
        if not kinds:
            self._hand.say("Choose a part first; then all of its kind are chosen.")
            return
        groups = (model.bodies, model.supports, model.links)
        ids = tuple(one.id for group in groups for one in group if kind_of(model, one.id) in kinds)
        self._hand.choose(ids)
        self._hand.say(f"{len(ids)} parts are chosen")

    def find(self) -> None:
        """Ask for a part by its name, and show it."""
        if self._hand.model is not None:
            FindPart(self._hand.model, self._show_found, self._sheet).open()

    def _show_found(self, part: str) -> None:
        self._hand.choose((part,))
        self.zoom_to_chosen()
        self._sheet.setFocus()

    def zoom_to_chosen(self) -> None:
        """Show what is chosen large."""
        if self._hand.chosen and self._hand.ready:
            self._sheet.zoom_to(self._hand.rectangle(self._hand.chosen))
        else:
            self._hand.say("Choose a part first; then the sheet can show it large.")

    # Changing

    def _places(self) -> list[tuple[float, ...]]:
        model = self._hand.placed_model()
        parts = (self._hand.part(part, model) for part in self._hand.chosen)
        return [
            tuple(one.si for one in part.position)
            for part in parts
            if isinstance(part, Body | Support) and part.position is not None
        ]

    def _middle(self) -> tuple[float, ...]:
        """Return the middle of what is chosen, in whole millionths of a metre."""
        columns = list(zip(*self._places(), strict=True))
        return tuple(round((min(column) + max(column)) / 2, 6) for column in columns)

    def _change(self, operation: Callable[[Model], Model], text: str, least: int = 1) -> None:
        """Make a change of the chosen bodies and supports, and tell why it cannot be made."""
        hand = self._hand
        if hand.model is None or len(self._places()) < least:
            some = "a body or a support" if least == 1 else f"at least {least} bodies or supports"
            hand.say(f"Choose {some} first.")
            return
        hand.hold_view()
        try:
            after = operation(hand.placed_model())
        except InputError as error:
            hand.say(str(error))
            return
        hand.change(after, text)

    def duplicate(self) -> None:
        """Double what is chosen, beside it."""
        hand = self._hand
        if not hand.chosen or not hand.ready:
            hand.say("Choose a part first; then it can be doubled.")
            return
        hand.hold_view()
        try:
            after, ids = duplicated(hand.placed_model(), hand.chosen, self._step(ASIDE))
        except InputError as error:
            hand.say(str(error))
            return
        if hand.change(after, f"Duplicate {hand.named(hand.chosen)}"):
            hand.choose(ids)

    def _step(self, steps: int) -> tuple[float, ...]:
        """Return so many steps of the grid across and down the sheet, in metres."""
        by = [0.0, 0.0, 0.0]
        across, up = self._hand.axes_shown()
        by[across], by[up] = steps * self._hand.grid(0), -steps * self._hand.grid(1)
        return tuple(by[: 3 if self._hand.model.motion is Motion.SPACE else 2])

    def mirror_sideways(self) -> None:
        """Exchange left and right."""
        self._mirror(0, "left and right")

    def mirror_upright(self) -> None:
        """Exchange above and below."""
        self._mirror(1, "above and below")

    def _mirror(self, which: int, words: str) -> None:
        chosen = self._hand.chosen
        axis = "xyz"[self._hand.axes_shown()[which]] if self._hand.ready else "x"
        self._change(lambda model: mirrored(model, chosen, axis, self._middle()), f"Mirror {words}")

    def turn_left(self) -> None:
        """Turn by a quarter, anticlockwise."""
        self._turn(90.0)

    def turn_right(self) -> None:
        """Turn by a quarter, clockwise."""
        self._turn(-90.0)

    def turn_by(self) -> None:
        """Ask for an angle and turn by it."""

        def turn(text: str) -> None:
            self._turn(typed_entry(text, q.ANGLE).si * 57.29577951308232)

        AskText("Turn", "Angle, anticlockwise", "30 deg", turn, self._sheet).open()

    def _turn(self, degrees: float) -> None:
        chosen, hand = self._hand.chosen, self._hand
        axes = hand.axes_shown() if hand.ready else (0, 1)
        axis = "xyz"[3 - sum(axes)]
        # Seen from where y points away from the eye, anticlockwise is a turn about minus y.
        sign = -1.0 if axis == "y" else 1.0
        degrees = round(sign * degrees, 9)
        self._change(
            lambda model: rotated(model, chosen, degrees, self._middle(), axis),
            f"Turn by {abs(degrees):g} deg",
        )

    def align_left(self) -> None:
        """Move all to the leftmost edge."""
        self._align("left")

    def align_centre(self) -> None:
        """Move all over each other."""
        self._align("centre")

    def align_right(self) -> None:
        """Move all to the rightmost edge."""
        self._align("right")

    def align_top(self) -> None:
        """Move all to the highest edge."""
        self._align("top")

    def align_middle(self) -> None:
        """Move all to one height."""
        self._align("middle")

    def align_bottom(self) -> None:
        """Move all to the lowest edge."""
        self._align("bottom")

    def _align(self, edge: str) -> None:
        chosen = self._hand.chosen
        axes = self._axes()
        self._change(lambda model: aligned(model, chosen, edge, axes), f"Align {edge}", 2)

    def _axes(self) -> tuple[int, int] | None:
        """Return the axes seen, where a space model is seen straight."""
        hand = self._hand
        return hand.axes_shown() if hand.ready and hand.geometry.view.straight else None

    def spread_sideways(self) -> None:
        """Put the same distance between all, sideways."""
        chosen = self._hand.chosen
        self._change(lambda model: spread(model, chosen, "sideways", self._axes()), "Spread sideways", 3)

    def spread_upright(self) -> None:
        """Put the same distance between all, upright."""
        chosen = self._hand.chosen
        self._change(lambda model: spread(model, chosen, "upright", self._axes()), "Spread upright", 3)

    # The clipboard

    def copy(self) -> bool:
        """Put what is chosen on the clipboard, for this window and others."""
        hand = self._hand
        if not self._places():
            hand.say("Choose bodies or supports first; links between them come along.")
            return False
        text = dump_model(fragment(hand.placed_model(), hand.chosen))
        # As text: data of our own making would outlive Python at the end of the program, and crash it.
        QGuiApplication.clipboard().setText(text)
        self._copied, self._copies = text, 0
        hand.say(f"{hand.named(hand.chosen).capitalize()} copied")
        return True

    def cut(self) -> None:
        """Copy what is chosen and delete it here."""
        if self.copy():
            self._hand.delete()

    def paste(self) -> None:
        """Put the parts on the clipboard on the sheet, a little aside."""
        hand = self._hand
        if hand.model is None or not hand.ready:
            return
        text = QGuiApplication.clipboard().text()
        if not text:
            hand.say("There are no parts on the clipboard.")
            return
        hand.hold_view()
        try:
            piece = parse_model(text)
            beside = self._beside(piece) if text != self._copied else None
            after, ids = pasted(hand.placed_model(), piece, beside or self._step(ASIDE * (self._copies + 1)))
        except InputError as error:
            first = str(error).splitlines()[0]
            hand.say(f"What is on the clipboard cannot be pasted here: {first}")
            return
        if hand.change(after, f"Paste {len(ids)} parts"):
            self._copies += 1
            hand.choose(ids)
            if beside is not None:
                self._sheet.fit()

    def _beside(self, piece: Model) -> tuple[float, ...] | None:
        """Return the step that takes parts of another window beside what is here; None where it is free."""
        axes = self._hand.axes_shown()
        here, there = ([span(one, axis) for axis in axes] for one in (self._hand.placed_model(), piece))
        by = [0.0, 0.0, 0.0]
        for old, new in zip(here, there, strict=True):
            if old is None or new is None or old[1] < new[0] or new[1] < old[0]:
                return None
        (_, right), (left, _) = here[0], there[0]
        by[axes[0]] = right - left + ASIDE * self._hand.grid(0)
        return tuple(by[: 3 if self._hand.model.motion is Motion.SPACE else 2])

    def key(self, event: QKeyEvent) -> bool:
        """Do what a key of the clipboard asks for on the sheet; tell whether it was one."""
        standard: dict[QKeySequence.StandardKey, Callable[[], Any]] = {
            QKeySequence.StandardKey.Copy: self.copy,
            QKeySequence.StandardKey.Cut: self.cut,
            QKeySequence.StandardKey.Paste: self.paste,
            QKeySequence.StandardKey.SelectAll: self.choose_all,
        }
        for sequence, do in standard.items():
            if event.matches(sequence):
                do()
                return True
        return False
