"""What is done with one model after the other, the same in the thread and in the other process.

What it rests on is kept from one to the next: the outlook, so that an edit only refills it, and the modes, so
that those of an edited model can be foretold.
"""

from collections.abc import Callable
from enum import Enum
from typing import Any

from modalview.model.parts import Model
from modalview.ui.studydoor import Study

# Models of at most so many coordinates find their modes after each edit, unless switched off: below, all
# modes take a few hundredths of a second.
SMALL_MODEL = 300
# Regions of the roots need singular values of a dense matrix: to this size, less than a second.
PLANE_LIMIT = 400


class Find(Enum):
    """Whether the modes are wanted."""

    NEVER = "only what is known before"
    IF_SMALL = "where the model is small"
    ALWAYS = "the person asked"


class Step(Enum):
    """What an answer tells; in brackets its content."""

    LOOKED = "known before any solve (Known)"
    DOUBTED = "what an engineer would doubt about the model (tuple of Doubt)"
    FORETOLD = "the lowest frequencies after an edit (number to hertz, empty where not foretold)"
    FINDING = "the solve begins (nothing)"
    PROGRESSED = "the solve goes on (what is done, share done)"
    SOLVED = "modes found (Solution)"
    DAMPED = "damped modes and complex plane (DampedSolution or None, content or None, why not)"
    REFUSED = "the model cannot be studied (KeepclearError)"
    FAILED = "an error of the program (Exception)"
    STOPPED = "the person stopped it (nothing)"


Tell = Callable[[Step, Any], None]


class Studies:
    """Studies models one after the other and tells every step."""

    def __init__(self, study: Study) -> None:
        self._study = study
        self._outlook: Any = None
        self._solution: Any = None

    def work(self, model: Model, find: Find, stopped: Callable[[], bool], tell: Tell) -> None:
        """Study a model.

        Raises
        ------
        CancelledError
            ``stopped`` said so.
        KeepclearError
            The model cannot be studied, or its modes cannot be found.
        """
        study = self._study
        request = study.request(
            model,
            cancelled=stopped,
            progress=lambda what, share: tell(Step.PROGRESSED, (what, share)),
        )
        outlook = self._outlook = study.look(request, self._outlook)
        tell(Step.LOOKED, outlook)
        if not stopped():
            tell(Step.DOUBTED, outlook.doubts)
        found = damped = None
        if find is Find.ALWAYS or (find is Find.IF_SMALL and outlook.coordinates <= SMALL_MODEL):
            tell(Step.FINDING, None)
            found = self._solution = study.solve(request, outlook)
            tell(Step.SOLVED, found)
            damped = study.damped(request, found) if outlook.dashpots else None
        elif self._solution is not None:
            tell(Step.FORETOLD, study.foretell(self._solution, outlook))
        if not stopped():
            tell(Step.DAMPED, self._plane(outlook, found, damped))

    def _plane(self, outlook: Any, found: Any, damped: Any) -> tuple[Any, Any, str]:
        """Return damped modes, content of the complex plane, and why there is none."""
        number = outlook.coordinates
        if outlook.dashpots and number > PLANE_LIMIT:
            return (
                damped,
                None,
                f"The regions of the roots are drawn to {PLANE_LIMIT} coordinates; this has {number}.",
            )
        return damped, self._study.plane(outlook, found, damped), ""
