"""One line of a form: what it is, the text typed, its converted value, its tolerance, source and status."""

from collections.abc import Callable

from PySide6.QtCore import QEvent, Qt, Signal
from PySide6.QtGui import QFocusEvent, QKeyEvent, QKeySequence
from PySide6.QtWidgets import QComboBox, QGridLayout, QLabel, QLineEdit, QWidget

from modalview.model.forms import FormLine

# What may be typed in a line: its value and what is known about it.
VALUE, TOLERANCE, SOURCE, STATUS = "value", "tolerance", "source", "status"
STATUSES = (("", "not told"), *((one, one) for one in ("datasheet", "measured", "assumed")))
SEVERAL = "several"
# Of a character's mean width.
_VALUE_WIDE, _TEXT_WIDE, _TOLERANCE_WIDE, _WORD_WIDE = 17, 30, 10, 10

# Types a text at a slot of a line; the reason why not, or nothing.
Commit = Callable[[str, str], str]


class TypedLine(QLineEdit):
    """Enter or leaving commits; what is refused stays, with its reason."""

    gone_on = Signal()  # Enter, and taken
    refused = Signal(str)  # the reason, or "" for none any more

    def __init__(self, name: str, commit: Callable[[str], str], parent: QWidget) -> None:
        super().__init__(parent)
        self._commit = commit
        self._known = ""
        self._reason = ""
        self.setAccessibleName(name)
        self.returnPressed.connect(self._on_enter)

    @property
    def reason(self) -> str:
        """Why what stands here is not the model's; "" where it is."""
        return self._reason

    def show_text(self, text: str, hint: str) -> None:
        """Show the model's text; what was refused is left standing until it is mended."""
        self.setPlaceholderText(hint)
        changed, self._known = text != self._known, text
        if changed or (not self._reason and not self.isModified()):
            self.setText(text)
            self._refuse("")

    def give_back(self) -> None:
        """Show what the model has."""
        self.setText(self._known)
        self._refuse("")

    def enter(self) -> bool:
        """Take what was typed; tell whether it stands in the model now."""
        if not self.isModified():
            return not self._reason
        reason = self._commit(self.text().strip())
        if not reason:
            self.setModified(False)
        self._refuse(reason)
        return not reason

    def refuse(self, reason: str) -> None:
        """Show why what stands here cannot be taken; it is tried anew at the next Enter."""
        self.setModified(True)
        self._refuse(reason)

    def _on_enter(self) -> None:
        if self.enter():
            self.gone_on.emit()

    def event(self, event: QEvent) -> bool:
        """Leave undo and redo to the window while nothing is being typed here."""
        asked = event.type() == QEvent.Type.ShortcutOverride and isinstance(event, QKeyEvent)
        if asked and not self.isModified():
            keys = QKeySequence.StandardKey
            if event.matches(keys.Undo) or event.matches(keys.Redo):
                event.ignore()
                return False
        return super().event(event)

    def focusOutEvent(self, event: QFocusEvent) -> None:  # noqa: N802  (Qt's name)
        """Take what was typed when the keyboard goes elsewhere in the window."""
        super().focusOutEvent(event)
        elsewhere = (Qt.FocusReason.ActiveWindowFocusReason, Qt.FocusReason.PopupFocusReason)
        if event.reason() not in elsewhere and self.isModified():
            self.enter()

    def focusInEvent(self, event: QFocusEvent) -> None:  # noqa: N802  (Qt's name)
        """Choose the whole text, so that typing replaces it."""
        super().focusInEvent(event)
        if event.reason() in (Qt.FocusReason.TabFocusReason, Qt.FocusReason.BacktabFocusReason):
            self.selectAll()

    def _refuse(self, reason: str) -> None:
        if not reason and not self._reason:
            return
        self._reason = reason
        self.setProperty("refused", bool(reason))
        self.style().polish(self)
        self.setAccessibleDescription(reason)
        self.refused.emit(reason)


class ChosenWord(QComboBox):
    """One of some words; Enter goes on."""

    gone_on = Signal()

    def __init__(
        self, name: str, words: tuple[tuple[str, str], ...], commit: Callable[[str], str], parent: QWidget
    ) -> None:
        super().__init__(parent)
        self.setAccessibleName(name)
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.setMinimumContentsLength(_WORD_WIDE)
        for word, called in words:
            self.addItem(called, word)
        self._commit = commit
        self.activated.connect(self._on_chosen)

    @property
    def word(self) -> str:
        """The word chosen."""
        return self.currentData() or ""

    def show_word(self, word: str, hint: str = "") -> None:
        """Show the model's word; one that is none of the words is added."""
        at = self.findData(word)
        if hint and not word:
            at = -1
            self.setPlaceholderText(hint)
        elif at < 0:
            self.addItem(word, word)
            at = self.count() - 1
        self.setCurrentIndex(at)

    def _on_chosen(self, _index: int) -> None:
        reason = self._commit(self.word)
        self.setAccessibleDescription(reason)
        self.setToolTip(reason)

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Enter goes on to the next."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.gone_on.emit()
        else:
            super().keyPressEvent(event)


class FormRow:
    """The widgets of one line, put into the grid of a form."""

    def __init__(
        self, line: FormLine, of: str, commit: Commit, grown: Callable[[], None], parent: QWidget
    ) -> None:
        self.key = line.key
        self._wide = line.quantity is None and not line.choices  # texts have no converted value, no tolerance
        self._parent = parent
        self._grown = grown
        named = f"{line.label} of {of}"
        self.label = QLabel(line.label, parent)
        self.label.setProperty("role", "quiet")
        self.value: TypedLine | ChosenWord
        if line.choices:
            words = (("", line.blank), *line.choices)
            self.value = ChosenWord(named, words, lambda text: commit(VALUE, text), parent)
        else:
            wide = _TEXT_WIDE if self._wide else _VALUE_WIDE
            self.value = self._line(named, lambda text: commit(VALUE, text), wide)
        self.label.setBuddy(self.value)
        self.converted = QLabel(parent)
        self.converted.setProperty("role", "quiet")
        self.tolerance = self._line(
            f"tolerance of {named}", lambda text: commit(TOLERANCE, text), _TOLERANCE_WIDE
        )
        self.source = self._line(f"source of {named}", lambda text: commit(SOURCE, text), _VALUE_WIDE)
        self.status = ChosenWord(f"status of {named}", STATUSES, lambda text: commit(STATUS, text), parent)
        self.reason = QLabel(parent)
        self.reason.setProperty("role", "refusal")
        self.reason.setWordWrap(True)
        self.reason.hide()

    def _line(self, name: str, commit: Callable[[str], str], characters: int) -> TypedLine:
        line = TypedLine(name, commit, self._parent)
        wide = self._parent.fontMetrics().averageCharWidth()
        line.setMinimumWidth(characters * wide)
        line.refused.connect(self._on_refused)
        return line

    @property
    def fields(self) -> tuple[TypedLine | ChosenWord, ...]:
        """What can be typed, in the order of the keyboard."""
        return self.value, self.tolerance, self.source, self.status

    @property
    def widgets(self) -> tuple[QWidget, ...]:
        """All of them."""
        return self.label, self.converted, self.reason, *self.fields

    def place(self, grid: QGridLayout, row: int) -> int:
        """Put the widgets into a grid; return the row after them."""
        grid.addWidget(self.label, row, 0)
        if self._wide:
            grid.addWidget(self.value, row, 1, 1, 3)
        else:
            grid.addWidget(self.value, row, 1)
            grid.addWidget(self.converted, row, 2)
        grid.addWidget(self.tolerance, row, 3)
        grid.addWidget(self.source, row + 1, 1, 1, 2)
        grid.addWidget(self.status, row + 1, 3)
        grid.addWidget(self.reason, row + 2, 0, 1, 4)
        return row + 3

    def show_line(self, line: FormLine, converted: str, exact: str, *, noted: bool, several: bool) -> None:
        """Show what the model has.

        Parameters
        ----------
        line : FormLine
        converted : str
            Beside the text.
        exact : str
            What holds where no tolerance is given.
        noted : bool
            Whether source and status are unfolded.
        several : bool
            Whether the texts of several parts differ.
        """
        if isinstance(self.value, ChosenWord):
            self.value.show_word(line.text, SEVERAL if several else "")
        else:
            self.value.show_text(line.text, SEVERAL if several else line.hint)
        self.converted.setText("" if converted == line.text else converted)
        self.tolerance.show_text(line.tolerance, exact)
        self.tolerance.setVisible(line.tolerance_address is not None)
        self.source.show_text(line.source, "where it comes from")
        self.status.show_word(line.status)
        self.source.setVisible(noted and line.noted)
        self.status.setVisible(noted and line.noted)

    def give_back(self) -> None:
        """Leave off what was typed and not taken."""
        for field in self.fields:
            if isinstance(field, TypedLine):
                field.give_back()

    def fold(self, *, away: bool) -> None:
        """Hide a line that is folded away, or show it again."""
        for widget in (self.label, self.value, self.converted):
            widget.setVisible(not away and not (widget is self.converted and self._wide))
        self.reason.setVisible(not away and bool(self.reason.text()))
        if away:
            for field in self.fields[1:]:
                field.hide()

    def _on_refused(self, _reason: str) -> None:
        lines = [one for one in self.fields if isinstance(one, TypedLine)]
        told = next((one.reason for one in lines if one.reason), "")
        self.tell(told)

    def tell(self, words: str, *, refused: bool = True) -> None:
        """Show a reason below the line, or what it waits for."""
        self.reason.setProperty("role", "refusal" if refused else "small")
        self.reason.style().polish(self.reason)
        self.reason.setText(words)
        self.reason.setVisible(bool(words))
        self._grown()
