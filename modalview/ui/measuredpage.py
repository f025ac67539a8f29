"""Measured peaks and the values tuned to them: what they determine, and what they cannot."""

from functools import partial
from typing import Any

from PySide6.QtCore import QPoint, Qt, QTimer, Signal
from PySide6.QtGui import QHideEvent, QShowEvent
from PySide6.QtWidgets import QBoxLayout, QHBoxLayout, QLabel, QPushButton, QVBoxLayout, QWidget

from modalview.errors import KeepclearError
from modalview.model.parts import Model
from modalview.ui.chartpage import OLD
from modalview.ui.chartroom import BESIDE, ChartRoom
from modalview.ui.errand import Errand
from modalview.ui.inquiry import Inquiry, Question, answered
from modalview.ui.peaktable import PeakPanel
from modalview.ui.theme import Theme
from modalview.ui.tunequestions import tunable, tuning
from modalview.ui.tunevalues import TuneValues

TUNE, ALONE, STOP = "Tune", "Try each value alone", "Stop"
OTHERWISE = "Out of date: other values, ranges or pairs are chosen by now."
TABLES = {
    "peaks": "Peaks and their modes",
    "values": "Tuned values",
    "told": "What the peaks tell",
    "alone": "Each value alone",
    "otherwise": "Otherwise",
}


class MeasuredRoom(ChartRoom):
    """What is given on the left, what comes of it on the right; below each other where there is no room."""

    def __init__(self, given: QWidget, parent: QWidget | None = None) -> None:
        super().__init__(given, parent)
        self.named = {name: self.add_table(title) for name, title in TABLES.items()}

    def put_first(self, row: QHBoxLayout, sentence: QLabel) -> None:
        """Put buttons and sentence over the tables."""
        self._column.insertLayout(0, row)
        self._column.insertWidget(1, sentence)

    def fit(self) -> None:
        """Arrange by the width; nothing has to fill the height."""
        wide = self.width() >= BESIDE * self.fontMetrics().height()
        directions = QBoxLayout.Direction
        self._layout.setDirection(directions.LeftToRight if wide else directions.TopToBottom)
        for heading, table in self.tables:
            heading.setVisible(table.rowCount() > 0)
            table.fit()


class MeasuredPage(QWidget):
    """Peaks and values to tune beside what tuning finds; only what is asked for is tuned."""

    edited = Signal(object)  # Rewrite of the peaks
    tried = Signal(object, str)  # Rewrite of the tuned values, and what it does
    failed = Signal(object)

    def __init__(self, parent: QWidget | None = None, question: Question = tuning) -> None:
        super().__init__(parent)
        self.inquiry = Inquiry("listing the values that can be tuned", tunable, self)
        self._errand = Errand(self)
        self._question = question
        self._model: Model | None = None
        self._asked: tuple[Any, ...] = ()
        self._applied: Model | None = None
        self.content: Any = None
        self.refusal = ""
        self._build()
        self.inquiry.changed.connect(self._show_values)
        self.panel.edited.connect(self.edited)
        self.panel.pairs_changed.connect(self._show_state)
        self.values.chosen_changed.connect(self._show_state)
        self._errand.busy_changed.connect(lambda _: self._show_state())
        self.tune.clicked.connect(self.on_tune)
        self.apply.clicked.connect(self.on_apply)
        self.setFocusProxy(self.panel.table)

    def _build(self) -> None:
        given = QWidget(self)
        self.panel, self.values = PeakPanel(given), TuneValues(given)
        heading = QLabel("Values to tune", given)
        heading.setProperty("role", "strong")
        heading.setBuddy(self.values)
        self.values_told = QLabel(given)
        self.values_told.setWordWrap(True)
        self.values_told.setProperty("role", "small")
        self.list_them = QPushButton("List the values", given)
        self.list_them.clicked.connect(self.inquiry.want)
        self.tune = QPushButton(TUNE, given)
        self.tune.setObjectName("tune")
        column = QVBoxLayout(given)
        column.setContentsMargins(8, 4, 8, 4)
        above = QHBoxLayout()
        above.addWidget(heading)
        above.addStretch(1)
        above.addWidget(self.tune)
        column.addWidget(self.panel)
        column.addLayout(above)
        column.addWidget(self.values)
        column.addWidget(self.values_told)
        column.addWidget(self.list_them, 0, Qt.AlignmentFlag.AlignLeft)
        column.addStretch(1)
        self.room = MeasuredRoom(given, self)
        self.apply = QPushButton("Apply", self)
        self.apply.setAccessibleName("Apply the tuned values")
        self.apply.setToolTip("Change the model so; one undo takes it back")
        self.sentence = QLabel(self)
        self.sentence.setWordWrap(True)
        self.sentence.setAccessibleName("What tuning found")
        self.sentence.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        row = QHBoxLayout()
        row.addWidget(self.apply)
        row.addStretch(1)
        self.room.put_first(row, self.sentence)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self.room)

    # What the window tells

    def follow(self, model: Model, *, anew: bool) -> None:
        """Show the peaks of a model; what was found of another one is dropped, of an older one pale."""
        if anew:
            self._errand.call_off()
            self.content, self.refusal, self._asked, self._applied = None, "", (), None
            self.values.forget()
        self._model = model
        self.panel.show_model(model, anew=anew)
        self.inquiry.follow(model, anew=anew)
        self._show_state()

    def set_theme(self, theme: Theme, text_scale: float) -> None:
        """Colour and measure anew."""
        del text_scale
        self.panel.set_theme(theme)
        self.values.fit()
        self.room.fit()

    def _show_values(self) -> None:
        inquiry = self.inquiry
        if inquiry.result is not None:
            self.values.show_lines(inquiry.result)
        said = inquiry.refusal or ("This model is large: listing takes a while." if inquiry.waits else "")
        self.values_told.setText(
            said or "Tick what is least known; the range is that of its tolerance unless typed."
        )
        self.list_them.setVisible(inquiry.waits)
        self._show_state()

    # Tuning

    @property
    def current(self) -> bool:
        """Whether what was found is about the model on the sheet, and about what is asked now."""
        return bool(self._asked) and self._asked == (self._model, self._wanted())

    @property
    def busy(self) -> bool:
        """Whether values are being tuned."""
        return self._errand.busy

    def _details(self) -> tuple[Any, ...]:
        return self.values.chosen(), self.panel.pairs()

    def _wanted(self) -> tuple[Any, ...]:
        """Return the details by name, as they stay when the model is edited and the edit undone."""
        values, pairs = self._details()
        return tuple((line.name, span) for line, span in values), pairs

    def on_tune(self) -> None:
        """Tune, or stop tuning."""
        if self._errand.busy:
            self._errand.call_off()
            return
        if self._model is None:
            return
        asked = self._model, self._wanted()
        self._errand.run(
            "tuning to the measured peaks",
            partial(answered, self._question, self._model, self._details()),
            partial(self._take, asked),
        )

    def _take(self, asked: tuple[Any, ...], content: Any, error: Exception | None) -> None:
        self._asked, self.content, self.refusal, self._applied = asked, content, "", None
        if isinstance(error, KeepclearError):
            self.refusal = f"Not tuned: {error}"
        elif error is not None:
            self.refusal = "An unexpected error came up; nothing was tuned."
            self.failed.emit(error)
        for name, table in self.room.named.items():
            lines = getattr(content, name, None)
            table.show_figures(lines.headings if lines else (), lines.rows if lines else ())
        self._show_state()
        self.room.fit()
        QTimer.singleShot(0, self, self._show_found)  # once the layout has room for it

    def _show_found(self) -> None:
        """Bring what was found into sight."""
        self.room.widget().layout().activate()
        bar = self.room.verticalScrollBar()
        top = self.sentence.mapTo(self.room.widget(), QPoint(0, 0)).y()
        bar.setValue(max(top - self.apply.height() - self.fontMetrics().height(), 0))

    def on_apply(self) -> None:
        """Make the edit of the tuned values."""
        if self.content is not None and self.content.edit is not None and self.current:
            edit = self.content.edit
            self.tried.emit(edit, f"{edit.text[:1].upper()}{edit.text[1:]}")
            self._applied = self._model
            self._show_state()

    def _show_state(self) -> None:
        """Say what was found and whether it still holds."""
        known, content = self.content is not None or bool(self.refusal), self.content
        applied = self._applied is not None and self._applied is self._model
        pale = known and not self.current and not applied
        peaks = self._model is not None and bool(self._model.measured)
        self.tune.setText(STOP if self._errand.busy else TUNE if self.values.chosen() else ALONE)
        self.tune.setAccessibleName(self.tune.text() if not self._errand.busy else "Stop tuning")
        self.tune.setEnabled(peaks)
        self.apply.setEnabled(self.current and content is not None and content.edit is not None)
        found = self.refusal or (content.sentence if content is not None else "")
        said = self._told(pale=pale, applied=applied)
        self.sentence.setText("\n".join(one for one in (said, found) if one))
        self.sentence.setProperty("role", "quiet" if pale else "strong")
        self.sentence.style().unpolish(self.sentence)
        self.sentence.style().polish(self.sentence)
        self.sentence.setVisible(bool(self.sentence.text()))
        self.room.notes.setText("\n".join(content.notes) if content is not None else "")
        for table in self.room.named.values():
            table.setEnabled(not pale)
            if not known:
                table.show_figures((), ())

    def _told(self, *, pale: bool, applied: bool) -> str:
        """Say whether what was found still holds."""
        if self._errand.busy:
            return "Tuning…"
        if pale:
            return f"{OLD}." if self._asked[0] != self._model else OTHERWISE
        return "Applied; one undo takes it back." if applied else ""

    # Qt's own

    def showEvent(self, event: QShowEvent) -> None:  # noqa: N802  (Qt's name)
        """List the values from now on."""
        super().showEvent(event)
        self.inquiry.show(in_sight=True)
        self.room.fit()

    def hideEvent(self, event: QHideEvent) -> None:  # noqa: N802  (Qt's name)
        """List no more."""
        super().hideEvent(event)
        self.inquiry.show(in_sight=False)

    def close_threads(self) -> None:
        """Wait for what is being worked out."""
        self.inquiry.close()
        self._errand.close()
