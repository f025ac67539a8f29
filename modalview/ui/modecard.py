"""How one found mode is painted in the list: frequency, small picture, energy shares."""

from dataclasses import dataclass
from functools import partial
from typing import Any

from PySide6.QtCore import QModelIndex, QObject, QPersistentModelIndex, QRectF, QSize, Qt, Signal
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPen, QPixmap
from PySide6.QtWidgets import QStyle, QStyledItemDelegate, QStyleOptionViewItem

from modalview.model.parts import Body, Model, Motion
from modalview.ui.canvas import paint_drawing
from modalview.ui.later import Later
from modalview.ui.modelist import (
    ModeList,
    damped_facts,
    foretold_text,
    frequency_text,
    is_damped,
    percent,
    range_text,
)
from modalview.ui.swing import Swing
from modalview.ui.symbols import IN_BAND, paint_sign
from modalview.ui.theme import LIGHT, Theme

_GAP = 8.0
_RADIUS = 6.0
_SMALL = 0.88  # of the text size
_PALE = 0.55  # of a picture that is out of date
# More bodies than this are laid out in a thread.
AT_ONCE = 12
_BARS = 3
_LEAST_PICTURE = 24  # pixels of height
# Least and greatest width of a card, in heights of a line.
_WIDTHS = (15.2, 19.0)
_LEFT = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter
_RIGHT = Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter


@dataclass(frozen=True, slots=True)
class _Now:
    """What decides how a card looks, apart from its mode."""

    chosen: bool
    focus: bool
    current: bool
    band: str | None
    foretold: float | None
    size: tuple[int, int]


class ModeCard(QStyledItemDelegate):
    """Paints a card; the small pictures are laid out once per model and size of card."""

    laid_out = Signal()  # a small picture has come out of its thread

    def __init__(self, swing: Swing, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._swing = swing
        self._viewpoint = "turned"
        self._background = Later(self)
        self._background.done.connect(self._on_laid_out)
        self._theme: Theme = LIGHT
        self._model: Model | None = None
        self._room, self._height = 0, 190
        # By size in pixels: cards with a longer name or fewer shares leave their picture another height.
        self._small: dict[tuple[int, int], Any] = {}
        self._drawn: Any = None
        self._posed: dict[tuple[int, tuple[int, int]], Any] = {}
        self._still: dict[tuple[int, _Now], tuple[QPixmap, QRectF]] = {}

    def set_theme(self, theme: Theme) -> None:
        """Paint in other colours and sizes from now on."""
        self._theme = theme
        self._still.clear()

    def set_model(self, model: Model | None) -> None:
        """Draw the small pictures of another model."""
        drawn = _drawn(model)
        if drawn != self._drawn:
            self._drawn = drawn
            self._small.clear()
            self._background.forget()
        self._model = model
        self._posed.clear()
        self._still.clear()

    def look_from(self, viewpoint: str) -> None:
        """Draw the small pictures of a space model from elsewhere (drawing.view.Viewpoint)."""
        if viewpoint != self._viewpoint:
            self._viewpoint, self._drawn = viewpoint, None
            self.set_model(self._model)

    def close_threads(self) -> None:
        """Wait for a layout under way."""
        self._background.close()

    def set_room(self, width: int, height: int) -> None:
        """Make the cards as tall as the list; few of them share its width."""
        self._room, self._height = width, height

    def sizeHint(self, option: QStyleOptionViewItem, index: Any) -> QSize:  # noqa: N802  (Qt's name)
        """Return the size of a card; it follows the text size."""
        del index
        least, most = (round(times * option.fontMetrics.height()) for times in _WIDTHS)
        return QSize(min(max(self._room, least), most), self._height)

    def paint(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        """Paint one card: what stands still from a kept picture, the small moving picture anew."""
        mode = index.data(ModeList.ModeRole)
        foretold = index.data(ModeList.ForetoldRole)
        now = _Now(
            chosen=bool(option.state & QStyle.StateFlag.State_Selected),
            focus=bool(option.state & QStyle.StateFlag.State_HasFocus),
            current=index.data(ModeList.CurrentRole),
            band=None if foretold is not None else index.data(ModeList.BandRole),
            foretold=foretold,
            size=(option.rect.width(), option.rect.height()),
        )
        kept = self._still.get((mode.number, now))
        if kept is None:
            kept = self._still[mode.number, now] = self._paint_still(mode, now, option)
        still, place = kept
        painter.save()
        painter.drawPixmap(option.rect.topLeft(), still)
        painter.translate(option.rect.topLeft())
        painter.setOpacity(1.0 if now.current else _PALE)
        self._paint_picture(painter, place, mode)
        painter.restore()

    def _paint_still(self, mode: Any, now: "_Now", option: QStyleOptionViewItem) -> tuple[QPixmap, QRectF]:
        """Return the card without its small picture, and where that goes."""
        ratio = option.widget.devicePixelRatioF() if option.widget is not None else 1.0
        pixmap = QPixmap(option.rect.size() * ratio)
        pixmap.setDevicePixelRatio(ratio)
        pixmap.fill(Qt.GlobalColor.transparent)
        painter = QPainter(pixmap)
        painter.setFont(option.font)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        box = QRectF(0, 0, *now.size).adjusted(2, 2, -_GAP, -2)
        self._paint_frame(painter, box, now)
        inner = box.adjusted(10, 7, -10, -7)
        below = self._paint_head(painter, inner, mode, now)
        above = self._paint_shares(painter, inner, mode)
        place = QRectF(inner.left(), below, inner.width(), above - below)
        self._paint_under(painter, place, now)
        painter.end()
        return pixmap, place

    def _paint_frame(self, painter: QPainter, box: QRectF, now: "_Now") -> None:
        painter.setBrush(QColor(self._theme.card))
        pen = QPen(QColor(self._theme.accent if now.chosen else self._theme.line), 2.0 if now.chosen else 1.0)
        if not now.current:
            pen.setStyle(Qt.PenStyle.DashLine)
        painter.setPen(pen)
        painter.drawRoundedRect(box, _RADIUS, _RADIUS)
        if now.focus:
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.setPen(QPen(QColor(self._theme.accent), 1.0, Qt.PenStyle.DotLine))
            painter.drawRoundedRect(box.adjusted(3, 3, -3, -3), _RADIUS - 2, _RADIUS - 2)

    def _paint_head(self, painter: QPainter, inner: QRectF, mode: Any, now: "_Now") -> float:
        """Paint frequency, range and name; return where they end."""
        bold = QFont(painter.font())
        bold.setBold(True)
        metrics = QFontMetricsF(bold)
        line = metrics.height()
        head = QRectF(inner.left(), inner.top(), inner.width(), line)
        left = head
        if now.band is not None:
            paint_sign(painter, QRectF(head.left(), head.top() + 1, line - 2, line - 2), IN_BAND, self._theme)
            left = head.adjusted(line + 4, 0, 0, 0)
        shown = frequency_text(mode) if now.foretold is None else foretold_text(now.foretold)
        text = f"{mode.number}  {shown}"
        self._write(painter, left, text, self._theme.in_band if now.band else self._theme.ink, font=bold)
        room = left.adjusted(metrics.horizontalAdvance(text) + 8, 0, 0, 0)
        small = QFont(painter.font())
        small.setPointSizeF(_SMALL * small.pointSizeF())
        words = range_text(mode) if now.current else "out of date"
        if now.foretold is not None:
            words = f"was {frequency_text(mode)}"
            if QFontMetricsF(small).horizontalAdvance(words) > room.width():
                words = ""  # it stands in the tool tip
        self._write(painter, room, words, self._theme.quiet, small, _RIGHT)
        lines = 1 if painter.fontMetrics().horizontalAdvance(mode.name) <= inner.width() else 2
        name = QRectF(inner.left(), inner.top() + line + 1, inner.width(), lines * line)
        if lines == 1:
            self._write(painter, name, mode.name, self._theme.ink)
        else:
            painter.setPen(QColor(self._theme.ink))
            painter.drawText(name, Qt.TextFlag.TextWordWrap, mode.name)
        return name.bottom() + 3

    def _paint_shares(self, painter: QPainter, inner: QRectF, mode: Any) -> float:
        """Paint the three largest strain shares and the leading mass from the bottom; return their top."""
        small = QFont(painter.font())
        small.setPointSizeF(_SMALL * small.pointSizeF())
        line = QFontMetricsF(small).height()
        if is_damped(mode):
            return self._paint_facts(painter, inner, mode, small)
        shares = mode.strain[:_BARS] if mode.kind == "elastic" else ()
        top = inner.bottom() - line * (1 + len(shares))
        for row, share in enumerate(shares):
            self._paint_bar(
                painter, QRectF(inner.left(), top + row * line, inner.width(), line), share, small
            )
        if mode.kinetic:
            lead = mode.kinetic[0]
            place = QRectF(inner.left(), inner.bottom() - line, inner.width(), line)
            figure = QFontMetricsF(small).horizontalAdvance("100 %") + 4
            name = place.adjusted(0, 0, -figure, 0)
            self._write(painter, name, f"mass: {lead.label}", self._theme.quiet, font=small)
            self._write(painter, place, percent(lead.fraction), self._theme.quiet, small, _RIGHT)
        return top - 2

    def _paint_facts(self, painter: QPainter, inner: QRectF, mode: Any, small: QFont) -> float:
        """Paint name and figure of what is known of a root, from the bottom; return their top."""
        line = QFontMetricsF(small).height()
        facts = damped_facts(mode)[: _BARS + 1]
        top = inner.bottom() - line * len(facts)
        for row, (name, figure) in enumerate(facts):
            place = QRectF(inner.left(), top + row * line, inner.width(), line)
            self._write(painter, place, name, self._theme.quiet, small)
            self._write(painter, place, figure, self._theme.ink, small, _RIGHT)
        return top - 2

    def _paint_bar(self, painter: QPainter, row: QRectF, share: Any, font: QFont) -> None:
        metrics = QFontMetricsF(font)
        label = 0.58 * row.width()
        figure = metrics.horizontalAdvance("100 %") + 4
        self._write(
            painter, QRectF(row.left(), row.top(), label, row.height()), share.label, self._theme.quiet, font
        )
        track = QRectF(row.left() + label + 6, row.center().y() - 3, row.width() - label - figure - 6, 6)
        painter.fillRect(track, QColor(self._theme.line))
        painter.fillRect(
            QRectF(track.topLeft(), track.bottomRight()).adjusted(
                0, 0, -track.width() * (1 - share.fraction), 0
            ),
            QColor(self._theme.accent),
        )
        self._write(painter, row, percent(share.fraction), self._theme.quiet, font, _RIGHT)

    def _geometry(self, place: QRectF) -> tuple[tuple[int, int], Any]:
        """Return the size of a small picture and its geometry; None where it has no room."""
        size = (round(place.width()), round(place.height()))
        if place.height() < _LEAST_PICTURE or self._model is None:
            return size, None
        from modalview.drawing import modepicture  # noqa: PLC0415  (numpy comes after the first paint)
        from modalview.drawing.view import Viewpoint  # noqa: PLC0415

        if size not in self._small:
            lay_out = partial(modepicture.mode_geometry, self._model, *size, Viewpoint(self._viewpoint))
            if len(self._model.bodies) <= AT_ONCE:
                self._small[size] = lay_out()
            elif not self._background.waits_for(size):
                self._background.ask(size, lay_out)
        return size, self._small.get(size)

    def _on_laid_out(self, size: tuple[int, int], geometry: Any) -> None:
        self._small[size] = geometry
        self._still.clear()
        self.laid_out.emit()

    def _paint_under(self, painter: QPainter, place: QRectF, now: "_Now") -> None:
        """Paint what lies under every frame of a small picture."""
        _, small = self._geometry(place)
        if small is None:
            return
        from modalview.drawing import modepicture  # noqa: PLC0415  (see above)

        painter.setOpacity(1.0 if now.current else _PALE)
        painter.translate(place.topLeft())
        paint_drawing(painter, modepicture.still_picture(small), self._theme)

    def _paint_picture(self, painter: QPainter, place: QRectF, mode: Any) -> None:
        size, small = self._geometry(place)
        if small is None:
            return
        from modalview.drawing import motion  # noqa: PLC0415  (see above)

        posed = self._posed.get((mode.number, size))
        if posed is None:
            posed = self._posed[mode.number, size] = motion.pose(small, mode.motion)
        painter.translate(place.topLeft())
        fading = getattr(mode, "overdamped", False)
        factor = self._swing.fading() if fading else self._swing.factor()
        paint_drawing(painter, motion.frame(small, posed, factor), self._theme)
        painter.translate(-place.topLeft())

    @staticmethod
    def _write(
        painter: QPainter,
        place: QRectF,
        text: str,
        colour: str,
        font: QFont | None = None,
        align: Qt.AlignmentFlag = _LEFT,
    ) -> None:
        kept = painter.font()
        painter.setFont(font or kept)
        painter.setPen(QColor(colour))
        shown = painter.fontMetrics().elidedText(text, Qt.TextElideMode.ElideRight, int(place.width()))
        painter.drawText(place, align, shown)
        painter.setFont(kept)


def _drawn(model: Model | None) -> Any:
    """Return what of a model a small picture shows: a changed stiffness needs no new one."""
    if model is None:
        return None
    links = tuple(
        (type(one), one.from_, one.to, *(getattr(one, name, None) for name in _SHAPES)) for one in model.links
    )
    bodies = tuple(
        (
            one.id,
            one.position,
            one.drawn,
            one.dof,
            one.mass is None or one.mass.si == 0,
            _seen_inertia(model, one),
        )
        for one in model.bodies
    )
    return model.motion, bodies, model.supports, links


def _seen_inertia(model: Model, body: Body) -> Any:
    """Return what the size of a disc follows in a shaft train; elsewhere whether there is any."""
    return body.inertia if model.motion is Motion.SHAFT_TRAIN else body.inertia is None


# Fields of links, other than their ends, that change how they are drawn.
_SHAPES = ("direction", "axes", "axis", "ratio", "teeth", "pitch_radius", "directions")
