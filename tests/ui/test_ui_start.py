import subprocess
import sys

import pytest

from modalview import __main__ as start
from modalview.cli import commands


def test_without_a_screen_the_window_command_names_the_commands_that_work(monkeypatch, capsys):
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    monkeypatch.setattr(sys, "platform", "linux")
    assert start.main(["pump.keepclear"]) == 2
    said = capsys.readouterr().err
    assert all(f"keepclear {command} " in said for command in start.COMMANDS)


def test_every_command_is_known_by_its_word_alone():
    assert set(start.COMMANDS) == set(commands.COMMANDS)


@pytest.mark.parametrize("variable", ["DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"])
def test_a_screen_is_known_by_the_environment(monkeypatch, variable):
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    monkeypatch.setattr(sys, "platform", "linux")
    assert not start.has_screen()
    monkeypatch.setenv(variable, "x")
    assert start.has_screen()


def test_the_window_is_built_before_numpy_is_imported(tmp_path):
    script = (
        "import sys, modalview.ui.app as app;"
        "from PySide6.QtCore import QSettings; from modalview.ui.settings import Settings;"
        "program = app.application();"
        "from modalview.ui.worker import Worker;"
        "window = app.Window(Settings(QSettings(sys.argv[1], QSettings.Format.IniFormat)), Worker());"
        "window.show(); program.processEvents();"
        "sys.exit('numpy' in sys.modules or 'scipy' in sys.modules)"
    )
    words = [sys.executable, "-c", script, str(tmp_path / "settings.ini")]
    run = subprocess.run(words, check=False, timeout=60)  # noqa: S603  (our own words)
    assert run.returncode == 0
