"""What a crash left behind, in words and as a list to choose from; nothing is replaced silently."""

import time
from collections.abc import Callable

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QFrame,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QScrollArea,
    QVBoxLayout,
    QWidget,
)

from modalview.errors import FileAccessError
from modalview.store import stamp
from modalview.store.recovery import Recovery, Session, Unreadable
from modalview.ui.dialogs import ask

_LEAD = (
    "The program ended without closing these models. What was recovered stands beside the saved file; "
    "neither replaces the other until you save."
)
_ASIDE = "These models were put aside or left by a program that ended without closing them."


def recovery_text(one: Recovery, *, now: float | None = None) -> str:
    """Return when a recovered model was edited, beside what its file is."""
    now = time.time() if now is None else now
    edited = f"edited {clock(one.edited, now)}"
    if one.path is None:
        return f"{edited}, never saved as a file"
    if one.example:
        return f"{edited}, made from the example {one.path.name} and never saved"
    try:
        on_disk = stamp(one.path)
    except FileAccessError:
        return f"{edited}; its file is no longer there"
    saved = on_disk.modified_ns / 1e9
    if one.stamp is not None and not on_disk.same_content(one.stamp):
        return f"{edited}; the file was changed since it was opened, at {clock(saved, now)}"
    if one.edited < saved:
        return f"{edited}, {span(saved - one.edited)} before the file was last saved"
    return f"{edited}, {span(one.edited - saved)} after it was last saved"


def clock(at: float, now: float) -> str:
    """Return a time of the day, with the day unless it is today."""
    same_day = time.localtime(at)[:3] == time.localtime(now)[:3]
    return time.strftime("%H:%M" if same_day else "%Y-%m-%d %H:%M", time.localtime(at))


def span(seconds: float) -> str:
    """Return a time span in words.

    >>> span(12.4), span(100), span(7200), span(200000)
    ('12 seconds', '2 minutes', '2 hours', '2 days')
    >>> span(0.2)
    '1 second'
    """
    for size, unit in ((86400, "day"), (3600, "hour"), (60, "minute")):
        if seconds >= 1.5 * size:
            return f"{round(seconds / size)} {unit}s"
    number = max(1, round(seconds))
    return f"{number} second{'s' if number > 1 else ''}"


class RecoveryDialog(QDialog):
    """One card for each model, with what can be done; closing it keeps them all for later."""

    open_asked = Signal(object)  # Recovery: open what was recovered
    file_asked = Signal(object)  # Path: open the saved file

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle("Recovered models")
        self.resize(680, 430)
        self._session = session
        self.cards: list[QFrame] = []
        recoveries, unreadable = session.recoveries()
        lead = _LEAD if any(not one.file.name.startswith(session.name) for one in recoveries) else _ASIDE
        words = QLabel(lead if recoveries else "", self)
        words.setWordWrap(True)
        words.setVisible(bool(recoveries))
        inside = QWidget(self)
        self._column = QVBoxLayout(inside)
        for one in recoveries:
            self._add_recovery(one)
        for one in unreadable:
            self._add_unreadable(one)
        self._column.addStretch(1)
        scroll = QScrollArea(self)
        scroll.setWidgetResizable(True)
        scroll.setFrameShape(QFrame.Shape.NoFrame)
        scroll.setWidget(inside)
        buttons = QDialogButtonBox(self)
        self.later = buttons.addButton("Keep all for later", QDialogButtonBox.ButtonRole.RejectRole)
        self.later.setToolTip("Leave them as they are: they are offered again at the next start")
        buttons.rejected.connect(self.close)
        layout = QVBoxLayout(self)
        layout.addWidget(words)
        layout.addWidget(scroll, 1)
        layout.addWidget(buttons)

    def _add_recovery(self, one: Recovery) -> None:
        card, row = self._card(one.name, f"{recovery_text(one)}", str(one.path or ""))
        self._button(row, "Open the recovered one", lambda: self._open(card, one), first=True)
        if one.path is not None and one.path.exists():
            name = "Open the example" if one.example else "Open the file"
            self._button(row, name, lambda: self.file_asked.emit(one.path))
        self._button(row, "Keep for later", lambda: self._settle(card))
        self._button(row, "Discard…", lambda: self._ask_discard(card, one))

    def _add_unreadable(self, one: Unreadable) -> None:
        card, row = self._card("A recovery file that cannot be read", one.reason, str(one.file))
        self._button(row, "Keep for later", lambda: self._settle(card))
        self._button(row, "Discard", lambda: self._discard(card, one))

    def _card(self, title: str, text: str, place: str) -> tuple[QFrame, QHBoxLayout]:
        card = QFrame(self)
        card.setProperty("role", "card")
        column = QVBoxLayout(card)
        for words, role in ((title, "strong"), (text, "plain"), (place, "small")):
            label = QLabel(words, card)
            label.setProperty("role", role)
            label.setWordWrap(True)
            label.setTextFormat(Qt.TextFormat.PlainText)
            label.setVisible(bool(words))
            column.addWidget(label)
        row = QHBoxLayout()
        column.addLayout(row)
        row.addStretch(1)
        self._column.addWidget(card)
        self.cards.append(card)
        return card, row

    def _button(self, row: QHBoxLayout, text: str, do: Callable[[], object], *, first: bool = False) -> None:
        button = QPushButton(text, self)
        button.setAutoDefault(first)
        button.clicked.connect(lambda _checked=False: do())
        row.insertWidget(row.count() - 1, button)

    def _open(self, card: QFrame, one: Recovery) -> None:
        self.open_asked.emit(one)
        if not one.file.exists():  # else it could not be opened, which was told
            self._settle(card)

    def _ask_discard(self, card: QFrame, one: Recovery) -> None:
        ask(
            self,
            f"Discard the recovered model {one.name}?",
            f"It was {recovery_text(one)}. It cannot be brought back.",
            (("Discard", lambda: self._discard(card, one)), ("Keep it", None)),
        )

    def _discard(self, card: QFrame, one: Recovery | Unreadable) -> None:
        try:
            self._session.discard(one.file)
        except OSError as fault:
            why = fault.strerror or str(fault)
            ask(self, "It was not discarded.", f"{one.file}: {why}", (("Close", None),))
        else:
            self._settle(card)

    def _settle(self, card: QFrame) -> None:
        """Take a card away; with the last one the list is done."""
        self.cards.remove(card)
        card.deleteLater()
        if not self.cards:
            self.close()
