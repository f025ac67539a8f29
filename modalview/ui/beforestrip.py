"""A strip over the frequency scale while a change is tried: what it is, back again, pale ticks away."""

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QPushButton, QVBoxLayout, QWidget


class BeforeStrip(QFrame):
    """Hidden unless a change is tried."""

    undo_asked = Signal()
    dismissed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("beforeStrip")
        self.label = QLabel(self)
        self.label.setWordWrap(True)
        self.label.setProperty("role", "small")
        self.undo = QPushButton("Undo it", self)
        self.undo.setObjectName("smallButton")
        self.undo.setToolTip("Take the change back (Ctrl+Z does so too)")
        self.undo.setAccessibleName("Undo the change that is tried")
        self.hide_ticks = QPushButton("Hide", self)
        self.hide_ticks.setObjectName("smallButton")
        self.hide_ticks.setToolTip("Keep the change and show the old modes no more")
        self.hide_ticks.setAccessibleName("Hide the modes before the change")
        self.undo.clicked.connect(self.undo_asked)
        self.hide_ticks.clicked.connect(self.dismissed)
        buttons = QHBoxLayout()
        buttons.setSpacing(6)
        buttons.addWidget(self.undo)
        buttons.addWidget(self.hide_ticks)
        buttons.addStretch(1)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(8, 4, 8, 4)
        layout.setSpacing(4)
        layout.addWidget(self.label)
        layout.addLayout(buttons)
        self.hide()

    def tell(self, text: str, *, latest: bool) -> None:
        """Say what is tried; only the latest edit can be undone from here."""
        self.label.setText(f"Tried: {text}. Pale: the modes before.")
        self.undo.setVisible(latest)
        self.show()
