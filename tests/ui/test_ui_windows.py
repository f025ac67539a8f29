"""Several windows: each with its own model, the same file never twice, and quitting that loses nothing."""

import pytest
from conftest import FAN, PUMP, settle
from PySide6.QtCore import QMimeData, QPointF, Qt, QUrl
from PySide6.QtGui import QDropEvent
from PySide6.QtWidgets import QMessageBox

from modalview.model.parts import Body, Model, Motion
from modalview.store import read_model
from modalview.store.recovery import Session
from modalview.ui import settings as names
from modalview.ui.windows import Windows, new_session

BASE_SUPPORT = ("links", "k3", "stiffness")


@pytest.fixture
def windows(qapp, settings, tmp_path):
    session = Session(tmp_path / "recovery")
    made = Windows(settings, session)
    yield made
    for window in list(made.all):
        window.document.stack.setClean()
        window.close_unasked()
    while made.all:
        qapp.processEvents()
    session.close()
    assert list((tmp_path / "recovery").iterdir()) == []


@pytest.fixture
def first(windows):
    return windows.add_shown()


@pytest.fixture
def own(tmp_path):
    path = tmp_path / "pump.keepclear"
    path.write_bytes(PUMP.read_bytes())
    return path


def answer(window, label):
    (box,) = [one for one in window.findChildren(QMessageBox) if one.isVisible()]
    next(button for button in box.buttons() if button.text() == label).click()


def opened(qtbot, window, path):
    qtbot.waitUntil(lambda: window.document.path == path)
    settle(qtbot, window)


def test_two_windows_hold_two_models(windows, first, qtbot):
    first.filing.open(PUMP)
    first.on_new_window()
    second = windows.all[1]
    second.filing.open(FAN)
    opened(qtbot, first, PUMP)
    opened(qtbot, second, FAN)
    assert first.document.model == read_model(PUMP)
    assert second.analysis.solution.outlook.request.model == read_model(FAN)
    first.document.type_value(BASE_SUPPORT, "340 kN/mm")
    assert not second.document.modified
    settle(qtbot, first)


def test_a_file_that_is_open_comes_to_the_front(windows, first, own, qtbot):
    first.filing.open(own)
    opened(qtbot, first, own)
    second = windows.add_shown(first)
    link = own.with_name("link.keepclear")
    link.symlink_to(own)
    second.filing.open(link)
    assert second.document.model is None
    assert not second.filing.reading.busy
    qtbot.waitUntil(first.isActiveWindow)


def test_several_dropped_files_open_in_several_windows(windows, first, qtbot):
    data = QMimeData()
    data.setUrls([QUrl.fromLocalFile(str(one)) for one in (PUMP, FAN)])
    copy, left, none = Qt.DropAction.CopyAction, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier
    first.dropEvent(QDropEvent(QPointF(10, 10), copy, data, left, none))
    opened(qtbot, first, PUMP)
    opened(qtbot, windows.all[1], FAN)


def test_an_empty_window_takes_the_file_itself(windows, first, qtbot):
    windows.open(PUMP, first)
    windows.open(FAN, first)  # while the first is still being read
    opened(qtbot, first, PUMP)
    opened(qtbot, windows.all[1], FAN)
    assert len(windows.all) == 2


def test_a_new_model_has_no_file_and_is_unmodified_until_edited(first, qtbot):
    first.new_model(Model(motion=Motion.PLANE))
    assert first.document.path is None
    assert not first.document.modified
    assert first.windowTitle().startswith("untitled (not saved yet)")
    first.document.type_value(("title",), "Pump")
    assert first.document.modified
    assert first.windowTitle().startswith("Pump")
    qtbot.waitUntil(lambda: not first.analysis.looking)


def test_a_new_model_asks_about_unsaved_changes_first(first, qtbot):
    first.filing.open(PUMP)
    opened(qtbot, first, PUMP)
    first.document.type_value(BASE_SUPPORT, "340 kN/mm")
    first.new_model(Model())
    assert first.document.model.bodies
    answer(first, "Discard")
    assert first.document.model == Model()
    qtbot.waitUntil(lambda: not first.analysis.looking)


def test_quitting_asks_each_window_and_closes_none_before_the_last_answer(windows, first, qtbot):
    second = windows.add_shown()
    for window in (first, second):
        window.filing.open(PUMP, example=True)
    for window in (first, second):
        opened(qtbot, window, PUMP)
        window.document.type_value(BASE_SUPPORT, "340 kN/mm")
    first.on_quit()
    answer(first, "Discard")
    answer(second, "Cancel")
    assert [one.isVisible() for one in windows.all] == [True, True]
    assert first.document.modified
    first.on_quit()
    answer(first, "Discard")
    first.document.type_value(BASE_SUPPORT, "350 kN/mm")  # edited after it was given up
    answer(second, "Discard")
    answer(first, "Discard")
    qtbot.waitUntil(lambda: windows.all == [])


def test_quitting_without_changes_closes_all(windows, first, qtbot):
    windows.add_shown()
    first.on_quit()
    qtbot.waitUntil(lambda: windows.all == [])


def test_a_setting_holds_in_all_windows(windows, first):
    second = windows.add_shown()
    first.on_setting(names.THEME, "dark")
    assert second.sheet._theme.dark
    first.on_setting(names.AUTOMATIC, False)
    assert not second.analysis.automatic
    first.on_setting(names.THEME, "light")


def test_recent_files_that_are_gone_are_told_once_and_forgotten(first, own, settings, tmp_path, qtbot):
    settings.set(names.RECENT, [str(own), str(tmp_path / "gone.keepclear"), "/no disk/there.keepclear"])
    first._fill_recent()
    lines = [(one.text(), one.isEnabled()) for one in first.menus.submenus["recent"].actions()]
    assert lines == [
        (str(own), True),
        (f"{tmp_path / 'gone.keepclear'} (moved, renamed or deleted)", False),
        ("/no disk/there.keepclear (its folder cannot be reached)", False),
    ]
    first._fill_recent()
    assert [one.text() for one in first.menus.submenus["recent"].actions()] == [
        str(own),
        "/no disk/there.keepclear (its folder cannot be reached)",
    ]
    first.menus.submenus["recent"].actions()[0].trigger()
    opened(qtbot, first, own)


def test_a_half_drawn_model_can_be_put_aside_instead_of_being_lost(windows, first, tmp_path, qtbot):
    half_drawn = Model(bodies=(Body(id="pump"),))
    first.document.recover(half_drawn, tmp_path / "x.keepclear", None, example=False)
    first.close()
    answer(first, "Save")
    qtbot.waitUntil(lambda: not first.filing.saving.busy)
    (box,) = [one for one in first.findChildren(QMessageBox) if one.isVisible()]
    assert "mass" in box.informativeText()
    answer(first, "Put aside")
    qtbot.waitUntil(lambda: windows.all == [])
    (one,), _ = windows._session.recoveries()
    assert one.read()[0] == half_drawn
    windows._session.discard(one.file)


def test_where_no_recovery_files_can_be_kept_the_reason_is_told(tmp_path):
    (tmp_path / "file").write_text("")
    session, why = new_session(tmp_path / "file" / "recovery")
    assert session is None
    assert "no recovery files" in why
