"""A picture that cannot be written whole leaves the one that was there."""

import errno

from modalview.cli import main
from modalview.places import demo_models
from modalview.store import saving

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"


class _FullDisk:
    """A file on a disk that takes 100 bytes."""

    def __init__(self, path):
        self._file = path.open("xb")

    def __enter__(self):
        return self

    def __exit__(self, *_):
        self._file.close()

    def write(self, data):
        self._file.write(data[:100])
        raise OSError(errno.ENOSPC, "No space left on device")


def test_a_full_disk_leaves_the_picture_that_was_there(tmp_path, monkeypatch, capsys):
    picture = tmp_path / "sheet.png"
    picture.write_bytes(b"the picture of yesterday")
    monkeypatch.setattr(saving, "_open_new", _FullDisk)
    assert main(["picture", str(PUMP), "-o", str(picture), "--size", "800x600"]) == 2
    assert "cannot be written: No space left on device" in capsys.readouterr().err
    assert picture.read_bytes() == b"the picture of yesterday"
    assert [path.name for path in tmp_path.iterdir()] == ["sheet.png"]
