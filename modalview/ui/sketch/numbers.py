"""Numbers beside a drag, typed over: what is typed holds, whatever the pointer does."""

from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QFrame, QGridLayout, QLabel, QLineEdit, QWidget

from modalview.errors import InputError
from modalview.model.tolerance_text import typed_entry
from modalview.ui.sketch.floating import place_beside
from modalview.ui.sketch.hand import Hand
from modalview.ui.sketch.tool import Number
from modalview.units.show import show

# A bare number is in this unit of the system shown.
UNITS = {"SI": "m", "mm-t": "mm", "inch-pound": "in"}
_EDGE = 4


class NumberEntry(QFrame):
    """A field for each number of what is being drawn; Enter makes it, Tab goes on, Esc leaves it off."""

    def __init__(self, hand: Hand, parent: QWidget) -> None:
        super().__init__(parent)
        self._hand = hand
        self.setObjectName("numberEntry")
        self.setAccessibleName("Numbers of what is being drawn")
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self.setAutoFillBackground(True)
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(8, 6, 8, 6)
        self._grid.setSpacing(4)
        self.reason = QLabel(self)
        self.reason.setProperty("role", "refusal")
        self.reason.setWordWrap(True)
        self.fields: dict[str, QLineEdit] = {}
        self._quantities: dict[str, Number] = {}
        hand.numbers_changed.connect(self._on_numbers_changed)
        self.hide()

    def begin(self, first: str) -> bool:
        """Open with a first character typed; tell whether there are any numbers to type."""
        numbers = self._hand.numbers()
        if not numbers:
            return False
        self._clear()
        for row, number in enumerate(numbers):
            self._add(row, number)
        self._grid.addWidget(self.reason, len(numbers), 0, 1, 3)
        self.reason.hide()
        self.show()
        self._place()
        self.raise_()
        line = next(iter(self.fields.values()))
        line.setText(first)
        line.setFocus()
        self._on_edited(next(iter(self.fields)), first)
        return True

    def _add(self, row: int, number: Number) -> None:
        system = self._hand.units()
        label = QLabel(number.label, self)
        line = QLineEdit(show(number.si, number.quantity, system), self)
        line.setAccessibleName(number.label)
        label.setBuddy(line)
        line.textEdited.connect(lambda text, name=number.label: self._on_edited(name, text))
        line.installEventFilter(self)
        unit = QLabel(f"{UNITS[system]}, or any unit", self)
        unit.setProperty("role", "quiet")
        self._grid.addWidget(label, row, 0)
        self._grid.addWidget(line, row, 1)
        self._grid.addWidget(unit, row, 2)
        self.fields[number.label] = line
        self._quantities[number.label] = number

    def _clear(self) -> None:
        while self._grid.count():
            widget = self._grid.takeAt(0).widget()
            if widget is not None and widget is not self.reason:
                widget.deleteLater()
        self.fields, self._quantities = {}, {}

    def _read(self, name: str, text: str) -> float:
        number = self._quantities[name]
        plain = text.strip()
        bare = plain.replace(",", ".").lstrip("+-\u2212").replace(".", "", 1)
        if bare.isdigit():
            plain = f"{plain} {UNITS[self._hand.units()]}"
        return typed_entry(plain, number.quantity).si

    def _on_edited(self, name: str, text: str) -> None:
        try:
            si = self._read(name, text)
        except InputError as error:
            self._refuse(str(error))
            return
        self._refuse("")
        self._hand.put_number(name, si)

    def _place(self) -> None:
        """Stand beside what is being drawn."""
        room = self.parentWidget().rect().adjusted(_EDGE, _EDGE, -_EDGE, -_EDGE)
        self.adjustSize()
        self.setGeometry(place_beside(self.size(), self._hand.dragged_over(), room))

    def _refuse(self, why: str) -> None:
        self.reason.setText(why)
        self.reason.setVisible(bool(why))
        self._place()

    def _on_numbers_changed(self) -> None:
        if self.isVisible() and not self._hand.numbers():
            self.close_entry()

    def close_entry(self) -> None:
        """Close, and give the keyboard back to the sheet."""
        self.hide()
        self._hand.typing = False
        self.parentWidget().setFocus()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:  # noqa: N802  (Qt's name)
        """Enter makes it, Esc leaves it off."""
        if event.type() == QEvent.Type.KeyPress and isinstance(event, QKeyEvent):
            if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
                if self.reason.isHidden():
                    self.close_entry()  # first: what is made asks for its values, and takes the keyboard
                    self._hand.settle()
                return True
            if event.key() == Qt.Key.Key_Escape:
                self._hand.leave_off()
                self.close_entry()
                return True
        return super().eventFilter(watched, event)
