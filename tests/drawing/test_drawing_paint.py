"""What needs Qt: painting, and pictures as files. The rest of the package must do without."""

import ast
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from PySide6.QtGui import QColor, QFontDatabase, QFontMetricsF, QImage, QPainter

from modalview import drawing
from modalview.drawing.paint import LINES_AT_ONCE, LineBuffer, font_of, paint
from modalview.drawing.palette import DARK, LIGHT
from modalview.drawing.picture import save_picture
from modalview.drawing.primitives import Box, Circles, Drawing, Lines, Polygons, Role, Size, Text
from modalview.drawing.sheet import sheet_drawing, sheet_geometry, title_lines
from modalview.drawing.textsize import text_width
from modalview.errors import FileAccessError
from modalview.model.parts import Model

pytestmark = pytest.mark.usefixtures("qapp")


def painted(picture: Drawing, palette=LIGHT) -> QImage:
    _, _, width, height = picture.bounds
    image = QImage(int(width), int(height), QImage.Format.Format_RGB32)
    image.fill(QColor(palette[Role.PAPER]))
    painter = QPainter(image)
    paint(painter, picture, palette)
    painter.end()
    return image


def one(*items) -> Drawing:
    return Drawing(items, (0.0, 0.0, 40.0, 40.0))


@pytest.mark.parametrize(
    "item",
    [
        Lines(np.array([[0.0, 20.0, 40.0, 20.0]]), Role.BAD, 6.0),
        Polygons(np.array([[[10.0, 10.0], [30.0, 10.0], [30.0, 30.0], [10.0, 30.0]]]), None, Role.BAD),
        Box(10, 10, 20, 20, 3.0, None, Role.BAD),
        Circles(np.array([[20.0, 20.0]]), 10.0, None, Role.BAD),
    ],
    ids=["lines", "polygons", "box", "circles"],
)
@pytest.mark.parametrize("palette", [LIGHT, DARK], ids=["light", "dark"])
def test_every_shape_is_painted_in_the_colour_of_its_role(item, palette):
    image = painted(one(item), palette)
    assert image.pixelColor(20, 20).name() == palette[Role.BAD]
    assert image.pixelColor(2, 2).name() == palette[Role.PAPER]


def test_nothing_to_draw_paints_nothing():
    image = painted(one(Lines(np.zeros((0, 4)))))
    assert image == painted(one())


def test_texts_leave_ink():
    assert painted(one(Text(5, 20, "A"))) != painted(one())


def test_a_line_buffer_serves_many_lines_and_then_few():
    buffer = LineBuffer()
    many = np.arange(4 * 3000, dtype=float).reshape(-1, 4)
    lines = buffer.filled(many)
    assert len(lines) == 3000
    assert (lines[2999].x1(), lines[2999].y2()) == (many[2999, 0], many[2999, 3])
    few = buffer.filled(many[:2] + 0.5)
    assert len(few) == 2
    assert few[1].p1().toTuple() == (4.5, 5.5)


def test_more_lines_than_one_call_takes_are_all_painted():
    rows = np.arange(2 * LINES_AT_ONCE + 1) % 30 + 2.0
    across = np.stack([0 * rows + 2, rows, 0 * rows + 30, rows], axis=1)
    assert painted(one(Lines(across))) == painted(
        one(Lines(across[:LINES_AT_ONCE]), Lines(across[LINES_AT_ONCE:]))
    )
    last = across.copy()
    last[:-1] = [2, 2, 30, 2]
    last[-1] = [2, 20, 30, 20]
    assert painted(one(Lines(last))) != painted(one(Lines(last[:-1])))


def test_demo_sheets_paint_in_both_palettes(demo_model: Model):
    sheet = sheet_drawing(sheet_geometry(demo_model, 720, 540), title_lines(demo_model))
    light, dark = painted(sheet, LIGHT), painted(sheet, DARK)
    assert light.pixelColor(1, 1).lightness() > 200
    assert dark.pixelColor(1, 1).lightness() < 60
    assert light != dark


def test_estimated_widths_cover_the_widest_common_face():
    if "DejaVu Sans" not in QFontDatabase.families():
        pytest.skip("DejaVu Sans is not installed")
    for text in (
        "motor pedestal",
        "1× unbalance, rotor 190 kg, G 6.3",
        "4.0e8 N/m ±10 %",
        "WWW MMM",
        "GD2 184",
    ):
        for bold in (False, True):
            metrics = QFontMetricsF(font_of("DejaVu Sans", Size.NORMAL, bold=bold))
            assert metrics.horizontalAdvance(text) <= text_width(text, bold=bold) * 1.02


def test_a_picture_is_written_at_its_detail(tmp_path: Path):
    path = tmp_path / "sheet.png"
    save_picture(one(Box(10, 10, 20, 20, 0.0, None, Role.BAD)), path, 80, 60, LIGHT, 2.0)
    image = QImage(str(path))
    assert (image.width(), image.height()) == (160, 120)
    assert image.pixelColor(80, 60).name() == LIGHT[Role.BAD]


def test_a_picture_that_cannot_be_written_is_told(tmp_path: Path):
    with pytest.raises(FileAccessError, match=r"nowhere.*cannot be written"):
        save_picture(one(), tmp_path / "nowhere" / "sheet.png", 40, 40)
    with pytest.raises(FileAccessError, match=r"'\.svg'.*\.png"):
        save_picture(one(), tmp_path / "sheet.svg", 40, 40)


def test_only_paint_loads_qt():
    for module in Path(drawing.__file__).parent.glob("*.py"):
        loaded = [
            name
            for node in ast.parse(module.read_text(encoding="utf-8")).body
            if isinstance(node, ast.Import | ast.ImportFrom)
            for name in (getattr(node, "module", None), *(alias.name for alias in node.names))
        ]
        qt = any(str(name).startswith(("PySide6", "shiboken6", "modalview.drawing.paint")) for name in loaded)
        assert qt == (module.stem == "paint"), module.name


@pytest.mark.slow  # starts an interpreter
def test_a_picture_needs_no_screen(tmp_path: Path):
    path = tmp_path / "bare.png"
    code = (
        "from pathlib import Path; from modalview.drawing.picture import save_picture; "
        "from modalview.drawing.primitives import Drawing, Text; "
        f"save_picture(Drawing((Text(5, 20, 'A'),), (0, 0, 40, 40)), Path({str(path)!r}), 40, 40)"
    )
    kept = {"PATH": "", "PYTHONPATH": ":".join(sys.path), "HOME": str(tmp_path)}
    run = subprocess.run([sys.executable, "-c", code], env=kept, check=False, capture_output=True)  # noqa: S603
    assert run.returncode == 0, run.stderr
    assert path.stat().st_size > 0
