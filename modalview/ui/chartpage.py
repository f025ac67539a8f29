"""What the pages of charts share: a line of reading, what is missing, and an inquiry behind."""

from typing import Any

from PySide6.QtCore import Qt
from PySide6.QtGui import QHideEvent, QShowEvent
from PySide6.QtWidgets import QHBoxLayout, QLabel, QPushButton, QStackedWidget, QVBoxLayout, QWidget

from modalview.ui.chartcanvas import ChartCanvas
from modalview.ui.chartroom import ChartRoom
from modalview.ui.elided import ElidedLabel
from modalview.ui.inquiry import Inquiry
from modalview.ui.theme import Theme

OLD = "Out of date: of the model before the last edit"


class ChartPage(QWidget):
    """A chart with its tables, or one sentence that says what is missing and a button that helps."""

    def __init__(
        self,
        canvas: ChartCanvas,
        inquiry: Inquiry,
        parent: QWidget | None = None,
        room: ChartRoom | None = None,
    ) -> None:
        super().__init__(parent)
        self.inquiry, self.canvas = inquiry, canvas
        inquiry.setParent(self)
        self.room = room or ChartRoom(canvas, self)
        self.controls = QHBoxLayout()
        self.controls.setContentsMargins(8, 2, 8, 0)
        self.controls.setSpacing(8)
        self.reading = ElidedLabel(self)
        self.reading.setAccessibleName("What is read on the chart")
        self.reading.setContentsMargins(8, 0, 8, 2)
        self.missing = QLabel(self)
        self.missing.setWordWrap(True)
        self.missing.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self.missing.setProperty("role", "quiet")
        self.help = QPushButton(self)
        self.help.setAccessibleName("Give what is missing")
        self.help.clicked.connect(self.on_help)
        empty = QWidget(self)
        column = QVBoxLayout(empty)
        column.setContentsMargins(24, 12, 24, 12)
        column.addStretch(1)
        column.addWidget(self.missing)
        column.addWidget(self.help, 0, Qt.AlignmentFlag.AlignHCenter)
        column.addStretch(1)
        self.stack = QStackedWidget(self)
        self.stack.addWidget(self.room)
        self.stack.addWidget(empty)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(2)
        layout.addLayout(self.controls)
        layout.addWidget(self.reading)
        layout.addWidget(self.stack, 1)
        canvas.read.connect(self._on_read)
        inquiry.changed.connect(self.show_result)
        self.setFocusProxy(canvas)

    # What each page says

    def show_result(self) -> None:
        """Show the answer of the inquiry."""
        raise NotImplementedError

    def sentence(self) -> str:
        """Return what the line of reading says while nothing is read."""
        return ""

    def on_help(self) -> None:
        """Do what the button beside the missing says."""
        if self.inquiry.waits:
            self.inquiry.want()

    # What all share

    def follow(self, model: Any, *, anew: bool) -> None:
        """Ask about a model."""
        self.inquiry.follow(model, anew=anew)

    def show_missing(self, text: str, button: str = "") -> None:
        """Say what is missing in place of the chart."""
        self.missing.setText(text)
        self.help.setText(button)
        self.help.setAccessibleName(button or "Give what is missing")
        self.help.setVisible(bool(button))
        self.reading.setText("")
        self.stack.setCurrentIndex(1)

    def show_chart(self, content: Any, description: str) -> None:
        """Show a chart, pale where it is out of date."""
        self.canvas.show_content(content, pale=self.inquiry.pale)
        self.canvas.setAccessibleDescription(f"{OLD}. {description}" if self.inquiry.pale else description)
        self.stack.setCurrentIndex(0)
        self.room.fit()
        self._on_read("")

    def told_of_none(self) -> bool:
        """Say why there is no answer; whether there is none."""
        inquiry = self.inquiry
        if inquiry.result is not None:
            return False
        if inquiry.refusal:
            self.show_missing(inquiry.refusal)
        elif inquiry.waits:
            self.show_missing("This model is large: working this out may take minutes.", "Work it out")
        else:
            self.show_missing("")
        return True

    def _on_read(self, text: str) -> None:
        self.reading.setText(text or (OLD if self.inquiry.pale else self.sentence()))

    def set_theme(self, theme: Theme, text_scale: float) -> None:
        """Repaint in other colours and text size."""
        self.canvas.set_theme(theme, text_scale)
        self.room.fit()

    def showEvent(self, event: QShowEvent) -> None:  # noqa: N802  (Qt's name)
        """Ask from now on."""
        super().showEvent(event)
        self.inquiry.show(in_sight=True)

    def hideEvent(self, event: QHideEvent) -> None:  # noqa: N802  (Qt's name)
        """Ask no more."""
        super().hideEvent(event)
        self.inquiry.show(in_sight=False)

    def close_threads(self) -> None:
        """Wait for what is being worked out."""
        self.inquiry.close()
