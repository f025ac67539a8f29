"""The one undo command: it wraps any edit of the model."""

from typing import TYPE_CHECKING

from PySide6.QtGui import QUndoCommand

from modalview.model.edits import Edit

if TYPE_CHECKING:
    from modalview.ui.document import Document


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
