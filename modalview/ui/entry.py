"""A field in which a value is typed with its unit: converted value beside it, refusal below it."""

from collections.abc import Callable

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QGridLayout, QLabel, QLineEdit, QWidget

from modalview.errors import InputError

_USUAL = "000.000 Hz"  # the widest that is usual beside a field


class _Line(QLineEdit):
    """Esc gives back what stood there."""

    left_unchanged = Signal()

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Cancel by Esc."""
        if event.key() == Qt.Key.Key_Escape:
            self.left_unchanged.emit()
        else:
            super().keyPressEvent(event)


class EntryField(QWidget):
    """One value: Enter or leaving commits, Esc cancels; what cannot be read stays, with its reason."""

    def __init__(self, label: str, commit: Callable[[str], None], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._commit = commit
        self._text = ""
        self.label = QLabel(label, self)
        self.label.setProperty("role", "quiet")
        self.line = _Line(self)
        self.line.setAccessibleName(label)
        self.label.setBuddy(self.line)
        self.converted = QLabel(self)
        self.converted.setProperty("role", "quiet")
        self.reason = QLabel(self)
        self.reason.setProperty("role", "refusal")
        self.reason.setWordWrap(True)
        self.reason.hide()
        self.line.editingFinished.connect(self._on_finished)
        self.line.left_unchanged.connect(self.give_back)
        layout = QGridLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setVerticalSpacing(1)
        layout.setColumnStretch(1, 1)
        layout.addWidget(self.label, 0, 0)
        layout.addWidget(self.line, 0, 1)
        layout.addWidget(self.converted, 0, 2)
        layout.addWidget(self.reason, 1, 0, 1, 3)

    def show_value(self, text: str, converted: str) -> None:
        """Show the model's value; a refused entry is left standing until it is mended or taken back."""
        self.converted.setText(converted)
        # Fields one above the other end at one line, whatever is converted beside them.
        self.converted.setMinimumWidth(self.fontMetrics().horizontalAdvance(_USUAL))
        changed = text != self._text
        self._text = text
        if changed or not self.refused:
            self.give_back()

    @property
    def refused(self) -> bool:
        """Whether the entry shown is not the model's."""
        return not self.reason.isHidden()

    def give_back(self) -> None:
        """Show what the model has."""
        self.line.setText(self._text)
        self._refuse("")

    def _on_finished(self) -> None:
        text = self.line.text().strip()
        if text == self._text:
            self._refuse("")
            return
        try:
            self._commit(text)
        except InputError as error:
            self._refuse(str(error))
        else:
            self._refuse("")

    def _refuse(self, reason: str) -> None:
        self.reason.setText(reason)
        self.reason.setVisible(bool(reason))
        self.line.setProperty("refused", bool(reason))
        self.line.style().polish(self.line)
        self.line.setAccessibleDescription(reason)
