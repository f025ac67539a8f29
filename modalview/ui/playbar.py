"""The small bar on the sheet: pause, which mode moves, how far."""

from typing import Any

from PySide6.QtCore import QPointF, QRectF, QSize, Qt, Signal
from PySide6.QtGui import QColor, QIcon, QPainter, QPixmap, QPolygonF
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QSlider, QToolButton, QWidget

from modalview.ui.modelist import frequency_text
from modalview.ui.theme import LIGHT, Theme

_ICON_PX = 16


class PlayBar(QFrame):
    """Shown while a mode is chosen."""

    moving_changed = Signal(bool)
    amplitude_changed = Signal(int)  # per cent

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("playBar")
        self.setCursor(Qt.CursorShape.ArrowCursor)
        self._theme: Theme = LIGHT
        self.pause = QToolButton(self)
        self.pause.setCheckable(True)
        self.pause.setIconSize(QSize(_ICON_PX, _ICON_PX))
        self.pause.toggled.connect(self._on_toggled)
        self.name = QLabel(self)
        self.slider = QSlider(Qt.Orientation.Horizontal, self)
        self.slider.setRange(5, 100)
        self.slider.setPageStep(10)
        self.slider.setFixedWidth(90)
        self.slider.setAccessibleName("Amplitude of the moving mode, per cent")
        self.slider.valueChanged.connect(self.amplitude_changed)
        amplitude = QLabel("amplitude", self)
        amplitude.setProperty("role", "small")
        amplitude.setBuddy(self.slider)
        layout = QHBoxLayout(self)
        layout.setContentsMargins(8, 3, 14, 3)
        layout.setSpacing(8)
        # Where it stands its room is kept, so that the drawing does not jump when modes are found.
        self.controls = (self.pause, self.name, self.slider, amplitude)
        for widget in self.controls:
            policy = widget.sizePolicy()
            policy.setRetainSizeWhenHidden(True)
            widget.setSizePolicy(policy)
            layout.addWidget(widget)
        layout.addStretch(1)
        self._show_state()
        self.show_mode(None, current=True)

    @property
    def moving(self) -> bool:
        """Whether the mode moves."""
        return not self.pause.isChecked()

    def set_moving(self, moving: bool) -> None:  # noqa: FBT001  (a slot)
        """Press or release the pause button."""
        self.pause.setChecked(not moving)

    def set_theme(self, theme: Theme) -> None:
        """Redraw the button."""
        self._theme = theme
        self._show_state()

    def show_mode(self, mode: Any, *, current: bool) -> None:
        """Name the mode that moves."""
        for widget in self.controls:
            widget.setVisible(mode is not None)
        if mode is not None:
            old = "" if current else " (out of date)"
            self.name.setText(f"mode {mode.number} · {frequency_text(mode)}{old}")

    def _on_toggled(self, paused: bool) -> None:  # noqa: FBT001  (a slot)
        self._show_state()
        self.moving_changed.emit(not paused)

    def _show_state(self) -> None:
        word = "Pause the mode" if self.moving else "Let the mode move"
        self.pause.setToolTip(word)
        self.pause.setAccessibleName(word)
        self.pause.setIcon(_icon(self._theme.ink, bars=self.moving))


def _icon(colour: str, *, bars: bool) -> QIcon:
    """Return two bars (pause) or a triangle (go on), drawn so that no font need have them."""
    pixmap = QPixmap(2 * _ICON_PX, 2 * _ICON_PX)
    pixmap.setDevicePixelRatio(2)
    pixmap.fill(Qt.GlobalColor.transparent)
    painter = QPainter(pixmap)
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
