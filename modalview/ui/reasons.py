"""The panel that unfolds under the banner: the whole reasoning behind the verdict, to be read and copied."""

from html import escape
from typing import Any

from PySide6.QtCore import QRect, Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QFrame, QSizePolicy, QTextBrowser, QVBoxLayout, QWidget

from modalview.ui.reasoning import CheckReasoning, Reasoning, reasoning
from modalview.ui.symbols import verdict_colour
from modalview.ui.theme import LIGHT, Theme
from modalview.ui.wording import kept_together

_SIGNS = {"clear": "✓", "clear at nominal only": "!", "mode in band": "✕"}
_HEADING = '<h4 style="margin:10px 0 3px 0">'
# Of the height of the place it lies over; its least width and height in heights of a line.
_SHARE, _LEAST_WIDTH, _LEAST_HEIGHT = 0.72, 40.0, 24.0


class Reasons(QFrame):
    """Lies over the sheet when the sentence is asked why; Esc folds it again."""

    folded = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("reasons")
        self._theme: Theme = LIGHT
        self._shown: Reasoning | None = None
        self._known: tuple[Any, Any] = (None, None)
        self.text = QTextBrowser(self)
        self.text.setAccessibleName("Reasoning behind the verdict")
        self.text.setFrameShape(QFrame.Shape.NoFrame)
        self.text.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Ignored)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(14, 2, 8, 4)
        layout.addWidget(self.text)
        self.hide()

    def set_theme(self, theme: Theme) -> None:
        """Write in other colours."""
        self._theme, self._shown = theme, None
        self._write()

    def show_known(self, outlook: Any, solution: Any) -> None:
        """Take over what is known now; it is written when it is in sight."""
        self._known = outlook, solution
        self._write()

    def open(self) -> None:
        """Unfold, and give it the keyboard."""
        self.show()
        self.raise_()
        self._write()
        self.text.setFocus()

    def lie_over(self, place: QRect, drawing: QRect) -> None:
        """Cover the sheet, and the modes in part; more of the place where the sheet is narrow."""
        line = self.fontMetrics().height()
        wide = min(max(drawing.width(), _LEAST_WIDTH * line), place.width() - 1)
        high = min(max(_SHARE * place.height(), _LEAST_HEIGHT * line), place.height())
        self.setGeometry(place.left(), place.top(), round(wide), round(high))

    def fold(self) -> None:
        """Fold away."""
        self.hide()
        self.folded.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Esc folds."""
        if event.key() == Qt.Key.Key_Escape:
            self.fold()
        else:
            super().keyPressEvent(event)

    def _write(self) -> None:
        outlook, solution = self._known
        if self.isHidden():
            return
        found = reasoning(outlook, solution) if outlook is not None else Reasoning((), ())
        if found != self._shown:
            self._shown = found
            place = self.text.verticalScrollBar().value()
            self.text.setHtml(_html(found, self._theme))
            self.text.verticalScrollBar().setValue(place)


def _html(found: Reasoning, theme: Theme) -> str:
    if not found.checks:
        return "<p>Nothing to check: give a machine its speed, its orders and the margin wanted.</p>"
    parts = [_check_html(check, theme) for check in found.checks]
    parts.append(f"{_HEADING}What it rests on</h4>" + _list(found.rests_on))
    return "".join(parts)


def _check_html(check: CheckReasoning, theme: Theme) -> str:
    colour = verdict_colour(check.verdict, theme)
    title = (
        f'{_HEADING}{escape(check.title)}: <span style="color:{colour}">{_SIGNS[check.verdict]} '
        f"{escape(check.wording)}</span></h4>"
    )
    parts = [title, _list(check.band), _counts(check, theme), _list(check.proof)]
    if check.margin:
        parts.append(_list((*check.margin, *check.drive)))
    return "".join(parts)


def _counts(check: CheckReasoning, theme: Theme) -> str:
    head = "".join(
        f'<td style="color:{theme.quiet}; padding-right:18px">{text}</td>'
        for text in ("at values", "modes counted", "number")
    )
    rows = "".join(
        f'<tr><td style="padding-right:18px">{escape(one.values)}</td>'
        f'<td style="padding-right:18px">{escape(one.edge)}</td><td align="right">'
        f"<b>{one.number}</b></td></tr>"
        for one in check.counts
    )
    return f'<table style="margin-left:22px" cellspacing="0" cellpadding="1"><tr>{head}</tr>{rows}</table>'


def _list(lines: tuple[str, ...]) -> str:
    return "".join(f'<p style="margin:1px 0 1px 22px">{escape(kept_together(line))}</p>' for line in lines)
