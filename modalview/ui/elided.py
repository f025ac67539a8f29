"""A line of text that leaves out whole parts where there is no room; its tool tip tells all of it."""

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QPainter, QPaintEvent, QResizeEvent
from PySide6.QtWidgets import QLabel, QSizePolicy, QWidget

PART = " · "


class ElidedLabel(QLabel):
    """Takes what room is left; parts from the end give way, then the last one ends in dots."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)

    def give_way_last(self) -> None:
        """Ask for room for the whole text, and give way only where the window has not so much."""
        self.setSizePolicy(QSizePolicy.Policy.Maximum, QSizePolicy.Policy.Preferred)

    def minimumSizeHint(self) -> QSize:  # noqa: N802  (Qt's name)
        """Return no width: what has no room is left out."""
        return QSize(0, super().minimumSizeHint().height())

    def setText(self, text: str) -> None:  # noqa: N802  (Qt's name)
        """Show a text."""
        super().setText(text)
        self._tell()

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Cut anew."""
        super().resizeEvent(event)
        self._tell()

    def shown_text(self) -> str:
        """Return what there is room for."""
        metrics, room = self.fontMetrics(), self.contentsRect().width()
        parts = self.text().split(PART)
        while len(parts) > 1 and metrics.horizontalAdvance(PART.join(parts)) > room:
            parts.pop()
        return metrics.elidedText(PART.join(parts), Qt.TextElideMode.ElideRight, room)

    def _tell(self) -> None:
        self.setToolTip("" if self.shown_text() == self.text() else self.text())

    def paintEvent(self, event: QPaintEvent) -> None:  # noqa: N802  (Qt's name)
        """Paint as much as there is room for."""
        del event
        QPainter(self).drawText(self.contentsRect(), Qt.AlignmentFlag.AlignVCenter, self.shown_text())
