from conftest import PUMP
from PySide6.QtGui import QImage

from modalview.ui import shot


def test_a_picture_of_the_window_is_made_by_a_command(qapp, tmp_path):
    del qapp
    out = tmp_path / "window.png"
    assert shot.main([str(PUMP), "-o", str(out), "--size", "1000x700", "--mode", "2"]) == 0
    image = QImage(str(out))
    assert (image.width(), image.height()) == (1000, 700)


def test_a_picture_of_a_missing_file_is_refused_with_its_reason(qapp, tmp_path, capsys):
    del qapp
    missing = tmp_path / "none.keepclear"
    assert shot.main([str(missing), "-o", str(tmp_path / "window.png")]) == 2
    assert "no such file" in capsys.readouterr().err


def test_a_size_that_is_none_is_refused(tmp_path, capsys):
    assert shot.main(["-o", str(tmp_path / "window.png"), "--size", "large"]) == 2
    assert "1280x800" in capsys.readouterr().err
