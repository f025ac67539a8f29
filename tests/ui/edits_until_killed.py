"""The window, edited and saved at random until it is killed; run by test_ui_crash.

Says "ready", then one line for each edit, its number and the time before it was made, and "kept" for each
recovery file.
"""

import os
import random
import sys
import time
from pathlib import Path

from PySide6.QtCore import QSettings, QTimer

from modalview.store.recovery import Session
from modalview.ui.app import application
from modalview.ui.settings import Settings
from modalview.ui.windows import Windows

EDIT_MS = 8
BASE_SUPPORT = ("links", "k3", "stiffness")


def main(file: str, folder: str, seed: str, interval_ms: str, save_share: str) -> None:
    chance = random.Random(int(seed))  # noqa: S311  (no secret)
    program = application()
    store = QSettings(str(Path(folder) / "settings.ini"), QSettings.Format.IniFormat)
    session = Session(Path(folder) / "recovery")
    windows = Windows(Settings(store), session, autosave_ms=int(interval_ms))
    window = windows.add_shown()
    window.document.open(Path(file))
    window.autosave.kept.connect(lambda: _say("kept"))
    made = 0

    def edit() -> None:
        nonlocal made
        made += 1
        before = time.monotonic()
        window.document.type_value(BASE_SUPPORT, f"{chance.randint(100, 400)} kN/mm")
        window.document.type_value(("title",), f"edit {made}")
        _say(f"{made} {before}")
        if chance.random() < float(save_share):
            window.on_save()

    timer = QTimer(interval=EDIT_MS)
    timer.timeout.connect(edit)

    def begin() -> None:
        window.analysis.damped_changed.disconnect(begin)
        _say("ready")
        timer.start()

    # Only now everything is imported: a window that is still starting holds nothing to be lost.
    window.analysis.damped_changed.connect(begin)
    program.exec()


def _say(words: str) -> None:
    try:
        os.write(1, f"{words}\n".encode())
    except BrokenPipeError:  # nobody is there to kill it
        os._exit(1)


if __name__ == "__main__":
    main(*sys.argv[1:])
