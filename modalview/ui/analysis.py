"""What is known of the model on the sheet: before the solve, after it, and whether that is still true."""

from typing import Any

from PySide6.QtCore import QObject, QTimer, Signal, Slot

from modalview.model.parts import Model
from modalview.ui.worker import Answer, Find, Step, Worker

BLINK_MS = 120


class Analysis(QObject):
    """Keeps the latest outlook and modes; a result of an older model is kept and told as out of date."""

    outlook_changed = Signal()
    solution_changed = Signal()
    damped_changed = Signal()
    busy_changed = Signal()
    failed = Signal(object)

    def __init__(self, worker: Worker, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._worker = worker
        self._model: Model | None = None
        self.automatic = True
        self.outlook: Any = None  # study.Outlook
        self.solution: Any = None  # study.Solution
        self.damped: Any = None  # study.damped.DampedSolution, where there are dashpots
        self.plane: Any = None  # drawing.complexplanecontent of this model or of the one before
        self.plane_why = ""
        self.refusal: Exception | None = None
        self.looking = False
        self.finding = False
        self.progress: tuple[str, float] = ("", 0.0)
        # Modes found again in a blink replace the old ones in one step, without a pale moment between.
        self._patience = QTimer(self, interval=BLINK_MS, singleShot=True)
        self._patience.timeout.connect(self.solution_changed)
        worker.answered.connect(self._on_answered)

    @property
    def damped_current(self) -> bool:
        """Whether the damped modes are those of the model on the sheet."""
        return self.damped is not None and self.damped.outlook.request.model is self._model

    @property
    def solution_current(self) -> bool:
        """Whether the modes are those of the model on the sheet."""
        return self.solution is not None and self.solution.outlook.request.model is self._model

    def forget(self) -> None:
        """Drop what is known: another model was opened."""
        self._patience.stop()
        self._model = self.outlook = self.solution = self.refusal = None
        self.damped = self.plane = None
        self._set_finding(False)
        self.outlook_changed.emit()
        self.solution_changed.emit()
        self.damped_changed.emit()

    def follow(self, model: Model) -> None:
        """Study an edited model."""
        self._order(model, Find.IF_SMALL if self.automatic else Find.NEVER)
        if not self.automatic or self.solution is None:
            self.solution_changed.emit()  # the modes shown are out of date from here on
        else:
            self._patience.start()

    def find(self) -> None:
        """Find the modes of the model on the sheet, whatever its size."""
        if self._model is not None:
            self._set_finding(True)
            self._order(self._model, Find.ALWAYS)

    def cancel(self) -> None:
        """Stop looking for modes; what is known before stays."""
        self._worker.stop()

    def _order(self, model: Model, find: Find) -> None:
        self._model = model
        self.looking = True
        if find is not Find.ALWAYS:
            self._set_finding(False)
        self._worker.order(model, find)

    def _set_finding(self, finding: bool) -> None:  # noqa: FBT001  (one word, one place)
        self.finding = finding
        self.progress = ("", 0.0)
        self.busy_changed.emit()

    @Slot(object)
    def _on_answered(self, answer: Answer) -> None:
        match answer.step:
            case Step.LOOKED:
                self.outlook, self.refusal, self.looking = answer.content, None, False
                if not self._patience.isActive():
                    self.outlook_changed.emit()
            case Step.FINDING:
                self._set_finding(True)
            case Step.PROGRESSED:
                self.progress = answer.content
                self.busy_changed.emit()
            case Step.SOLVED:
                self._patience.stop()
                self.solution = answer.content
                self._set_finding(False)
                self.solution_changed.emit()
            case Step.DAMPED:
                self.damped, self.plane, self.plane_why = answer.content
                self.damped_changed.emit()
            case Step.STOPPED:
                self._set_finding(False)
            case Step.REFUSED:
                self._refuse(answer.content)
            case Step.FAILED:
                self._set_finding(False)
                self.failed.emit(answer.content)

    def _refuse(self, error: Exception) -> None:
        self._patience.stop()
        if self.looking:  # not even the outlook is there
            self.outlook, self.looking = None, False
        self.refusal = error
        self._set_finding(False)
        self.outlook_changed.emit()
