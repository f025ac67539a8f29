"""The one module that paints a drawing, with QPainter."""

import threading
from typing import TYPE_CHECKING, cast

import numpy as np
import shiboken6
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QBrush, QColor, QFont, QFontMetricsF, QPainter, QPen

from modalview.drawing.palette import Palette
from modalview.drawing.pauses import between_pieces
from modalview.drawing.primitives import (
    Anchor,
    Box,
    Circles,
    Drawing,
    Floats,
    Item,
    Lines,
    Polygons,
    Role,
    Size,
    Text,
)
from modalview.drawing.textsize import PIXELS

if TYPE_CHECKING:
    from collections.abc import Callable

# Rows of a buffer are wrapped in blocks of this many, so that a growing picture wraps seldom.
_BLOCK = 1024
# Faces and marks of bodies have no more corners, and are convex; other outlines may be neither.
MOST_CONVEX = 28
LINES_AT_ONCE = 4 * _BLOCK
_BYTES_PER_LINE = 32  # a QLineF is four doubles: x1, y1, x2, y2


class LineBuffer:
    """QLineF objects that look into one numpy buffer.

    Filling the buffer moves them all, so that a frame builds no Qt object per line: making 8,000 QLineF
    cost as much as painting them.
    """

    def __init__(self) -> None:
        self._blocks: list[Floats] = []
        self._lines: list[QLineF] = []

    def filled(self, segments: Floats) -> list[QLineF]:
        """Return lines at ``segments`` (n, 4); good until the next call."""
        count = len(segments)
        while len(self._lines) < count:
            self._grow()
        for index, block in enumerate(self._blocks):
            part = segments[index * _BLOCK : (index + 1) * _BLOCK]
            if not len(part):
                break
            block[: len(part)] = part
        return self._lines[:count]

    def _grow(self) -> None:
        block = np.zeros((_BLOCK, 4))
        start = block.ctypes.data
        self._blocks.append(block)  # keeps the memory that the lines look into
        wrap = cast("Callable[[int, type[QLineF]], QLineF]", shiboken6.Shiboken.wrapInstance)
        self._lines += [wrap(start + row * _BYTES_PER_LINE, QLineF) for row in range(_BLOCK)]


_OWN = threading.local()  # each thread that paints has a buffer of its own


def _buffer() -> LineBuffer:
    if not hasattr(_OWN, "buffer"):
        _OWN.buffer = LineBuffer()
    buffer: LineBuffer = _OWN.buffer
    return buffer


def paint(painter: QPainter, drawing: Drawing, palette: Palette, *, family: str | None = None) -> None:
    """Paint a drawing; the painter's transform is kept, its pen, brush and font are not.

    Parameters
    ----------
    painter : QPainter
        On a QImage it may be of any thread.
    drawing : Drawing
    palette : Palette
    family : str or None
        Font family; None keeps the painter's.
    """
    _Painting(painter, palette, drawing.text_scale, family).run(drawing.items)


class _Painting:
    """One run over the items, with the fonts and metrics it has met."""

    def __init__(self, painter: QPainter, palette: Palette, text_scale: float, family: str | None) -> None:
        self.painter = painter
        self.palette = palette
        self.text_scale = text_scale
        self.family = family or painter.font().family()
        self.fonts: dict[tuple[Size, bool], tuple[QFont, QFontMetricsF]] = {}

    def run(self, items: tuple[Item, ...]) -> None:
        self.painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        for item in items:
            between_pieces()
            match item:
                case Lines():
                    self.lines(item)
                case Polygons():
                    self.polygons(item)
                case Box():
                    self.box(item)
                case Circles():
                    self.circles(item)
                case Text():
                    self.text(item)

    def lines(self, item: Lines) -> None:
        if not len(item.segments):
            return
        self.painter.setPen(self.pen(item.role, item.width, item.opacity))
        # One call holds the interpreter lock while its list is read: 100,000 lines for a fifth of a second.
        for start in range(0, len(item.segments), LINES_AT_ONCE):
            self.painter.drawLines(_buffer().filled(item.segments[start : start + LINES_AT_ONCE]))

    def polygons(self, item: Polygons) -> None:
        self.shape(item.stroke, item.fill, item.width, item.opacity)
        # One path of many polygons fills far slower than they do one by one (400: 62 ms against 10 ms).
        draw = (
            self.painter.drawConvexPolygon
            if item.points.shape[1] <= MOST_CONVEX
            else self.painter.drawPolygon
        )
        for corners in item.points.tolist():
            draw([QPointF(x, y) for x, y in corners])

    def box(self, item: Box) -> None:
        self.shape(item.stroke, item.fill, item.line, item.opacity)
        rectangle = QRectF(item.x, item.y, item.width, item.height)
        self.painter.drawRoundedRect(rectangle, item.radius, item.radius)

    def circles(self, item: Circles) -> None:
        self.shape(item.stroke, item.fill, item.width, item.opacity)
        for x, y in item.centres.tolist():
            self.painter.drawEllipse(QPointF(x, y), item.radius, item.radius)

    def text(self, item: Text) -> None:
        font, metrics = self.font(item.size, bold=item.bold)
        self.painter.setFont(font)
        self.painter.setPen(QColor(self.palette[item.role]))
        share = {Anchor.LEFT: 0.0, Anchor.MIDDLE: 0.5, Anchor.RIGHT: 1.0}[item.anchor]
        x = item.x - share * metrics.horizontalAdvance(item.text)
        # Centred on the capitals: a line with and one without descenders stand level.
        self.painter.drawText(QPointF(x, item.y + metrics.capHeight() / 2), item.text)

    def pen(self, role: Role, width: float, opacity: float = 1.0) -> QPen:
        colour = QColor(self.palette[role])
        colour.setAlphaF(opacity)
        pen = QPen(colour, width)
        # Square caps close the corners of zigzags, and cost a third of round ones (measured).
        pen.setCapStyle(Qt.PenCapStyle.SquareCap)
        pen.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
        return pen

    def shape(self, stroke: Role | None, fill: Role | None, width: float, opacity: float) -> None:
        self.painter.setPen(QPen(Qt.PenStyle.NoPen) if stroke is None else self.pen(stroke, width))
        if fill is None:
            self.painter.setBrush(QBrush(Qt.BrushStyle.NoBrush))
            return
        colour = QColor(self.palette[fill])
        colour.setAlphaF(opacity)
        self.painter.setBrush(QBrush(colour))

    def font(self, size: Size, *, bold: bool) -> tuple[QFont, QFontMetricsF]:
        if (size, bold) not in self.fonts:
            font = font_of(self.family, size, bold=bold, text_scale=self.text_scale)
            self.fonts[size, bold] = font, QFontMetricsF(font)
        return self.fonts[size, bold]


def font_of(family: str, size: Size, *, bold: bool = False, text_scale: float = 1.0) -> QFont:
    """Return the font of a text role."""
    font = QFont(family)
    font.setPixelSize(max(1, round(PIXELS[size] * text_scale)))
    font.setBold(bold)
    return font
