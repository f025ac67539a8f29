"""The open model, its file and its undo stack: every change of the model goes through here."""

import time
from collections.abc import Sequence
from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QUndoStack

from modalview.errors import FileChangedError, InputError
from modalview.model.addresses import Address
from modalview.model.edits import Edit, set_typed
from modalview.model.parts import Model
from modalview.store import FileStamp, open_model, save_model
from modalview.ui.commands import EditCommand, Together


class Document(QObject):
    """One model in the window.

    ``model`` is None while nothing is open. ``clean_changed`` of the stack alone says "modified".
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
        self.stack.cleanChanged.connect(self.clean_changed)

    @property
    def modified(self) -> bool:
        """Whether there is something to save."""
        return not self.stack.isClean()

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
        self.saved_at = None
        self.stack.clear()
        if recovered:
            self.stack.resetClean()
        self.opened.emit()

    def save(self, path: Path, *, overwrite: bool = False) -> None:
        """Save under a path; FileChangedError when its file holds something else, unless ``overwrite``."""
        if self.model is None:
            return
        guarded = path == self.path and not overwrite
        known = self.stamp if guarded else None
        if guarded and self.recovered and path.exists():
            raise FileChangedError(f"{path} holds what was last saved, not what was recovered")
        self.stamp = save_model(self.model, path, known=known)
        self.path, self.example, self.recovered = path, False, False
        self.saved_at = time.monotonic()
        self.stack.setClean()
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
        self.model_changed.emit()
