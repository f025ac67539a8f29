"""Where a chart stands with its tables: beside each other in a wide page, else the tables below, scrolled."""

from PySide6.QtCore import Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QBoxLayout, QFrame, QLabel, QScrollArea, QVBoxLayout, QWidget

from modalview.ui.chartcanvas import ChartCanvas
from modalview.ui.figuretable import FigureTable

# In heights of a line: from this width on the tables stand beside the chart; so much of them peeps in below,
# unless the page is lower than so much; a chart is at least so high.
BESIDE, PEEP, LOW, LEAST = 62.0, 2.4, 18.0, 10.0
_SHARES = (5, 4)


class ChartRoom(QScrollArea):
    """A chart, tables under headings, and notes."""

    def __init__(self, canvas: ChartCanvas, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("chartRoom")
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setWidgetResizable(True)
        self.canvas = canvas
        self.tables: list[tuple[QLabel, FigureTable]] = []
        self.notes = QLabel(self)
        self.notes.setWordWrap(True)
        self.notes.setProperty("role", "small")
        self.notes.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        inside = QWidget(self)
        inside.setObjectName("chartInside")
        self._layout = QBoxLayout(QBoxLayout.Direction.TopToBottom, inside)
        self._layout.setContentsMargins(0, 0, 0, 4)
        self._layout.addWidget(canvas, _SHARES[0])
        beside = QWidget(inside)
        self._column = QVBoxLayout(beside)
        self._column.setContentsMargins(8, 4, 8, 4)
        self._column.addWidget(self.notes)
        self._column.addStretch(1)
        self._layout.addWidget(beside, _SHARES[1])
        self.setWidget(inside)

    def add_table(self, name: str) -> FigureTable:
        """Add a table under a heading of its own."""
        heading, table = QLabel(name, self), FigureTable(name, self)
        heading.setProperty("role", "strong")
        at = 2 * len(self.tables)
        self._column.insertWidget(at, heading)
        self._column.insertWidget(at + 1, table)
        self.tables.append((heading, table))
        return table

    def fit(self) -> None:
        """Put the tables beside the chart or below it, as the width asks for."""
        line = self.fontMetrics().height()
        wide = self.width() >= BESIDE * line
        directions = QBoxLayout.Direction
        self._layout.setDirection(directions.LeftToRight if wide else directions.TopToBottom)
        room = self.viewport().height()
        high = room if wide or room < LOW * line else room - round(PEEP * line)
        self.canvas.setMinimumHeight(max(round(LEAST * line), high))
        for heading, table in self.tables:
            heading.setVisible(table.rowCount() > 0)
            table.fit()

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Arrange anew."""
        super().resizeEvent(event)
        self.fit()
