"""What a window holds beyond its file is kept, and let go of when the file has it."""

import errno

import pytest
from conftest import PUMP, save, settle

from modalview.model.edits import SetField
from modalview.model.rules import faults
from modalview.store import saving
from modalview.store.reading import parse_unchecked
from modalview.store.recovery import Session
from modalview.ui.autosave import AUTOSAVE_MS, FOLDER_VARIABLE, Autosave, recovery_folder

BASE_SUPPORT = ("links", "k3", "stiffness")


@pytest.fixture
def session(tmp_path):
    made = Session(tmp_path / "recovery")
    yield made
    made.close()


@pytest.fixture
def own(window, session, tmp_path, qtbot):
    """The window with a file of its own, whose edits are kept at once."""
    path = tmp_path / "pump.keepclear"
    path.write_bytes(PUMP.read_bytes())
    window.keep_with(Autosave(window.document, session, 1, interval_ms=0))
    window.document.open(path)
    settle(qtbot, window)
    return window


def kept(session):
    """Return the model of the recovery file of the window; None without one."""
    try:
        text = session.file(1).read_text(encoding="utf-8")
    except FileNotFoundError:  # the thread may take it away at any moment
        return None
    return parse_unchecked(text.split("\n", 1)[1])[0]


def test_an_edit_is_kept_half_a_minute_later_at_most():
    assert AUTOSAVE_MS == 30_000


def test_an_edit_is_kept_and_the_file_left_alone(own, session, qtbot):
    before = own.document.path.read_bytes()
    with qtbot.waitSignal(own.autosave.kept):
        own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    assert kept(session) == own.document.model
    assert own.document.path.read_bytes() == before


def test_nothing_is_kept_of_an_unmodified_model(own, session):
    own.autosave.keep()
    own.autosave._later.close()
    assert kept(session) is None
    assert not own.autosave._timer.isActive()


def test_the_clock_runs_from_the_first_edit_not_the_last(own):
    own.autosave._timer.setInterval(10_000_000)
    own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    left = own.autosave._timer.remainingTime()
    own.document.type_value(BASE_SUPPORT, "350 kN/mm")
    assert own.autosave._timer.remainingTime() <= left


def test_saving_lets_go(own, session, qtbot):
    with qtbot.waitSignal(own.autosave.kept):
        own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    save(qtbot, own)
    qtbot.waitUntil(lambda: kept(session) is None)


def test_undoing_to_what_was_saved_lets_go(own, session, qtbot):
    with qtbot.waitSignal(own.autosave.kept):
        own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    own.document.stack.undo()
    qtbot.waitUntil(lambda: kept(session) is None)
    with qtbot.waitSignal(own.autosave.kept):
        own.document.stack.redo()
    assert kept(session) == own.document.model


def test_closing_in_order_lets_go(own, session, qtbot):
    with qtbot.waitSignal(own.autosave.kept):
        own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    own.close_unasked()
    qtbot.waitUntil(lambda: not own.isVisible())
    assert kept(session) is None


def test_undo_goes_on_after_a_save(own, qtbot):
    saved = own.document.model
    own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    own.document.type_value(BASE_SUPPORT, "350 kN/mm")
    save(qtbot, own)
    edited = own.document.model
    assert not own.document.modified
    own.document.stack.undo()
    own.document.stack.undo()
    assert own.document.model == saved
    assert own.document.modified
    own.document.stack.redo()
    own.document.stack.redo()
    assert own.document.model == edited
    assert not own.document.modified


def test_a_half_drawn_model_is_kept_too(own, session, qtbot):
    model = own.document.model
    edit = SetField(("bodies", "pump", "mass"), model.bodies[1].mass, None, "Take the mass away")
    with qtbot.waitSignal(own.autosave.kept):
        own.document.push(edit)
    assert faults(own.document.model)
    assert kept(session) == own.document.model


def test_a_full_disk_is_told_once_and_tried_again(own, session, qtbot, monkeypatch):
    def fail(_):
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(saving, "_open_new", fail)
    told = []
    own.autosave.failed.connect(told.append)
    with qtbot.waitSignal(own.autosave.failed):
        own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    assert "No space left on device" in own.statusBar().currentMessage()
    qtbot.waitUntil(lambda: own.autosave._timer.isActive() or own.autosave._later.waits_for("file"))
    with qtbot.waitSignal(own.autosave.kept):
        monkeypatch.undo()
    assert told == ["No space left on device"]
    assert kept(session) == own.document.model


def test_the_folder_can_be_another_one(monkeypatch, tmp_path):
    monkeypatch.setenv(FOLDER_VARIABLE, str(tmp_path))
    assert recovery_folder() == tmp_path / "recovery"
    monkeypatch.delenv(FOLDER_VARIABLE)
    assert recovery_folder().name == "recovery"


def test_edits_made_during_a_save_are_kept_when_it_ends(own, session, qtbot):
    own.document.type_value(BASE_SUPPORT, "340 kN/mm")
    own.autosave._timer.setInterval(10_000_000)
    own.on_save()
    own.document.type_value(BASE_SUPPORT, "350 kN/mm")
    with qtbot.waitSignal(own.autosave.kept):
        qtbot.waitUntil(lambda: not own.filing.saving.busy)
    assert kept(session) == own.document.model
