import pytest
from conftest import settle
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLineEdit

from modalview.ui.parttable import CONVERTED, PART, TOLERANCE, TYPED, WHAT


def index_of(window, part, what, column):
    lines = window.parts.lines
    row = next(n for n, one in enumerate(lines.rows) if (one.part, one.what) == (part, what))
    return lines.index(row, column)


def test_every_value_of_every_part_stands_in_the_table(pump):
    rows = {(row.part, row.what): row for row in pump.parts.lines.rows}
    assert rows["base support", "stiffness"].text == "175 kN/mm"
    assert rows["base support", "stiffness"].converted == "1.75e8 N/m"
    assert rows["base support", "stiffness"].tolerance == "25 %"
    assert rows["motor", "mass"].text == "620 kg"
    assert rows["pump set P-3", "speed"].converted == "49.167 Hz"
    assert rows["pump set P-3, vane pass", "order"].text == "7"
    assert rows["model", "damping ratio"].text == "2 %"


def test_a_value_typed_in_the_table_changes_the_verdict(pump, qtbot):
    index = index_of(pump, "base support", "stiffness", TYPED)
    assert pump.parts.lines.setData(index, "1,5e9 N/m")
    settle(qtbot, pump)
    assert pump.document.model.links[2].stiffness.si == pytest.approx(1.5e9)
    assert pump.analysis.solution.modes[0].frequency_hz == pytest.approx(106.89, abs=0.01)


def test_a_tolerance_typed_in_the_table_is_an_edit_of_its_own(pump, qtbot):
    index = index_of(pump, "base support", "stiffness", TOLERANCE)
    pump.parts.lines.setData(index, "-10 % / +20 %")
    settle(qtbot, pump)
    assert pump.document.model.links[2].stiffness.tolerance.limits(1.0) == pytest.approx((0.9, 1.2))
    assert pump.document.stack.count() == 1


def test_a_refused_entry_stays_visible_with_its_reason_and_changes_nothing(pump):
    before = pump.document.model
    index = index_of(pump, "motor", "mass", TYPED)
    pump.parts.lines.setData(index, "1,200 kg")
    assert index.data() == "1,200 kg"
    reason = index.data(Qt.ItemDataRole.ToolTipRole)
    assert "1.200" in reason or "1200" in reason
    assert index.siblingAtColumn(CONVERTED).data().startswith("not used: ")
    assert pump.document.model is before
    assert not pump.document.modified


def test_an_empty_entry_over_a_refused_one_gives_the_value_back(pump):
    before = pump.document.model
    index = index_of(pump, "motor", "mass", TYPED)
    pump.parts.lines.setData(index, "heavy")
    pump.parts.lines.setData(index, "")
    assert index.data() == "620 kg"
    assert pump.document.model is before


def test_a_refused_entry_survives_an_edit_elsewhere_and_goes_with_a_good_one(pump, qtbot):
    index = index_of(pump, "motor", "mass", TYPED)
    pump.parts.lines.setData(index, "heavy")
    pump.parts.lines.setData(index_of(pump, "pump", "mass", TYPED), "400 kg")
    assert index.data() == "heavy"
    pump.parts.lines.setData(index, "640 kg")
    assert index.data() == "640 kg"
    assert index.data(Qt.ItemDataRole.ToolTipRole) is None
    settle(qtbot, pump)


def test_only_values_and_tolerances_can_be_typed(pump):
    lines = pump.parts.lines
    for column, editable in ((PART, False), (WHAT, False), (TYPED, True), (CONVERTED, False)):
        index = index_of(pump, "motor", "mass", column)
        assert bool(lines.flags(index) & Qt.ItemFlag.ItemIsEditable) is editable


def test_typing_in_the_table_by_keyboard(pump, qtbot):
    pump.on_go_to_values()
    index = index_of(pump, "motor", "mass", TYPED)
    pump.parts.setCurrentIndex(index)
    qtbot.keyClick(pump.parts, Qt.Key.Key_Return)
    editor = pump.parts.viewport().findChild(QLineEdit)
    editor.selectAll()
    qtbot.keyClicks(editor, "650 kg")
    qtbot.keyClick(editor, Qt.Key.Key_Return)
    qtbot.waitUntil(lambda: pump.document.model.bodies[0].mass.text == "650 kg")
    settle(qtbot, pump)
