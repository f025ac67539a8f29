"""The response chart on the screen: read by pointer and arrow keys; a click or Enter chooses a speed."""

from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent, QMouseEvent
from PySide6.QtWidgets import QWidget

from modalview.ui.chartcanvas import ChartCanvas

_FINE, _COARSE = 1.0, 10.0  # pixels that an arrow key goes on, without and with Shift


class ResponseCanvas(ChartCanvas):
    """Amplitude over machine speed."""

    speed_chosen = Signal(float)  # rpm

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Response over machine speed", parent)
        self.logarithmic = False
        self._rpm: float | None = None

    def draw(self) -> Any:
        """Draw the chart."""
        from modalview.drawing.responsechart import response_chart  # noqa: PLC0415  (numpy is late)

        return response_chart(
            self.content,
            self.width(),
            self.height(),
            text_scale=self.text_scale,
            logarithmic=self.logarithmic,
            titled=False,  # the lists above say it
        )

    def set_logarithmic(self, logarithmic: bool) -> None:  # noqa: FBT001  (a slot)
        """Show amplitudes by their logarithm, or as they are."""
        self.logarithmic = logarithmic
        self.forget()

    @property
    def rpm(self) -> float | None:
        """The speed that is read."""
        return self._rpm

    def read_speed(self, rpm: float | None) -> None:
        """Read a speed; None reads nothing."""
        self._rpm = rpm
        if rpm is None or self.content is None:
            self.read.emit("")
        else:
            from modalview.drawing.responsechart import reading_text  # noqa: PLC0415  (numpy is late)

            self.read.emit(reading_text(self.content, rpm))
        self.update()

    def reading_items(self) -> tuple[Any, ...]:
        """Return the line at the speed that is read."""
        if self._rpm is None:
            return ()
        from modalview.drawing.responsechart import reading_items  # noqa: PLC0415  (numpy is late)

        return reading_items(self.chart, self._rpm)

    def read_at(self, x: float, y: float) -> None:
        """Read the speed under the pointer."""
        del y
        frame = self.chart.frame
        inside = frame.left - 1 <= x <= frame.right + 1
        self.read_speed(frame.rpm_at(x) if inside else None)

    def stop_reading(self) -> None:
        """Read nothing."""
        self.read_speed(None)

    def mousePressEvent(self, event: QMouseEvent) -> None:  # noqa: N802  (Qt's name)
        """Choose the speed under the pointer."""
        super().mousePressEvent(event)
        if event.button() == Qt.MouseButton.LeftButton and self.chart is not None:
            self.read_at(event.position().x(), event.position().y())
            if self._rpm is not None:
                self.speed_chosen.emit(self._rpm)

    def read_key(self, event: QKeyEvent) -> bool:
        """Go on by arrow keys, from peak to peak by Page Up and Down, choose by Enter."""
        keys, key = Qt.Key, event.key()
        if key in (keys.Key_Left, keys.Key_Right):
            coarse = bool(event.modifiers() & Qt.KeyboardModifier.ShiftModifier)
            self._step((_COARSE if coarse else _FINE) * (1 if key == keys.Key_Right else -1))
        elif key in (keys.Key_PageUp, keys.Key_PageDown):
            self._jump(forward=key == keys.Key_PageDown)
        elif key in (keys.Key_Home, keys.Key_End):
            frame = self.chart.frame
            self.read_speed(frame.low_rpm if key == keys.Key_Home else frame.high_rpm)
        elif key in (keys.Key_Return, keys.Key_Enter) and self._rpm is not None:
            self.speed_chosen.emit(self._rpm)
        else:
            return False
        return True

    def _step(self, pixels: float) -> None:
        frame = self.chart.frame
        here = self._rpm if self._rpm is not None else self.content.running_rpm[0]
        self.read_speed(frame.rpm_at(frame.x_of(here) + pixels))

    def _jump(self, *, forward: bool) -> None:
        from modalview.drawing.responsechart import stops  # noqa: PLC0415  (numpy is late)

        found, here = stops(self.content), self._rpm
        near = 1e-9
        if forward:
            ahead = [rpm for rpm in found if here is None or rpm > here * (1 + near)]
        else:
            ahead = [rpm for rpm in reversed(found) if here is None or rpm < here * (1 - near)]
        if ahead:
            self.read_speed(ahead[0])
