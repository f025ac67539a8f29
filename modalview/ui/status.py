"""The line at the foot: what follows every edit, when it was saved, and the caution."""

import time

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QStatusBar

from modalview.ui.analysis import Analysis
from modalview.ui.document import Document
from modalview.ui.elided import ElidedLabel

CAUTION = "A screening aid. It does not replace local codes or a licensed engineer's review."
_REFRESH_MS = 5000


def ago(seconds: float) -> str:
    """Return a time span in words.

    >>> ago(2), ago(47), ago(300), ago(9000)
    ('just now', '40 s ago', '5 min ago', '2 h ago')
    """
    if seconds < 10:
        return "just now"
    if seconds < 60:
        return f"{10 * int(seconds // 10)} s ago"
    if seconds < 3600:
        return f"{int(seconds // 60)} min ago"
    return f"{int(seconds // 3600)} h ago"


class StatusLine:
    """Fills the status bar and keeps the time in it true."""

    def __init__(self, bar: QStatusBar) -> None:
        self.state = ElidedLabel(bar)
        self.caution = ElidedLabel(bar)
        self.caution.setText(CAUTION)
        self.caution.give_way_last()
        bar.addWidget(self.state, 1)
        bar.addPermanentWidget(self.caution)
        bar.setSizeGripEnabled(False)
        self._document: Document | None = None
        self._analysis: Analysis | None = None
        self._timer = QTimer(bar, interval=_REFRESH_MS)
        self._timer.timeout.connect(self._refresh)
        self._timer.start()

    def show_state(self, document: Document, analysis: Analysis) -> None:
        """Show what is true now."""
        self._document, self._analysis = document, analysis
        self._refresh()

    def _refresh(self) -> None:
        if self._document is None or self._document.model is None:
            self.state.clear()
            return
        outlook = self._analysis.outlook
        took = f" ({_milliseconds(outlook.seconds)})" if outlook is not None else ""
        self.state.setText(f"Bounds, counts and verdict follow every edit{took} · {_saved(self._document)}")


def _milliseconds(seconds: float) -> str:
    ms = 1000 * seconds
    return f"{ms:.1f} ms" if ms < 10 else f"{ms:.0f} ms"


def _saved(document: Document) -> str:
    if document.modified:
        return "recovered, not saved" if document.recovered else "not saved"
    if document.path is None:
        return "new, nothing to save yet"
    if document.saved_at is not None:
        return f"saved {ago(time.monotonic() - document.saved_at)}"
    return "example, unchanged" if document.example else "as on disk"
