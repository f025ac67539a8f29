"""The verdict's sign: one shape for each answer, so that it reads without colour."""

from PySide6.QtCore import QLineF, QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFontMetrics, QPainter, QPaintEvent, QPen, QPolygonF
from PySide6.QtWidgets import QApplication, QSizePolicy, QWidget

from modalview.ui.theme import LIGHT, Theme

# Verdicts are told by their words here, so that painting needs nothing of the core.
CLEAR, NOMINAL_ONLY, IN_BAND = "clear", "clear at nominal only", "mode in band"

# Lines inside the outline, in units of the sign's size.
_TICK = ((0.30, 0.52, 0.45, 0.67), (0.45, 0.67, 0.72, 0.36))
_CROSS = ((0.30, 0.30, 0.70, 0.70), (0.30, 0.70, 0.70, 0.30))
_BAR = ((0.5, 0.42, 0.5, 0.65), (0.5, 0.75, 0.5, 0.77))
_DASH = ((0.33, 0.5, 0.67, 0.5),)
_INSIDE = {CLEAR: _TICK, NOMINAL_ONLY: _BAR, IN_BAND: _CROSS}


def verdict_colour(verdict: str | None, theme: Theme) -> str:
    """Return the colour of a verdict; quiet where there is none."""
    colours = {CLEAR: theme.clear, NOMINAL_ONLY: theme.nominal, IN_BAND: theme.in_band}
    return colours.get(verdict or "", theme.quiet)


def paint_sign(painter: QPainter, box: QRectF, verdict: str | None, theme: Theme) -> None:
    """Paint a ticked circle, a triangle with a stroke, a crossed square, or a circle with a dash."""
    size = box.width()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setPen(QPen(QColor(verdict_colour(verdict, theme)), max(1.6, size / 11)))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    edge = box.adjusted(0.08 * size, 0.08 * size, -0.08 * size, -0.08 * size)
    if verdict == IN_BAND:
        painter.drawRect(edge)
    elif verdict == NOMINAL_ONLY:
        top = QPointF(edge.center().x(), edge.top())
        painter.drawPolygon(QPolygonF([top, edge.bottomRight(), edge.bottomLeft()]))
    else:
        painter.drawEllipse(edge)
    x, y = box.left(), box.top()
    lines = _INSIDE.get(verdict or "", _DASH)
    painter.drawLines(
        [QLineF(x + a * size, y + b * size, x + c * size, y + d * size) for a, b, c, d in lines]
    )


class VerdictSign(QWidget):
    """The sign as a widget, as large as text beside it; its meaning stands in words there."""

    def __init__(self, times: float, parent: QWidget | None = None) -> None:
        """Make a sign so many times as high as a line of the program's text."""
        super().__init__(parent)
        self._times = times
        self._verdict: str | None = None
        self._theme = LIGHT
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)

    def show_verdict(self, verdict: str | None, theme: Theme) -> None:
        """Show the sign of a verdict; None is the dash of nothing checked."""
        self._verdict, self._theme = verdict, theme
        self.updateGeometry()
        self.update()

    def sizeHint(self) -> QSize:  # noqa: N802  (Qt's name)
        """Return the fixed size."""
        size = round(self._times * QFontMetrics(QApplication.font()).height())
        return QSize(size, size)

    def paintEvent(self, event: QPaintEvent) -> None:  # noqa: N802  (Qt's name)
        """Paint the sign."""
        del event
        size = min(self.width(), self.height())
        paint_sign(QPainter(self), QRectF(0, 0, size, size), self._verdict, self._theme)
