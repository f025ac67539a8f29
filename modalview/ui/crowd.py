"""Crowded sheets are painted in a thread: the last picture stays in sight until the next is there.

Hundreds of bodies are hundreds of calls into Qt, each of which gives the interpreter lock away and waits to
get it back: while another thread computed, one frame stopped the window for a tenth of a second.
"""

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial
from time import perf_counter
from typing import Any

from PySide6.QtCore import QObject, QSize, Signal
from PySide6.QtGui import QImage

from modalview.ui.canvas import image_of
from modalview.ui.front import give_way
from modalview.ui.later import Later
from modalview.ui.theme import Theme

# More bodies than this make a sheet crowded.
AT_ONCE = 40


@dataclass(frozen=True, slots=True)
class Moment:
    """All that decides how a sheet looks; two that are equal look the same.

    Parameters
    ----------
    geometry : drawing.geometry.SheetGeometry
    posed : drawing.motion.Pose or None
        None at rest.
    factor : complex
        What the mode is multiplied by.
    frozen : bool
        Standing still, with arrows.
    title : drawing.furniture.TitleLines or None
    size : QSize
    ratio : float
        Pixels of the screen to one of the window.
    theme : Theme
    """

    geometry: Any
    posed: Any
    factor: complex
    frozen: bool
    title: Any
    size: QSize
    ratio: float
    theme: Theme

    @property
    def still(self) -> tuple[Any, ...]:
        """What decides the part of the picture that does not move."""
        moves = self.posed is not None
        return self.geometry, moves, self.title, self.size, self.ratio, self.theme


class CrowdPainter(QObject):
    """Paints moments one after the other; those that pass while it paints are left out."""

    painted = Signal(float)  # milliseconds that it took

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._later = Later(self)
        self._later.done.connect(self._on_done)
        self._shown: Moment | None = None
        self._asked: Moment | None = None
        self._still: tuple[Any, QImage] | None = None
        self._image: QImage | None = None

    @property
    def busy(self) -> bool:
        """Whether a picture is being painted."""
        return self._asked is not None

    def picture(self, moment: Moment) -> QImage | None:
        """Return the last picture, None before the first; this one follows where it shows another moment."""
        if moment != self._shown and self._asked is None:
            self._asked = moment
            kept = self._still[1] if self._still is not None and self._still[0] == moment.still else None
            self._later.ask("picture", partial(paused, partial(_painted, moment, kept)))
        return self._image

    def forget(self) -> None:
        """Drop the last picture: it is of another sheet."""
        self._later.forget()
        self._shown = self._asked = self._still = self._image = None

    def close(self) -> None:
        """Wait for the thread."""
        self._later.close()
        self._asked = None

    def _on_done(self, _key: object, result: tuple[QImage, QImage, float]) -> None:
        still, self._image, took_ms = result
        self._shown, self._asked = self._asked, None
        self._still = self._shown.still, still
        self.painted.emit(took_ms)


def paused(work: Callable[[], Any]) -> Any:
    """Do what draws in a thread, with pauses while the window has something to show."""
    from modalview.drawing.pauses import pausing  # noqa: PLC0415  (numpy comes after the first paint)

    with pausing(give_way):
        return work()


def _painted(moment: Moment, still: QImage | None) -> tuple[QImage, QImage, float]:
    """Return the picture of what does not move, that of the moment, and the milliseconds it took."""
    from modalview.drawing import motion, sheet  # noqa: PLC0415  (numpy comes after the first paint)

    start = perf_counter()
    to = {"size": moment.size, "ratio": moment.ratio, "theme": moment.theme}
    if still is None:
        if moment.posed is None:
            drawing = sheet.sheet_drawing(moment.geometry, moment.title)
        else:
            drawing = motion.still_drawing(moment.geometry, moment.title)
        still = image_of(drawing, **to)
    image = still
    if moment.posed is not None:
        show = motion.frozen if moment.frozen else motion.frame
        image = image_of(show(moment.geometry, moment.posed, moment.factor), **to, under=still)
    return still, image, 1000 * (perf_counter() - start)
