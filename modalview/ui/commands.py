"""The one undo command: it wraps any edit of the model."""

from dataclasses import dataclass
from typing import TYPE_CHECKING

from PySide6.QtGui import QUndoCommand

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
    """Applies and reverts one edit."""

    def __init__(self, edit: Edit, document: "Document") -> None:
        super().__init__(edit.text)
        self._edit = edit
        self._document = document

    def redo(self) -> None:
        """Apply."""
        self._document.replace_model(self._edit.apply(self._document.model))

    def undo(self) -> None:
        """Revert."""
        self._document.replace_model(self._edit.revert(self._document.model))
