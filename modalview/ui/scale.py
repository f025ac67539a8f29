"""The frequency scale: bands, counts, bounds and found modes on one axis, in hertz and rpm."""

from collections.abc import Mapping
from typing import Any

from PySide6.QtCore import QEvent, QSize, Signal
from PySide6.QtGui import QHelpEvent, QPainter, QPaintEvent, QPixmap, QResizeEvent
from PySide6.QtWidgets import (
    QCheckBox,
    QFrame,
    QHBoxLayout,
    QLabel,
    QSizePolicy,
    QToolTip,
    QVBoxLayout,
    QWidget,
)

from modalview.ui.beforestrip import BeforeStrip
from modalview.ui.canvas import painted
from modalview.ui.theme import LIGHT, Theme
from modalview.units.show import significant


class ScaleCanvas(QWidget):
    """Paints the scale from a cached picture, rebuilt when data or size change."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._outlook: Any = None
        self._solution: Any = None
        self._foretold: Mapping[int, float] | None = None
        self._before: Mapping[int, float] | None = None
        self._scale: Any = None
        self._cache: QPixmap | None = None
        self._discs = True
        self._theme: Theme = LIGHT
        self._text_scale = 1.0
        self.setMinimumSize(220, 240)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setAccessibleName("Frequency scale")

    def show_results(self, outlook: Any, solution: Any, foretold: Mapping[int, float] | None = None) -> None:
        """Show what is known (study.results.Known) and the modes of the same model, found or foretold."""
        self._outlook, self._solution, self._foretold = outlook, solution, foretold
        self.setAccessibleDescription(_in_words(outlook))
        self._forget()

    def show_before(self, before: Mapping[int, float] | None) -> None:
        """Show pale the modes before a change that is tried, by number in Hz; None shows none."""
        self._before = before
        self._forget()

    def show_discs(self, shown: bool) -> None:  # noqa: FBT001  (a slot)
        """Show or fold the Gershgorin bounds."""
        self._discs = shown
        self._forget()

    def set_theme(self, theme: Theme, text_scale: float) -> None:
        """Repaint in other colours and text size."""
        self._theme, self._text_scale = theme, text_scale
        self._forget()

    def _forget(self) -> None:
        self._cache = None
        self.update()

    def _build(self) -> None:
        from modalview.drawing import scale, scalecontent  # noqa: PLC0415  (numpy comes after the first paint)

        content = scalecontent.scale_content(
            self._outlook, solution=self._solution, foretold=self._foretold, before=self._before
        )
        self._scale = scale.scale_drawing(
            content, self.width(), self.height(), text_scale=self._text_scale, discs=self._discs
        )
        self._cache = painted(self._scale.drawing, self, self._theme)

    def paintEvent(self, event: QPaintEvent) -> None:  # noqa: N802  (Qt's name)
        """Paint the cached scale."""
        del event
        if self._outlook is None:
            return
        if self._cache is None:
            self._build()
        QPainter(self).drawPixmap(0, 0, self._cache)

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Fit to the new size."""
        super().resizeEvent(event)
        self._forget()

    def event(self, event: QEvent) -> bool:
        """Tell the frequency under the pointer."""
        if isinstance(event, QHelpEvent) and event.type() == QEvent.Type.ToolTip and self._scale is not None:
            hz = self._scale.axis.hz_at(event.pos().y())
            QToolTip.showText(event.globalPos(), _place_in_words(hz, self._outlook), self)
            return True
        return super().event(event)

    def sizeHint(self) -> QSize:  # noqa: N802  (Qt's name)
        """Tall and narrow."""
        return QSize(300, 600)


class ScalePanel(QFrame):
    """The scale under its heading, with the switch of the Gershgorin bounds."""

    discs_switched = Signal(bool)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("scalePanel")
        self.canvas = ScaleCanvas(self)
        self.discs = QCheckBox("Gershgorin bounds", self)
        self.discs.setToolTip("Where every mode must lie, read from the rows of the model's matrices")
        self.discs.toggled.connect(self.canvas.show_discs)
        self.discs.toggled.connect(self.discs_switched)
        self.heading = QLabel("Frequency scale", self)
        self.heading.setProperty("role", "heading")
        top = QHBoxLayout()
        top.setContentsMargins(8, 0, 8, 0)
        top.addWidget(self.heading)
        top.addStretch(1)
        top.addWidget(self.discs)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(4, 8, 2, 4)
        layout.setSpacing(2)
        layout.addLayout(top)
        self.before = BeforeStrip(self)
        layout.addWidget(self.before)
        layout.addWidget(self.canvas, 1)

    def stand_alone(self, *, alone: bool) -> None:
        """Show the heading; under a tab the tab is one."""
        self.heading.setVisible(alone)


def _modes(number: int | None) -> str:
    if number is None:
        return "a number of modes that rounding leaves open"
    return "no mode" if number == 0 else f"{number} mode{'s' if number > 1 else ''}"


def _reach(interval: Any) -> str:
    if interval.high_hz == float("inf"):
        return f"above {significant(interval.low_hz, 4)} Hz"
    return f"{significant(interval.low_hz, 4)} to {significant(interval.high_hz, 4)} Hz"


def _in_words(outlook: Any) -> str:
    """Say what the scale shows, for those who hear the window."""
    if outlook is None:
        return ""
    return "; ".join(
        f"{_reach(one)}{f' (kept clear for {one.check})' if one.check else ''}: {_modes(one.number)}"
        for one in outlook.intervals
    )


def _place_in_words(hz: float, outlook: Any) -> str:
    here = f"{significant(hz, 4)} Hz = {significant(60 * hz, 4)} rpm"
    for one in outlook.intervals:
        if one.low_hz <= hz <= one.high_hz:
            band = f"\nkept clear for {one.check}" if one.check else ""
            return f"{here}\n{_reach(one)}: {_modes(one.number)}{band}"
    return here
