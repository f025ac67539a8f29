"""A drawing as a file, with or without a screen."""

import os
import sys
from pathlib import Path

from modalview.drawing.palette import LIGHT, Palette
from modalview.drawing.primitives import Drawing, Role
from modalview.errors import FileAccessError
from modalview.store.saving import put_in_place

# Pixels of the file per pixel of the drawing: sharp in print.
DETAIL = 2.0


def save_picture(
    drawing: Drawing, path: Path, width: int, height: int, palette: Palette = LIGHT, detail: float = DETAIL
) -> None:
    """Write a drawing as a PNG file.

    Parameters
    ----------
    drawing : Drawing
        Its bounds are fitted into the picture, centred.
    path : Path
        Ends in .png.
    width, height : int
        Pixels of the drawing; the file has ``detail`` times as many.
    palette : Palette
    detail : float

    Raises
    ------
    FileAccessError
        The name does not end in .png, or the file cannot be written.
    """
    if path.suffix.lower() != ".png":
        raise FileAccessError(
            f"{path}: a picture is written as PNG, found {path.suffix!r}; end its name in .png"
        )
    data = _png(drawing, (width, height), palette, detail)
    try:
        put_in_place(path, data, like=path if path.exists() else None)
    except OSError as error:
        raise FileAccessError(f"{path}: the picture cannot be written: {error.strerror or error}") from error


def _png(drawing: Drawing, size: tuple[int, int], palette: Palette, detail: float) -> bytes:
    _ensure_application()
    from PySide6.QtCore import QBuffer, QByteArray, QIODevice  # noqa: PLC0415  (Qt is loaded only when a picture is asked for)
    from PySide6.QtGui import QColor, QImage, QImageWriter, QPainter  # noqa: PLC0415

    from modalview.drawing.paint import paint  # noqa: PLC0415

    width, height = size
    image = QImage(round(width * detail), round(height * detail), QImage.Format.Format_RGB32)
    image.fill(QColor(palette[Role.PAPER]))
    left, top, wide, high = drawing.bounds
    scale = min(width / wide, height / high)
    painter = QPainter(image)
    painter.scale(detail, detail)
    painter.translate((width - wide * scale) / 2, (height - high * scale) / 2)
    painter.scale(scale, scale)
    painter.translate(-left, -top)
    paint(painter, drawing, palette)
    painter.end()
    buffer = QBuffer()
    buffer.open(QIODevice.OpenModeFlag.WriteOnly)
    QImageWriter(buffer, QByteArray(b"png")).write(image)
    return bytes(buffer.data().data())


def _ensure_application() -> None:
    """Make the application that fonts need, unless there is one; off screen where there is no display."""
    from PySide6.QtGui import QGuiApplication  # noqa: PLC0415

    if QGuiApplication.instance() is not None:
        return
    on_linux = sys.platform.startswith("linux")
    if on_linux and not (os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY")):
        os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
    _KEPT.append(QGuiApplication(sys.argv[:1]))


# Qt's application must live as long as the process.
_KEPT: list[object] = []
