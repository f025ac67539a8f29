"""Starts the window."""

import os
import signal
import sys
from collections.abc import Sequence
from pathlib import Path

from PySide6.QtCore import QMessageLogContext, QTimer, QtMsgType, qInstallMessageHandler
from PySide6.QtWidgets import QApplication

from modalview.ui.failure import show_unexpected
from modalview.ui.settings import Settings, kept_settings
from modalview.ui.window import Window
from modalview.ui.worker import Worker

# A call into Qt gives the interpreter lock away, and to get it back waits for so long while another thread
# computes. With Python's own 5 ms every painting of 50 calls took a quarter of a second during a study.
SWITCH_S = 0.0003

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
    """Return a window with its own thread, which starts after the first paint."""
    window = Window(settings, Worker())
    QTimer.singleShot(0, window, window.start_worker)
    return window


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
    sys.excepthook = show_unexpected
    window = new_window(kept_settings())
    program.styleHints().colorSchemeChanged.connect(window.apply_theme)
    close_on_interrupt(window)
    window.show()
    if file is not None:
        QTimer.singleShot(0, window, lambda: window.filing.open(file))
    return program.exec()


def close_on_interrupt(window: Window) -> None:
    """Let Ctrl+C in the terminal close the window as its own button does, asking about unsaved changes.

    The handler runs in the middle of whatever runs, painting too, so it only orders the closing. While Qt
    waits no Python runs at all: the timer lets it look for a signal four times a second.
    """
    signal.signal(signal.SIGINT, lambda *_: QTimer.singleShot(0, window, window.close))
    heartbeat = QTimer(window)
    heartbeat.timeout.connect(lambda: None)
    heartbeat.start(HEARTBEAT_MS)
