"""What one page wants to know of the model on the sheet: asked while in sight, answered from a thread."""

from collections.abc import Callable
from functools import partial
from typing import Any

from PySide6.QtCore import QObject, QTimer, Signal

from modalview.errors import KeepclearError
from modalview.model.parts import FREEDOMS, Model
from modalview.ui.analysis import BLINK_MS
from modalview.ui.apart import is_large
from modalview.ui.aside import answer_aside
from modalview.ui.errand import Errand
from modalview.ui.studies import SMALL_MODEL

# Verdict and modes of an edit are ordered first.
SOON_MS = 40

Question = Callable[[Model, tuple[Any, ...], Callable[[], bool]], Any]


class Inquiry(QObject):
    """Keeps the latest answer; one about an older model is kept and told as out of date."""

    changed = Signal()
    failed = Signal(object)

    def __init__(self, what: str, question: Question, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._what, self._question = what, question
        self._errand = Errand(self)
        self._model: Model | None = None
        self._details: tuple[Any, ...] = ()
        self._answered: tuple[Model, tuple[Any, ...]] | None = None
        self._asked: tuple[Model, tuple[Any, ...]] | None = None
        self._in_sight = self._wanted = False
        self.result: Any = None
        self.refusal = ""
        self._soon = QTimer(self, interval=SOON_MS, singleShot=True)
        self._soon.timeout.connect(self._ask)
        # An answer that comes in a blink replaces the old one without a pale moment between.
        self._patience = QTimer(self, interval=BLINK_MS, singleShot=True)
        self._patience.timeout.connect(self.changed)

    @property
    def model(self) -> Model | None:
        """The model that is asked about."""
        return self._model

    @property
    def current(self) -> bool:
        """Whether the answer is about the model on the sheet, and about what is asked of it now."""
        return self._same(self._answered)

    @property
    def pale(self) -> bool:
        """Whether the answer is to be shown as out of date."""
        return self.result is not None and not self.current and not self._patience.isActive()

    @property
    def busy(self) -> bool:
        """Whether an answer is being worked out, or will be in a moment."""
        return self._errand.busy or self._soon.isActive()

    @property
    def waits(self) -> bool:
        """Whether the model is so large that the answer waits to be asked for."""
        model = self._model
        if model is None or self._wanted or self.current or self.busy:
            return False
        return len(model.bodies) * len(FREEDOMS[model.motion]) > SMALL_MODEL

    def _same(self, one: tuple[Model, tuple[Any, ...]] | None) -> bool:
        return one is not None and one[0] is self._model and one[1] == self._details

    def follow(self, model: Model | None, details: tuple[Any, ...] = (), *, anew: bool = False) -> None:
        """Ask about a model, and about details of it; ``anew`` drops what was known of another one."""
        if anew:
            self._errand.call_off()
            self._answered = self._asked = self.result = None
            self.refusal = ""
        if model is not self._model:
            self._wanted = False
        self._model, self._details = model, details
        if not self.current:
            if self.result is not None:
                self._patience.start()
            self._plan()
        if anew or self.result is None:
            self.changed.emit()

    def show(self, *, in_sight: bool) -> None:
        """Begin to ask, or leave off, as the page comes into sight or goes."""
        self._in_sight = in_sight
        self._plan()

    def want(self) -> None:
        """Ask also about a large model: somebody wants it."""
        self._wanted = True
        self._ask()
        self.changed.emit()

    def close(self) -> None:
        """Call off and wait for the thread."""
        self._soon.stop()
        self._patience.stop()
        self._errand.close()

    def _plan(self) -> None:
        if self._in_sight and self._model is not None and not self.current and not self.waits:
            self._soon.start()

    def _ask(self) -> None:
        if self._model is None or (self._same(self._asked) and self._errand.busy) or self.current:
            return
        self._asked = self._model, self._details
        self._errand.run(
            self._what,
            partial(answered, self._question, self._model, self._details),
            partial(self._take, self._asked),
        )

    def _take(self, asked: tuple[Model, tuple[Any, ...]], result: Any, error: Exception | None) -> None:
        self._answered, self.result, self.refusal = asked, result, ""
        self._patience.stop()
        if isinstance(error, KeepclearError):
            self.refusal = str(error)
        elif error is not None:
            self.refusal = "An unexpected error came up; nothing is known."
            self.failed.emit(error)
        self.changed.emit()
        if not self.current:
            self._plan()


def answered(question: Question, model: Model, details: tuple[Any, ...], stopped: Callable[[], bool]) -> Any:
    """Answer in this thread, or for a large model in a process of its own."""
    if is_large(model):
        return answer_aside(question, (model, details), stopped)
    return question(model, details, stopped)
