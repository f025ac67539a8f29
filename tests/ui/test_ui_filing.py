"""Saving in a thread: what was asked for is what is written, and edits made meanwhile stay modified."""

from threading import Event

import pytest
from conftest import FAN, PUMP, save, settle
from PySide6.QtWidgets import QFileDialog, QLineEdit, QMessageBox

from modalview.errors import FileAccessError
from modalview.model.parts import Model
from modalview.store import read_model, save_model
from modalview.ui import document as documents

BASE_SUPPORT = ("links", "k3", "stiffness")


@pytest.fixture
def own(window, tmp_path, qtbot):
    """The window with an own copy of the pump, edited once."""
    path = tmp_path / "pump.keepclear"
    path.write_bytes(PUMP.read_bytes())
    window.document.open(path)
    window.document.type_value(BASE_SUPPORT, "340 kN/mm")
    settle(qtbot, window)
    return window


class Disk:
    """A disk that writes only when it is let, or refuses."""

    def __init__(self):
        self.let, self.refuses, self.writes = Event(), False, 0

    def save_model(self, model, path, *, known):
        assert self.let.wait(5)
        self.writes += 1
        if self.refuses:
            raise FileAccessError("the disk is full")
        return save_model(model, path, known=known)


@pytest.fixture
def disk(monkeypatch):
    made = Disk()
    monkeypatch.setattr(documents, "save_model", made.save_model)
    yield made
    made.let.set()


def release(disk, window, qtbot):
    disk.let.set()
    qtbot.waitUntil(lambda: not window.filing.saving.busy)


def stiffness(window):
    return read_model(window.document.path).links[2].stiffness.text


def questions(window):
    return [box.text() for box in window.findChildren(QMessageBox)]


def test_until_it_is_written_nothing_counts_as_saved(own, disk, qtbot):
    told = []
    own.document.clean_changed.connect(told.append)
    own.on_save()
    assert own.document.saving
    assert own.document.modified
    assert own.isWindowModified()
    own.document.stack.undo()
    own.document.stack.redo()  # the mark of the stack is here, the file is not yet written
    assert True not in told
    release(disk, own, qtbot)
    assert not own.document.modified
    assert not own.isWindowModified()


def test_edits_made_during_a_save_stay_modified(own, disk, qtbot):
    own.on_save()
    own.document.type_value(BASE_SUPPORT, "350 kN/mm")
    release(disk, own, qtbot)
    assert stiffness(own) == "340 kN/mm"
    assert own.document.modified
    own.document.stack.undo()
    assert not own.document.modified, "this is what was saved"
    own.document.stack.redo()
    save(qtbot, own)
    assert stiffness(own) == "350 kN/mm"
    assert not own.document.modified


def test_what_was_saved_and_then_edited_away_is_never_taken_for_the_model(own, disk, qtbot):
    own.on_save()
    own.document.stack.undo()
    own.document.type_value(BASE_SUPPORT, "350 kN/mm")  # as many edits as were saved, but another
    release(disk, own, qtbot)
    assert own.document.modified
    own.document.stack.undo()
    assert own.document.modified


def test_after_a_save_that_failed_the_model_is_modified(own, disk, qtbot):
    disk.refuses = True
    own.on_save()
    release(disk, own, qtbot)
    assert own.document.modified
    assert own.isWindowModified()
    assert questions(own) == ["The model was not saved."]
    own.document.stack.undo()
    assert own.document.modified


def test_a_model_as_on_disk_stays_so_when_saving_it_again_fails(window, disk, qtbot, tmp_path):
    path = tmp_path / "pump.keepclear"
    path.write_bytes(PUMP.read_bytes())
    window.document.open(path)
    disk.refuses = True
    window.on_save()
    release(disk, window, qtbot)
    assert not window.document.modified
    assert not window.isWindowModified()
    settle(qtbot, window)


def test_closing_waits_for_a_save_and_asks_nothing_after_it(own, disk, qtbot):
    own.on_save()
    own.close()
    assert own.isVisible()
    assert questions(own) == []
    release(disk, own, qtbot)
    qtbot.waitUntil(lambda: not own.isVisible())
    assert stiffness(own) == "340 kN/mm"


def test_closing_after_a_save_that_failed_keeps_the_window(own, disk, qtbot):
    disk.refuses = True
    own.on_save()
    own.close()
    release(disk, own, qtbot)
    assert own.isVisible()
    assert questions(own) == ["The model was not saved."]


def test_opening_another_file_waits_for_a_save(own, disk, qtbot):
    path = own.document.path
    own.on_save()
    own.document.type_value(BASE_SUPPORT, "350 kN/mm")
    own.filing.open(FAN, example=True)
    assert own.document.path == path
    release(disk, own, qtbot)
    assert questions(own) == ["Save the changes of pump.keepclear?"], "the edit made meanwhile"


def test_saving_again_meanwhile_writes_what_was_edited_meanwhile(own, disk, qtbot):
    own.on_save()
    own.on_save()
    own.document.type_value(BASE_SUPPORT, "350 kN/mm")
    release(disk, own, qtbot)
    assert disk.writes == 2
    assert stiffness(own) == "350 kN/mm"
    assert not own.document.modified


def test_saving_the_same_twice_keeps_the_backup_of_what_was_before(own, disk, qtbot):
    path, before = own.document.path, own.document.path.read_bytes()
    own.on_save()
    own.on_save()
    release(disk, own, qtbot)
    assert disk.writes == 1
    assert path.with_name("pump.keepclear.bak").read_bytes() == before


def test_a_save_under_way_is_no_change_by_another_program(own, disk, qtbot):
    told = []
    own.watch.state_changed.connect(told.append)
    own.watch._settle.setInterval(0)
    own.on_save()
    own.watch.look()
    own.document.path.write_bytes(own.document.path.read_bytes() + b"\n")
    own.watch.look()
    assert not own.watch.looking.busy
    own.document.path.write_bytes(own.document.path.read_bytes()[:-1])
    release(disk, own, qtbot)
    own.watch.look()
    qtbot.waitUntil(lambda: not own.watch.looking.busy)
    assert told == []


def test_the_name_of_a_new_file_is_proposed_from_the_title(window):
    window.document.start(Model(title="Pump P-3: as built"))
    window.filing.save_as()
    dialog = window.findChild(QFileDialog)
    assert dialog.findChild(QLineEdit, "fileNameEdit").text() == "Pump P-3- as built.keepclear"
    dialog.close()
