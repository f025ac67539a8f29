"""The verdict in one sentence across the top, and the button that finds the modes."""

from typing import Any

from PySide6.QtCore import QRect, Qt, QTimer, Signal
from PySide6.QtGui import QMouseEvent, QResizeEvent
from PySide6.QtWidgets import (
    QFrame,
    QGridLayout,
    QHBoxLayout,
    QLabel,
    QProgressBar,
    QPushButton,
    QSizePolicy,
    QWidget,
)

from modalview.ui.analysis import Analysis
from modalview.ui.symbols import VerdictSign
from modalview.ui.theme import LIGHT, Theme
from modalview.ui.unfinished import missing, refusal_text, unchecked, ungiven
from modalview.ui.wording import kept_together, one_line

_BLINK_MS = 250
_CLICK = "Click for the whole reasoning"
# Lines of the sentence: at most so many, and of the height of the window at most this share.
_MOST_LINES, _MOST_SHARE = 6, 0.24
_WORDS = {
    "clear": "Clear",
    "clear at nominal only": "Clear at nominal only",
    "mode in band": "Mode in band",
}


class _Sentence(QLabel):
    """As many lines as there is room for; a click asks why, and what is marked can be copied."""

    clicked = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._whole, self._lines = "", _MOST_LINES
        self.setObjectName("verdictSentence")
        self.setWordWrap(True)
        self.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.MinimumExpanding)
        self.setAccessibleName("Verdict")

    def say(self, text: str) -> None:
        """Show a sentence; where it has no room its end stands in the tool tip and in the reasoning."""
        self._whole = one_line(text)
        self.setAccessibleDescription(self._whole)
        self._fit()

    def set_most_lines(self, lines: int) -> None:
        """Show at most so many lines."""
        if lines != self._lines:
            self._lines = lines
            self._fit()

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Cut anew."""
        super().resizeEvent(event)
        self._fit()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:  # noqa: N802  (Qt's name)
        """Ask, unless something was marked."""
        super().mouseReleaseEvent(event)
        if event.button() == Qt.MouseButton.LeftButton and not self.hasSelectedText():
            self.clicked.emit()

    @property
    def whole(self) -> str:
        """What is said, whether or not all of it has room."""
        return self._whole

    def _fit(self) -> None:
        wanted = kept_together(self._whole)
        shown = self._cut(wanted, self.contentsRect().width())
        self.setToolTip(_CLICK if shown == wanted else f"{self._whole}\n\n{_CLICK}")
        if shown != self.text():
            self.setText(shown)

    def _cut(self, text: str, room: int) -> str:
        """Return a text, or as many of its words as the lines take at a width in pixels."""
        if self._fits(text, room):
            return text
        words = text.split(" ")
        low, high = 1, len(words)
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (middle, high) if self._fits(_cut_off(words, middle), room) else (low, middle)
        return _cut_off(words, low)

    def _fits(self, text: str, room: int) -> bool:
        metrics = self.fontMetrics()
        need = metrics.boundingRect(QRect(0, 0, room, 100_000), Qt.TextFlag.TextWordWrap, text).height()
        return need <= self._lines * metrics.lineSpacing()


def _cut_off(words: list[str], count: int) -> str:
    return f"{' '.join(words[:count])} …"


class Banner(QFrame):
    """Sign, word and sentence of the verdict; why; Find modes, or its progress and Cancel."""

    why_asked = Signal()
    find_asked = Signal()
    cancel_asked = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("banner")
        self._theme = LIGHT
        self._verdict: str | None = None
        self._narrow = False
        self.sign = VerdictSign(1.6, self)
        self.word = QLabel(self)
        self.word.setObjectName("verdictWord")
        self.sentence = _Sentence(self)
        self.sentence.clicked.connect(self.why_asked)
        self.progress = QProgressBar(self)
        self.progress.setAccessibleName("Progress of finding modes")
        self.progress.setFixedWidth(150)
        self.cancel = QPushButton("Cancel", self)
        self.cancel.clicked.connect(self.cancel_asked)
        self.find = QPushButton("Find modes", self)
        self.find.setObjectName("findModes")
        self.find.setToolTip("Find every mode of the model (Ctrl+Enter)")
        self.find.clicked.connect(self.find_asked)
        self.why = QPushButton("Why?", self)
        self.why.setToolTip("Show the whole reasoning behind the verdict (Ctrl+E)")
        self.why.setAccessibleName("Why this verdict")
        self.why.setCheckable(True)
        self.why.clicked.connect(self.why_asked)
        # A search that is over in a blink shows no progress: it would only flicker.
        self._patience = QTimer(self, interval=_BLINK_MS, singleShot=True)
        self._patience.timeout.connect(lambda: self._show_progress(shown=True))
        self._lay_out()
        self._show_progress(shown=False)

    def _lay_out(self) -> None:
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(16, 7, 12, 7)
        self._grid.setHorizontalSpacing(10)
        self._grid.setVerticalSpacing(4)
        self._grid.setColumnStretch(2, 1)
        buttons = QHBoxLayout()
        buttons.setSpacing(6)
        for widget in (self.why, self.progress, self.cancel, self.find):
            buttons.addWidget(widget)
        self._grid.addWidget(self.sign, 0, 0)
        self._grid.addWidget(self.word, 0, 1)
        self._grid.addLayout(buttons, 0, 3)
        self._grid.addWidget(self.sentence, 0, 2)

    def fit(self, height: int, *, narrow: bool) -> None:
        """Fit into a window of a height in pixels; in a narrow one the sentence has a row of its own."""
        lines = int(_MOST_SHARE * height / self.sentence.fontMetrics().lineSpacing())
        self.sentence.set_most_lines(min(max(lines, 2), _MOST_LINES))
        if narrow != self._narrow:
            self._narrow = narrow
            self._grid.removeWidget(self.sentence)
            place = (1, 0, 1, 4) if narrow else (0, 2, 1, 1)
            self._grid.addWidget(self.sentence, *place)

    def set_theme(self, theme: Theme) -> None:
        """Repaint the sign."""
        self._theme = theme
        self.sign.show_verdict(self._verdict, theme)

    def show_analysis(self, analysis: Analysis) -> None:
        """Show what is known now."""
        verdict, word, sentence = _said(analysis)
        self._verdict = verdict
        self.sign.show_verdict(verdict, self._theme)
        self.word.setText(word)
        self.word.setVisible(bool(word))
        self.sign.setVisible(bool(sentence))
        self.why.setVisible(analysis.outlook is not None)
        self.word.setProperty("verdict", verdict or "none")
        self.word.style().polish(self.word)
        self._keep_height(settled=not (analysis.looking or analysis.finding))
        self.sentence.say(sentence)
        self.show_busy(analysis)

    def _keep_height(self, *, settled: bool) -> None:
        """Let the banner grow but not shrink while a study goes on, so that the sheet below stands still."""
        lines = (1 if self._narrow else 2) * self.sentence.fontMetrics().lineSpacing()
        self.sentence.setMinimumHeight(lines if settled else max(lines, self.sentence.height()))

    def show_busy(self, analysis: Analysis) -> None:
        """Show progress and Cancel while the modes are being found, the button otherwise."""
        what, share = analysis.progress
        if not analysis.finding:
            self._patience.stop()
            self._show_progress(shown=False)
        elif self.cancel.isHidden() and not self._patience.isActive():
            self._patience.start()
        self.find.setEnabled(analysis.outlook is not None)
        self.progress.setRange(0, 100 if share > 0 else 0)
        self.progress.setValue(round(100 * share))
        self.progress.setFormat(what or "finding modes")
        self.progress.setToolTip(what)

    def _show_progress(self, *, shown: bool) -> None:
        self.progress.setVisible(shown)
        self.cancel.setVisible(shown)
        self.find.setVisible(not shown)


def _said(analysis: Analysis) -> tuple[str | None, str, str]:
    """Return verdict, word and sentence."""
    if analysis.refusal is not None and analysis.outlook is None:
        lacking = missing(analysis.model)
        if lacking:  # a drawing that goes on is no error
            return None, "Not finished", lacking
        return None, "Cannot be analysed", refusal_text(analysis.refusal)
    if analysis.outlook is None:
        return None, "", "Reading the model…" if analysis.looking else ""
    known: Any = analysis.solution if analysis.solution_current else analysis.outlook
    sentence = known.sentence
    if analysis.refusal is not None:
        sentence = f"{sentence} The modes were not found: {analysis.refusal}"
    verdict = analysis.outlook.verdict
    if verdict is None:
        return None, "", unchecked(analysis.model) or sentence
    return str(verdict), _WORDS[str(verdict)], f"{ungiven(analysis.model, analysis.doubts)}{sentence}"
