"""From a drawing to the screen."""

from typing import Any

from PySide6.QtGui import QPainter, QPixmap
from PySide6.QtWidgets import QWidget

from modalview.ui.theme import Theme


def paint_drawing(painter: QPainter, drawing: Any, theme: Theme) -> None:
    """Paint a drawing in the colours of a theme."""
    from modalview.drawing import paint, palette  # noqa: PLC0415  (numpy comes after the first paint)

    paint.paint(painter, drawing, palette.DARK if theme.dark else palette.LIGHT)


def painted(drawing: Any, widget: QWidget, theme: Theme) -> QPixmap:
    """Return a drawing as a picture as large as a widget, sharp on its screen, on paper colour."""
    ratio = widget.devicePixelRatioF()
    pixmap = QPixmap(widget.size() * ratio)
    pixmap.setDevicePixelRatio(ratio)
    pixmap.fill(theme.paper)
    painter = QPainter(pixmap)
    paint_drawing(painter, drawing, theme)
    painter.end()
    return pixmap
