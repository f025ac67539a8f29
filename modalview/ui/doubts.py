"""The doubts about the model: a quiet list, each entry of which leads to its parts."""

from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent, QPainter, QPaintEvent
from PySide6.QtWidgets import QAbstractButton, QLabel, QSizePolicy, QStyle, QStyleOption, QVBoxLayout, QWidget

from modalview.model.parts import Model
from modalview.ui.analysis import Analysis
from modalview.ui.wording import kept_together


class DoubtEntry(QAbstractButton):
    """One doubt: what was found, and below it what it would mean."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setProperty("role", "doubt")
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.parts: tuple[str, ...] = ()
        self.found, self.effect = QLabel(self), QLabel(self)
        self.effect.setProperty("role", "small")
        layout = QVBoxLayout(self)
        layout.setContentsMargins(9, 4, 9, 5)
        layout.setSpacing(2)
        for label in (self.found, self.effect):
            label.setWordWrap(True)
            label.setTextFormat(Qt.TextFormat.PlainText)
            label.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)
            layout.addWidget(label)
        policy = self.sizePolicy()
        policy.setHorizontalPolicy(QSizePolicy.Policy.Preferred)
        policy.setVerticalPolicy(QSizePolicy.Policy.Minimum)
        policy.setHeightForWidth(True)
        self.setSizePolicy(policy)

    def show_doubt(self, doubt: Any) -> None:
        """Show an advice.Doubt."""
        self.parts = doubt.parts
        self.found.setText(kept_together(doubt.text))
        self.effect.setText(kept_together(doubt.effect))
        self.setAccessibleName(doubt.text)
        self.setAccessibleDescription(doubt.effect)
        self.setToolTip("Show this on the sheet and in the values" if doubt.parts else "")

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Let Enter press it, as the space bar does."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.click()
        else:
            super().keyPressEvent(event)

    def paintEvent(self, _event: QPaintEvent) -> None:  # noqa: N802  (Qt's name)
        """Paint what the style sheet says; the labels paint the words."""
        option = QStyleOption()
        option.initFrom(self)
        painter = QPainter(self)
        self.style().drawPrimitive(QStyle.PrimitiveElement.PE_Widget, option, painter, self)


class Doubts(QWidget):
    """Heading with the number of doubts, and the entries; not there where nothing is doubted."""

    parts_chosen = Signal(tuple)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._shown: tuple[Any, ...] = ()
        self.entries: list[DoubtEntry] = []
        self.heading = QLabel(self)
        self.heading.setProperty("role", "heading")
        self.setAccessibleName("Doubts about the model")
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 4, 0, 0)
        self._column.setSpacing(5)
        self._column.addWidget(self.heading)
        self.hide()

    def show_known(self, model: Model | None, analysis: Analysis) -> None:
        """Show the doubts about the model on the sheet: also about one that cannot be analysed."""
        if analysis.outlook is not None:
            self.show_doubts(analysis.doubts)
        elif analysis.refusal is not None and model is not None:
            self.show_doubts(_of_refused(model))
        elif not analysis.looking:
            self.show_doubts(())

    def show_doubts(self, doubts: tuple[Any, ...]) -> None:
        """Show these; entries stay while only their words change, so that the keyboard keeps its place."""
        if doubts == self._shown:
            return
        self._shown = doubts
        while len(self.entries) < len(doubts):
            self._add_entry()
        for entry, doubt in zip(self.entries, doubts, strict=False):
            entry.show_doubt(doubt)
        for number, entry in enumerate(self.entries):
            entry.setVisible(number < len(doubts))
        self.heading.setText(f"Doubts ({len(doubts)})")
        self.setVisible(bool(doubts))

    def _add_entry(self) -> None:
        entry = DoubtEntry(self)
        entry.clicked.connect(lambda: self.parts_chosen.emit(entry.parts))
        self._column.addWidget(entry)
        self.entries.append(entry)


def _of_refused(model: Model) -> tuple[Any, ...]:
    from modalview.advice.drawn import doubts  # noqa: PLC0415  (only a refused model is asked here)

    return doubts(model)
