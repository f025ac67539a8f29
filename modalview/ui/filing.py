"""Opening and saving as a conversation: what is asked, and what happens then."""

from collections.abc import Callable
from functools import partial
from pathlib import Path
from typing import Any

from PySide6.QtCore import QObject, Qt
from PySide6.QtWidgets import QFileDialog, QWidget

from modalview.errors import FaultsError, FileChangedError, InputError
from modalview.model.parts import Model
from modalview.store import FileStamp, open_model
from modalview.ui import settings as names
from modalview.ui.dialogs import TextDialog, ask
from modalview.ui.document import Document, Save
from modalview.ui.errand import Errand
from modalview.ui.examples import SUFFIX
from modalview.ui.settings import Settings

Then = Callable[[], None]
_FILTER = f"Keepclear models (*{SUFFIX});;All files (*)"
_RECENT_KEPT = 8
# More faults than this make a question unreadable.
_FAULTS_TOLD = 6


class Filing(QObject):
    """Guards the model against loss and the file against being overwritten."""

    def __init__(self, document: Document, settings: Settings, window: QWidget) -> None:
        super().__init__(window)
        self._document, self._settings, self._window = document, settings, window
        self.reading = Errand(self)
        self.saving = Errand(self)
        self._after_saving: list[Then] = []
        # Brings the window to the front that has a file open already; there may be several windows.
        self.shown_elsewhere: Callable[[Path], bool] = lambda _path: False
        # Puts the model aside as a recovery; False where nothing can be kept.
        self.put_aside: Callable[[], bool] | None = None

    @property
    def busy(self) -> bool:
        """Whether a file is being read or written."""
        return self.reading.busy or self.saving.busy

    def close(self) -> None:
        """Give up what is being read, and wait for what is being written."""
        self.reading.close()
        self.saving.close()

    def guard(self, then: Then) -> None:
        """Do something that would lose unsaved changes, after asking what to do with them.

        A save under way is waited for; where it fails, its message is all that comes.
        """
        if self.saving.busy:
            self._after_saving.append(partial(self.guard, then))
            return
        if not self._document.modified:
            then()
            return
        ask(
            self._window,
            f"Save the changes of {self._document.name}?",
            "Changes that are not saved are lost.",
            (("Save", lambda: self.save(then)), ("Discard", then), ("Cancel", None)),
        )

    # Opening

    def choose(self) -> None:
        """Ask for a file and open it."""
        self.guard(self._choose)

    def _choose(self) -> None:
        dialog = self._file_dialog("Open a model", QFileDialog.AcceptMode.AcceptOpen)
        dialog.setFileMode(QFileDialog.FileMode.ExistingFile)
        dialog.fileSelected.connect(lambda path: self._read_chosen(Path(path)))
        dialog.open()

    def _read_chosen(self, path: Path) -> None:
        if not self.shown_elsewhere(path):
            self.read(path)

    def open(self, path: Path, *, example: bool = False) -> None:
        """Open a file, after asking about unsaved changes; one that is open already comes to the front."""
        if not example and self.shown_elsewhere(path):
            return
        self.guard(lambda: self.read(path, example=example))

    def read(self, path: Path, *, example: bool = False) -> None:
        """Open a file in a thread; one that is still being read is given up."""
        before = self._document.model

        def then(result: Any, error: Exception | None) -> None:
            if error is not None:
                self._tell_unread(path, error)
            elif self._document.model is before:
                self._show_read(result, path, example=example)
            else:  # edited meanwhile
                self.guard(lambda: self._show_read(result, path, example=example))

        self.reading.run(f"Opening {path.name}…", lambda stopped: open_model(path, stopped=stopped), then)

    def _show_read(self, result: tuple[Model, FileStamp], path: Path, *, example: bool) -> None:
        self._document.show_read(*result, path, example=example)
        if not example:
            self._remember(path)

    def _tell_unread(self, path: Path, error: Exception) -> None:
        """Say why a file cannot be used, all at once; the open model is kept."""
        kept = "" if self._document.model is None else " The open model is kept."
        if isinstance(error, FaultsError):
            number = len(error.faults)
            lead = f"{path.name} cannot be opened: {number} fault{'s' if number > 1 else ''}.{kept}"
            TextDialog("Faults of the file", lead, str(error), self._window).open()
        elif isinstance(error, InputError):
            self._tell(f"{path.name} cannot be opened.{kept}", error)
        else:
            raise error

    def _remember(self, path: Path) -> None:
        place = str(path.resolve())
        recent = [one for one in self._settings.get(names.RECENT) if one != place]
        self._settings.set(names.RECENT, [place, *recent][:_RECENT_KEPT])
        self._settings.set(names.FOLDER, str(path.resolve().parent))

    def recent(self) -> list[tuple[Path, str]]:
        """Return the files opened last, each with why it cannot be opened, or "".

        One that is gone is told this once and then forgotten; one on a disk that is not there is kept.
        """
        told = [(Path(one), _missing(Path(one))) for one in self._settings.get(names.RECENT)]
        kept = [str(path) for path, why in told if why != _GONE]
        if len(kept) < len(told):
            self._settings.set(names.RECENT, kept)
        return told

    # Saving

    def save(self, then: Then | None = None) -> None:
        """Save where the model came from; an example or a new model is asked for its place."""
        path = self._document.path
        if path is None or self._document.example:
            self.save_as(then)
        else:
            self._write(path, then)

    def save_as(self, then: Then | None = None) -> None:
        """Ask for a place and save there."""
        dialog = self._file_dialog("Save the model", QFileDialog.AcceptMode.AcceptSave)
        dialog.setDefaultSuffix(SUFFIX.removeprefix("."))
        title = (self._document.model.title or "") if self._document.model is not None else ""
        dialog.selectFile(self._document.path.name if self._document.path is not None else file_name(title))
        dialog.fileSelected.connect(lambda path: self._write(Path(path), then))
        dialog.open()

    def _write(self, path: Path, then: Then | None, *, overwrite: bool = False) -> None:
        """Write in a thread; a save that is asked for meanwhile follows when this one succeeded."""
        if self._document.model is None:
            return
        if self.saving.busy:
            self._after_saving.append(partial(self._write_again, path, then, overwrite=overwrite))
            return
        try:
            save = self._document.begin_save(path, overwrite=overwrite)
        except FileChangedError:
            self._ask_over(path, then)
            return
        self.saving.run(
            f"Saving {path.name}…",
            lambda _stopped: save.write(),
            lambda written, error: self._on_written(save, written, error, then),
        )

    def _write_again(self, path: Path, then: Then | None, *, overwrite: bool) -> None:
        """Write what was edited during a save; a second copy of the same would only displace the backup."""
        if self._document.modified or path != self._document.path:
            self._write(path, then, overwrite=overwrite)
        elif then is not None:
            then()

    def _on_written(
        self, save: Save, written: FileStamp | None, error: Exception | None, then: Then | None
    ) -> None:
        self._document.end_save(save, written)
        waiting, self._after_saving = self._after_saving, []
        if error is not None:
            self._tell_unsaved(error, save.path, then)
            return
        self._remember(save.path)
        for one in (then, *waiting):
            if one is not None:
                one()

    def _tell_unsaved(self, error: Exception, path: Path, then: Then | None) -> None:
        if isinstance(error, FileChangedError):
            self._ask_over(path, then)
        elif isinstance(error, FaultsError):
            self._tell_unfinished(error, then)
        elif isinstance(error, InputError):
            self._tell("The model was not saved.", error)
        else:
            raise error

    def _ask_over(self, path: Path, then: Then | None) -> None:
        recovered = self._document.recovered
        ask(
            self._window,
            f"{path.name} holds what was last saved, not what was recovered."
            if recovered
            else f"{path.name} was changed by another program since it was opened.",
            "Overwriting keeps the other version as one backup beside it.",
            (
                ("Save as…", lambda: self.save_as(then)),
                ("Overwrite", lambda: self._write(path, then, overwrite=True)),
                ("Cancel", None),
            ),
        )

    def _tell_unfinished(self, error: FaultsError, then: Then | None) -> None:
        """Tell that a half-drawn model is no file yet; who wanted to leave it can put it aside."""
        lines = [str(fault) for fault in error.faults[:_FAULTS_TOLD]]
        more = len(error.faults) - len(lines)
        text = "\n".join([*lines, f"and {more} more" if more > 0 else ""]).strip()
        if then is None or self.put_aside is None:
            kept = "\n\nUntil it can be saved a recovery copy is kept." if self.put_aside else ""
            ask(self._window, "The model was not saved: it breaks rules.", text + kept, (("Close", None),))
            return

        def keep() -> None:
            if self.put_aside():
                then()
            else:
                self._tell("The model could not be put aside.", InputError("Save it, or leave it open."))

        ask(
            self._window,
            "The model was not saved: it breaks rules.",
            f"{text}\n\nPut aside, it is offered at the next start and under File, Recovered models.",
            (("Put aside", keep), ("Go on with it", None)),
        )

    def _tell(self, text: str, error: InputError) -> None:
        ask(self._window, text, str(error), (("Close", None),))

    def _file_dialog(self, title: str, mode: QFileDialog.AcceptMode) -> QFileDialog:
        dialog = QFileDialog(self._window, title, self._settings.get(names.FOLDER), _FILTER)
        dialog.setAcceptMode(mode)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        return dialog


def file_name(title: str) -> str:
    """Return a name for the file of a model with a title, without what some system bars from names.

    >>> file_name("Pump P-3: as built / 2"), file_name("")
    ('Pump P-3- as built - 2.keepclear', '')
    """
    kept = "".join("-" if one in _BARRED or not one.isprintable() else one for one in title)
    kept = kept.strip(" .")[:_LONGEST]
    return f"{kept}{SUFFIX}" if kept else ""


# Barred from file names by one system or another; and how long a proposed name may be.
_BARRED, _LONGEST = '\\/:*?"<>|', 80
_GONE = "moved, renamed or deleted"


def _missing(path: Path) -> str:
    """Return why a file is not there, or nothing."""
    if path.exists():
        return ""
    return _GONE if path.parent.exists() else "its folder cannot be reached"
