"""A file changed, moved or deleted by somebody else is told, and nothing is lost over it."""

import difflib
from threading import Event

import pytest
from conftest import FAN, PUMP, save, settle
from PySide6.QtCore import QEvent
from PySide6.QtWidgets import QMessageBox

from modalview.errors import CancelledError
from modalview.store import read_model
from modalview.ui import ondisk
from modalview.ui.dialogs import TextDialog
from modalview.ui.ondisk import State

BASE_SUPPORT = ("links", "k3", "stiffness")


@pytest.fixture
def own(window, tmp_path, qtbot):
    path = tmp_path / "pump.keepclear"
    path.write_bytes(PUMP.read_bytes())
    window.watch._settle.setInterval(0)
    window.document.open(path)
    settle(qtbot, window)
    return window


def told(window, qtbot, state):
    qtbot.waitUntil(lambda: window.watch.state is state)
    assert window.disk_strip.isHidden() is (state is State.SAME)


def look(window, qtbot):
    window.watch.look()
    qtbot.waitUntil(lambda: not window.watch.looking.busy)


def change(window, to=FAN):
    window.document.path.write_bytes(to.read_bytes())


def test_a_change_is_told_and_can_be_reloaded(own, qtbot):
    change(own)
    told(own, qtbot, State.CHANGED)
    assert own.disk_strip.words.text() == "pump.keepclear was changed by another program."
    own.disk_strip.reload.click()
    qtbot.waitUntil(lambda: own.document.model == read_model(FAN))
    told(own, qtbot, State.SAME)
    settle(qtbot, own)


def test_reloading_over_unsaved_edits_asks_first(own, qtbot):
    own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    edited = own.document.model
    change(own)
    told(own, qtbot, State.CHANGED)
    assert "unsaved changes" in own.disk_strip.words.text()
    own.disk_strip.reload.click()
    (box,) = own.findChildren(QMessageBox)
    next(button for button in box.buttons() if button.text() == "Cancel").click()
    assert own.document.model is edited


def test_kept_apart_it_is_told_no_more_until_it_changes_again(own, qtbot):
    change(own)
    told(own, qtbot, State.CHANGED)
    own.disk_strip.mine.click()
    told(own, qtbot, State.SAME)
    look(own, qtbot)
    assert own.watch.state is State.SAME
    own.document.path.write_text("{}", encoding="utf-8")
    told(own, qtbot, State.CHANGED)


def test_folded_for_later_it_is_told_at_the_next_change(own, qtbot):
    change(own)
    told(own, qtbot, State.CHANGED)
    own.disk_strip.later.click()
    assert own.disk_strip.isHidden()
    own.document.path.write_text("{}", encoding="utf-8")
    qtbot.waitUntil(lambda: not own.disk_strip.isHidden())


def test_versions_can_be_compared(own, qtbot):
    text = PUMP.read_text(encoding="utf-8")
    own.document.path.write_text(text.replace('"620 kg"', '"640 kg"'), encoding="utf-8")
    told(own, qtbot, State.CHANGED)
    own.disk_strip.compare.click()
    qtbot.waitUntil(lambda: not own.disk_strip.comparing.busy)
    (dialog,) = own.findChildren(TextDialog)
    lines = dialog.text.toPlainText().splitlines()
    assert [line[0] + line.split('"')[3] for line in lines if "kg" in line] == ["-640 kg", "+620 kg"]
    dialog.close()


def test_comparing_can_be_given_up(own, qtbot, monkeypatch):
    let = Event()
    monkeypatch.setattr(ondisk, "_compared", lambda *_: str(let.wait(5)))
    change(own)
    told(own, qtbot, State.CHANGED)
    strip = own.disk_strip
    strip.compare.click()
    strip._patience.timeout.emit()
    assert strip.compare.text() == "Stop comparing"
    strip.compare.click()
    assert not strip.comparing.busy
    assert strip.compare.text() == "Compare…"
    let.set()
    strip.close_thread()
    qtbot.wait(0)
    assert own.findChildren(TextDialog) == []


def test_comparing_stops_between_two_searches():
    asked = []
    with pytest.raises(CancelledError):
        ondisk.differences("a\nb", "a\nc", stopped=lambda: not asked.append(1))
    assert asked == [1]


def test_what_differs_is_told_with_the_places_and_as_much_as_is_read(monkeypatch):
    mine = "\n".join(map(str, range(20)))
    theirs = mine.replace("5\n", "", 1).replace("12", "twelve").replace("19", "19\n20")
    usual = difflib.unified_diff(theirs.splitlines(), mine.splitlines(), lineterm="", n=1)
    assert ondisk.differences(theirs, mine).splitlines() == list(usual)[2:]
    monkeypatch.setattr(ondisk, "MOST_SHOWN", 3)
    assert ondisk.differences(theirs, mine).splitlines()[3:] == ["… and 9 more lines"]


def test_long_texts_are_not_compared(monkeypatch):
    monkeypatch.setattr(ondisk, "MOST_LINES", 2)
    assert "3 and 1 lines" in ondisk.differences("a\nb\nc", "a")
    assert "No line differs" in ondisk.differences("a\r\n", "a\n")


def test_a_file_that_is_gone_is_told_and_the_model_counts_as_unsaved(own, qtbot):
    path, text = own.document.path, own.document.path.read_bytes()
    path.unlink()
    told(own, qtbot, State.GONE)
    assert own.document.modified
    assert "no longer there" in own.disk_strip.words.text()
    own.disk_strip.again.click()
    told(own, qtbot, State.SAME)
    assert path.read_bytes() == text
    assert not own.document.modified


def test_a_file_moved_away_and_back_is_told_no_more(own, qtbot, tmp_path):
    path = own.document.path
    path.rename(tmp_path / "elsewhere.keepclear")
    told(own, qtbot, State.GONE)
    (tmp_path / "elsewhere.keepclear").rename(path)
    told(own, qtbot, State.SAME)


def test_a_file_replaced_by_its_like_is_no_change(own, qtbot, tmp_path):
    looked = []
    own.watch._settle.timeout.connect(lambda: looked.append(1))
    beside = tmp_path / "x.tmp"
    beside.write_bytes(PUMP.read_bytes())
    beside.replace(own.document.path)
    qtbot.waitUntil(lambda: bool(looked))
    look(own, qtbot)
    assert own.watch.state is State.SAME
    change(own)  # the watch follows the new file
    told(own, qtbot, State.CHANGED)


def test_own_saves_are_no_change(own, qtbot):
    looked = []
    own.watch._settle.timeout.connect(lambda: looked.append(1))
    own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    save(qtbot, own)
    qtbot.waitUntil(lambda: bool(looked))
    look(own, qtbot)
    assert own.watch.state is State.SAME


def test_where_the_system_tells_of_nothing_the_window_looks_when_it_comes_to_the_front(own, qtbot):
    own.watch._watcher.removePaths([*own.watch._watcher.files(), *own.watch._watcher.directories()])
    own.watch._watcher.blockSignals(True)
    own.activateWindow()
    qtbot.waitUntil(own.isActiveWindow)
    change(own)
    own.changeEvent(QEvent(QEvent.Type.ActivationChange))
    told(own, qtbot, State.CHANGED)


def test_examples_are_not_watched(pump):
    assert pump.watch._watcher.files() == []
