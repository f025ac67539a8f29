"""An option that is tried: one undoable edit, with the modes before it pale on the scale until dismissed."""

from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QObject
from shiboken6 import isValid

if TYPE_CHECKING:
    from modalview.ui.window import Window


class Trying(QObject):
    """Remembers what was tried last; undone it is forgotten for the scale, done again it is shown again."""

    def __init__(self, window: "Window") -> None:
        super().__init__(window)
        self._window = window
        self._text = ""
        self._before: dict[int, float] = {}
        self._at = -1  # place in the undo stack before it
        window.charts.changes.tried.connect(self.try_option)
        window.charts.measured.tried.connect(self.try_option)
        window.document.opened.connect(self.dismiss)
        window.document.stack.indexChanged.connect(self._show)
        window.scale.before.dismissed.connect(self.dismiss)
        window.scale.before.undo_asked.connect(window.document.stack.undo)

    def try_option(self, edit: Any, text: str) -> None:
        """Make the edit of an option."""
        window = self._window
        analysis, stack = window.analysis, window.document.stack
        modes = analysis.solution.modes if analysis.solution_current else ()
        self._before = {one.number: one.frequency_hz for one in modes if one.kind == "elastic"}
        self._text, self._at = text, stack.index()
        window.document.push(edit)
        window.tell(f"{text}. Undo takes it back.")

    def dismiss(self) -> None:
        """Show the modes before no more."""
        self._at = -1
        self._before = {}
        self._show()

    def _show(self) -> None:
        stack, scale = self._window.document.stack, self._window.scale
        if not isValid(stack):  # it tells of its own end, too
            return
        index = stack.index()
        if 0 <= self._at < index:
            scale.canvas.show_before(self._before)
            scale.before.tell(self._text, latest=index == self._at + 1)
        else:
            scale.canvas.show_before(None)
            scale.before.hide()
