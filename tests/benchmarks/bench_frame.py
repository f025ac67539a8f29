"""One frame of a moving sheet with 100, 1,000 and 6,000 springs, against bare drawLines of the same lines.

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

SIZES = ((40, 100), (400, 1000), (2400, 6000))  # bodies and springs


def measure(bodies: int, links: int) -> None:
    """Print one line of the table."""
    model = plane_model(bodies=bodies, links=links)
    geometry = sheet_geometry(model, 1200, 900)
    motion = np.random.default_rng(0).uniform(-1, 1, (len(model.bodies), 6))
    posed = pose(geometry, motion)
    image = QImage(1200, 900, QImage.Format.Format_ARGB32_Premultiplied)
    springs = _springs(frame(geometry, posed, 0.5))
    bare_lines = [QLineF(*segment) for segment in springs.segments.tolist()]
    pen = QPen(QColor("black"), springs.width)
    pen.setCapStyle(Qt.PenCapStyle.SquareCap)

    def whole() -> None:
        painter = QPainter(image)
        paint(painter, frame(geometry, posed, 0.5), LIGHT)
        painter.end()

    def ours() -> None:
        moving = frame(geometry, posed, 0.5)
        painter = QPainter(image)
        paint(painter, Drawing((_springs(moving),), moving.bounds), LIGHT)
        painter.end()

    def bare() -> None:
        painter = QPainter(image)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(pen)
        painter.drawLines(bare_lines)
        painter.end()

    print(f"{len(model.links)} springs, {len(bare_lines)} segments")
    print(f"  arrays and paint | bare drawLines:          {in_turn(ours, bare, rounds=15)}")
    print(f"  whole frame, bodies and names | bare drawLines: {in_turn(whole, bare, rounds=15)}")


def _springs(moving: Drawing) -> Lines:
    return max((i for i in moving.items if isinstance(i, Lines)), key=lambda i: len(i.segments))


def main() -> None:
    """Print the table."""
    application = QGuiApplication([])
    for bodies, links in SIZES:
        measure(bodies, links)
    del application


if __name__ == "__main__":
    main()
