from dataclasses import replace

import pytest
from conftest import settle
from PySide6.QtCore import QItemSelection, QItemSelectionModel, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QLineEdit

from modalview.model.editable import editable_fields
from modalview.places import demo_models
from modalview.store import read_model
from modalview.ui import partlines
from modalview.ui.parttable import CONVERTED, PART, TOLERANCE, TYPED, WHAT
from modalview.ui.values import Lines


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


def mark(window, first, last):
    """Mark a block of cells, as a pointer would."""
    window.parts.setCurrentIndex(first)
    window.parts.selectionModel().select(
        QItemSelection(first, last), QItemSelectionModel.SelectionFlag.ClearAndSelect
    )


def paste(window, qtbot, text):
    QGuiApplication.clipboard().setText(text)
    qtbot.keyClick(window.parts, Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier)


def test_a_block_is_copied_with_tabs_and_lines(pump, qtbot):
    pump.on_go_to_values()
    mark(
        pump,
        index_of(pump, "base support", "stiffness", PART),
        index_of(pump, "base support", "stiffness", TOLERANCE),
    )
    qtbot.keyClick(pump.parts, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    assert QGuiApplication.clipboard().text() == "base support\tstiffness\t175 kN/mm\t1.75e8 N/m\t25 %\n"


def test_a_pasted_block_is_one_edit_with_decimal_commas(pump, qtbot):
    before = pump.document.model
    first = index_of(pump, "base support", "stiffness", PART)
    pump.parts.setCurrentIndex(first)
    paste(pump, qtbot, "base support\tstiffness\t1,5e9 N/m\t\t10 %\n")
    stiffness = pump.document.model.links[2].stiffness
    assert stiffness.si == pytest.approx(1.5e9)
    assert stiffness.tolerance.limits(1.0) == pytest.approx((0.9, 1.1))
    assert pump.document.stack.count() == 1
    pump.document.stack.undo()
    assert pump.document.model == before
    settle(qtbot, pump)


def test_pasted_cells_that_cannot_be_read_stay_with_their_reasons_and_the_others_are_taken(pump, qtbot):
    index = index_of(pump, "motor", "mass", TYPED)
    pump.parts.setCurrentIndex(index)
    told = []
    pump.parts.told.connect(told.append)
    paste(pump, qtbot, "heavy\t\t4 %")
    assert index.data() == "heavy"
    assert index.data(Qt.ItemDataRole.ToolTipRole)
    mass = pump.document.model.bodies[0].mass
    assert mass.text == "620 kg"
    assert mass.tolerance.both.text == "4 %"
    assert told == ["1 value pasted; 1 cannot be read and stand in red with the reason"]
    settle(qtbot, pump)


def test_one_text_fills_every_marked_cell(pump, qtbot):
    first = index_of(pump, "motor", "mass", TOLERANCE)
    mark(pump, first, first)
    paste(pump, qtbot, "7 %")
    mark(pump, index_of(pump, "motor", "name", TYPED), index_of(pump, "motor", "mass", TYPED))
    paste(pump, qtbot, "650 kg")
    assert pump.document.model.bodies[0].mass.text == "650 kg"
    assert pump.document.model.bodies[0].name == "650 kg"  # a name may be anything
    settle(qtbot, pump)


def test_what_lies_beyond_the_table_is_told(pump, qtbot):
    told = []
    pump.parts.told.connect(told.append)
    pump.parts.setCurrentIndex(pump.parts.lines.index(pump.parts.lines.rowCount() - 1, TYPED))
    paste(pump, qtbot, "3 %\n4 %\n5 %\n")
    assert told == ["1 value pasted; 2 lie beyond the table"]
    settle(qtbot, pump)


def test_the_whole_reason_of_a_refused_entry_stands_below_the_table(pump):
    pump.on_go_to_values()
    index = index_of(pump, "motor", "mass", TYPED)
    pump.parts.setCurrentIndex(index)
    below = pump.parts.parentWidget().reason
    assert below.isHidden()
    pump.parts.lines.setData(index, "1,200 kg")
    assert not below.isHidden()
    assert below.text().startswith("motor, mass: not used. ")
    reason = index.data(Qt.ItemDataRole.ToolTipRole)
    assert reason in below.text()
    assert index.siblingAtColumn(CONVERTED).data(Qt.ItemDataRole.ToolTipRole) == reason
    pump.parts.setCurrentIndex(index_of(pump, "pump", "mass", TYPED))
    assert below.isHidden()


def test_undo_takes_the_refused_entry_back_first_then_the_edit_before(pump, qtbot):
    pump.on_go_to_values()
    pump.activateWindow()
    pump.parts.lines.setData(index_of(pump, "pump", "mass", TYPED), "400 kg")
    index = index_of(pump, "motor", "mass", TYPED)
    pump.parts.lines.setData(index, "heavy")
    qtbot.keyClick(pump.parts, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert index.data() == "620 kg"
    assert pump.document.modified
    pump.document.stack.undo()
    assert not pump.document.modified
    settle(qtbot, pump)


def test_undoing_an_edit_takes_refused_entries_back(pump, qtbot):
    pump.parts.lines.setData(index_of(pump, "pump", "mass", TYPED), "400 kg")
    index = index_of(pump, "motor", "mass", TYPED)
    pump.parts.lines.setData(index, "heavy")
    pump.document.stack.undo()
    assert index_of(pump, "motor", "mass", TYPED).data() == "620 kg"
    settle(qtbot, pump)


@pytest.mark.parametrize(
    ("key", "ctrl", "line", "column"),
    [
        (Qt.Key.Key_Home, True, 0, TYPED),
        (Qt.Key.Key_Home, False, 1, TYPED),
        (Qt.Key.Key_End, False, 1, TOLERANCE),
        (Qt.Key.Key_End, True, -1, TYPED),
    ],
)
def test_home_and_end_go_to_what_can_be_typed(pump, qtbot, key, ctrl, line, column):
    pump.on_go_to_values()
    pump.parts.setCurrentIndex(index_of(pump, "motor", "mass", WHAT))
    held = Qt.KeyboardModifier.ControlModifier if ctrl else Qt.KeyboardModifier.NoModifier
    qtbot.keyClick(pump.parts, key, held)
    here = pump.parts.currentIndex()
    assert (here.row(), here.column()) == (line % pump.parts.lines.rowCount(), column)


def test_tab_in_a_cell_goes_to_the_next_that_can_be_typed_in(pump, qtbot):
    pump.on_go_to_values()
    pump.parts.setCurrentIndex(index_of(pump, "motor", "mass", TYPED))
    places = []
    for _ in range(2):
        qtbot.keyClick(pump.parts, Qt.Key.Key_F2)
        qtbot.keyClick(pump.parts.viewport().findChildren(QLineEdit)[-1], Qt.Key.Key_Tab)
        places.append(pump.parts.currentIndex())
    mass, after = index_of(pump, "motor", "mass", TOLERANCE), places[1]
    assert places[0] == mass
    assert (after.row(), after.column()) == (mass.row() + 1, TYPED)


def test_enter_on_a_name_edits_the_value_of_its_line(pump, qtbot):
    pump.on_go_to_values()
    pump.parts.setCurrentIndex(index_of(pump, "motor", "mass", PART))
    qtbot.keyClick(pump.parts, Qt.Key.Key_Return)
    assert pump.parts.currentIndex() == index_of(pump, "motor", "mass", TYPED)
    assert pump.parts.viewport().findChild(QLineEdit).text() == "620 kg"


def test_delete_takes_a_tolerance_away(pump, qtbot):
    pump.on_go_to_values()
    pump.parts.setCurrentIndex(index_of(pump, "base support", "stiffness", TOLERANCE))
    qtbot.keyClick(pump.parts, Qt.Key.Key_Delete)
    assert pump.document.model.links[2].stiffness.tolerance is None
    settle(qtbot, pump)


def test_lines_of_many_parts_are_counted_in_a_thread_and_made_when_seen(pump, qtbot, monkeypatch):
    expected = list(pump.parts.lines.rows)
    monkeypatch.setattr(partlines, "AT_ONCE", 0)
    pump.parts.show_model(pump.document.model, anew=True)
    assert pump.parts.lines.counting
    assert len(pump.parts.lines.rows) == 0 or not pump.parts.lines.row_of_part("k3") >= 0
    pump.parts.choose_part("k3")  # not there yet
    qtbot.waitUntil(lambda: not pump.parts.lines.counting)
    assert list(pump.parts.lines.rows) == expected
    assert pump.parts.lines.rows[pump.parts.currentIndex().row()].part_id == "k3"


@pytest.mark.parametrize("path", sorted(demo_models().glob("*/*.keepclear")), ids=lambda one: one.stem)
def test_as_many_lines_are_counted_as_are_made(path):
    model = read_model(path)
    lines = Lines(model)
    fields = [editable_fields(model, part.address) for part in lines.parts]
    kept = [field for some in fields for field in some if field.name not in ("notes", "units")]
    assert [row.address for row in lines] == [field.address for field in kept]
    assert len(Lines(model, before=lines)) == len(lines)


def test_lines_of_a_changed_part_are_counted_anew(pump):
    before = pump.parts.lines.rows
    motor = pump.document.model.bodies[0]
    bodies = (replace(motor, inertia=None, dof=None, position=None), *pump.document.model.bodies[1:])
    after = Lines(replace(pump.document.model, bodies=bodies), before=before)
    assert len(after) == len(Lines(replace(pump.document.model, bodies=bodies)))
    assert not after.like(before)
