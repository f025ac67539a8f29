"""Ctrl+C in the terminal closes the window."""

import os
import signal
import subprocess
import sys
import time

import pytest

from modalview.places import demo_models

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"


@pytest.mark.slow
@pytest.mark.skipif(sys.platform == "win32", reason="Windows sends no such signal to one process")
def test_an_interrupt_closes_the_window_in_order(tmp_path):
    own = {"XDG_CONFIG_HOME": str(tmp_path), "KEEPCLEAR_DATA": str(tmp_path)}
    environment = {**os.environ, "QT_QPA_PLATFORM": "offscreen", **own}
    command = [sys.executable, "-m", "modalview", str(PUMP)]
    run = subprocess.Popen(command, env=environment, stderr=subprocess.PIPE, text=True)  # noqa: S603
    time.sleep(4.0)  # long enough to be drawing the modes
    run.send_signal(signal.SIGINT)
    _, said = run.communicate(timeout=20)
    assert (run.returncode, said) == (0, "")
    assert list((tmp_path / "recovery").iterdir()) == []
