"""What is known of the model on the sheet: before the solve, after it, and whether that is still true."""

from typing import Any

from PySide6.QtCore import QObject, QTimer, Signal, Slot

from modalview.model.parts import Model
from modalview.ui.worker import Answer, Find, Step, Worker

BLINK_MS = 120


class Analysis(QObject):
    """Keeps the latest outlook and modes; a result of an older model is kept and told as out of date."""

    outlook_changed = Signal()
    doubts_changed = Signal()
    verdict_known = Signal()  # while modes that may follow in a blink are awaited
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
        self.doubts: tuple[Any, ...] = ()  # advice.Doubt; those of the model before, until they are told anew
        self.solution: Any = None  # study.Solution
        self.damped: Any = None  # study.damped.DampedSolution, where there are dashpots
        self.plane: Any = None  # drawing.complexplanecontent of this model or of the one before
        self.plane_why = ""
        # Of the model on the sheet, where modes of the one before the edit are shown: number to hertz.
        self.foretold: dict[int, float] = {}
        self.refusal: Exception | None = None
        self.looking = False
        self.finding = False
        self.progress: tuple[str, float] = ("", 0.0)
        # Modes found again in a blink replace the old ones in one step, without a pale moment between.
        self._patience = QTimer(self, interval=BLINK_MS, singleShot=True)
        self._patience.timeout.connect(self.solution_changed)
        worker.answered.connect(self._on_answered)

    @property
    def model(self) -> Model | None:
        """The model that is studied: the one on the sheet."""
        return self._model

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
        self.foretold, self.doubts = {}, ()
        self._set_finding(False)
        self.outlook_changed.emit()
        self.solution_changed.emit()
        self.damped_changed.emit()

    def follow(self, model: Model) -> None:
        """Study an edited model."""
        self.foretold = {}
        if self.solution is not None and self.solution.outlook.request.model == model:
            model = self.solution.outlook.request.model  # an edit was undone: its modes are there
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
        take = {
            Step.LOOKED: self._take_outlook,
            Step.DOUBTED: self._take_doubts,
            Step.FORETOLD: self._foretell,
            Step.FINDING: lambda _: self._set_finding(True),
            Step.PROGRESSED: self._take_progress,
            Step.SOLVED: self._take_solution,
            Step.DAMPED: self._take_damped,
            Step.STOPPED: lambda _: self._set_finding(False),
            Step.REFUSED: self._refuse,
            Step.FAILED: self._fail,
        }[answer.step]
        take(answer.content)

    def _take_outlook(self, outlook: Any) -> None:
        self.outlook, self.refusal, self.looking = outlook, None, False
        if self._patience.isActive():
            self.verdict_known.emit()
        else:
            self.outlook_changed.emit()

    def _take_doubts(self, doubts: tuple[Any, ...]) -> None:
        self.doubts = doubts
        self.doubts_changed.emit()

    def _take_progress(self, progress: tuple[str, float]) -> None:
        self.progress = progress
        self.busy_changed.emit()

    def _take_solution(self, solution: Any) -> None:
        self._patience.stop()
        self.solution, self.foretold = solution, {}
        self._set_finding(False)
        self.solution_changed.emit()

    def _take_damped(self, content: tuple[Any, Any, str]) -> None:
        damped, self.plane, self.plane_why = content
        if damped is not None or not self.outlook.dashpots:  # else those of before stay, out of date
            self.damped = damped
        self.damped_changed.emit()

    def _fail(self, error: Exception) -> None:
        self._set_finding(False)
        self.failed.emit(error)

    def _foretell(self, foretold: dict[int, float]) -> None:
        """Keep what the modes shown become by the edit; they stay marked as out of date."""
        if self.solution is None or self.solution_current:
            return
        self._patience.stop()
        self.foretold = foretold
        self.solution_changed.emit()

    def _refuse(self, error: Exception) -> None:
        self._patience.stop()
        if self.looking:  # not even the outlook is there
            self.outlook, self.looking = None, False
        self.refusal = error
        self._set_finding(False)
        self.outlook_changed.emit()
        if self.solution is not None:
            self.solution_changed.emit()  # modes of a model before do not wait any longer to be told as old
