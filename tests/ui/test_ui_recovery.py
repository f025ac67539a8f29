"""What a crash left is offered beside the saved file, and neither replaces the other silently."""

import os
import time
from dataclasses import replace

import pytest
from conftest import PUMP, save, settle
from PySide6.QtWidgets import QLabel, QMessageBox, QPushButton

from modalview.model.parts import Body, Model
from modalview.store import open_model, read_model
from modalview.store.recovery import Draft, Recovery, Session
from modalview.ui.recovery import clock, recovery_text
from modalview.ui.windows import Windows

NOON = time.mktime((2026, 9, 14, 12, 0, 0, 0, 0, -1))


@pytest.fixture
def own(tmp_path):
    path = tmp_path / "pump.keepclear"
    path.write_bytes(PUMP.read_bytes())
    os.utime(path, (NOON, NOON))
    return path


@pytest.fixture
def edited(own):
    """What a window held: the pump under another title."""
    model, stamp = open_model(own)
    return Draft(replace(model, title="Pump P-3"), own, False, stamp, NOON + 180)


@pytest.fixture
def start(qapp, settings, tmp_path):
    """Return a function that starts the program after a crash and returns its windows."""
    made = []

    def start(*left):
        dead = Session(tmp_path / "recovery")
        for key, draft in enumerate(left, start=1):
            dead.write(key, draft)
        dead._lock.release()
        session = Session(tmp_path / "recovery")
        windows = Windows(settings, session)
        made.append((windows, session))
        windows.add_shown()
        windows.offer_recovered(windows.all[0], asked=False)
        return windows

    yield start
    for windows, session in made:
        for window in list(windows.all):
            window.document.stack.setClean()
            window.close_unasked()
        while windows.all:
            qapp.processEvents()
        session.close()


def press(dialog, label, card=0):
    buttons = dialog.cards[card].findChildren(QPushButton)
    next(one for one in buttons if one.text() == label).click()


def said(dialog, card=0):
    return [one.text() for one in dialog.cards[card].findChildren(QLabel)]


def recovery(draft):
    return Recovery(None, draft.model.title, draft.path, draft.example, draft.stamp, draft.edited, 1)


def test_it_is_offered_by_name_and_time_beside_the_saved_file(start, edited, own):
    windows = start(edited)
    dialog = windows._recovered
    assert said(dialog) == [
        "Pump P-3",
        "edited 2026-09-14 12:03, 3 minutes after it was last saved",
        str(own),
    ]
    assert [one.text() for one in dialog.cards[0].findChildren(QPushButton)] == [
        "Open the recovered one",
        "Open the file",
        "Keep for later",
        "Discard…",
    ]


def test_without_a_crash_nothing_is_offered(start):
    windows = start()
    assert windows._recovered is None
    windows.all[0].on_recovered()
    (box,) = windows.all[0].findChildren(QMessageBox)
    assert "nothing to recover" in box.text()
    box.close()


def test_opened_it_is_modified_and_kept_anew(start, edited, own, qtbot):
    before = own.read_bytes()
    windows = start(edited)
    dialog = windows._recovered
    press(dialog, "Open the recovered one")
    (window,) = windows.all
    assert window.document.model == edited.model
    assert (window.document.modified, window.document.path) == (True, own)
    assert window.isWindowModified()
    assert "recovered" in window.windowTitle()
    assert own.read_bytes() == before
    qtbot.waitUntil(lambda: windows._recovered is None)  # it was the last of the list
    window.autosave._later.close()
    (file,) = own.parent.glob("recovery/*.recovery")
    assert file.name.startswith(windows._session.name), "kept by this program now"
    assert f'"edited": {NOON + 180}' in file.read_text(encoding="utf-8")
    settle(qtbot, window)


def test_saving_it_asks_as_for_a_changed_file(start, edited, own, qtbot):
    windows = start(edited)
    press(windows._recovered, "Open the recovered one")
    (window,) = windows.all
    before = own.read_bytes()
    save(qtbot, window)
    (box,) = window.findChildren(QMessageBox)
    assert "not what was recovered" in box.text()
    assert own.read_bytes() == before
    next(one for one in box.buttons() if one.text() == "Overwrite").click()
    qtbot.waitUntil(lambda: not window.filing.saving.busy)
    assert read_model(own) == edited.model
    assert own.with_name("pump.keepclear.bak").read_bytes() == before
    assert not window.document.recovered
    window.document.type_value(("title",), "Pump P-4")
    save(qtbot, window)
    assert not window.document.modified, "the next save asks no more"
    settle(qtbot, window)


def test_the_file_can_be_opened_beside_it(start, edited, own, qtbot):
    windows = start(edited)
    dialog = windows._recovered
    press(dialog, "Open the file")
    qtbot.waitUntil(lambda: windows.all[0].document.path == own)
    assert len(dialog.cards) == 1
    press(dialog, "Open the recovered one")
    assert len(windows.all) == 2
    file, recovered = (one.document for one in windows.all)
    assert (file.modified, recovered.modified) == (False, True)
    assert file.model == read_model(PUMP)
    assert recovered.model == edited.model
    for window in windows.all:
        settle(qtbot, window)


def test_kept_for_later_it_stays_and_is_listed_again(start, edited, qtbot):
    windows = start(edited)
    press(windows._recovered, "Keep for later")
    qtbot.waitUntil(lambda: windows._recovered is None)
    windows.all[0].on_recovered()
    assert said(windows._recovered)[0] == "Pump P-3"


def test_discarding_asks_and_takes_it_away(start, edited, own, qtbot):
    windows = start(edited)
    dialog = windows._recovered
    for label in ("Keep it", "Discard"):
        press(dialog, "Discard…")
        (box,) = [one for one in dialog.findChildren(QMessageBox) if one.isVisible()]
        next(one for one in box.buttons() if one.text() == label).click()
        assert bool(list(own.parent.glob("recovery/*.recovery"))) is (label == "Keep it")
    qtbot.waitUntil(lambda: windows._recovered is None)


def test_closing_the_list_keeps_everything(start, edited, own, qtbot):
    windows = start(edited, edited)
    windows._recovered.later.click()
    qtbot.waitUntil(lambda: windows._recovered is None)
    assert len(list(own.parent.glob("recovery/*.recovery"))) == 2


def test_a_half_drawn_model_opens_and_is_told_what_it_lacks(start, edited, qtbot):
    half = replace(edited, model=Model(title="Half", bodies=(Body(id="pump"),)), path=None, stamp=None)
    windows = start(half)
    press(windows._recovered, "Open the recovered one")
    (window,) = windows.all
    assert window.document.model == half.model
    qtbot.waitUntil(lambda: window.analysis.refusal is not None)
    assert window.banner.word.text() == "Not finished"


def test_a_file_that_cannot_be_read_is_told_and_the_start_goes_on(start, edited, own, qtbot):
    (own.parent / "recovery").mkdir()
    (own.parent / "recovery" / "x.1.recovery").write_text("rubbish", encoding="utf-8")
    windows = start(edited)
    dialog = windows._recovered
    assert [said(dialog, card)[0] for card in (0, 1)] == ["Pump P-3", "A recovery file that cannot be read"]
    assert "damaged" in said(dialog, 1)[1]
    press(dialog, "Discard", card=1)
    assert len(dialog.cards) == 1
    press(dialog, "Keep for later")
    qtbot.waitUntil(lambda: windows._recovered is None)


def test_one_that_vanished_meanwhile_is_told(start, edited, own):
    windows = start(edited)
    for file in own.parent.glob("recovery/*.recovery"):
        file.unlink()
    press(windows._recovered, "Open the recovered one")
    (box,) = windows.all[0].findChildren(QMessageBox)
    assert "cannot be recovered" in box.text()
    assert windows.all[0].document.model is None
    box.close()


def test_an_error_of_the_program_keeps_what_is_open(start, edited, monkeypatch):
    from modalview.ui import windows as module

    windows = start(replace(edited, path=None))
    press(windows._recovered, "Open the recovered one")
    windows.all[0].autosave._timer.stop()
    windows.all[0].document.type_value(("title",), "Pump P-4")
    shown = []
    monkeypatch.setattr(module, "show_unexpected", lambda *error: shown.append(error))
    module.keep_what_is_open(windows)(ValueError, ValueError("x"), None)
    assert len(shown) == 1
    (file,) = windows._session.folder.glob(f"{windows._session.name}*.recovery")
    assert '"title": "Pump P-4"' in file.read_text(encoding="utf-8")


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({}, "edited 12:03, 3 minutes after it was last saved"),
        ({"edited": NOON - 7200}, "edited 10:00, 2 hours before the file was last saved"),
        ({"path": None, "stamp": None}, "edited 12:03, never saved as a file"),
        ({"example": True}, "edited 12:03, made from the example pump.keepclear and never saved"),
    ],
)
def test_in_words(edited, change, words):
    assert recovery_text(recovery(replace(edited, **change)), now=NOON + 600) == words


def test_in_words_of_a_file_that_changed_or_is_gone(edited, own):
    own.write_text("{}", encoding="utf-8")
    os.utime(own, (NOON + 240, NOON + 240))
    words = "edited 12:03; the file was changed since it was opened, at 12:04"
    assert recovery_text(recovery(edited), now=NOON + 600) == words
    own.unlink()
    assert recovery_text(recovery(edited), now=NOON + 600) == "edited 12:03; its file is no longer there"


def test_another_day_is_told():
    assert clock(NOON, NOON + 60) == "12:00"
    assert clock(NOON, NOON + 86_400) == "2026-09-14 12:00"
