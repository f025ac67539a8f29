"""The one undo command: it wraps any edit of the model."""

from dataclasses import dataclass
from typing import TYPE_CHECKING

from PySide6.QtGui import QUndoCommand

from modalview.model.differences import Rewrite, joined
from modalview.model.edits import Edit
from modalview.model.parts import Model

if TYPE_CHECKING:
    from modalview.ui.document import Document


@dataclass(frozen=True, slots=True)
class Together:
    """Several edits as one: done and undone in one step, with one study after it."""

    edits: tuple[Edit, ...]
    text: str

    def apply(self, model: Model) -> Model:
        """Return the model with all changes."""
        for edit in self.edits:
            model = edit.apply(model)
        return model

    def revert(self, model: Model) -> Model:
        """Return the model without them."""
        for edit in reversed(self.edits):
            model = edit.revert(model)
        return model


class EditCommand(QUndoCommand):
    """Applies and reverts one edit; takes in one that goes on with it."""

    def __init__(self, edit: Edit, document: "Document") -> None:
        super().__init__(edit.text)
        self._edit = edit
        self._document = document

    def id(self) -> int:
        """Return the mark of commands that may be taken in; -1 for those that never are."""
        return -1 if getattr(self._edit, "merge", None) is None else 1

    def mergeWith(self, other: QUndoCommand) -> bool:  # noqa: N802  (Qt's name)
        """Take in the next command where it goes on with this one: nudges of the same parts."""
        if not isinstance(other, EditCommand) or self._document.model is None:
            return False
        first, second = self._edit, other._edit  # noqa: SLF001  (of its own class)
        if not isinstance(first, Rewrite) or not isinstance(second, Rewrite) or first.merge != second.merge:
            return False
        self._edit = joined(first, second, self._document.model)
        return True

    def redo(self) -> None:
        """Apply."""
        self._document.replace_model(self._edit.apply(self._document.model))

    def undo(self) -> None:
        """Revert."""
        self._document.replace_model(self._edit.revert(self._document.model))
