"""The page of changes: options are tried by one undoable edit, values are read on their axis."""

from dataclasses import replace

import pytest
from conftest import PUMP, settle
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from modalview.model.parts import LoadCase, LoadChange
from modalview.places import demo_models
from modalview.store import read_model
from modalview.ui.changespage import ChangesPage
from modalview.ui.questions import changes

RETROFIT = demo_models() / "6-vacuum-pump-absorber" / "no-absorber.keepclear"
CLEAR = PUMP.with_name("part-grout-and-anchors.keepclear")


_ANSWERS = []  # about models that were asked about: the search itself is tested below the window


def known_changes(model, details, stopped):
    for one, other, answer in _ANSWERS:
        if (one, other) == (model, details):
            return answer
    _ANSWERS.append((model, details, changes(model, details, stopped)))
    return _ANSWERS[-1][2]


@pytest.fixture(scope="session", autouse=True)
def _cores_loaded(_study_loaded):
    """Import and work once what the page asks, outside of any test's time."""
    for path in (PUMP, CLEAR):
        known_changes(read_model(path), (), lambda: False)


@pytest.fixture(autouse=True)
def _asked_once(monkeypatch):
    monkeypatch.setattr(ChangesPage.__init__, "__defaults__", (None, known_changes))


@pytest.fixture
def page(pump, qtbot):
    """Return the page with its answer about the pump."""
    return shown(pump, qtbot)


def shown(window, qtbot):
    window.below.show_page("changes")
    page = window.charts.changes
    qtbot.waitUntil(lambda: page.inquiry.current and not page.inquiry.busy, timeout=10000)
    return page


def test_options_stand_side_by_side(page):
    head, *rows = page.options.rows_text()
    assert head[1:4] == ["what", "from → to", "room left"]
    assert rows[0][1] == "stiffness of base support"
    assert page.said.text().startswith("Raise stiffness of base support")
    assert page.options.cellWidget(0, 0).accessibleName().startswith("Try: Raise stiffness of base support")


def test_tried_by_its_button_and_undone(pump, page, qtbot):
    before = pump.document.model
    modes = {one.number: one.frequency_hz for one in pump.analysis.solution.modes}
    page.options.cellWidget(0, 0).click()
    settle(qtbot, pump)
    assert str(pump.analysis.outlook.verdict) == "clear"
    assert pump.document.stack.count() == 1
    assert pump.scale.canvas._before == modes
    assert not pump.scale.before.isHidden()
    assert "Raise stiffness of base support" in pump.scale.before.label.text()
    pump.scale.before.undo.click()
    settle(qtbot, pump)
    assert pump.document.model == before
    assert pump.scale.before.isHidden()
    pump.document.stack.redo()
    assert not pump.scale.before.isHidden()


def test_old_modes_are_shown_until_dismissed(pump, page, qtbot):
    page.options.setFocus()
    page.options.setCurrentCell(1, 1)
    QTest.keyClick(page.options, Qt.Key.Key_Return)
    settle(qtbot, pump)
    pump.scale.before.hide_ticks.click()
    assert pump.scale.before.isHidden()
    assert pump.document.stack.count() == 1
    assert pump.document.modified


def test_only_the_latest_edit_is_undone_from_the_strip(pump, page, qtbot):
    page.options.cellWidget(0, 0).click()
    settle(qtbot, pump)
    pump.document.type_value(("bodies", "base", "mass"), "530 kg")
    settle(qtbot, pump)
    assert pump.scale.before.undo.isHidden()
    assert not pump.scale.before.isHidden()


def test_another_model_forgets_what_was_tried(pump, page, qtbot):
    page.options.cellWidget(0, 0).click()
    settle(qtbot, pump)
    pump.document.open(CLEAR, example=True)
    settle(qtbot, pump)
    assert pump.scale.before.isHidden()


def test_clear_model_says_by_how_much(window, qtbot):
    window.document.open(CLEAR, example=True)
    settle(qtbot, window)
    page = shown(window, qtbot)
    assert page.said.text().startswith("Every check is clear over all tolerances. Least room:")
    assert page.options.isHidden()
    assert page.canvas.content.clear_now


def test_out_of_date_options_cannot_be_tried(pump, page):
    option = page.inquiry.result.options[0]
    pump.document.type_value(("bodies", "base", "mass"), "530 kg")
    page.show_result()
    tried = []
    page.tried.connect(lambda *what: tried.append(what))
    assert not page.options.cellWidget(0, 0).isEnabled()
    page.options.cellWidget(0, 0).click()
    assert tried == []
    assert option.edit is not None


def test_axis_goes_with_the_option_and_is_read_by_keys(page):
    page.options.setCurrentCell(2, 1)
    assert page.canvas.content.value == "base.mass"
    assert page.reading.text().startswith("Raise mass of baseplate")
    page.value.setCurrentIndex(page.value.findData("k3.stiffness"))
    read = []
    page.canvas.read.connect(read.append)
    QTest.keyClick(page.canvas, Qt.Key.Key_PageUp)
    assert read[-1].endswith("every check clear")
    QTest.keyClick(page.canvas, Qt.Key.Key_Left)
    assert read[-1].endswith("some check not clear")
    QTest.keyClick(page.canvas, Qt.Key.Key_Escape)
    assert read[-1] == ""
    assert "every check is clear from" in page.canvas.accessibleDescription()


def test_without_orders_it_says_what_is_missing(pump, page, qtbot):
    model = pump.document.model
    bare = replace(model, machines=(replace(model.machines[0], excitations=()),))
    pump.document.start(bare)
    settle(qtbot, pump)
    assert "Nothing is to be kept clear yet" in page.missing.text()
    assert page.said.isHidden()


def test_load_cases_are_cleared_together(pump, qtbot):
    heavy = LoadCase(id="full", name="full", changes=(LoadChange(part="base", key="mass", value="600 kg"),))
    pump.document.start(replace(pump.document.model, load_cases=(heavy,)))
    settle(qtbot, pump)
    page = shown(pump, qtbot)
    head, first, *_ = page.options.rows_text()
    assert "1× unbalance (full)" in head
    assert first[head.index("1× unbalance (full)")].startswith("clear")


def wanted(page, qtbot, ratio):
    line = page.room.absorber
    line.ratio.setText(ratio)
    line.show_it.click()
    qtbot.waitUntil(lambda: page.inquiry.current and not page.inquiry.busy, timeout=10000)


def test_an_absorber_that_is_asked_for_stands_first(window, qtbot):
    window.document.open(RETROFIT, example=True)
    settle(qtbot, window)
    page = shown(window, qtbot)
    wanted(page, qtbot, "5 %")
    _, first, *_ = page.options.rows_text()
    assert first[2] == "105 kg, 1.6 kN/mm"
    assert first[4].startswith("nominal only")
    page.options.setCurrentCell(0, 1)
    assert "modes at 17.69 Hz" in page.reading.text()
    page.options.cellWidget(0, 0).click()
    settle(qtbot, window)
    assert [one.name for one in window.document.model.bodies][-1] == "absorber"


def test_an_absorber_that_cannot_be_says_why(page, qtbot):
    wanted(page, qtbot, "heavy")
    assert "No absorber:" in page.room.notes.text()
    assert page.options.rowCount() > 1
