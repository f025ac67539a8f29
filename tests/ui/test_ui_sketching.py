"""What the window does around the drawing hand: room for what was added."""

import pytest
from pen import Pen
from PySide6.QtCore import QPoint
from PySide6.QtWidgets import QApplication

from modalview.drawing.lettering import arrows_in_the_way
from modalview.model.parts import Model, Motion


@pytest.fixture
def pen(window, qtbot):
    window.document.start(Model(motion=Motion.SINGLE_AXIS))
    window.activateWindow()
    made = Pen(window, qtbot)
    sheet = window.sheet
    right = sheet.width() - 60
    made.laid_out()
    made.tool("M")
    made.drag(QPoint(right - 130, 90), QPoint(right, 140))  # close below the title block
    made.type("100 kg", "", "fan")
    made.tool("S")
    made.drag(made.part("fan"), made.part("fan") + QPoint(0, 120))
    made.type("1e6 N/m", "", "leg")
    return made


def add_order(pen):
    pen.tool("F")
    pen.click(pen.part("fan"))
    pen.type("fan", "900 rpm", "20 %", "1", "", "", "unbalance")
    QApplication.processEvents()


def place(pen):
    view = pen.laid_out().view
    return view.scale_x, view.left, view.top


def test_the_sheet_is_fitted_anew_where_an_arrow_would_cross_the_title_block(pen):
    before = place(pen)
    add_order(pen)
    assert not arrows_in_the_way(pen.laid_out())
    assert place(pen) != before


def test_the_sheet_stands_still_where_an_arrow_has_room(pen):
    pen.sheet.pan(0, 120)
    before = place(pen)
    add_order(pen)
    assert place(pen) == before


def test_parts_of_another_window_are_pasted_beside_what_is_there_and_all_is_in_sight(pen, make_window, qtbot):
    pen.window.sketching.editing.choose_all()
    pen.window.sketching.editing.copy()
    other = make_window()
    other.document.start(pen.window.document.model)
    qtbot.waitUntil(lambda: other.sketching.hand.ready)
    other.sketching.editing.paste()
    first, second = other.document.model.bodies
    gap = second.position[0].si - first.position[0].si
    assert gap > first.drawn.width.si
    assert second.position[1].si == first.position[1].si
    geometry = Pen(other, qtbot).laid_out()
    assert (geometry.boxes[:, 0] > 0).all()
    assert (geometry.boxes[:, 2] < geometry.width).all()
