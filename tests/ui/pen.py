"""Draws in a window as a person does: mouse and keyboard only."""

import numpy as np
from PySide6.QtCore import QEvent, QPoint, QPointF, Qt
from PySide6.QtGui import QMouseEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication


class Pen:
    """Mouse and keyboard over the sheet of a window; places are metres of the drawing, or parts by name."""

    def __init__(self, window, qtbot):
        self.window, self._qtbot = window, qtbot
        self.sheet = window.sheet

    # Where things are

    def laid_out(self):
        """Wait until the model as it stands is on the sheet."""
        self._qtbot.waitUntil(
            lambda: (
                self.sheet.geometry is not None and self.sheet.geometry.model is self.window.document.model
            ),
            timeout=5000,
        )
        return self.sheet.geometry

    def at(self, *world):
        """Return the pixel of a place in metres: x, y, or x, y, z in space."""
        point = np.array([[*world, *[0.0] * (3 - len(world))]])
        x, y = self.laid_out().view.to_pixels(point)[0].tolist()
        return QPoint(round(x), round(y))

    def part(self, name, across=0.5, down=0.5):
        """Return the pixel of a place on a body, in shares of its box."""
        geometry = self.laid_out()
        number = next(n for n, one in enumerate(geometry.model.bodies) if name in (one.id, one.name))
        x1, y1, x2, y2 = geometry.boxes[number].tolist()
        return QPoint(round(x1 + across * (x2 - x1)), round(y1 + down * (y2 - y1)))

    # What hands do

    def key(self, key, held=Qt.KeyboardModifier.NoModifier):
        """Press a key on whatever has the keyboard."""
        QTest.keyClick(QApplication.focusWidget() or self.sheet, key, held)
        QApplication.processEvents()

    def tool(self, letter):
        """Take a tool by its key, on the sheet."""
        self.sheet.setFocus()
        QTest.keyClicks(self.sheet, letter)
        QApplication.processEvents()

    def type(self, *texts):
        """Type texts into the fields of the form in turn, each with Enter."""
        for text in texts:
            field = QApplication.focusWidget()
            if text:
                QTest.keyClicks(field, text)
            QTest.keyClick(field, Qt.Key.Key_Return)
            QApplication.processEvents()

    def type_on(self, text):
        """Go on typing where the keyboard is, without Enter."""
        QTest.keyClicks(QApplication.focusWidget(), text)
        QApplication.processEvents()

    def over_number(self, text):
        """Type over the number that has the keyboard, without Enter."""
        QApplication.focusWidget().selectAll()
        self.type_on(text)

    def key_on(self, widget, key):
        """Press a key on a widget."""
        QTest.keyClick(widget, key)
        QApplication.processEvents()

    def double_click(self, where):
        """Click twice at one place."""
        QTest.mouseMove(self.sheet, where)
        QTest.mouseDClick(self.sheet, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier, where)
        QApplication.processEvents()

    def click(self, where, held=Qt.KeyboardModifier.NoModifier):
        """Press and let go at one place."""
        QTest.mouseMove(self.sheet, where)
        QTest.mouseClick(self.sheet, Qt.MouseButton.LeftButton, held, where)
        QApplication.processEvents()

    def drag(self, start, stop, held=Qt.KeyboardModifier.NoModifier, *, let_go=True):
        """Press at one place, go to another in steps, and let go there."""
        QTest.mouseMove(self.sheet, start)
        QTest.mousePress(self.sheet, Qt.MouseButton.LeftButton, held, start)
        for step in range(1, 5):
            _move(self.sheet, start + (stop - start) * step / 4, held)
            QApplication.processEvents()
        if let_go:
            self.let_go(stop, held)

    def let_go(self, where, held=Qt.KeyboardModifier.NoModifier):
        """Let the button go."""
        QTest.mouseRelease(self.sheet, Qt.MouseButton.LeftButton, held, where)
        QApplication.processEvents()


def _move(widget, where, held):
    place = QPointF(where)
    event = QMouseEvent(
        QEvent.Type.MouseMove,
        place,
        widget.mapToGlobal(place),
        Qt.MouseButton.NoButton,
        Qt.MouseButton.LeftButton,
        held,
    )
    QApplication.sendEvent(widget, event)
