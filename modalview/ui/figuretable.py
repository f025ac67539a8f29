"""A table of figures to be read and copied; as high as its rows."""

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication, QKeyEvent, QKeySequence
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableWidget, QTableWidgetItem, QWidget

from modalview.ui.cells import text_of


class FigureTable(QTableWidget):
    """Read-only; Ctrl+C copies rows with their headings as spreadsheets have them."""

    def __init__(self, accessible_name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("figureTable")
        self.setAccessibleName(accessible_name)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setTabKeyNavigation(False)  # arrows move in the table, Tab leaves it
        self.setShowGrid(False)
        self.setWordWrap(False)
        self.setAlternatingRowColors(True)
        self.verticalHeader().hide()
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        head = self.horizontalHeader()
        head.setHighlightSections(False)
        head.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        head.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)

    def show_figures(
        self, headings: Sequence[str], rows: Sequence[Sequence[str]], details: Sequence[str] = ()
    ) -> None:
        """Show rows under headings; ``details`` are the tool tips of the rows. Nothing to show hides it."""
        row = self.currentRow()
        kept = self.blockSignals(True)  # not every step of the exchange is a choice
        self.clear()
        self.setColumnCount(len(headings))
        self.setRowCount(len(rows))
        self.setHorizontalHeaderLabels(list(headings))
        for number, cells in enumerate(rows):
            for column, text in enumerate(cells):
                item = QTableWidgetItem(text)
                item.setToolTip(details[number] if number < len(details) else "")
                self.setItem(number, column, item)
        if 0 <= row < len(rows):
            self.setCurrentCell(row, 0)
        self.blockSignals(kept)
        self.setVisible(bool(rows))
        self.fit()

    def fit(self) -> None:
        """Be as high as the rows, at the text size of now."""
        line = round(1.55 * self.fontMetrics().height())
        self.verticalHeader().setDefaultSectionSize(line)
        bar = self.horizontalScrollBar().sizeHint().height()
        head = self.horizontalHeader().sizeHint().height()
        self.setFixedHeight(head + line * self.rowCount() + bar + 4)

    def rows_text(self) -> list[list[str]]:
        """Return the headings and all cells."""
        columns = range(self.columnCount())
        head = [self.horizontalHeaderItem(column).text() for column in columns]
        rows = [[self._text(row, column) for column in columns] for row in range(self.rowCount())]
        return [head, *rows]

    def _text(self, row: int, column: int) -> str:
        item = self.item(row, column)
        return item.text() if item is not None else ""

    def copy(self) -> None:
        """Put the chosen rows, or all, on the clipboard under their headings."""
        chosen = sorted({one.row() for one in self.selectedIndexes()}) or range(self.rowCount())
        head, *rows = self.rows_text()
        QGuiApplication.clipboard().setText(text_of([head, *(rows[row] for row in chosen)]))

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Copy."""
        if event.matches(QKeySequence.StandardKey.Copy):
            self.copy()
        else:
            super().keyPressEvent(event)
