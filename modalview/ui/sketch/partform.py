"""The form beside a part on the sheet: its values, typed in place."""

from dataclasses import replace
from typing import Any

from PySide6.QtCore import QRect, QTimer, Signal
from PySide6.QtWidgets import QLabel, QToolButton, QWidget

from modalview.errors import FaultsError, InputError, ModelFaultsError
from modalview.model.addresses import Address
from modalview.model.filling import typed_together
from modalview.model.forms import FormLine, form_lines, kind_of, part_of
from modalview.ui.document import Document
from modalview.ui.sketch.floating import FloatingForm
from modalview.ui.sketch.formrow import SOURCE, STATUS, TOLERANCE, VALUE, FormRow
from modalview.ui.values import converted, inherited

_IN_SYSTEM = {"SI": "in SI", "mm-t": "in mm and t", "inch-pound": "in inch and lb"}
Typed = list[tuple[Address, str]]


class PartForm(FloatingForm):
    """Edits one part or several; every text taken is one edit."""

    committed = Signal()
    told = Signal(str)  # what was lost by closing

    def __init__(self, document: Document, parent: QWidget) -> None:
        super().__init__(parent)
        self.setAccessibleName("values of the part")
        self._document = document
        self._ids: tuple[str, ...] = ()
        self._system = "SI"
        self._lines: list[list[FormLine]] = []  # of each part, those that all have
        self._sections: dict[str, QLabel] = {}
        self._waiting: dict[str, str] = {}  # texts of lines that need others too, by key
        self._heads = [QLabel(self.inside) for _ in range(2)]
        for column, head in enumerate(self._heads, start=2):
            head.setProperty("role", "small")
            self.grid.addWidget(head, 0, column)
        self._heads[1].setText("tolerance")
        self.more = self._switch("place and more")
        self.sources = self._switch("source and status")
        self.foot.addStretch(1)
        document.model_changed.connect(self._on_model_changed)
        document.opened.connect(self.hide_form)

    def _switch(self, text: str) -> QToolButton:
        button = QToolButton(self, text=text, checkable=True, accessibleName=text)
        button.toggled.connect(self._fold)
        self.foot.addWidget(button)
        return button

    # What is shown

    def show_parts(
        self, ids: tuple[str, ...], beside: QRect, *, fresh: bool = False, system: str = "SI"
    ) -> None:
        """Show the values of parts.

        Parameters
        ----------
        ids : tuple of str
            Of bodies, supports, links and machines.
        beside : QRect
            What the form must not cover, in pixels of the sheet.
        fresh : bool
            Whether the part was just drawn: the first value has the keyboard, its text is chosen, and the
            less usual lines are folded away. Otherwise the keyboard stays where it is.
        system : str
            In which values are converted: "SI", "mm-t" or "inch-pound".
        """
        self._waiting = {}
        self._ids, self._system = ids, system
        if fresh:
            self.more.setChecked(False)
            self.sources.setChecked(False)
        self._build()
        if not self.rows:
            self.hide_form()
            return
        self.float_beside(beside)
        if fresh:
            self.take_keyboard()

    @property
    def ids(self) -> tuple[str, ...]:
        """The parts shown."""
        return self._ids

    def set_system(self, system: str) -> None:
        """Show converted values in other units; nothing typed changes."""
        if system != self._system:
            self._system = system
            self._refresh()

    def _read(self) -> None:
        """Read the lines that all parts have."""
        model = self._document.model
        found = [{line.key: line for line in form_lines(model, one)} for one in self._ids] if model else []
        shared = [
            key
            for key, line in (found[0].items() if found else ())
            if (len(found) == 1 or key != "name")
            and all(key in other and other[key].quantity == line.quantity for other in found)
        ]
        self._lines = [[lines[key] for lines in found] for key in shared]

    def _build(self) -> None:
        """Make the rows anew."""
        self.clear_rows()
        for label in self._sections.values():
            self.grid.removeWidget(label)
            label.hide()
            label.deleteLater()
        self._sections = {}
        try:
            self._read()
        except LookupError:
            self._lines = []
        at = 1
        for lines in self._lines:
            section = lines[0].section
            if section and section not in self._sections:
                self._sections[section] = self._heading(section)
                self.grid.addWidget(self._sections[section], at, 0, 1, 4)
                at += 1
            row = FormRow(lines[0], self._named(), self._committer(lines[0].key), self.fit, self.inside)
            at = row.place(self.grid, at)
            self.rows.append(row)
        self.lead_keyboard((self.more, self.sources))
        self._refresh()

    def _heading(self, section: str) -> QLabel:
        label = QLabel(section, self.inside)
        label.setProperty("role", "heading")
        label.show()
        return label

    def _named(self) -> str:
        if len(self._ids) != 1:
            return f"{len(self._ids)} parts"
        _, part = part_of(self._document.model, self._ids[0])
        return part.name or part.id

    def _title(self) -> str:
        kinds = {kind_of(part_of(self._document.model, one)[1]) for one in self._ids}
        return f"{kinds.pop()}: {self._named()}" if len(kinds) == 1 else self._named()

    def _refresh(self) -> None:
        """Show what the model has."""
        if not self.rows:
            return
        self.title.setText(self._title())
        for row, lines in zip(self.rows, self._lines, strict=True):
            self._show_row(row, lines)
        self._heads[0].setText(_IN_SYSTEM[self._system])
        shown = [row for row in self.rows if not row.value.isHidden()]
        self._heads[0].setVisible(any(row.converted.text() for row in shown))
        self._heads[1].setVisible(any(not row.tolerance.isHidden() for row in shown))
        self.more.setVisible(any(lines[0].more for lines in self._lines))
        self.sources.setVisible(any(lines[0].noted for lines in self._lines))
        for section, label in self._sections.items():
            label.setVisible(
                any(not self._away(lines) for lines in self._lines if lines[0].section == section)
            )
        self.fit()

    def _away(self, lines: list[FormLine]) -> bool:
        return lines[0].more and not self.more.isChecked()

    def _show_row(self, row: FormRow, lines: list[FormLine]) -> None:
        shown = _agreed(lines)
        same = shown.text == lines[0].text and all(line.text == shown.text for line in lines)
        si = lines[0].si
        known = same and si is not None and shown.quantity is not None
        beside = converted(si, shown.quantity, self._system) if known else ""
        exact = inherited(self._document.model, lines[0]) if lines[0].quantity is not None else ""
        if row.key in self._waiting:
            shown = replace(shown, text=self._waiting[row.key])
        row.fold(away=False)
        row.show_line(shown, beside, exact, noted=self.sources.isChecked(), several=not same)
        if self._away(lines):
            row.fold(away=True)

    def _fold(self, _shown: bool) -> None:  # noqa: FBT001  (a slot)
        self._refresh()
        QTimer.singleShot(0, self, self.fit)

    def _on_model_changed(self) -> None:
        if self.isHidden():
            return
        before = [(lines[0].key, len(lines)) for lines in self._lines]
        try:
            self._read()
        except LookupError:
            self.hide_form()
            return
        if [(lines[0].key, len(lines)) for lines in self._lines] != before:
            self._rebuild()
        else:
            self._refresh()

    def _rebuild(self) -> None:
        """Make the rows anew and give the keyboard back to the line that had it."""
        keyed = {field: (row.key, number) for row in self.rows for number, field in enumerate(row.fields)}
        held = keyed.get(self.focusWidget())
        self._build()
        if held is not None and any(row.key == held[0] for row in self.rows):
            self.row(held[0]).fields[held[1]].setFocus()

    # What is typed

    def _committer(self, key: str) -> Any:
        return lambda slot, text: self._commit(key, slot, text)

    def _commit(self, key: str, slot: str, text: str) -> str:
        """Type a text at all parts shown; return why not, or nothing."""
        lines = next((lines for lines in self._lines if lines[0].key == key), None)
        if lines is None or self._document.model is None:
            return ""
        if slot == VALUE and text and self._waits(lines, text):
            return ""
        try:
            edit = typed_together(
                self._document.model, self._typed(lines, slot, text), self._said(lines, slot, text)
            )
        except InputError as error:
            why = self._why_not(error)
            later = slot == VALUE and isinstance(error, ModelFaultsError) and self._to_come(lines)
            return "" if later and self._keep(lines, text, f"not taken yet: {why}") else why
        for other in self._group(lines):
            if self._waiting.pop(other, None) is not None:
                self.row(other).tell("", refused=False)
        if edit:
            self._document.push(edit)
            self.committed.emit()
        return ""

    def _typed(self, lines: list[FormLine], slot: str, text: str) -> Typed:
        typed: Typed = []
        for line in lines:
            if slot == VALUE:
                typed += self._with_waiting(line, text)
            elif slot == TOLERANCE:
                typed.append((line.tolerance_address, text))
            else:
                typed.append(((*line.address, {SOURCE: "source", STATUS: "status"}[slot]), text))
        return typed

    def _said(self, lines: list[FormLine], slot: str, text: str) -> str:
        what = lines[0].label if slot == VALUE else f"{slot} of {lines[0].label}"
        return f"Set {what} of {self._named()} to {text}" if text else f"Clear {what} of {self._named()}"

    def _why_not(self, error: InputError) -> str:
        """Return the reason in words; the place is left out where it is the part of this form."""
        if not isinstance(error, FaultsError):
            return str(error)
        told = []
        for fault in error.faults:
            place, *keys = fault.path.split(" . ")
            own = any(place.endswith(f'"{one}"') for one in self._ids)
            told.append(f"{' of '.join(reversed(keys))} {fault.reason}" if own and keys else str(fault))
        return "\n".join(dict.fromkeys(told))

    # Lines that are only right together

    def _group(self, lines: list[FormLine]) -> dict[str, list[FormLine]]:
        """Return the lines that belong together with these, by key."""
        one = lines[0]
        if not one.group:
            return {}
        return {
            other[0].key: other
            for other in self._lines
            if other[0].group == one.group and other[0].section == one.section
        }

    def _waits(self, lines: list[FormLine], text: str) -> bool:
        """Keep a text until the others that it needs are typed; tell what it waits for."""
        group = self._group(lines)
        needed = {key: other for key, other in group.items() if other[0].needed}
        kept = {**self._waiting, lines[0].key: text}
        missing = [
            key for key, other in needed.items() if not all(one.text for one in other) and key not in kept
        ]
        if not missing:
            return False
        labels = [needed[key][0].label for key in missing]
        return self._keep(lines, text, f"waits for {' and '.join(labels)}")

    def _to_come(self, lines: list[FormLine]) -> bool:
        """Tell whether others of a group may still be typed, with which this text would be right."""
        return any(
            other[0].needed and key not in (*self._waiting, lines[0].key)
            for key, other in self._group(lines).items()
        )

    def _keep(self, lines: list[FormLine], text: str, why: str) -> bool:
        self._waiting[lines[0].key] = text
        for key in self._group(lines):
            self.row(key).tell("", refused=False)
        self.row(lines[0].key).tell(why, refused=False)
        self.fit()
        return True

    def _with_waiting(self, line: FormLine, text: str) -> Typed:
        typed = dict(line.typed(text))
        if text:
            for key in self._group([line]):
                if key != line.key and key in self._waiting:
                    other = self._line_of(line, key)
                    typed.update(other.typed(self._waiting[key]))
        return list(typed.items())

    def _line_of(self, like: FormLine, key: str) -> FormLine:
        """Return the line of a key at the part that another line belongs to."""
        lines = next(lines for lines in self._lines if lines[0].key == key)
        return next(line for line in lines if line.address[:2] == like.address[:2])

    def leave(self) -> None:
        """Close without taking what was typed last."""
        self._waiting = {}
        super().leave()

    def hide_form(self) -> None:
        """Close; tell of what waited for other lines and is lost."""
        lost = " and ".join(f"{key} {text}" for key, text in self._waiting.items())
        self._waiting = {}
        super().hide_form()
        if lost:
            self.told.emit(f"Not taken: {lost}, which waited for the other lines of its group.")


def _agreed(lines: list[FormLine]) -> FormLine:
    """Return one line for several parts: texts that differ are left empty, what not all have is absent."""
    first = lines[0]
    return replace(
        first,
        text=first.text if all(line.text == first.text for line in lines) else "",
        tolerance=first.tolerance if all(line.tolerance == first.tolerance for line in lines) else "",
        tolerance_address=first.tolerance_address if all(line.tolerance_address for line in lines) else None,
        noted=all(line.noted for line in lines),
        source=first.source if all(line.source == first.source for line in lines) else "",
        status=first.status if all(line.status == first.status for line in lines) else "",
    )
