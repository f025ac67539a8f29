"""Puts hand, palette, numbers and forms into the window and passes on what each tells."""

from dataclasses import replace
from typing import Any

from PySide6.QtCore import QObject, QRect, QTimer

from modalview.model.removing import without
from modalview.ui.sketch.asking import AskText
from modalview.ui.sketch.editing import Editing
from modalview.ui.sketch.excitationform import ExcitationForm
from modalview.ui.sketch.hand import Hand
from modalview.ui.sketch.numbers import NumberEntry
from modalview.ui.sketch.partform import PartForm
from modalview.ui.unfinished import invitation


class Sketching(QObject):
    """Everything that draws and edits on the sheet of one window."""

    def __init__(self, window: Any) -> None:
        super().__init__(window)
        self._window = window
        self.hand = Hand(window.document, window.sheet)
        window.sheet.hand = self.hand
        self.palette = window.palette_of_tools
        self.numbers = NumberEntry(self.hand, window.sheet)
        self.form = PartForm(window.document, window.sheet)
        self.force = ExcitationForm(window.document, window.sheet)
        self.editing = Editing(self.hand, window.sheet)
        self.hand.editing = self.editing
        self.hand.units = window.system_of_units
        self._awaited: tuple[tuple[str, ...], bool] | None = None  # parts whose form waits for the sheet
        self._arrow_added = False
        self._connect()

    def _connect(self) -> None:
        window, hand = self._window, self.hand
        self.palette.tool_taken.connect(self._on_tool_taken)
        hand.tool_changed.connect(self._on_tool_changed)
        hand.told.connect(window.sheet.setAccessibleDescription)
        hand.number_begun.connect(self.numbers.begin)
        hand.numbers_changed.connect(self._hold_still)
        hand.chosen_changed.connect(self._on_chosen_changed)
        hand.begun.connect(self.form.hide_form)
        hand.begun.connect(self.force.hide_form)
        self.form.told.connect(hand.say)
        hand.force_asked.connect(self._ask_force)
        hand.drawn.connect(lambda part: self._ask_values((part,), fresh=True))
        hand.title_asked.connect(self.ask_title)
        hand.form_asked.connect(lambda parts: self._ask_values(parts, fresh=False))
        window.parts.part_chosen.connect(self._on_part_of_table)
        self.force.made.connect(self._on_made)
        window.results.force_asked.connect(self.add_force)
        window.results.change_asked.connect(self.change_machine)
        window.results.removal_asked.connect(self.remove_machine)
        window.results.doubts.parts_chosen.connect(self._on_parts_of_doubt)
        window.sheet.laid_out.connect(self._on_laid_out)
        window.document.model_changed.connect(self._on_model_changed)
        window.document.opened.connect(self._on_opened)

    def _on_tool_taken(self, name: str, keep: bool) -> None:  # noqa: FBT001  (a slot)
        self.hand.take(name, locked=keep)
        self._window.sheet.setFocus()

    def _on_tool_changed(self, name: str) -> None:
        self.palette.show_tool(name)
        self._hold_still()

    def _hold_still(self) -> None:
        """Let no mode move under the hand while it draws."""
        self._window.sheet.hold_still(still=self.hand.kind.name != "choose" or self.hand.at_work)

    def _on_chosen_changed(self, parts: tuple[str, ...]) -> None:
        if parts:
            table = self._window.parts
            kept = table.blockSignals(True)  # what was chosen here needs not be chosen again
            table.choose_part(parts[0])
            table.blockSignals(kept)

    def _on_part_of_table(self, part: str) -> None:
        if self.hand.part(part) is not None:
            self.hand.choose((part,))

    def _on_parts_of_doubt(self, parts: tuple[str, ...]) -> None:
        """Choose what is doubted; the values follow."""
        known = tuple(part for part in parts if self.hand.part(part) is not None)
        if known:
            self.hand.choose(known)

    def _on_model_changed(self) -> None:
        self.palette.show_motion(self._window.document.model.motion)
        self.hand.forget_gone()
        self._hold_still()
        self._window.sheet.draw_now()

    def _on_opened(self) -> None:
        self.hand.choose(())
        self.hand.take("choose")
        model = self._window.document.model
        self.palette.show_motion(model.motion)
        told = "" if model.bodies else " ".join(invitation(model.motion))
        self._window.sheet.setAccessibleDescription(told)

    def show_units(self, system: str) -> None:
        """Show converted values in other units; nothing typed changes."""
        self.form.set_system(system)
        self._window.sheet.update()

    # Values beside a part

    def ask_chosen(self) -> None:
        """Ask for the values of what is chosen."""
        if self.hand.chosen:
            self._ask_values(self.hand.chosen, fresh=False)

    def ask_title(self) -> None:
        """Ask what the model is called."""
        model = self._window.document.model
        if model is not None:
            AskText("Give title", "Title of the model", model.title, self._give_title, self._window).open()

    def _give_title(self, text: str) -> None:
        title = " ".join(text.split())
        model = self._window.document.model
        if title != model.title:
            self.hand.change(replace(model, title=title), f'Title "{title}"')

    def _ask_values(self, parts: tuple[str, ...], *, fresh: bool) -> None:
        self._awaited = parts, fresh
        if self.hand.geometry.model is self._window.document.model:
            self._on_laid_out()

    def _on_laid_out(self) -> None:
        """Show the form that waited for its part to be on the sheet, and make room for an arrow."""
        if self._arrow_added:
            QTimer.singleShot(0, self, self._make_room)
        if self._awaited is None or self.hand.geometry.model is not self._window.document.model:
            return
        (parts, fresh), self._awaited = self._awaited, None
        beside = self.hand.rectangle(parts)
        self.form.show_parts(parts, beside, fresh=fresh, system=self._window.system_of_units())
        if not fresh:
            self.form.take_keyboard()

    def _ask_force(self, body: str, place: tuple[float, ...]) -> None:
        """Ask what acts at a place on a body."""
        self.form.hide_form()
        self.force.show_at(body, place, self.hand.rectangle((body,)), system=self._window.system_of_units())

    def _on_made(self) -> None:
        self._arrow_added = True
        if self._window.sheet.settled:
            self._make_room()

    def _make_room(self) -> None:
        """Fit the sheet anew where an arrow that was just added has no room above its body."""
        from modalview.drawing.lettering import arrows_in_the_way  # noqa: PLC0415  (numpy is late)

        geometry = self._window.sheet.geometry
        if not self._arrow_added or geometry is None or geometry.model is not self._window.document.model:
            return
        self._arrow_added = False
        if arrows_in_the_way(geometry):
            self._window.sheet.fit()

    def add_force(self) -> None:
        """Ask what acts on the chosen body, or on the first: the way of the keyboard and of the results."""
        hand = self.hand
        bodies = [body.id for body in hand.model.bodies] if hand.model is not None else []
        chosen = next((part for part in hand.chosen if part in bodies), bodies[0] if bodies else None)
        if chosen is None or not hand.ready:
            hand.say("Draw a body first; a machine's orders act on it.")
            return
        hand.choose((chosen,))
        self._ask_force(chosen, hand.place(hand.middle_of(chosen)))

    def change_machine(self, machine: str) -> None:
        """Ask for all values of a machine and its orders."""
        sheet = self._window.sheet
        beside = QRect(sheet.width() - 2, 8, 1, 1)
        self.form.show_parts((machine,), beside, system=self._window.system_of_units())
        self.form.take_keyboard()

    def remove_machine(self, machine: str, excitation: str) -> None:
        """Take an order away, or a machine with all of them."""
        model = self._window.document.model
        gone = {(machine, excitation)} if excitation else {machine}
        self.hand.change(without(model, gone), f"Remove {excitation or machine}")
