"""Starts the window."""

import os
import signal
import sys
from collections.abc import Sequence
from pathlib import Path

from PySide6.QtCore import QMessageLogContext, QTimer, QtMsgType, qInstallMessageHandler
from PySide6.QtWidgets import QApplication

from modalview.ui.autosave import recovery_folder
from modalview.ui.settings import Settings, kept_settings
from modalview.ui.window import Window
from modalview.ui.windows import Windows, keep_what_is_open, new_session

# A call into Qt gives the interpreter lock away, and to get it back waits for so long while another thread
# computes. With Python's own 5 ms every painting of 50 calls took a quarter of a second during a study.
SWITCH_S = 0.00005

HEARTBEAT_MS = 250


def application(arguments: Sequence[str] = ("keepclear",)) -> QApplication:
    """Return the one Qt application, made if there is none."""
    made = QApplication.instance() or QApplication(list(arguments))
    made.setApplicationName("Keepclear")
    made.setApplicationDisplayName("Keepclear")
    made.setStyle("Fusion")  # one look to be drawn for, on every system
    sys.setswitchinterval(SWITCH_S)
    return made


def new_window(settings: Settings) -> Window:
    """Return a window that keeps no recovery files, for pictures and trials."""
    return Windows(settings).add()


def run(file: Path | None, without_screen: str) -> int:
    """Show the window until it is closed; return the exit status.

    Where Qt finds no screen to draw on it ends the process: ``without_screen`` is said then, with status 2.
    """

    def on_message(kind: QtMsgType, context: QMessageLogContext, text: str) -> None:
        del context
        sys.stderr.write(f"{text}\n")
        if kind == QtMsgType.QtFatalMsg:
            sys.stderr.write(without_screen)
            sys.stderr.flush()
            os._exit(2)

    qInstallMessageHandler(on_message)
    program = application()
    qInstallMessageHandler(None)
    session, why_none = new_session(recovery_folder())
    windows = Windows(kept_settings(), session)
    sys.excepthook = keep_what_is_open(windows)
    program.styleHints().colorSchemeChanged.connect(windows.apply_theme)
    program.commitDataRequest.connect(windows.keep_all)
    close_on_interrupt(windows)
    window = windows.add_shown()
    if why_none:
        window.tell(f"No recovery copies are kept: {why_none}")
    if file is not None:
        QTimer.singleShot(0, window, lambda: window.filing.open(file))
    if session is not None:
        QTimer.singleShot(0, window, lambda: windows.offer_recovered(window, asked=False))
    status = program.exec()
    if session is not None:
        session.close()
    return status


def close_on_interrupt(windows: Windows) -> None:
    """Let Ctrl+C in the terminal quit as the menu does, asking about unsaved changes.

    The handler runs in the middle of whatever runs, painting too, so it only orders the closing. While Qt
    waits no Python runs at all: the timer lets it look for a signal four times a second.
    """
    signal.signal(signal.SIGINT, lambda *_: QTimer.singleShot(0, windows, windows.quit))
    heartbeat = QTimer(windows)
    heartbeat.timeout.connect(lambda: None)
    heartbeat.start(HEARTBEAT_MS)
