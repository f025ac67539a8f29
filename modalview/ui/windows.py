"""The open windows: which one holds which file, what is recovered into them, and quitting them all."""

import os
from itertools import count
from pathlib import Path
from typing import Any

from PySide6.QtCore import QObject, QTimer
from PySide6.QtWidgets import QWidget

from modalview.errors import FileAccessError, InputError
from modalview.store.recovery import Recovery, Session
from modalview.ui.autosave import AUTOSAVE_MS, Autosave
from modalview.ui.dialogs import TextDialog, ask
from modalview.ui.failure import show_unexpected
from modalview.ui.frame import Frame
from modalview.ui.recovery import RecoveryDialog
from modalview.ui.settings import Setting, Settings
from modalview.ui.window import Window
from modalview.ui.worker import Worker

# A second window stands a little lower than the first, so that both are seen.
_STEP_PX = 28


class Windows(QObject):
    """Makes windows, each with its own model and its own thread.

    Parameters
    ----------
    settings : Settings
        Shared by all.
    session : Session or None
        Where recovery files are kept; None keeps none.
    autosave_ms : int
        How long an edit may go unkept.
    """

    def __init__(
        self, settings: Settings, session: Session | None = None, *, autosave_ms: int = AUTOSAVE_MS
    ) -> None:
        super().__init__()
        self._settings, self._session, self._autosave_ms = settings, session, autosave_ms
        self._keys = count(1)
        self.all: list[Window] = []
        self._recovered: RecoveryDialog | None = None

    def add(self, beside: Window | None = None) -> Window:
        """Return a new window, not yet shown; its thread starts after its first paint."""
        window = Window(self._settings, Worker(), self)
        QTimer.singleShot(0, window, window.start_worker)
        if self._session is not None:
            autosave = Autosave(
                window.document, self._session, next(self._keys), interval_ms=self._autosave_ms
            )
            window.keep_with(autosave)
        window.filing.shown_elsewhere = self.bring_to_front
        window.closed.connect(lambda: self._on_closed(window))
        if beside is not None:
            window.resize(beside.size())
            window.move(beside.pos().x() + _STEP_PX, beside.pos().y() + _STEP_PX)
        self.all.append(window)
        return window

    def add_shown(self, beside: Window | None = None) -> Window:
        """Return a new window in sight."""
        window = self.add(beside)
        window.show()
        return window

    def _on_closed(self, window: Window) -> None:
        if window in self.all:
            self.all.remove(window)
            if self._recovered is not None and self._recovered.parent() is window:
                self._recovered.close()  # what it lists is kept for later
            QTimer.singleShot(0, window, window.deleteLater)

    def holding(self, path: Path) -> Window | None:
        """Return the window that has a file open; what was recovered of it is not the file."""
        for window in self.all:
            document = window.document
            known = None if document.recovered else document.path
            if known is not None and _same(known, path):
                return window
        return None

    def bring_to_front(self, path: Path) -> bool:
        """Show the window that has a file open; False where none has."""
        window = self.holding(path)
        if window is not None:
            to_front(window)
        return window is not None

    def open(self, path: Path, beside: Window) -> None:
        """Open a file in a window of its own, or in ``beside`` while that one is empty."""
        if not self.bring_to_front(path):
            self._empty_or_new(beside).filing.open(path)

    def _empty_or_new(self, beside: Window) -> Window:
        unused = beside in self.all and beside.document.model is None
        empty = unused and not beside.filing.reading.busy
        return beside if empty else self.add_shown(beside)

    def share(self, source: Frame, setting: Setting, value: Any) -> None:
        """Let a setting changed in one window hold in the others."""
        for window in self.all:
            if window is not source:
                Frame.on_setting(window, setting, value)

    def apply_theme(self) -> None:
        """Dress all windows anew: the desktop turned light or dark."""
        for window in self.all:
            window.apply_theme()

    # Recovery

    def keep_all(self, *_: Any) -> None:
        """Keep what every window holds, at once: the desktop's session ends."""
        for window in self.all:
            if window.autosave is not None:
                window.autosave.keep_now()

    def offer_recovered(self, beside: Window, *, asked: bool) -> None:
        """List what crashes left; when there is nothing, say so only where it was ``asked`` for."""
        if self._session is None:
            ask(beside, "No recovery copies are kept here.", "", (("Close", None),))
            return
        if self._recovered is not None:
            to_front(self._recovered)
            return
        dialog = RecoveryDialog(self._session, beside)
        if not dialog.cards:
            dialog.deleteLater()
            if asked:
                ask(beside, "There is nothing to recover.", "", (("Close", None),))
            return
        dialog.open_asked.connect(lambda one: self.recover(one, beside))
        dialog.file_asked.connect(lambda path: self.open(path, beside))
        dialog.destroyed.connect(lambda: setattr(self, "_recovered", None))
        self._recovered = dialog
        dialog.show()

    def recover(self, one: Recovery, beside: Window) -> Window | None:
        """Open a recovered model as modified; its recovery file goes only when it is kept anew."""
        try:
            model, faults = one.read()
        except InputError as error:
            ask(beside, f"{one.name} cannot be recovered.", str(error), (("Close", None),))
            return None
        window = self._empty_or_new(beside)
        window.document.recover(model, one.path, one.stamp, example=one.example)
        if window.autosave.keep_now(edited=one.edited):
            self._session.discard(one.file)
        if faults:
            lead = f"{one.name} was recovered but for what stands below."
            TextDialog("Recovered in part", lead, "\n".join(map(str, faults)), window).open()
        return window

    # Quitting

    def quit(self) -> None:
        """Ask each window about unsaved changes; close them all when all have been answered.

        Nothing is closed before the last answer: who cancels at the third window still has the changes of
        the first.
        """
        agreed: dict[Window, Any] = {}

        def ask_next() -> None:
            for window in self.all:
                document = window.document
                if document.modified and agreed.get(window) is not document.model:
                    to_front(window)
                    window.filing.guard(lambda window=window: agree(window))
                    return
            for window in list(self.all):
                window.close_unasked()

        def agree(window: Window) -> None:
            agreed[window] = window.document.model
            ask_next()

        ask_next()


def to_front(widget: QWidget) -> None:
    """Show a window above the others, with the keyboard."""
    if widget.isMinimized():
        widget.showNormal()
    widget.show()
    widget.raise_()
    widget.activateWindow()


def _same(one: Path, other: Path) -> bool:
    try:
        return one.samefile(other)
    except OSError:  # one of them is gone: names are all there is
        return os.path.realpath(one) == os.path.realpath(other)


def keep_what_is_open(windows: Windows) -> Any:
    """Return an exception hook that keeps every modified model before it tells of an error."""

    def on_error(*error: Any) -> None:
        windows.keep_all()
        show_unexpected(*error)

    return on_error


def new_session(folder: Path) -> tuple[Session | None, str]:
    """Return the session of this program, or None and why recovery files cannot be kept."""
    try:
        return Session(folder), ""
    except FileAccessError as error:
        return None, str(error)
