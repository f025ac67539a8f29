"""The sheet: the model as an engineering drawing, on which the chosen mode moves."""

from dataclasses import replace
from functools import partial
from time import perf_counter
from typing import Any

from PySide6.QtCore import QEvent, QPoint, QPointF, QRect, Qt, QTimer, Signal
from PySide6.QtGui import (
    QColor,
    QKeyEvent,
    QMouseEvent,
    QNativeGestureEvent,
    QPainter,
    QPaintEvent,
    QPixmap,
    QResizeEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QSizePolicy, QWidget

from modalview.model.parts import Model, Motion
from modalview.ui import crowd
from modalview.ui.canvas import paint_drawing, painted
from modalview.ui.crowd import CrowdPainter, paused
from modalview.ui.later import Later
from modalview.ui.swing import Swing
from modalview.ui.theme import LIGHT, Theme

FRAME_MS = 16
# More bodies and links than this are laid out in a thread.
AT_ONCE = 24
# An edited model is laid out anew when its verdict is shown, or after the longer time.
SOON_MS, LATER_MS = 15, 250
# Painting a frame takes at most this share of the time.
MOST_SHARE = 0.35
# One notch of a wheel (120 units of an eighth of a degree) enlarges by so much.
ZOOM_PER_NOTCH = 1.2
_PAN_STEP_PX = 40
# Of the sheet, what a part that is zoomed to fills.
_SURROUNDINGS = 0.5


class Sheet(QWidget):
    """Paints cached pictures of the model; a frame of the moving mode only adds what moves."""

    laid_out = Signal()

    def __init__(self, swing: Swing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._swing = swing
        self._model: Model | None = None
        self._view: Any = None
        self.viewpoint = "turned"  # of a space model
        self._geometry: Any = None
        self._title: Any = None
        self._mode: Any = None
        self._posed: Any = None
        self._still = False
        self._rest: QPixmap | None = None
        self._theme: Theme = LIGHT
        self._text_scale = 1.0
        self.amplitude = 0.6
        self._timer = QTimer(self, interval=FRAME_MS, timerType=Qt.TimerType.PreciseTimer)
        self._timer.timeout.connect(self.update)
        swing.running_changed.connect(self._run)
        swing.moved.connect(self.update)
        # The verdict of an edit comes first: laying out a large sheet takes longer than counting.
        self._later = QTimer(self, singleShot=True)
        self._later.timeout.connect(self._rebuild)
        self._background = Later(self)
        self._background.done.connect(self._show_geometry)
        self._crowd = CrowdPainter(self)
        self._crowd.painted.connect(self._on_crowd_painted)
        self.hand: Any = None  # ui.sketch.hand.Hand, which draws on the sheet
        self._drag: QPoint | None = None
        self._space = False
        self.setMinimumSize(320, 200)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMouseTracking(True)
        self.setAccessibleName("Sheet with the drawing of the model")

    # What is shown

    def show_model(self, model: Model, *, fit: bool = False) -> None:
        """Draw a model; ``fit`` drops the zoom that was chosen for another one."""
        from modalview.drawing import furniture  # noqa: PLC0415  (numpy comes after the first paint)

        title = furniture.title_lines(model)
        if not fit and self._title is not None:  # what was checked is told anew when it is counted anew
            title = replace(title, checked=self._title.checked, motion=self._title.motion)
        self._model, self._title = model, title
        if fit:
            self._view = None
            self._crowd.forget()
            self._geometry = None if len(model.bodies) > crowd.AT_ONCE else self._geometry
            self._rebuild()
        else:
            self._later.start(LATER_MS)

    def catch_up(self) -> None:
        """Lay an edited model out now that its verdict is known."""
        if self._later.isActive():
            self._later.start(SOON_MS)

    def draw_now(self) -> None:
        """Lay an edited model out at once, for the hand that draws it."""
        if self._later.isActive():
            self._rebuild()

    def hold_still(self, *, still: bool) -> None:
        """Show the model at rest while somebody draws on it, whatever mode was chosen."""
        if still != self._still:
            self._still = still
            self._pose()

    @property
    def still(self) -> bool:
        """Whether no mode moves because somebody draws."""
        return self._still

    def show_title(self, title: Any) -> None:
        """Fill the title block (drawing.furniture.TitleLines)."""
        if title != self._title:
            self._title, self._rest = title, None
            self.update()

    def show_mode(self, mode: Any) -> None:
        """Let a mode (study.FoundMode) move on the sheet; None shows the model at rest."""
        if mode is not self._mode:
            self._mode = mode
            self._pose()

    @property
    def mode(self) -> Any:
        """The mode that moves, or None."""
        return self._mode

    def set_theme(self, theme: Theme, text_scale: float) -> None:
        """Repaint in other colours and text size."""
        self._theme, self._text_scale = theme, text_scale
        self._rebuild()

    def set_amplitude(self, share: float) -> None:
        """Set how far the mode moves, 0..1."""
        self.amplitude = share
        self.update()

    @property
    def geometry(self) -> Any:
        """What is laid out (drawing.geometry.SheetGeometry), or None."""
        return self._geometry

    def look_from(self, viewpoint: str) -> None:
        """Show a space model from elsewhere (drawing.view.Viewpoint), fitted anew."""
        if viewpoint != self.viewpoint:
            self.viewpoint = viewpoint
            self._view = None
            self._rebuild()

    def hold_view(self) -> None:
        """Keep scale and place from now on, whatever is drawn or edited."""
        if self._view is None and self._geometry is not None:
            self._view = self._geometry.view

    @property
    def settled(self) -> bool:
        """Whether what is shown is the model as it stands, laid out and painted."""
        return not (self._later.isActive() or self._background.waits_for("sheet") or self._crowd.busy)

    def fit(self) -> None:
        """Show the whole model."""
        self._view = None
        self._rebuild()

    def zoom_to(self, part: QRect) -> None:
        """Show a part of the sheet as large as there is room, with some of its surroundings."""
        if self._geometry is None or part.isEmpty():
            return
        factor = min(self.width() / part.width(), self.height() / part.height()) * _SURROUNDINGS
        middle = QPointF(part.center())
        away = QPointF(self.rect().center()) - middle
        self._view = self._geometry.view.zoomed(factor, middle.x(), middle.y()).panned(away.x(), away.y())
        self._rebuild()

    def zoom(self, factor: float, at: QPointF | None = None) -> None:
        """Enlarge about a point of the sheet."""
        if self._geometry is not None:
            at = at or QPointF(self.rect().center())
            self._view = self._geometry.view.zoomed(factor, at.x(), at.y())
            self._rebuild()

    def pan(self, dx: float, dy: float) -> None:
        """Move the drawing by so many pixels."""
        if self._geometry is not None:
            self._view = self._geometry.view.panned(dx, dy)
            self._rebuild()

    # Building

    def _rebuild(self) -> None:
        """Lay the sheet out: at once where that is quick, else in a thread, with the old sheet in sight."""
        self._later.stop()
        if self._model is None:
            return
        from modalview.drawing import sheet  # noqa: PLC0415  (numpy comes after the first paint)
        from modalview.drawing.view import Viewpoint  # noqa: PLC0415

        lay_out = partial(
            sheet.sheet_geometry,
            self._model,
            self.width(),
            self.height(),
            text_scale=self._text_scale,
            view=self._view if self._fits_viewpoint() else None,
            viewpoint=Viewpoint(self.viewpoint),
        )
        if len(self._model.bodies) + len(self._model.links) <= AT_ONCE:
            self._background.forget()
            self._show_geometry("sheet", lay_out())
        else:
            self._background.ask("sheet", partial(paused, lay_out))

    def _fits_viewpoint(self) -> bool:
        """Whether scale and place that were kept are of the view that is shown now."""
        return (
            self._model.motion is not Motion.SPACE or getattr(self._view, "viewpoint", "") == self.viewpoint
        )

    def _show_geometry(self, _key: str, geometry: Any) -> None:
        self._geometry = geometry
        self._pose()
        self.laid_out.emit()

    def close_threads(self) -> None:
        """Wait for a layout and a painting under way."""
        self._background.close()
        self._crowd.close()

    def _pose(self) -> None:
        self._rest = self._posed = None
        fits = self._geometry is not None and self._mode is not None and not self._still
        if fits and len(self._mode.motion) == len(self._geometry.model.bodies):
            from modalview.drawing import motion  # noqa: PLC0415  (see above)

            self._posed = motion.pose(self._geometry, self._mode.motion)
        self._run()
        self.update()

    def _run(self) -> None:
        run = self._swing.running and self._posed is not None and self.isVisible()
        if run and not self._timer.isActive():
            self._timer.start()
        elif not run:
            self._timer.stop()

    def _rest_pixmap(self) -> QPixmap:
        from modalview.drawing import motion, sheet  # noqa: PLC0415  (see above)

        if self._posed is not None:
            drawing = motion.still_drawing(self._geometry, self._title)
        else:
            drawing = sheet.sheet_drawing(self._geometry, self._title)
        return painted(drawing, self, self._theme)

    def paintEvent(self, event: QPaintEvent) -> None:  # noqa: N802  (Qt's name)
        """Paint the cached sheet and, over it, the frame of the moving mode."""
        del event
        start = perf_counter()
        self._paint()
        self._pace(1000 * (perf_counter() - start))

    def _pace(self, took_ms: float) -> None:
        self._timer.setInterval(max(FRAME_MS, round(took_ms / MOST_SHARE)))

    def _on_crowd_painted(self, took_ms: float) -> None:
        self._pace(took_ms)
        self.update()

    def _paint(self) -> None:
        painter = QPainter(self)
        if self._geometry is None:
            return
        if len(self._geometry.centres) > crowd.AT_ONCE:
            picture = self._crowd.picture(self._moment())
            if picture is not None:
                painter.drawImage(0, 0, picture)
            else:
                painter.fillRect(self.rect(), QColor(self._theme.paper))
        else:
            if self._rest is None:
                self._rest = self._rest_pixmap()
            painter.drawPixmap(0, 0, self._rest)
            if self._posed is not None:
                paint_drawing(painter, self.moving_drawing(), self._theme)
        if self.hand is not None and (items := self.hand.items()):
            from modalview.drawing import sheet  # noqa: PLC0415  (numpy comes after the first paint)

            over = sheet.sheet_of(items, self.width(), self.height(), self._text_scale)
            paint_drawing(painter, over, self._theme)

    def moving_drawing(self) -> Any:
        """Return the frame of this moment: moving, or frozen with arrows."""
        from modalview.drawing import motion  # noqa: PLC0415  (see above)

        show = motion.frame if self._swing.running else motion.frozen
        return show(self._geometry, self._posed, self._factor())

    def _factor(self) -> complex:
        fading = getattr(self._mode, "overdamped", False)
        return self._swing.fading(self.amplitude) if fading else self._swing.factor(self.amplitude)

    def _moment(self) -> crowd.Moment:
        return crowd.Moment(
            geometry=self._geometry,
            posed=self._posed,
            factor=self._factor() if self._posed is not None else 0.0,
            frozen=not self._swing.running,
            title=self._title,
            size=self.size(),
            ratio=self.devicePixelRatioF(),
            theme=self._theme,
        )

    # What a person does

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Fit to the new size."""
        super().resizeEvent(event)
        if self._model is not None:
            self._rebuild()

    def showEvent(self, event: Any) -> None:  # noqa: N802  (Qt's name)
        """Move again."""
        super().showEvent(event)
        self._run()

    def hideEvent(self, event: Any) -> None:  # noqa: N802  (Qt's name)
        """Do not move unseen."""
        super().hideEvent(event)
        self._timer.stop()

    def wheelEvent(self, event: QWheelEvent) -> None:  # noqa: N802  (Qt's name)
        """Zoom about the pointer; two fingers on a pad, or Shift with the wheel, move the sheet."""
        step, held = event.pixelDelta(), event.modifiers()
        finger = not step.isNull() and event.phase() != Qt.ScrollPhase.NoScrollPhase
        if finger and not held & Qt.KeyboardModifier.ControlModifier:
            self.pan(step.x(), step.y())
            return
        turn = event.angleDelta()
        notches = (turn.y() or turn.x()) / 120
        if not notches:
            return
        if held & Qt.KeyboardModifier.ShiftModifier:
            self.pan(notches * _PAN_STEP_PX, 0)
        else:
            self.zoom(ZOOM_PER_NOTCH**notches, event.position())

    def event(self, event: QEvent) -> bool:
        """Zoom by two fingers drawn apart."""
        if (
            isinstance(event, QNativeGestureEvent)
            and event.gestureType() == Qt.NativeGestureType.ZoomNativeGesture
        ):
            self.zoom(1.0 + event.value(), event.position())
            return True
        return super().event(event)

    def mousePressEvent(self, event: QMouseEvent) -> None:  # noqa: N802  (Qt's name)
        """Begin to pan, or choose the part under the pointer."""
        self.setFocus()
        middle = event.button() == Qt.MouseButton.MiddleButton
        if middle or (self._space and event.button() == Qt.MouseButton.LeftButton):
            self._drag = event.position().toPoint()
            self.setCursor(Qt.CursorShape.ClosedHandCursor)
        elif event.button() == Qt.MouseButton.LeftButton and self.hand is not None:
            self.hand.press(event)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:  # noqa: N802  (Qt's name)
        """Two clicks on a part."""
        if event.button() == Qt.MouseButton.LeftButton and self.hand is not None:
            self.hand.double_click(event)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:  # noqa: N802  (Qt's name)
        """Pan."""
        if self._drag is not None:
            step = event.position().toPoint() - self._drag
            self._drag = event.position().toPoint()
            self.pan(step.x(), step.y())
        elif self.hand is not None:
            self.hand.move(event)

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:  # noqa: N802  (Qt's name)
        """End of panning, or of what the hand does."""
        if self._drag is not None:
            self._drag = None
            self.unsetCursor()
        elif self.hand is not None and event.button() == Qt.MouseButton.LeftButton:
            self.hand.release(event)

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Let the hand do what it knows; else pan by arrows, zoom by plus and minus.

        Space held makes the left button pan.
        """
        if self.hand is not None and self.hand.key(event):
            return
        steps = {
            Qt.Key.Key_Left: (_PAN_STEP_PX, 0),
            Qt.Key.Key_Right: (-_PAN_STEP_PX, 0),
            Qt.Key.Key_Up: (0, _PAN_STEP_PX),
            Qt.Key.Key_Down: (0, -_PAN_STEP_PX),
        }
        zooms = {
            Qt.Key.Key_Plus: ZOOM_PER_NOTCH,
            Qt.Key.Key_Equal: ZOOM_PER_NOTCH,
            Qt.Key.Key_Minus: 1 / ZOOM_PER_NOTCH,
        }
        key = Qt.Key(event.key())
        if key in steps:
            self.pan(*steps[key])
        elif key in zooms:
            self.zoom(zooms[key])
        elif key == Qt.Key.Key_Space:
            self._space = True
        else:
            super().keyPressEvent(event)

    def keyReleaseEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Space let go."""
        if event.key() == Qt.Key.Key_Space and not event.isAutoRepeat():
            self._space = False
        else:
            super().keyReleaseEvent(event)
