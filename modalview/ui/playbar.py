"""The small bar on the sheet: pause, which mode moves, how fast, where in its swing, how far."""

import math
from dataclasses import dataclass
from typing import Any

from PySide6.QtCore import QPointF, QRectF, QSize, Qt, QTimer, Signal
from PySide6.QtGui import QColor, QFontMetrics, QIcon, QPainter, QPixmap, QPolygonF, QResizeEvent
from PySide6.QtWidgets import (
    QApplication,
    QBoxLayout,
    QFrame,
    QHBoxLayout,
    QLabel,
    QSizePolicy,
    QSlider,
    QToolButton,
    QWidget,
)

from modalview.ui.modelist import frequency_text
from modalview.ui.swing import FULL_TURN, Swing
from modalview.ui.theme import LIGHT, Theme

_ICON = 1.15  # times the height of a line of text
_LEAST_SLIDER, _MOST_SLIDER, _GAP = 4.0, 8.0, 8  # heights of a line; pixels
# The phase shown while the mode moves need not follow every frame.
_FOLLOW_MS = 120
# Steps of the speed slider that double the speed.
STEPS_PER_DOUBLE = 10


@dataclass(frozen=True, slots=True)
class Control:
    """One slider: its caption, what it is for those who hear it, and its range."""

    caption: str
    spoken: str
    low: int
    high: int
    page: int


SPEED = Control("speed", "Speed of the moving mode, from a quarter to four times", -20, 20, 5)
PHASE = Control("phase", "Phase of the mode in degrees; moving it pauses", 0, 359, 15)
AMPLITUDE = Control("amplitude", "Amplitude of the moving mode, per cent", 5, 100, 10)


def speed_of(step: int) -> float:
    """Return how many times as fast a step of the slider is.

    >>> speed_of(0), speed_of(10), speed_of(-20)
    (1.0, 2.0, 0.25)
    """
    return float(2.0 ** (step / STEPS_PER_DOUBLE))


class PlayBar(QFrame):
    """Shown while a mode is chosen; in little room captions go above their sliders, then sliders go."""

    moving_changed = Signal(bool)
    speed_changed = Signal(int)  # steps
    amplitude_changed = Signal(int)  # per cent

    def __init__(self, swing: Swing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("playBar")
        self.setCursor(Qt.CursorShape.ArrowCursor)
        self._swing = swing
        self._theme: Theme = LIGHT
        self._there = False
        self.pause = QToolButton(self)
        self.pause.setCheckable(True)
        self.pause.toggled.connect(self._on_toggled)
        self.name = QLabel(self)
        self.name.setSizePolicy(QSizePolicy.Policy.Minimum, QSizePolicy.Policy.Preferred)
        self._layout = QHBoxLayout(self)
        self._layout.setContentsMargins(8, 3, 14, 3)
        self._layout.setSizeConstraint(QHBoxLayout.SizeConstraint.SetNoConstraint)
        self._layout.setSpacing(8)
        for widget in (self.pause, self.name):
            self._add(widget)
        self._controls: list[_Sliding] = []
        self.speed, self.phase, self.amplitude = (self._slider(one) for one in (SPEED, PHASE, AMPLITUDE))
        self._layout.addStretch(1)
        self.speed.valueChanged.connect(self.speed_changed)
        self.amplitude.valueChanged.connect(self.amplitude_changed)
        self.phase.valueChanged.connect(self._on_phase)
        self._follower = QTimer(self, interval=_FOLLOW_MS)
        self._follower.timeout.connect(self.show_phase)
        swing.moved.connect(self.show_phase)
        self._show_state()
        self.show_mode(None, current=True)

    def _add(self, widget: QWidget) -> None:
        # Where it stands its room is kept, so that the drawing does not jump when modes are found.
        policy = widget.sizePolicy()
        policy.setRetainSizeWhenHidden(widget is self.pause)
        widget.setSizePolicy(policy)
        self._layout.addWidget(widget)

    def _slider(self, control: Control) -> QSlider:
        sliding = _Sliding(control, self)
        self._controls.append(sliding)
        self._add(sliding)
        return sliding.slider

    @property
    def moving(self) -> bool:
        """Whether the mode moves."""
        return not self.pause.isChecked()

    def set_moving(self, moving: bool) -> None:  # noqa: FBT001  (a slot)
        """Press or release the pause button."""
        self.pause.setChecked(not moving)
        self._follow()

    def set_theme(self, theme: Theme) -> None:
        """Redraw the button."""
        self._theme = theme
        self._show_state()
        self._fit()

    def show_mode(self, mode: Any, *, current: bool) -> None:
        """Name the mode that moves."""
        self._there = mode is not None
        if mode is not None:
            old = "" if current else " (out of date)"
            caption = getattr(mode, "caption", "")  # of a response; modes have a number
            self.name.setText(f"{caption or f'mode {mode.number} · {frequency_text(mode)}'}{old}")
        self._fit()
        self._follow()

    def show_phase(self) -> None:
        """Let the slider stand where the mode does."""
        quiet = self.phase.blockSignals(True)
        self.phase.setValue(round(math.degrees(self._swing.phase)) % 360)
        self.phase.blockSignals(quiet)

    def minimumSizeHint(self) -> QSize:  # noqa: N802  (Qt's name)
        """Return no width: what has no room is left out."""
        return QSize(0, super().minimumSizeHint().height())

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Leave out what has no room."""
        super().resizeEvent(event)
        self._fit()

    def _fit(self) -> None:
        margins = self._layout.contentsMargins()
        room = self.width() - margins.left() - margins.right() - 2 * _GAP
        room -= self.pause.sizeHint().width() + self.name.sizeHint().width()
        beside = sum(one.least_width(above=False) + _GAP for one in self._controls) <= room
        # Of few, the phase stays longest: the other two are set once.
        kept = sorted(self._controls, key=lambda one: _RANKS[one.control])
        while kept and not beside and sum(one.least_width(above=True) + _GAP for one in kept) > room:
            kept.pop()
        for one in self._controls:
            one.put_caption(above=not beside)
            one.setVisible(self._there and one in kept)
        self.pause.setVisible(self._there)
        self.name.setVisible(self._there)

    def _follow(self) -> None:
        if self._there and self.moving and self.isVisible():
            self._follower.start()
        else:
            self._follower.stop()

    def showEvent(self, event: Any) -> None:  # noqa: N802  (Qt's name)
        """Follow again."""
        super().showEvent(event)
        self._follow()

    def hideEvent(self, event: Any) -> None:  # noqa: N802  (Qt's name)
        """Follow nothing unseen."""
        super().hideEvent(event)
        self._follower.stop()

    def _on_toggled(self, paused: bool) -> None:  # noqa: FBT001  (a slot)
        self._show_state()
        self.moving_changed.emit(not paused)

    def _on_phase(self, degrees: int) -> None:
        if self.moving:
            self.pause.setChecked(True)
        self._swing.put(FULL_TURN * degrees / 360)

    def _show_state(self) -> None:
        word = "Pause the mode" if self.moving else "Let the mode move"
        self.pause.setToolTip(word)
        self.pause.setAccessibleName(word)
        size = round(_ICON * QFontMetrics(QApplication.font()).height())
        self.pause.setIconSize(QSize(size, size))
        self.pause.setIcon(_icon(self._theme.ink, size, bars=self.moving))


class _Sliding(QWidget):
    """A slider with its caption beside it, or above it where there is little room."""

    def __init__(self, control: Control, parent: QWidget) -> None:
        super().__init__(parent)
        self.control = control
        self.slider = QSlider(Qt.Orientation.Horizontal, self)
        self.slider.setRange(control.low, control.high)
        self.slider.setPageStep(control.page)
        self.slider.setAccessibleName(control.spoken)
        self.slider.setToolTip(control.spoken)
        self.caption = QLabel(control.caption, self)
        self.caption.setProperty("role", "small")
        self.caption.setBuddy(self.slider)
        self._layout = QBoxLayout(QBoxLayout.Direction.LeftToRight, self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        for widget in (self.caption, self.slider):
            self._layout.addWidget(widget)
        self.put_caption(above=False)

    def put_caption(self, *, above: bool) -> None:
        """Put the caption above the slider or beside it; a slider is as long as its text is large."""
        directions = QBoxLayout.Direction
        self._layout.setDirection(directions.TopToBottom if above else directions.LeftToRight)
        self._layout.setSpacing(0 if above else _GAP)
        line = QFontMetrics(QApplication.font()).height()
        self.slider.setMinimumSize(round(_LEAST_SLIDER * line), line)
        self.slider.setMaximumWidth(round(_MOST_SLIDER * line))

    def least_width(self, *, above: bool) -> int:
        """Return the pixels it needs with the caption above or beside."""
        slider = round(_LEAST_SLIDER * QFontMetrics(QApplication.font()).height())
        caption = self.caption.sizeHint().width()
        return max(caption, slider) if above else caption + _GAP + slider


_RANKS = {PHASE: 0, SPEED: 1, AMPLITUDE: 2}  # which sliders stay longest


def _icon(colour: str, size: int, *, bars: bool) -> QIcon:
    """Return two bars (pause) or a triangle (go on), drawn so that no font need have them."""
    pixmap = QPixmap(2 * size, 2 * size)
    pixmap.setDevicePixelRatio(2)
    pixmap.fill(Qt.GlobalColor.transparent)
    painter = QPainter(pixmap)
    painter.scale(size / 16, size / 16)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(QColor(colour))
    if bars:
        painter.drawRect(QRectF(3.5, 2.5, 3, 11))
        painter.drawRect(QRectF(9.5, 2.5, 3, 11))
    else:
        painter.drawPolygon(QPolygonF([QPointF(4, 2.5), QPointF(13.5, 8), QPointF(4, 13.5)]))
    painter.end()
    return QIcon(pixmap)
