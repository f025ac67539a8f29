"""The page of measured peaks: typed, pasted, removed and tuned to, each by one undoable edit."""

from dataclasses import replace
from multiprocessing import Pipe

import pytest
from conftest import settle
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit

from modalview.drawing.tunecontent import wish
from modalview.model import typed_peaks as peaks
from modalview.places import demo_models
from modalview.store import read_model
from modalview.study.results import never
from modalview.ui.peaktable import MODE
from modalview.ui.theme import DARK
from modalview.ui.tunequestions import tunable, tuning
from modalview.ui.tunevalues import RANGE, VALUE

PUMP_5 = demo_models() / "5-raw-water-vertical-pump"
BUMPED, DESIGN = PUMP_5 / "after-bump-test.keepclear", PUMP_5 / "design.keepclear"
SOLE, WIDE = "sole.stiffness.rz", "6e7 to 1e9 N m/rad"


@pytest.fixture
def bumped(window, qtbot):
    """The window with the page of model 5 as designed, with the one clear peak of its bump test."""
    peak = read_model(BUMPED).measured[0]
    window.document.start(replace(read_model(DESIGN), measured=(peak,)))
    settle(qtbot, window)
    window.on_go_to_measured()
    page = window.charts.measured
    qtbot.waitUntil(lambda: page.inquiry.current, timeout=5000)
    return window


def ids(window):
    return [one.id for one in window.document.model.measured]


def type_cell(page, row, column, text):
    page.panel.table.item(row, column).setText(text)


def tuned(window, qtbot):
    page = window.charts.measured
    page.tune.click()
    assert page.busy
    assert page.tune.text() == "Stop"
    qtbot.waitUntil(lambda: not page.busy, timeout=10000)
    return page


def test_table_shows_the_peaks(bumped):
    head, *rows = bumped.charts.measured.panel.table.rows_text()
    assert head == ["peak", "frequency", "uncertainty", "body", "direction", "take for mode"]
    assert rows == [["bump 1", "17.0 Hz", "0.25 Hz", "motor at 0 m; 0.8 m", "x", ""]]


def test_peak_is_added_by_button_and_keys_and_undone(bumped):
    panel = bumped.charts.measured.panel
    before = bumped.document.model
    panel.add.click()
    assert bumped.document.stack.count() == 0
    assert panel.reason.text().startswith("A new peak")
    QTest.keyClick(panel.table, Qt.Key.Key_Return)
    editor = panel.table.findChild(QLineEdit)
    QTest.keyClicks(editor, "6,2 Hz")
    QTest.keyClick(editor, Qt.Key.Key_Return)
    QApplication.processEvents()
    assert ids(bumped) == ["bump 1", "peak 1"]
    assert bumped.document.model.measured[1].frequency.text == "6.2 Hz"
    assert bumped.document.stack.count() == 1
    type_cell(bumped.charts.measured, 1, peaks.BODY, "motor")
    assert bumped.document.model.measured[1].at.body == "motor"
    bumped.document.stack.undo()
    bumped.document.stack.undo()
    assert bumped.document.model == before
    assert panel.table.rowCount() == 1


def test_refused_text_stays_in_red_with_its_reason(bumped):
    page = bumped.charts.measured
    type_cell(page, 0, peaks.FREQUENCY_AT, "17")
    assert bumped.document.stack.count() == 0
    assert "unit is missing" in page.panel.reason.text()
    assert page.panel.table.item(0, peaks.FREQUENCY_AT).text() == "17"
    page.panel.table.setCurrentCell(0, peaks.FREQUENCY_AT)
    QTest.keyClick(page.panel.table, Qt.Key.Key_Delete)
    assert page.panel.table.item(0, peaks.FREQUENCY_AT).text() == "17.0 Hz"
    assert page.panel.reason.isHidden()


def test_lines_of_a_spreadsheet_are_pasted_in_one_edit(bumped):
    panel = bumped.charts.measured.panel
    QGuiApplication.clipboard().setText("p1\t31,5 Hz\t0,4 Hz\tmotor\tx\r\np2\tloud\r\np3\t44 Hz\r\n")
    panel.table.setFocus()
    QTest.keyClick(panel.table, Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier)
    assert ids(bumped) == ["bump 1", "p1", "p3"]
    assert bumped.document.stack.count() == 1
    assert "line 2, p2" in panel.reason.text()
    bumped.document.stack.undo()
    assert ids(bumped) == ["bump 1"]
    panel.paste.click()
    assert ids(bumped) == ["bump 1", "p1", "p3"]


def test_one_copied_text_is_typed_into_the_cell(bumped):
    panel = bumped.charts.measured.panel
    QGuiApplication.clipboard().setText("17,5 Hz")
    panel.table.setCurrentCell(0, peaks.FREQUENCY_AT)
    QTest.keyClick(panel.table, Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier)
    assert bumped.document.model.measured[0].frequency.text == "17.5 Hz"


def test_chosen_peaks_are_removed_and_come_back(bumped):
    panel = bumped.charts.measured.panel
    panel.table.selectRow(0)
    panel.remove.click()
    assert ids(bumped) == []
    assert panel.reason.text().startswith("No measured peaks yet")
    assert not bumped.charts.measured.tune.isEnabled()
    bumped.document.stack.undo()
    assert ids(bumped) == ["bump 1"]
    assert panel.table.rowCount() == 1


def test_new_peak_is_given_up_by_remove(bumped):
    panel = bumped.charts.measured.panel
    panel.add.click()
    panel.remove.click()
    assert panel.table.rowCount() == 1
    assert bumped.document.stack.count() == 0


def test_new_peak_whose_frequency_is_refused_can_be_emptied(bumped):
    page = bumped.charts.measured
    page.panel.add.click()
    type_cell(page, 1, peaks.FREQUENCY_AT, "loud")
    assert "New peak: not used" in page.panel.reason.text()
    type_cell(page, 1, peaks.FREQUENCY_AT, "")
    assert page.panel.table.item(1, peaks.FREQUENCY_AT).text() == ""
    assert bumped.document.stack.count() == 0


def test_value_is_ticked_by_space(bumped):
    page = bumped.charts.measured
    page.values.setFocus()
    page.values.setCurrentCell(0, VALUE)
    QTest.keyClick(page.values, Qt.Key.Key_Space)
    assert [line.name for line, _ in page.values.chosen()] == [page.inquiry.result[0].name]
    QTest.keyClick(page.values, Qt.Key.Key_Space)
    assert page.values.chosen() == ()


def through_a_pipe(what):
    ours, theirs = Pipe()
    with ours, theirs:
        ours.send(what)
        return theirs.recv()


def test_question_and_answer_pass_to_a_process_of_its_own():
    model = replace(read_model(DESIGN), measured=read_model(BUMPED).measured[:1])
    (line,) = (one for one in tunable(model, (), never) if one.name == SOLE)
    asked = through_a_pipe((model, (((line, "6e7 to 1e9 N m/rad"),), ())))
    answer = through_a_pipe(tuning(*asked, never))
    assert answer.edit.apply(model).links != model.links


def test_range_is_read_by_the_rule_of_the_window():
    (line,) = (one for one in tunable(read_model(DESIGN), (), never) if one.name == SOLE)
    assert wish(line, "6,5e7 to 1,5e9 N m/rad") == f"{SOLE}=6.5e7 N m/rad to 1.5e9 N m/rad"
    assert wish(line, line.span) == wish(line, "") == SOLE


def test_sole_is_tuned_to_the_peak_and_applied(bumped, qtbot):
    page = bumped.charts.measured
    before = bumped.document.model
    row = next(row for row, one in enumerate(page.inquiry.result) if one.name == SOLE)
    page.values.item(row, RANGE).setText(WIDE)
    assert page.values.item(row, VALUE).checkState() == Qt.CheckState.Checked
    assert page.tune.text() == "Tune"
    tuned(bumped, qtbot)
    assert page.sentence.text().startswith("Tuned soleplate stiffness rz to 1.17")
    assert "→ 1.17" in page.content.values.rows[0][1]
    assert page.room.named["peaks"].rowCount() == 1
    page.apply.click()
    sole = next(one for one in bumped.document.model.links if one.id == "sole")
    assert sole.stiffness.rz.si == pytest.approx(1.174e8, rel=0.01)
    assert bumped.document.stack.count() == 1
    assert page.sentence.text().startswith("Applied")
    assert not page.apply.isEnabled()
    settle(qtbot, bumped)
    assert any(abs(one.frequency_hz - 17.0) < 0.05 for one in bumped.analysis.solution.modes)
    bumped.document.stack.undo()
    assert bumped.document.model == before
    assert page.current
    settle(qtbot, bumped)


def test_found_is_pale_after_an_edit_and_cannot_be_applied(bumped, qtbot):
    page = bumped.charts.measured
    page.values.tick(SOLE, WIDE)
    tuned(bumped, qtbot)
    assert page.apply.isEnabled()
    page.values.tick("flange.stiffness.rz")
    assert page.sentence.text().startswith("Out of date: other values")
    type_cell(page, 0, peaks.FREQUENCY_AT, "18 Hz")
    assert page.sentence.text().startswith("Out of date: of the model before")
    assert not page.room.named["peaks"].isEnabled()
    assert not page.room.named["values"].isEnabled()
    assert not page.apply.isEnabled()
    settle(qtbot, bumped)


def test_what_the_peaks_cannot_determine_is_refused(bumped, qtbot):
    page = bumped.charts.measured
    page.values.tick(SOLE, WIDE)
    page.values.tick("flange.stiffness.rz")
    tuned(bumped, qtbot)
    assert "1 peak determines at most 1 value" in page.sentence.text()
    assert page.room.named["told"].rowCount() == 2
    assert not page.apply.isEnabled()


def test_range_that_cannot_be_read_is_refused_with_its_reason(bumped, qtbot):
    page = bumped.charts.measured
    page.values.tick(SOLE, "soft")
    tuned(bumped, qtbot)
    assert '"soft" is no range' in page.sentence.text()
    assert not page.apply.isEnabled()


def test_without_a_value_each_is_tried_alone(bumped, qtbot):
    page = bumped.charts.measured
    assert page.tune.text() == "Try each value alone"
    tuned(bumped, qtbot)
    assert page.room.named["alone"].rowCount() > 5
    assert "--" not in page.sentence.text()


def test_peak_is_taken_for_the_mode_typed(bumped, qtbot):
    page = bumped.charts.measured
    page.values.tick(SOLE, WIDE)
    type_cell(page, 0, MODE, "first")
    assert "the number of a mode" in page.panel.reason.text()
    type_cell(page, 0, MODE, "1")
    assert page.panel.pairs() == (("bump 1", 1),)
    tuned(bumped, qtbot)
    assert page.content.peaks.rows[0][2] == "1"


def test_another_model_forgets_what_was_found(bumped, qtbot):
    page = bumped.charts.measured
    page.values.tick(SOLE, WIDE)
    tuned(bumped, qtbot)
    bumped.document.start(read_model(BUMPED))
    settle(qtbot, bumped)
    assert page.content is None
    assert page.sentence.isHidden()
    assert page.values.chosen() == ()


def test_page_takes_colours_and_tells_names(bumped):
    page = bumped.charts.measured
    bumped.charts.set_theme(DARK, 1.5)
    type_cell(page, 0, peaks.FREQUENCY_AT, "loud")
    item = page.panel.table.item(0, peaks.FREQUENCY_AT)
    assert item.foreground().color().name() == DARK.in_band.lower()
    assert "frequency" in item.data(Qt.ItemDataRole.AccessibleDescriptionRole)
    assert page.panel.table.accessibleName() == "Measured peaks"
    assert page.values.accessibleName() == "Values to tune"
