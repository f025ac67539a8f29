"""Where in its swing every moving picture stands: one phase for the sheet and the small pictures."""

import cmath
import math
from collections.abc import Callable
from time import perf_counter

from PySide6.QtCore import QObject, Signal

# Real frequencies are too fast to follow; every mode swings once in this time at speed 1.
SWING_S = 1.6
FULL_TURN = 2 * math.pi
# A motion that dies away without swinging falls by this factor, e-folds, in one turn.
_FOLDS = 3.0


class Swing(QObject):
    """A phase in radians that runs, or stands where it was put; 0 is the largest motion.

    ``clock`` is replaced in tests.
    """

    moved = Signal()  # the phase was put elsewhere, or what it does has changed
    running_changed = Signal(bool)

    def __init__(self, parent: QObject | None = None, clock: Callable[[], float] = perf_counter) -> None:
        super().__init__(parent)
        self._clock = clock
        self._start = clock()
        self._kept = 0.0
        self._speed = 1.0
        self.running = False

    @property
    def phase(self) -> float:
        """Phase of this moment, 0 to 2 pi."""
        if not self.running:
            return self._kept
        return (self._kept + FULL_TURN * self._speed * (self._clock() - self._start) / SWING_S) % FULL_TURN

    def factor(self, amplitude: float = 1.0) -> complex:
        """Return what a mode is multiplied by; its real part is what is seen.

        >>> swing = Swing()
        >>> swing.factor(0.5)
        (0.5+0j)
        """
        return amplitude * cmath.exp(1j * self.phase)

    def fading(self, amplitude: float = 1.0) -> float:
        """Return the same for a motion that dies away without swinging, shown over and over."""
        return amplitude * math.exp(-_FOLDS * self.phase / FULL_TURN)

    def run(self, running: bool) -> None:  # noqa: FBT001  (a slot)
        """Run on, or stand still at the largest motion."""
        if running != self.running:
            self.put(0.0)
            self.running = running
            self.running_changed.emit(running)
            self.moved.emit()

    def put(self, phase: float) -> None:
        """Go to a phase."""
        self._kept, self._start = phase % FULL_TURN, self._clock()
        self.moved.emit()

    def set_speed(self, times: float) -> None:
        """Swing so many times as fast."""
        self._kept, self._start = self.phase, self._clock()
        self._speed = times
