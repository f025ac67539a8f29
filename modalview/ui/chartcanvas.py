"""A chart on the screen: painted from a cache, read by pointer and arrow keys, pale when out of date."""

from typing import Any

from PySide6.QtCore import QEvent, QSize, Qt, Signal
from PySide6.QtGui import QColor, QKeyEvent, QMouseEvent, QPainter, QPaintEvent, QPixmap, QResizeEvent
from PySide6.QtWidgets import QSizePolicy, QWidget

from modalview.ui.canvas import paint_drawing, painted
from modalview.ui.theme import LIGHT, Theme

PALE = 0.4
# In heights of a line: with less, the page scrolls rather than crowds.
_LEAST_WIDTH = 24.0


class ChartCanvas(QWidget):
    """What all charts share; each says how it is drawn and what the pointer and the keys read."""

    read = Signal(str)  # what is read, "" for nothing

    def __init__(self, accessible_name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.content: Any = None
        self._chart: Any = None
        self._cache: QPixmap | None = None
        self._pale = False
        self._theme: Theme = LIGHT
        self.text_scale = 1.0
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMouseTracking(True)
        self.setAccessibleName(accessible_name)

    # What each chart says

    def draw(self) -> Any:
        """Return the chart of the content for the size of now."""
        raise NotImplementedError

    def drawing_of(self, chart: Any) -> Any:
        """Return the drawing of a chart."""
        return chart.drawing

    def reading_items(self) -> tuple[Any, ...]:
        """Return what is painted over the chart where it is read."""
        return ()

    def read_at(self, x: float, y: float) -> None:
        """Read where the pointer is."""

    def read_key(self, event: QKeyEvent) -> bool:
        """Read by a key; whether it was one that reads."""
        del event
        return False

    def stop_reading(self) -> None:
        """Read nothing."""

    # What all share

    def show_content(self, content: Any, *, pale: bool) -> None:
        """Show a content of the drawing layer; None shows nothing."""
        if content is not self.content or pale != self._pale:
            if content is not self.content:
                self.content, self._chart = content, None
            self._pale, self._cache = pale, None
            self.update()

    def set_theme(self, theme: Theme, text_scale: float) -> None:
        """Repaint in other colours and text size."""
        self._theme, self.text_scale = theme, text_scale
        self.setMinimumWidth(round(_LEAST_WIDTH * self.fontMetrics().height()))
        self.forget()

    def forget(self) -> None:
        """Draw anew."""
        self._cache = self._chart = None
        self.update()

    @property
    def chart(self) -> Any:
        """The chart as it is drawn now, or None without a content."""
        if self.content is None:
            return None
        if self._chart is None:
            self._chart = self.draw()
        return self._chart

    @property
    def pale(self) -> bool:
        """Whether what is shown is out of date."""
        return self._pale

    def paintEvent(self, event: QPaintEvent) -> None:  # noqa: N802  (Qt's name)
        """Paint the cached chart, and over it what is read."""
        del event
        painter = QPainter(self)
        painter.fillRect(self.rect(), QColor(self._theme.paper))
        if self.content is None:
            return
        if self._cache is None:
            self._cache = painted(self.drawing_of(self.chart), self, self._theme)
        painter.setOpacity(PALE if self._pale else 1.0)
        painter.drawPixmap(0, 0, self._cache)
        items = self.reading_items()
        if items:
            from modalview.drawing.primitives import Drawing  # noqa: PLC0415  (numpy is late)

            size = (0.0, 0.0, float(self.width()), float(self.height()))
            paint_drawing(painter, Drawing(items, size, self.text_scale), self._theme)
        if self.hasFocus():
            painter.setPen(QColor(self._theme.accent))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRect(self.rect().adjusted(0, 0, -1, -1))

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Fit to the new size."""
        super().resizeEvent(event)
        self.forget()

    def sizeHint(self) -> QSize:  # noqa: N802  (Qt's name)
        """Ask for no more than the least: the page shares its room out."""
        return self.minimumSize()

    def mouseMoveEvent(self, event: QMouseEvent) -> None:  # noqa: N802  (Qt's name)
        """Read."""
        if self.chart is not None:
            self.read_at(event.position().x(), event.position().y())

    def leaveEvent(self, event: QEvent) -> None:  # noqa: N802  (Qt's name)
        """Read nothing."""
        super().leaveEvent(event)
        self.stop_reading()

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Read by keys; Esc reads nothing."""
        if event.key() == Qt.Key.Key_Escape:
            self.stop_reading()
        elif self.chart is None or not self.read_key(event):
            super().keyPressEvent(event)
