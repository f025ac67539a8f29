"""From a drawing to the screen."""

from typing import Any

from PySide6.QtCore import QSize
from PySide6.QtGui import QImage, QPainter, QPixmap
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


def image_of(drawing: Any, size: QSize, ratio: float, theme: Theme, under: QImage | None = None) -> QImage:
    """Return a drawing as a picture over another one or on paper colour; may be called in any thread."""
    if under is not None:
        image = QImage(under)  # a copy, made when it is painted on
    else:
        image = QImage(size * ratio, QImage.Format.Format_RGB32)
        image.setDevicePixelRatio(ratio)
        image.fill(theme.paper)
    painter = QPainter(image)
    paint_drawing(painter, drawing, theme)
    painter.end()
    return image
