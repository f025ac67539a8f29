"""A picture of the whole window, made without a screen: for the README and for looking at what was built."""

import tempfile
import time
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from PySide6.QtCore import QSettings, QTimer
from PySide6.QtWidgets import QApplication

from modalview.errors import InputError
from modalview.ui import settings as names
from modalview.ui.app import application, new_window
from modalview.ui.settings import Settings
from modalview.ui.window import Window
from modalview.ui.worker import SMALL_MODEL

_PATIENCE_S = 120.0
_SETTLE_S = 0.15


@dataclass(frozen=True, slots=True)
class Look:
    """How the window stands in the picture.

    Parameters
    ----------
    width, height : int
        Pixels.
    theme : str
        "light" or "dark".
    mode : int or None
        Number of the mode on the sheet, standing at its largest; None takes the first.
    automatic : bool
        Whether modes are found after opening.
    page : str
        What stands under the sheet: "modes", "damped", "plane" or "values".
    why : bool
        Whether the reasoning is unfolded.
    text_percent : int
        Size of text.
    view : str
        From where a space model is seen.
    """

    width: int = 1280
    height: int = 800
    theme: str = "light"
    mode: int | None = None
    automatic: bool = True
    page: str = "modes"
    why: bool = False
    text_percent: int = 100
    view: str = "turned"


def window_picture(file: Path | None, path: Path, look: Look) -> None:
    """Save a picture of the window with a model open, or empty without one.

    Raises
    ------
    InputError
        When the file cannot be used or the picture cannot be written.
    """
    program = application()
    with tempfile.TemporaryDirectory() as folder:
        window = new_window(settings_for(Path(folder), look))
        failures: list[Exception] = []
        window.analysis.failed.connect(failures.append)
        try:
            window.resize(look.width, look.height)
            window.show()
            if file is not None:
                window.document.open(file, example=True)
                wait_for(program, lambda: failures or settled(window))
                if failures:
                    raise failures[0]
                _arrange(window, look)
            wait_for(program, lambda: not window.charts.busy)
            if not window.grab().save(str(path)):
                raise InputError(f"{path} cannot be written as a picture; is the folder there?")
        finally:
            window.close()
            program.processEvents()


def settings_for(folder: Path, look: Look) -> Settings:
    """Return settings of their own for a picture, kept in a folder."""
    settings = Settings(QSettings(str(folder / "look.ini"), QSettings.Format.IniFormat))
    settings.set(names.THEME, look.theme)
    settings.set(names.AUTOMATIC, look.automatic)
    settings.set(names.TEXT_SIZE, look.text_percent)
    settings.set(names.MOVE, False)
    settings.set(names.VIEWPOINT, look.view)
    return settings


def settled(window: Window) -> bool:
    """Tell whether all that is known of the model is shown."""
    analysis = window.analysis
    if analysis.refusal is not None or analysis.looking:
        return analysis.refusal is not None
    # Between the outlook and the modes of a small model nothing is under way for a moment.
    wanted = analysis.automatic and analysis.outlook.coordinates <= SMALL_MODEL
    solved = analysis.solution_current or not (wanted or analysis.finding)
    return solved and window.sheet.settled and (analysis.plane is not None or bool(analysis.plane_why))


def _arrange(window: Window, look: Look) -> None:
    if look.mode is not None:
        window.modes.row.choose(look.mode - 1)
    if look.page != "modes":
        window.below.show_page(look.page)
    if look.why:
        window.on_why()


def wait_for(program: QApplication, ready: Callable[[], bool]) -> None:
    """Run the program until it is ready, and a little longer for layouts to settle."""
    end = time.monotonic() + _PATIENCE_S
    last: list[float] = []

    def on_time() -> None:
        if not last and (ready() or time.monotonic() > end):
            last.append(time.monotonic())
        if last and time.monotonic() > last[0] + _SETTLE_S:
            program.exit()  # unlike quit, leaves the window open

    timer = QTimer(interval=10)
    timer.timeout.connect(on_time)
    timer.start()
    program.exec()
    timer.stop()
