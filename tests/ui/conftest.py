"""Windows without a screen, with fresh settings; Qt warnings and leftover threads fail."""

import os

os.environ["QT_QPA_PLATFORM"] = "offscreen"

from pathlib import Path

import pytest
from PySide6.QtCore import QEvent, QSettings, QtMsgType
from PySide6.QtWidgets import QApplication

from modalview.places import demo_models
from modalview.ui import settings as names
from modalview.ui.settings import Settings
from modalview.ui.studydoor import load_study
from modalview.ui.window import Window
from modalview.ui.worker import Worker

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"
FAN = demo_models() / "2-supply-fan" / "steel-legs.keepclear"
# What the offscreen platform says of itself, not of the program.
NOT_OURS = (
    "This plugin does not support propagateSizeHints()",
    "This plugin does not support raise()",
    "This plugin does not support grabbing the keyboard",
)


@pytest.fixture(scope="session", autouse=True)
def _study_loaded():
    """Import numpy and scipy once, outside of any test's time."""
    load_study()


@pytest.fixture(autouse=True)
def _quiet_and_tidy(qtlog):
    yield
    warned = [
        record.message
        for record in qtlog.records
        if record.type not in (QtMsgType.QtDebugMsg, QtMsgType.QtInfoMsg) and record.message not in NOT_OURS
    ]
    assert not warned
    application = QApplication.instance()
    if application is not None:
        assert [one for one in application.topLevelWidgets() if one.isVisible()] == []


@pytest.fixture
def settings(tmp_path: Path) -> Settings:
    kept = Settings(QSettings(str(tmp_path / "settings.ini"), QSettings.Format.IniFormat))
    kept.set(names.MOVE, False)
    kept.set(names.THEME, "light")
    return kept


@pytest.fixture
def make_window(qapp, settings):
    """Return a function that opens windows; they are closed and their threads have ended afterwards."""
    del qapp
    made = []

    def make(load=load_study) -> Window:
        worker = Worker(load=load)
        window = Window(settings, worker)
        made.append((window, worker))
        window.show()
        window.start_worker()
        return window

    yield make
    for window, worker in made:
        window.document.stack.setClean()
        window.close()
        window.deleteLater()
        assert worker._thread.isFinished()
    QApplication.processEvents()
    # Widgets left behind would be dressed anew with every window that follows.
    QApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)


@pytest.fixture
def window(make_window) -> Window:
    return make_window()


@pytest.fixture
def pump(window, qtbot) -> Window:
    """The window with demonstration model 1, its modes found."""
    window.document.open(PUMP, example=True)
    settle(qtbot, window)
    return window


def settle(qtbot, window: Window) -> None:
    """Let a file be read or written and the study of the model on the sheet come to its end."""
    qtbot.waitUntil(lambda: not window.filing.busy, timeout=5000)
    analysis = window.analysis
    qtbot.waitUntil(lambda: not analysis.looking and not analysis.finding, timeout=5000)
    if analysis.automatic and analysis.refusal is None:
        qtbot.waitUntil(lambda: analysis.solution_current, timeout=5000)


def save(qtbot, window: Window) -> None:
    """Save and wait until the file is written, or a question is asked."""
    window.on_save()
    qtbot.waitUntil(lambda: not window.filing.saving.busy, timeout=5000)
