"""The verdict in one sentence across the top, and the button that finds the modes."""

from typing import Any

from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtGui import QMouseEvent
from PySide6.QtWidgets import (
    QBoxLayout,
    QFrame,
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

_BLINK_MS = 250
_WORDS = {
    "clear": "Clear",
    "clear at nominal only": "Clear at nominal only",
    "mode in band": "Mode in band",
}


class _Sentence(QLabel):
    """A click asks why; what is marked with the pointer can be copied."""

    clicked = Signal()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:  # noqa: N802  (Qt's name)
        """Ask, unless something was marked."""
        super().mouseReleaseEvent(event)
        if event.button() == Qt.MouseButton.LeftButton and not self.hasSelectedText():
            self.clicked.emit()


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
        self.sign = VerdictSign(24, self)
        self.word = QLabel(self)
        self.word.setObjectName("verdictWord")
        self.sentence = _Sentence(self)
        self.sentence.clicked.connect(self.why_asked)
        self.sentence.setToolTip("Click for the whole reasoning")
        self.sentence.setObjectName("verdictSentence")
        self.sentence.setWordWrap(True)
        self.sentence.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.sentence.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.MinimumExpanding)
        self.sentence.setAccessibleName("Verdict")
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
        layout = QHBoxLayout(self)
        layout.setContentsMargins(16, 7, 12, 7)
        layout.setSpacing(10)
        layout.addWidget(self.sign)
        layout.addWidget(self.word)
        layout.addWidget(self.sentence, 1)
        self._buttons = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        self._buttons.setSpacing(6)
        for widget in (self.why, self.progress, self.cancel, self.find):
            self._buttons.addWidget(widget)
        layout.addLayout(self._buttons)

    def stack_buttons(self, *, stacked: bool) -> None:
        """Put the buttons one above the other, where the sentence needs the width."""
        direction = QBoxLayout.Direction
        self._buttons.setDirection(direction.BottomToTop if stacked else direction.LeftToRight)

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
        self.sentence.setText(sentence)
        self.show_busy(analysis)

    def _keep_height(self, *, settled: bool) -> None:
        """Let the banner grow but not shrink while a study goes on, so that the sheet below stands still."""
        lines = 2 * self.sentence.fontMetrics().lineSpacing()
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
        return None, "Cannot be analysed", " ".join(str(analysis.refusal).splitlines())
    if analysis.outlook is None:
        return None, "", "Reading the model…" if analysis.looking else ""
    known: Any = analysis.solution if analysis.solution_current else analysis.outlook
    sentence = known.sentence
    if analysis.refusal is not None:
        sentence = f"{sentence} The modes were not found: {analysis.refusal}"
    verdict = analysis.outlook.verdict
    if verdict is None:
        return None, "", sentence
    return str(verdict), _WORDS[str(verdict)], sentence
