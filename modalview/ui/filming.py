"""Films the window while demonstration model 1 is drawn in it by events of mouse and keyboard."""

import tempfile
from dataclasses import replace
from pathlib import Path
from typing import Any

from PySide6.QtCore import QEvent, QPoint, QPointF, QRect, Qt
from PySide6.QtGui import QColor, QImage, QKeyEvent, QMouseEvent, QPainter, QPolygonF
from PySide6.QtWidgets import QApplication, QWidget

from modalview.errors import InputError
from modalview.model.parts import Model, Motion
from modalview.ui.apng import Frame, moving_png
from modalview.ui.app import application, new_window
from modalview.ui.picture import Look, settings_for, settled, wait_for
from modalview.ui.window import Window

_SIZE = (1120, 700)
_STRIP = 34  # for the words below, pixels
_FAST, _SLOW, _READ, _LAST = 110, 420, 900, 4000  # how long frames stand, ms
_ARROW = ((0, 0), (0, 17), (4, 13), (7, 19), (10, 18), (7, 12), (12, 12))
Place = tuple[float, float]


def film_drawing(path: Path, *, theme: str = "light", stills: Path | None = None) -> None:
    """Film how the cooling-water pump is drawn, up to its verdict.

    Parameters
    ----------
    path : Path
        Of the moving picture.
    theme : str
        "light" or "dark".
    stills : Path or None
        Folder for each frame as a picture of its own.

    Raises
    ------
    InputError
        When it cannot be written.
    """
    program = application()
    with tempfile.TemporaryDirectory() as folder:
        window = new_window(settings_for(Path(folder), Look(theme=theme)))
        try:
            window.resize(*_SIZE)
            window.show()
            window.activateWindow()
            film = Film(program, window)
            draw_pump(film)
        finally:
            window.document.stack.setClean()
            window.close()
            program.processEvents()
    try:
        path.write_bytes(moving_png(film.frames))
        for number, image in enumerate(film.images if stills is not None else ()):
            stills.mkdir(parents=True, exist_ok=True)
            image.save(str(stills / f"{number:03}.png"))
    except OSError as error:
        raise InputError(f"{path} cannot be written: {error.strerror}") from error


def draw_pump(film: "Film") -> None:
    """Draw demonstration model 1 with its three checks."""
    film.window.document.start(Model(motion=Motion.SINGLE_AXIS))
    film.wait()
    film.say("File, New: an empty sheet", _READ)
    film.say("M and a drag: a mass", _SLOW)
    film.draw("M", (0.26, 0.30), (0.42, 0.36), "620 kg", "3 %", "motor")
    film.draw("M", (0.52, 0.30), (0.64, 0.36), "380 kg", "3 %", "pump")
    film.draw("M", (0.24, 0.53), (0.68, 0.57), "520 kg", "3 %", "baseplate")
    film.say("S and a drag from part to part, or to the ground: a spring", _SLOW)
    film.draw("S", film.on("m1", 0.5, 0.9), film.on("m3", 0.23, 0.1), "4.0e8 N/m", "10 %", "motor pedestal")
    film.draw("S", film.on("m2", 0.5, 0.9), film.on("m3", 0.77, 0.1), "3.5e8 N/m", "10 %", "pump pedestal")
    film.draw("S", film.on("m3", 0.5, 0.9), (0.46, 0.78), "175 kN/mm", "25 %", "base support")
    film.say("F and a click on a body: what acts there", _SLOW)
    pump_set = ("pump set P-3", "2950 rpm", "15 %")
    film.draw("F", film.on("m1"), None, *pump_set, "1x", "", "G 6.3 of 190 kg", "unbalance")
    film.draw("F", film.on("m1"), None, "2x", "", "", "misalignment")
    film.draw("F", film.on("m2"), None, "7x", "", "", "vane pass")
    film.say("Scale, modes and verdict follow every edit", _LAST)


class Film:
    """Hands that draw, and a camera that takes a frame after what they did."""

    def __init__(self, program: QApplication, window: Window) -> None:
        self.window = window
        self.images: list[QImage] = []
        self.frames: list[Frame] = []
        self._program = program
        self._pointer: QPoint | None = None  # on the sheet
        self._words = ""
        self._seen: set[str] = set()  # letters of tools

    # The hands

    def draw(self, letter: str, start: Place, stop: Place | None, *texts: str) -> None:
        """Take a tool, drag from place to place or click, and type what is asked.

        Every text is seen the first time that a tool is used, later only what they come to.
        """
        known = letter in self._seen
        self._seen.add(letter)
        self._key(letter)
        self._mouse(QEvent.Type.MouseMove, start)
        self.shoot(_SLOW)
        self._mouse(QEvent.Type.MouseButtonPress, start)
        for step in (1, 2, 3) if stop is not None else ():
            share = step / 3
            on_the_way = start[0] + share * (stop[0] - start[0]), start[1] + share * (stop[1] - start[1])
            self._mouse(QEvent.Type.MouseMove, on_the_way, held=True)
            self.shoot(_FAST)
        self._mouse(QEvent.Type.MouseButtonRelease, stop or start)
        self.wait()
        self.shoot(_FAST)
        for text in texts:
            for character in text:
                self._key(character)
            if text and not known:
                self.shoot(_SLOW)
            self._key("\r")
        self.wait()
        self.shoot(_READ)

    def on(self, part: str, across: float = 0.5, down: float = 0.5) -> Place:
        """Return a place on a part, in shares of the sheet."""
        x1, y1, x2, y2 = self.window.sketching.hand.box_of(part)
        sheet = self.window.sheet
        return (x1 + across * (x2 - x1)) / sheet.width(), (y1 + down * (y2 - y1)) / sheet.height()

    def _key(self, text: str) -> None:
        target = QApplication.focusWidget() or self.window.sheet
        key = Qt.Key.Key_Return if text == "\r" else Qt.Key.Key_unknown
        for kind in (QEvent.Type.KeyPress, QEvent.Type.KeyRelease):
            event = QKeyEvent(kind, key, Qt.KeyboardModifier.NoModifier, text)
            QApplication.sendEvent(target, event)

    def _mouse(self, kind: QEvent.Type, place: Place, *, held: bool = False) -> None:
        sheet = self.window.sheet
        at = QPointF(round(place[0] * sheet.width()), round(place[1] * sheet.height()))
        left, none = Qt.MouseButton.LeftButton, Qt.MouseButton.NoButton
        button = none if kind is QEvent.Type.MouseMove else left
        buttons = left if held or kind is QEvent.Type.MouseButtonPress else none
        plain = Qt.KeyboardModifier.NoModifier
        QApplication.sendEvent(sheet, QMouseEvent(kind, at, sheet.mapToGlobal(at), button, buttons, plain))
        self._pointer = at.toPoint()

    def wait(self) -> None:
        """Let the study of the model come to its end."""
        wait_for(self._program, lambda: settled(self.window))

    # The camera

    def say(self, words: str, duration_ms: int) -> None:
        """Change the words below, and take a frame."""
        self._words = words
        self.shoot(duration_ms)

    def shoot(self, duration_ms: int) -> None:
        """Take a frame of what has changed."""
        self._program.processEvents()
        image = self._image()
        area = changed(self.images[-1], image) if self.images else image.rect()
        self.images.append(image)
        if area.isEmpty():
            last = self.frames[-1]
            self.frames[-1] = replace(last, duration_ms=last.duration_ms + duration_ms)
        else:
            self.frames.append(_frame(image, area, duration_ms))

    def _image(self) -> QImage:
        window: Any = self.window
        image = QImage(window.width(), window.height() + _STRIP, QImage.Format.Format_RGB888)
        image.fill(QColor("#243038"))
        painter = QPainter(image)
        painter.drawPixmap(0, 0, window.grab())
        font = painter.font()
        font.setPixelSize(16)
        painter.setFont(font)
        painter.setPen(QColor("white"))
        below = QRect(16, window.height(), window.width() - 32, _STRIP)
        painter.drawText(below, Qt.AlignmentFlag.AlignVCenter, self._words)
        if self._pointer is not None:
            _draw_pointer(painter, window.sheet, window, self._pointer)
        painter.end()
        return image


def _draw_pointer(painter: QPainter, sheet: QWidget, window: QWidget, at: QPoint) -> None:
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.translate(sheet.mapTo(window, at))
    painter.setPen(QColor("white"))
    painter.setBrush(QColor("black"))
    painter.drawPolygon(QPolygonF([QPointF(*corner) for corner in _ARROW]))


def changed(before: QImage, after: QImage) -> QRect:
    """Return the smallest rectangle outside of which two pictures of one size are the same."""
    old, new = _rows(before), _rows(after)
    rows = [y for y in range(len(new)) if old[y] != new[y]]
    if not rows:
        return QRect()
    left = min(_same(old[y], new[y]) for y in rows) // 3
    right = after.width() - min(_same(old[y][::-1], new[y][::-1]) for y in rows) // 3
    return QRect(left, rows[0], right - left, rows[-1] + 1 - rows[0])


def _same(one: bytes, other: bytes) -> int:
    """Return how many bytes two rows that differ have in common from their start."""
    low, high = 0, len(one)
    while high - low > 1:
        middle = (low + high) // 2
        low, high = (middle, high) if one[:middle] == other[:middle] else (low, middle)
    return low


def _frame(image: QImage, area: QRect, duration_ms: int) -> Frame:
    part = image.copy(area)
    colours = b"".join(_rows(part))
    return Frame(part.width(), part.height(), colours, area.x(), area.y(), duration_ms)


def _rows(image: QImage) -> list[bytes]:
    """Return the colours of each row, without the bytes that fill it up in memory."""
    wide = 3 * image.width()
    return [bytes(image.constScanLine(y))[:wide] for y in range(image.height())]
