"""Guarded saving: whatever fails, the file on disk is as it was."""

import errno
import os
from pathlib import Path

import pytest

from modalview.errors import FileAccessError, FileChangedError, ModelFaultsError
from modalview.model.parts import Body, Model
from modalview.model.values import Value
from modalview.store import dump_model, open_model, read_model, save_model, saving, stamp
from modalview.units.quantities import MASS


def model(kilograms):
    return Model(title="Pump", bodies=(Body(id="pump", mass=Value.typed(f"{kilograms} kg", MASS)),))


OLD, NEW = model(1), model(2)


@pytest.fixture
def path(tmp_path):
    path = tmp_path / "pump.keepclear"
    save_model(OLD, path, known=None)
    return path


class FailingDevice:
    """A file on a device that takes so many bytes and no more."""

    def __init__(self, file, takes):
        self.file, self.takes = file, takes

    def __enter__(self):
        return self

    def __exit__(self, *_):
        self.file.close()

    def write(self, data):
        self.file.write(data[: self.takes])
        if self.takes < len(data):
            raise OSError(errno.ENOSPC, "No space left on device")
        self.takes -= len(data)

    def flush(self):
        self.file.flush()

    def fileno(self):
        return self.file.fileno()


def test_saving_writes_what_reading_reads(path):
    known = stamp(path)
    assert known == save_model(OLD, path, known=known) or known.same_content(stamp(path))
    assert read_model(path) == OLD
    assert path.read_bytes() == dump_model(OLD).encode()


def test_one_backup_is_kept(path, tmp_path):
    for kilograms in (2, 3):
        save_model(model(kilograms), path, known=stamp(path))
    assert read_model(path) == model(3)
    assert read_model(tmp_path / "pump.keepclear.bak") == model(2)
    assert sorted(one.name for one in tmp_path.iterdir()) == ["pump.keepclear", "pump.keepclear.bak"]


def test_a_first_save_leaves_no_backup(path, tmp_path):
    assert list(tmp_path.iterdir()) == [path]


SIZES = (0, 1, 20, 100, 150, 250, 400)


@pytest.mark.parametrize("takes", SIZES)
def test_a_device_that_fails_after_some_bytes_leaves_the_old_file(path, tmp_path, monkeypatch, takes):
    left = [takes]

    def failing(beside):
        device = FailingDevice(Path.open(beside, "xb"), left[0])
        left[0] -= len(dump_model(OLD))
        return device

    monkeypatch.setattr(saving, "_open_new", failing)
    whole = len(dump_model(OLD)) + len(dump_model(NEW))
    if takes >= whole:
        save_model(NEW, path, known=None)
    else:
        with pytest.raises(FileAccessError, match="No space left on device"):
            save_model(NEW, path, known=None)
    monkeypatch.undo()
    assert read_model(path) == (NEW if takes >= whole else OLD)
    assert not list(tmp_path.glob(".*"))


def test_the_sizes_tried_reach_past_backup_and_file():
    whole = len(dump_model(OLD)) + len(dump_model(NEW))
    assert any(len(dump_model(OLD)) < size < whole for size in SIZES)
    assert max(SIZES) > whole


def test_a_disk_that_cannot_flush_leaves_the_old_file(path, tmp_path, monkeypatch):
    def fail(_):
        raise OSError(errno.EIO, "Input/output error")

    monkeypatch.setattr(os, "fsync", fail)
    with pytest.raises(FileAccessError, match="Input/output error"):
        save_model(NEW, path, known=None)
    assert read_model(path) == OLD
    assert list(tmp_path.iterdir()) == [path]


def test_changes_of_others_are_not_overwritten(path):
    known = stamp(path)
    path.write_text(dump_model(model(9)), encoding="utf-8")
    with pytest.raises(FileChangedError, match="changed by another program"):
        save_model(NEW, path, known=known)
    assert read_model(path) == model(9)
    save_model(NEW, path, known=None)
    assert read_model(path) == NEW


def test_a_touched_date_is_no_change(path):
    _, known = open_model(path)
    os.utime(path, (1, 1))
    save_model(NEW, path, known=known)
    assert read_model(path) == NEW


def test_a_file_gone_since_it_was_opened_is_written_anew(path):
    known = stamp(path)
    path.unlink()
    save_model(NEW, path, known=known)
    assert read_model(path) == NEW


def test_opening_stamps_the_bytes_that_were_read(path):
    opened, known = open_model(path)
    assert opened == OLD
    assert known == stamp(path)


def test_a_model_that_could_not_be_opened_again_is_not_written(path):
    with pytest.raises(ModelFaultsError, match="mass"):
        save_model(Model(bodies=(Body(id="pump"),)), path, known=None)
    assert read_model(path) == OLD


def test_a_read_only_file_is_kept(path):
    path.chmod(0o444)
    with pytest.raises(FileAccessError, match="read-only"):
        save_model(NEW, path, known=None)
    path.chmod(0o644)
    assert read_model(path) == OLD


def test_a_missing_folder_and_a_folder_as_file_are_named(tmp_path):
    with pytest.raises(FileAccessError, match="no folder"):
        save_model(NEW, tmp_path / "no" / "x.keepclear", known=None)
    with pytest.raises(FileAccessError, match="it is a folder"):
        save_model(NEW, tmp_path, known=None)
    with pytest.raises(FileAccessError, match="was not saved"):
        save_model(NEW, "x\0.keepclear", known=None)


@pytest.mark.skipif(os.name == "nt", reason="Windows has no such permissions")
def test_permissions_are_kept(path):
    path.chmod(0o600)
    save_model(NEW, path, known=None)
    assert path.stat().st_mode & 0o777 == 0o600


@pytest.mark.skipif(os.name == "nt", reason="links need rights on Windows")
def test_a_link_is_followed_and_stays_a_link(path, tmp_path):
    link = tmp_path / "link.keepclear"
    link.symlink_to(path)
    save_model(NEW, link, known=None)
    assert link.is_symlink()
    assert read_model(path) == NEW


def test_stamping_a_missing_file_is_an_error(tmp_path):
    with pytest.raises(FileAccessError, match="no such file"):
        stamp(tmp_path / "x")
