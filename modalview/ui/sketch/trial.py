"""An edit while it is being made: shown at every step, one step to undo when it is settled."""

from modalview.errors import InputError
from modalview.model.differences import checked_edit
from modalview.model.parts import Model
from modalview.ui.document import Document


class Trial:
    """Shows models that are not yet settled; the undo stack knows nothing of them."""

    def __init__(self, document: Document, base: Model | None = None) -> None:
        self._document = document
        self.base: Model = base if base is not None else document.model
        self._before: Model = document.model
        self._shown: Model = document.model

    @property
    def stands(self) -> bool:
        """Whether nobody else has changed the model meanwhile (undo, another place of the window)."""
        return self._document.model is self._shown

    def show(self, model: Model) -> None:
        """Show a model, until the next one, or until it is settled or given back.

        Nothing is shown any more once somebody else changed the model.
        """
        if self.stands and model is not self._shown:
            self._document.replace_model(model)
            self._shown = model

    def settle(self, text: str) -> str:
        """Make what is shown the one edit; return why not, or nothing."""
        if not self.stands:
            return "the model was changed meanwhile; nothing more was done"
        model = self._shown
        if model == self._before:
            self.give_back()
            return ""
        try:
            edit = checked_edit(self._before, model, text)
        except InputError as error:
            self.give_back()
            return str(error)
        self._document.model = self._before
        self._document.push(edit)
        self._shown = self._document.model
        return ""

    def give_back(self) -> None:
        """Show what was there before."""
        if self.stands:
            self.show(self._before)
