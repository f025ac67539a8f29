"""Options side by side: each line with a button that tries it."""

from collections.abc import Sequence
from functools import partial
from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QHeaderView, QPushButton, QWidget

from modalview.ui.figuretable import FigureTable

# Of a column, and of a row of one line, in heights of a line.
WIDEST, HIGH = 15.0, 1.9


class OptionsTable(FigureTable):
    """Enter, a double click or the button of a line tries its option."""

    tried = Signal(int)

    def __init__(self, accessible_name: str, parent: QWidget | None = None) -> None:
        super().__init__(accessible_name, parent)
        self._usable = True
        self.doubleClicked.connect(lambda index: self._try(index.row()))

    def show_options(self, headings: Sequence[str], options: Sequence[Any], *, usable: bool) -> None:
        """Show options (drawing.changescontent.OptionLine); those out of date cannot be tried."""
        self._usable = usable
        rows = [("", *one.cells) for one in options]
        self.show_figures(("", *headings), rows, [one.detail for one in options])
        for row, one in enumerate(options):
            button = QPushButton("Try", self)
            button.setObjectName("tryOption")
            button.setEnabled(usable and one.edit is not None)
            button.setToolTip("Change the model so; one undo takes it back")
            button.setAccessibleName(f"Try: {one.text}")
            button.setFocusPolicy(Qt.FocusPolicy.TabFocus)
            button.clicked.connect(partial(self._try, row))
            self.setCellWidget(row, 0, button)
            head = self.item(row, 0)
            if head is not None:
                head.setData(Qt.ItemDataRole.AccessibleTextRole, one.text)
        self.fit()

    def fit(self) -> None:
        """Be as high as the rows, with room for the buttons."""
        super().fit()
        if not self.rowCount():
            return
        text = self.fontMetrics().height()
        for row in range(self.rowCount()):
            self.setRowHeight(row, round((HIGH + self._lines(row) - 1) * text))
        bar = self.horizontalScrollBar().sizeHint().height()
        self.setFixedHeight(self.horizontalHeader().sizeHint().height() + self.rows_height() + bar + 4)
        self.horizontalHeader().setSectionResizeMode(0, QHeaderView.ResizeMode.Fixed)
        self.setColumnWidth(0, self.button_width())
        # Longer texts are cut; the tool tip of the line tells all.
        self.horizontalHeader().setMaximumSectionSize(round(WIDEST * text))

    def _lines(self, row: int) -> int:
        return 1 + max(self._text(row, column).count("\n") for column in range(self.columnCount()))

    def rows_height(self) -> int:
        """Return the height of all rows, pixels."""
        return sum(self.rowHeight(row) for row in range(self.rowCount()))

    def button_width(self) -> int:
        """Return the width that the buttons need, pixels."""
        first = self.cellWidget(0, 0)
        return first.sizeHint().width() + 8 if first is not None else 0

    def _try(self, row: int) -> None:
        button = self.cellWidget(row, 0)
        if button is not None and button.isEnabled():
            self.tried.emit(row)

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Try the option of the current line."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and self.currentRow() >= 0:
            self._try(self.currentRow())
        else:
            super().keyPressEvent(event)
