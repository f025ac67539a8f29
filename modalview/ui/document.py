"""The open model, its file and its undo stack: every change of the model goes through here."""

import time
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QUndoStack

from modalview.errors import FileChangedError, InputError
from modalview.model.addresses import Address
from modalview.model.edits import Edit, set_typed
from modalview.model.parts import Model
from modalview.store import FileStamp, open_model, save_model
from modalview.ui.commands import EditCommand, Together
from modalview.ui.front import window_first


@dataclass(frozen=True, slots=True, eq=False)
class Save:
    """One saving: the model as it was when it was asked for, which no edit can change.

    Parameters
    ----------
    model : Model
    path : Path
    known : FileStamp or None
        What the file must still hold; None writes over whatever is there.
    clean : bool
        Whether there was nothing to save.
    """

    model: Model
    path: Path
    known: FileStamp | None
    clean: bool

    def write(self) -> FileStamp:
        """Write the file, in any thread; raises what ``store.save_model`` raises."""
        return save_model(self.model, self.path, known=self.known)


class Document(QObject):
    """One model in the window.

    ``model`` is None while nothing is open. The clean mark of the stack alone says "modified"; it is set when
    a save begins, so that the stack itself keeps track of what was saved while edits go on, and nothing is
    called saved before the file is written.
    """

    opened = Signal()  # another model is in the window
    model_changed = Signal()  # the same model was edited
    clean_changed = Signal(bool)
    saved = Signal()

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.model: Model | None = None
        self.path: Path | None = None
        self.example = False  # bundled examples are opened, never written
        self.recovered = False  # left by a crash, and not yet saved: its file holds something else
        self.stamp: FileStamp | None = None  # the file when it was last opened or saved
        self.saved_at: float | None = None
        self.stack = QUndoStack(self)
        self.stack.cleanChanged.connect(self._on_clean)
        self._save: Save | None = None  # under way

    @property
    def modified(self) -> bool:
        """Whether there is something to save, or being saved."""
        return self._save is not None or not self.stack.isClean()

    @property
    def saving(self) -> bool:
        """Whether a save has begun that has not ended."""
        return self._save is not None

    def _on_clean(self, clean: bool) -> None:  # noqa: FBT001  (a slot)
        self.clean_changed.emit(clean and self._save is None)

    @property
    def name(self) -> str:
        """Return the file's name, or what stands in its place."""
        return self.path.name if self.path else "not saved yet"

    def open(self, path: Path, *, example: bool = False) -> None:
        """Open a file and wait for it; one that cannot be used raises its error and the open model stays."""
        self.show_read(*open_model(path), path, example=example)

    def show_read(self, model: Model, stamp: FileStamp, path: Path, *, example: bool = False) -> None:
        """Show a model that was read from a file."""
        self._begin(model, path, stamp, example=example)

    def start(self, model: Model) -> None:
        """Begin a model that has no file yet."""
        self._begin(model, None, None)

    def recover(self, model: Model, path: Path | None, stamp: FileStamp | None, *, example: bool) -> None:
        """Open what a crash left: modified, and never saved over its file unasked."""
        self._begin(model, path, stamp, example=example, recovered=True)

    def _begin(
        self,
        model: Model,
        path: Path | None,
        stamp: FileStamp | None,
        *,
        example: bool = False,
        recovered: bool = False,
    ) -> None:
        self.model = model
        self.path, self.example, self.stamp, self.recovered = path, example, stamp, recovered
        self.saved_at = self._save = None
        self.stack.clear()
        if recovered:
            self.stack.resetClean()
        self.opened.emit()

    def begin_save(self, path: Path, *, overwrite: bool = False) -> Save:
        """Return what is to be written under a path, and then to be told to ``end_save``.

        FileChangedError when the file holds something else for certain, unless ``overwrite``.
        """
        guarded = path == self.path and not overwrite
        if guarded and self.recovered and path.exists():
            raise FileChangedError(f"{path} holds what was last saved, not what was recovered")
        self._save = Save(self.model, path, self.stamp if guarded else None, self.stack.isClean())
        self.stack.blockSignals(True)
        self.stack.setClean()
        self.stack.blockSignals(False)
        return self._save

    def end_save(self, save: Save, written: FileStamp | None) -> None:
        """Take in how a save ended: with the stamp of the file, or with None where it failed.

        Edits made meanwhile stay modified. After one that failed the model counts as modified, unless there
        was nothing to save. What was begun for another model that was open then changes nothing.
        """
        if save is not self._save:
            return
        self._save = None
        if written is None:
            if not save.clean:
                self.stack.resetClean()
            self.clean_changed.emit(self.stack.isClean())
            return
        self.stamp = written
        self.path, self.example, self.recovered = save.path, False, False
        self.saved_at = time.monotonic()
        self.clean_changed.emit(self.stack.isClean())
        self.saved.emit()

    def lose_file(self) -> None:
        """Its file is gone: the window alone holds the model, so that it counts as not saved."""
        self.stack.resetClean()

    def type_value(self, address: Address, text: str) -> None:
        """Type a text at an address; InputError with the reason when it is refused, changing nothing."""
        if self.model is None:
            return
        edit = set_typed(self.model, address, text)
        if edit.old != edit.new:
            self.push(edit)

    def type_values(self, typed: Sequence[tuple[Address, str]], text: str) -> dict[Address, InputError]:
        """Type several texts as one edit; return the reasons of those that are refused and change nothing.

        What is refused is tried once more after the others: some values are only right together.
        """
        if self.model is None:
            return {}
        edits: list[Edit] = []
        refused: dict[Address, InputError] = {}
        model, left = self.model, list(typed)
        while left:
            again = []
            for address, one in left:
                try:
                    edit = set_typed(model, address, one)
                except InputError as error:
                    refused[address] = error
                    again.append((address, one))
                    continue
                refused.pop(address, None)
                if edit.old != edit.new:
                    edits.append(edit)
                    model = edit.apply(model)
            if len(again) == len(left):
                break
            left = again
        if edits:
            self.push(Together(tuple(edits), text))
        return refused

    def push(self, edit: Edit) -> None:
        """Make an edit that can be undone."""
        self.stack.push(EditCommand(edit, self))

    def replace_model(self, model: Model) -> None:
        """Put an edited model in place; for the undo commands alone."""
        self.model = model
        window_first()
        self.model_changed.emit()
