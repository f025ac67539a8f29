"""One frame of a moving sheet with 1,000 zigzag springs, against bare drawLines of the same segments.

QT_QPA_PLATFORM=offscreen python tests/benchmarks/bench_frame.py
"""

import os

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

import numpy as np
from made import plane_model
from PySide6.QtCore import QLineF, Qt
from PySide6.QtGui import QColor, QGuiApplication, QImage, QPainter, QPen
from sidebyside import in_turn

from modalview.drawing.motion import frame, pose
from modalview.drawing.paint import paint
from modalview.drawing.palette import LIGHT
from modalview.drawing.primitives import Drawing, Lines
from modalview.drawing.sheet import sheet_geometry


def main() -> None:
    """Print the table."""
    QGuiApplication([])
    model = plane_model(bodies=400, links=1000)
    geometry = sheet_geometry(model, 1200, 900)
    motion = np.random.default_rng(0).uniform(-1, 1, (len(model.bodies), 6))
    posed = pose(geometry, motion)
    image = QImage(1200, 900, QImage.Format.Format_ARGB32_Premultiplied)
    springs = max(
        (i for i in frame(geometry, posed, 0.5).items if isinstance(i, Lines)), key=lambda i: len(i.segments)
    )
    bare_lines = [QLineF(*segment) for segment in springs.segments.tolist()]
    pen = QPen(QColor("black"), springs.width)
    pen.setCapStyle(Qt.PenCapStyle.SquareCap)

    def ours() -> None:
        moving = frame(geometry, posed, 0.5)
        lines = max((i for i in moving.items if isinstance(i, Lines)), key=lambda i: len(i.segments))
        painter = QPainter(image)
        paint(painter, Drawing((lines,), moving.bounds), LIGHT)
        painter.end()

    def bare() -> None:
        painter = QPainter(image)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(pen)
        painter.drawLines(bare_lines)
        painter.end()

    print(f"{len(model.links)} links, {len(bare_lines)} segments")
    print(f"arrays and paint | bare drawLines: {in_turn(ours, bare, rounds=30)}")


if __name__ == "__main__":
    main()
