"""The complex plane: where roots and eigenvalues must lie, and where they were found."""

from typing import Any

from PySide6.QtGui import QPainter, QPaintEvent, QPixmap, QResizeEvent
from PySide6.QtWidgets import QFrame, QScrollArea, QSizePolicy, QWidget

from modalview.ui.canvas import painted
from modalview.ui.theme import LIGHT, Theme

# In heights of a line: with less, the picture scrolls rather than crowds.
_LEAST_LINES = (34.0, 27.0)


class PlaneCanvas(QWidget):
    """Paints the picture from a cache, rebuilt when content or size change."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._content: Any = None
        self._why = ""
        self._cache: QPixmap | None = None
        self._theme: Theme = LIGHT
        self._text_scale = 1.0
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setAccessibleName("Complex plane")

    def show_content(self, content: Any, why: str) -> None:
        """Show a drawing.complexplanecontent content; ``why`` says what is shown, or why nothing is."""
        self._content, self._why = content, why
        self.setAccessibleDescription(why)
        self._forget()

    def set_theme(self, theme: Theme, text_scale: float) -> None:
        """Repaint in other colours and text size."""
        self._theme, self._text_scale = theme, text_scale
        line = self.fontMetrics().height()
        self.setMinimumSize(*(round(lines * line) for lines in _LEAST_LINES))
        self._forget()

    def _forget(self) -> None:
        self._cache = None
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:  # noqa: N802  (Qt's name)
        """Paint the cached picture."""
        del event
        if self._content is None:
            QPainter(self).drawText(self.rect().adjusted(16, 12, -16, -12), 0x1000, self._why)  # word wrap
            return
        if self._cache is None:
            from modalview.drawing import complexplane  # noqa: PLC0415  (numpy comes after the first paint)

            drawing = complexplane.plane_drawing(
                self._content, self.width(), self.height(), text_scale=self._text_scale
            )
            self._cache = painted(drawing, self, self._theme)
        QPainter(self).drawPixmap(0, 0, self._cache)

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Fit to the new size."""
        super().resizeEvent(event)
        self._forget()


class PlaneView(QScrollArea):
    """The picture, which scrolls where there is little room."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("planeView")
        self.setWidgetResizable(True)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.canvas = PlaneCanvas(self)
        self.setWidget(self.canvas)
        self.setAccessibleName("Complex plane")
