from pathlib import Path

import pytest
from conftest import FAN, PUMP, save, settle
from pen import Pen
from PySide6.QtCore import QMimeData, QPoint, QPointF, Qt, QUrl
from PySide6.QtGui import QDropEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import (
    QAbstractButton,
    QAbstractItemView,
    QAbstractSlider,
    QHeaderView,
    QLineEdit,
    QMessageBox,
    QScrollBar,
    QWidget,
)

from modalview.drawing.primitives import Text
from modalview.store import read_model
from modalview.ui import settings as names
from modalview.ui.dialogs import TextDialog
from modalview.ui.examples import bundled_examples
from modalview.ui.menus import keyboard_text

BASE_SUPPORT = ("links", "k3", "stiffness")


def click(window, label: str) -> None:
    """Press a button of the question that stands open."""
    (box,) = [one for one in window.findChildren(QMessageBox) if one.isVisible()]
    next(button for button in box.buttons() if button.text() == label).click()


def test_an_empty_window_offers_a_file_and_one_example_of_each_kind(window):
    assert window.pages.currentWidget() is window.welcome
    assert len(window.welcome.buttons) == 6
    assert not window.menus.actions["on_save"].isEnabled()


def test_an_example_opens_from_its_button_and_is_solved(window, qtbot):
    qtbot.mouseClick(window.welcome.buttons[0], Qt.MouseButton.LeftButton)
    settle(qtbot, window)
    assert window.banner.word.text() == "Mode in band"
    assert "mode 1 at 51.3 Hz" in window.banner.sentence.whole
    assert window.modes.row.modes.rowCount() == 3
    assert [card.verdict.text() for card in window.results._cards] == [
        "mode in band",
        "clear",
        "clear in this model",
    ]
    assert window.windowTitle() == "Cooling-water pump P-3, as built (example)[*] - Keepclear"


def test_an_edit_is_followed_by_verdict_scale_and_modes_and_can_be_undone_and_redone(pump, qtbot):
    before, scale_before = pump.document.model, pump.scale.canvas.accessibleDescription()
    pump.document.type_value(BASE_SUPPORT, "340 kN/mm")
    pump.document.type_value((*BASE_SUPPORT, "tolerance"), "15 %")
    after = pump.document.model
    assert pump.isWindowModified()
    settle(qtbot, pump)
    assert pump.banner.word.text() == "Clear"
    assert pump.scale.canvas.accessibleDescription() != scale_before
    assert pump.analysis.solution.modes[0].frequency_hz == pytest.approx(68.06, abs=0.01)
    pump.document.stack.undo()
    pump.document.stack.undo()
    assert pump.document.model == before
    assert not pump.isWindowModified()
    pump.document.stack.redo()
    pump.document.stack.redo()
    assert pump.document.model == after
    settle(qtbot, pump)
    assert pump.banner.word.text() == "Clear"


def test_a_margin_typed_in_the_results_changes_the_verdict(pump, qtbot):
    field = pump.results._machines["pump set"].fields["machines", "pump set", "margin"]
    field.line.setText("4 %")
    field.line.editingFinished.emit()
    settle(qtbot, pump)
    assert pump.banner.word.text() == "Clear at nominal only"


def test_a_refused_entry_in_the_results_stays_with_its_reason_and_esc_gives_back(pump, qtbot):
    before = pump.document.model
    field = pump.results._machines["pump set"].fields["machines", "pump set", "speed"]
    field.line.setText("2950 kg")
    field.line.editingFinished.emit()
    assert field.line.text() == "2950 kg"
    assert "kg" in field.reason.text()
    assert field.refused
    assert pump.document.model is before
    qtbot.keyClick(field.line, Qt.Key.Key_Escape)
    assert field.line.text() == "2950 rpm"
    assert not field.refused


def test_modes_of_an_older_model_are_told_as_out_of_date_until_found_again(pump, qtbot):
    pump.on_automatic(False)
    pump.document.type_value(BASE_SUPPORT, "340 kN/mm")
    settle(qtbot, pump)
    row = pump.modes.row
    assert row.modes.rowCount() == 3
    assert row.modes.index(0).data(row.modes.CurrentRole) is False
    assert pump.proof.text().startswith("Out of date")
    assert "out of date" in pump.play_bar.name.text()
    assert "68.1 Hz" not in pump.banner.sentence.text()
    pump.on_find()
    qtbot.waitUntil(lambda: pump.analysis.solution_current, timeout=5000)
    assert row.modes.index(0).data(row.modes.CurrentRole) is True
    assert "out of date" not in pump.play_bar.name.text()


def test_with_the_automatic_search_off_the_verdict_stands_without_modes(window, qtbot):
    window.on_automatic(False)
    window.document.open(PUMP, example=True)
    settle(qtbot, window)
    assert window.banner.word.text() == "Mode in band"
    assert window.modes.row.modes.rowCount() == 0
    assert "Ctrl+Enter" in window.modes.invitation.text()


def test_the_key_that_finds_modes_has_one_name_and_two_places(window):
    assert "| Find modes | Ctrl+Enter |" in keyboard_text()
    keys = [key.toString() for key in window.menus.actions["on_find"].shortcuts()]
    assert keys == ["Ctrl+Enter", "Ctrl+Return"]  # the menu shows the first


def test_a_chosen_mode_moves_on_the_sheet_and_frozen_it_stands_still(pump):
    pump.on_next_mode()
    assert pump.play_bar.name.text().startswith("mode 2")
    assert not pump.sheet._timer.isActive()
    frozen = pump.sheet.grab().toImage()
    pump.on_move(True)
    assert pump.sheet._timer.isActive()
    pump.swing.put(2.0)
    assert pump.sheet.grab().toImage() != frozen
    pump.on_move(False)
    assert not pump.sheet._timer.isActive()
    assert pump.sheet.grab().toImage() == frozen


def test_modes_are_stepped_through_round_the_end(pump):
    pump.on_previous_mode()
    assert pump.modes.row.chosen().number == 3
    pump.on_next_mode()
    assert pump.modes.row.chosen().number == 1


def test_a_faulty_file_is_told_with_all_faults_and_the_open_model_is_kept(pump, qtbot, tmp_path):
    before = pump.document.model
    bad = tmp_path / "bad.keepclear"
    text = PUMP.read_text(encoding="utf-8")
    bad.write_text(text.replace('"620 kg"', '"-620 kg"').replace('"2950 rpm"', '"fast"'), encoding="utf-8")
    pump.filing.open(bad)
    qtbot.waitUntil(lambda: not pump.filing.reading.busy)
    (dialog,) = pump.findChildren(TextDialog)
    told = dialog.text.toPlainText()
    assert "motor" in told
    assert "fast" in told
    assert pump.document.model is before
    dialog.activateWindow()
    QTest.keyClick(dialog, Qt.Key.Key_Return)
    assert not dialog.isVisible()


def test_a_missing_file_is_told_and_an_empty_window_stays_empty(window, qtbot, tmp_path):
    window.filing.open(tmp_path / "none.keepclear")
    qtbot.waitUntil(lambda: not window.filing.reading.busy)
    click(window, "Close")
    assert window.document.model is None
    assert window.pages.currentWidget() is window.welcome


def test_closing_with_changes_asks_and_cancel_keeps_the_window(pump):
    pump.document.type_value(BASE_SUPPORT, "340 kN/mm")
    pump.close()
    assert pump.isVisible()
    click(pump, "Cancel")
    assert pump.isVisible()


def test_closing_with_changes_can_discard_them(pump, qtbot):
    pump.document.type_value(BASE_SUPPORT, "340 kN/mm")
    pump.close()
    click(pump, "Discard")
    qtbot.waitUntil(lambda: not pump.isVisible())


def test_opening_another_file_with_changes_saves_first_when_asked(window, qtbot, tmp_path):
    own = tmp_path / "own.keepclear"
    own.write_bytes(PUMP.read_bytes())
    window.document.open(own)
    window.document.type_value(BASE_SUPPORT, "340 kN/mm")
    window.filing.open(FAN, example=True)
    click(window, "Save")
    settle(qtbot, window)  # written, then read
    assert read_model(own).links[2].stiffness.text == "340 kN/mm"
    assert window.document.model == read_model(FAN)


def test_a_file_changed_on_disk_is_not_overwritten_unasked(window, qtbot, tmp_path):
    own = tmp_path / "own.keepclear"
    own.write_bytes(PUMP.read_bytes())
    window.document.open(own)
    window.document.type_value(BASE_SUPPORT, "340 kN/mm")
    other = FAN.read_bytes()
    own.write_bytes(other)
    save(qtbot, window)
    click(window, "Cancel")
    assert own.read_bytes() == other
    assert window.document.modified
    save(qtbot, window)
    click(window, "Overwrite")
    qtbot.waitUntil(lambda: not window.filing.saving.busy)
    assert read_model(own) == window.document.model
    assert not window.document.modified
    settle(qtbot, window)


def test_a_save_that_fails_says_why_and_stays_modified(window, qtbot, tmp_path):
    own = tmp_path / "own.keepclear"
    own.write_bytes(PUMP.read_bytes())
    window.document.open(own)
    window.document.type_value(BASE_SUPPORT, "340 kN/mm")
    window.filing._write(tmp_path / "no folder" / "x.keepclear", None)
    qtbot.waitUntil(lambda: not window.filing.saving.busy)
    click(window, "Close")
    assert window.document.modified
    settle(qtbot, window)


def test_a_dropped_file_is_opened(window, qtbot):
    data = QMimeData()
    data.setUrls([QUrl.fromLocalFile(str(FAN))])
    window.dropEvent(
        QDropEvent(
            QPointF(10, 10),
            Qt.DropAction.CopyAction,
            data,
            Qt.MouseButton.LeftButton,
            Qt.KeyboardModifier.NoModifier,
        )
    )
    settle(qtbot, window)
    assert window.document.path == FAN


def test_a_part_chosen_on_the_sheet_is_found_in_the_values_and_hides_nothing(pump, qtbot):
    pen = Pen(pump, qtbot)
    pen.click(pen.part("pump"))
    assert pump.below.current() == "modes"
    assert pump.parts.lines.rows[pump.parts.currentIndex().row()].part_id == "pump"


def test_every_place_is_painted_dark_and_at_large_text(pump):
    light = pump.grab().toImage()
    pump.on_setting(names.TEXT_SIZE, 200)
    pump.on_setting(names.THEME, "dark")
    dark = pump.grab().toImage()
    paper = pump.sheet.mapTo(pump, pump.sheet.rect().bottomLeft()) + QPoint(3, -3)
    assert light.pixelColor(paper).lightness() > 200
    assert dark.pixelColor(paper).lightness() < 60


@pytest.mark.parametrize(
    "example", bundled_examples(), ids=lambda one: f"{one.path.parent.name}-{one.variant}"
)
def test_every_example_has_a_sentence_of_its_story(example):
    assert Path(example.path).is_file()
    assert 20 < len(example.sentence) < 160


def test_the_keyboard_goes_to_every_place(pump):
    pump.activateWindow()
    for go, place in (
        (pump.on_go_to_sheet, pump.sheet),
        (pump.on_go_to_modes, pump.modes.row),
        (pump.on_go_to_values, pump.parts),
    ):
        go()
        assert pump.focusWidget() is place


def test_every_control_that_takes_the_keyboard_says_what_it_is(pump):
    silent = [
        widget.objectName() or type(widget).__name__
        for widget in pump.findChildren(QWidget)
        if widget.isVisible()
        and widget.focusPolicy() != Qt.FocusPolicy.NoFocus
        and isinstance(widget, QLineEdit | QAbstractButton | QAbstractSlider | QAbstractItemView)
        and not isinstance(widget, QScrollBar | QHeaderView)
        and not (widget.accessibleName() or getattr(widget, "text", str)())
    ]
    assert silent == []


def test_frequencies_after_an_edit_are_foretold_on_cards_and_scale_until_found(pump, qtbot):
    pump.on_automatic(False)
    pump.document.type_value(BASE_SUPPORT, "340 kN/mm")
    qtbot.waitUntil(lambda: bool(pump.analysis.foretold))
    row = pump.modes.row
    first = row.modes.index(0)
    assert first.data(row.modes.CurrentRole) is False
    assert first.data(row.modes.ForetoldRole) == pytest.approx(68.06, abs=0.01)
    assert "foretold 68.06 Hz" in first.data(Qt.ItemDataRole.ToolTipRole)
    assert "foretold 68.06 Hz" in first.data(Qt.ItemDataRole.AccessibleTextRole)
    assert pump.proof.text().startswith("Out of date")
    pump.scale.canvas._build()
    words = [item.text for item in pump.scale.canvas._scale.drawing.items if isinstance(item, Text)]
    assert "foretold" in words
    pump.on_find()
    qtbot.waitUntil(lambda: pump.analysis.solution_current, timeout=5000)
    assert row.modes.index(0).data(row.modes.ForetoldRole) is None
    pump.scale.canvas._build()
    words = [item.text for item in pump.scale.canvas._scale.drawing.items if isinstance(item, Text)]
    assert "foretold" not in words


def test_the_card_of_a_foretold_mode_differs_from_one_merely_out_of_date(pump, qtbot):
    pump.on_automatic(False)
    pump.document.type_value(BASE_SUPPORT, "340 kN/mm")
    qtbot.waitUntil(lambda: bool(pump.analysis.foretold))
    foretold = pump.modes.row.grab().toImage()
    pump.modes.row.modes.mark_old({})
    assert pump.modes.row.grab().toImage() != foretold
