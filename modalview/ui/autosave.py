"""Keeps what a window holds beyond its file, so that a crash loses half a minute at most.

The first edit that is not kept yet starts a clock; when it has run, the model is written by a thread of its
own into a recovery file, never into the person's. Saving, or closing in order, takes the recovery file away.
"""

import os
import time
from collections.abc import Callable
from functools import partial
from pathlib import Path

from PySide6.QtCore import QObject, QStandardPaths, QTimer, Signal

from modalview.store.recovery import Draft, Session
from modalview.ui.document import Document
from modalview.ui.errand import few_collections
from modalview.ui.later import Later

AUTOSAVE_MS = 30_000
# Names another folder than the one of the system, for trials.
FOLDER_VARIABLE = "KEEPCLEAR_DATA"


def recovery_folder() -> Path:
    """Return the folder of this person's recovery files."""
    told = os.environ.get(FOLDER_VARIABLE)
    place = QStandardPaths.writableLocation(QStandardPaths.StandardLocation.AppDataLocation)
    return Path(told or place) / "recovery"


class Autosave(QObject):
    """Follows one document into one recovery file.

    Parameters
    ----------
    document : Document
    session : Session
    key : int
        Of the window, in this session.
    interval_ms : int
        How long an edit may go unkept.
    """

    kept = Signal()  # a recovery file was written
    failed = Signal(str)  # it could not be, and why; told once until one can be

    def __init__(
        self, document: Document, session: Session, key: int, *, interval_ms: int = AUTOSAVE_MS
    ) -> None:
        super().__init__(document)
        self._document, self._session, self._key = document, session, key
        self._edited = time.time()
        self._told = self._closed = False
        self._timer = QTimer(self, singleShot=True, interval=interval_ms)
        self._timer.timeout.connect(self.keep)
        self._later = Later(self)
        self._later.done.connect(self._on_done)
        document.model_changed.connect(self._on_edited)
        document.clean_changed.connect(self._on_clean)
        document.opened.connect(self._on_opened)
        document.saved.connect(self._on_saved)

    def _on_edited(self) -> None:
        self._edited = time.time()
        self._start()

    def _on_clean(self, clean: bool) -> None:  # noqa: FBT001  (a slot)
        if clean:
            self._drop()
        else:
            self._start()

    def _on_opened(self) -> None:
        if self._document.modified:  # recovered; who opened it keeps it at once
            self._start()
        else:
            self._drop()

    def _on_saved(self) -> None:
        """Keep edits made during a save at once: what was kept before is older than the file now."""
        if self._document.modified:
            self.keep()

    def _start(self) -> None:
        if not self._timer.isActive() and not self._closed:
            self._timer.start()

    def keep(self) -> None:
        """Write what the window holds, if its file does not hold it."""
        draft = self._draft()
        if draft is not None:
            self._do("keep", partial(self._session.write, self._key, draft))

    def keep_now(self, *, edited: float | None = None) -> bool:
        """Write at once, without the thread; return whether it is on the disk.

        ``edited`` is the time of the last edit, where the model comes from an earlier run.
        """
        self._edited = self._edited if edited is None else edited
        draft = self._draft()
        self._later.close()  # nothing older may be written after it
        return draft is not None and not _tried(partial(self._session.write, self._key, draft))

    def put_aside(self) -> bool:
        """Keep what the window holds for later, whatever the window does next."""
        if not self.keep_now():
            return False
        return not _tried(partial(self._session.set_aside, self._key))

    def _draft(self) -> Draft | None:
        document = self._document
        if self._closed or document.model is None or not document.modified:
            return None
        return Draft(document.model, document.path, document.example, document.stamp, self._edited)

    def _drop(self) -> None:
        self._timer.stop()
        if not self._closed:
            self._do("drop", partial(self._session.drop, self._key))

    def _do(self, what: str, work: Callable[[], None]) -> None:
        # Under one key: what was asked for later takes the place of what has not begun.
        self._later.ask("file", lambda: (what, _tried(work)))

    def _on_done(self, _key: object, result: tuple[str, str]) -> None:
        what, why = result
        if why:
            self._start()  # tried again
            if not self._told:
                self.failed.emit(why)
            self._told = True
        elif what == "keep":
            self._told = False
            self.kept.emit()

    def close(self) -> None:
        """End with the window, in order: what it held was saved, given up or put aside."""
        self._timer.stop()
        self._closed = True
        self._later.close()
        _tried(partial(self._session.drop, self._key))


def _tried(work: Callable[[], None]) -> str:
    """Do it; return why it failed, or nothing."""
    try:
        with few_collections():  # the text of a large model is made of many small objects
            work()
    except OSError as fault:
        return fault.strerror or str(fault)
    return ""
