"""The empty window: what to do first."""

from pathlib import Path

from PySide6.QtCore import QEvent, QRectF, QSize, Qt, Signal
from PySide6.QtGui import QColor, QFont, QFontMetrics, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import (
    QAbstractButton,
    QGridLayout,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QScrollArea,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from modalview.ui.examples import Example
from modalview.ui.theme import LIGHT, Theme

_JOB = (
    "Draw the machine and what carries it as masses and springs. Keepclear shows where "
    "its natural frequencies can and cannot lie, and proves over all tolerances whether a speed or an order "
    "of the machine meets one."
)


def _bold(font: QFont) -> QFont:
    bold = QFont(font)
    bold.setBold(True)
    return bold


def _wrapped_height(font: QFont, room: int, text: str) -> int:
    wrap = Qt.TextFlag.TextWordWrap
    return QFontMetrics(font).boundingRect(0, 0, room, 10_000, wrap, text).height()


class ExampleButton(QAbstractButton):
    """An example's title over a sentence of its story, which wraps."""

    def __init__(self, example: Example, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.example = example
        self._theme: Theme = LIGHT
        self.setText(example.title)
        self.setAccessibleName(f"Open the example {example.title}")
        self.setAccessibleDescription(example.sentence)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        policy = QSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Preferred)
        policy.setHeightForWidth(True)
        self.setSizePolicy(policy)

    def set_theme(self, theme: Theme) -> None:
        """Paint in other colours."""
        self._theme = theme
        self.update()

    def hasHeightForWidth(self) -> bool:  # noqa: N802  (Qt's name)
        """Return True: the sentence wraps."""
        return True

    def heightForWidth(self, width: int) -> int:  # noqa: N802  (Qt's name)
        """Return the height the title and the wrapped sentence need."""
        room = self._room(width)
        sentence = _wrapped_height(self.font(), room, self.example.sentence)
        return round(_wrapped_height(_bold(self.font()), room, self.text()) + sentence + 32)

    def sizeHint(self) -> QSize:  # noqa: N802  (Qt's name)
        """Return a size for two columns of buttons."""
        width = 40 * self.fontMetrics().averageCharWidth()
        return QSize(width, self.heightForWidth(width))

    @staticmethod
    def _room(width: int) -> int:
        return max(width - 28, 60)

    def paintEvent(self, event: QPaintEvent) -> None:  # noqa: N802  (Qt's name)
        """Paint a card; a heavier edge marks the pointer or the keyboard."""
        del event
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        lively = self.underMouse() or self.hasFocus()
        painter.setBrush(QColor(self._theme.accent_pale if self.isDown() else self._theme.card))
        edge = QPen(QColor(self._theme.accent if lively else self._theme.line), 2.0 if lively else 1.0)
        painter.setPen(edge)
        painter.drawRoundedRect(QRectF(self.rect()).adjusted(1.5, 1.5, -1.5, -1.5), 7, 7)
        room, bold = self._room(self.width()), _bold(self.font())
        title = _wrapped_height(bold, room, self.text())
        painter.setFont(bold)
        painter.setPen(QColor(self._theme.accent))
        painter.drawText(QRectF(14, 10, room, title), int(Qt.TextFlag.TextWordWrap), self.text())
        painter.setFont(self.font())
        painter.setPen(QColor(self._theme.ink))
        below = QRectF(14, 17 + title, room, self.height() - title - 19)
        painter.drawText(below, int(Qt.TextFlag.TextWordWrap), self.example.sentence)

    def enterEvent(self, event: QEvent) -> None:  # noqa: N802  (Qt's name)
        """Show the pointer's place."""
        super().enterEvent(event)
        self.update()

    def leaveEvent(self, event: QEvent) -> None:  # noqa: N802  (Qt's name)
        """And that it left."""
        super().leaveEvent(event)
        self.update()


class Welcome(QScrollArea):
    """Open a file, or one of the examples."""

    new_asked = Signal()
    open_asked = Signal()
    example_chosen = Signal(Path)

    def __init__(self, examples: tuple[Example, ...], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("welcome")
        self.setWidgetResizable(True)
        self.buttons = [ExampleButton(example) for example in examples]
        inside = QWidget(self)
        inside.setObjectName("welcomeInside")
        inside.setMaximumWidth(1000)
        column = QVBoxLayout(inside)
        column.setContentsMargins(32, 28, 32, 24)
        column.setSpacing(12)
        column.addWidget(_text("Keep every speed clear of every natural frequency", "title", inside))
        column.addWidget(_text(_JOB, "plain", inside))
        self.new = QPushButton("New model…", inside)
        self.new.setObjectName("findModes")
        self.new.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        self.new.clicked.connect(self.new_asked)
        self.open = QPushButton("Open a model file…", inside)
        self.open.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        self.open.clicked.connect(self.open_asked)
        buttons = QHBoxLayout()
        buttons.setSpacing(10)
        for button in (self.new, self.open):
            buttons.addWidget(button)
        buttons.addStretch(1)
        column.addLayout(buttons)
        column.addWidget(_text("Or drop a .keepclear file on the window.", "quiet", inside))
        column.addSpacing(6)
        if examples:
            column.addWidget(_text("Or open an example and change its values", "heading", inside))
            column.addLayout(self._grid())
            column.addWidget(
                _text("Each comes in variants: see File, Open example. All are invented.", "quiet", inside)
            )
        column.addStretch(1)
        frame = QWidget(self)
        frame.setObjectName("welcomeInside")
        row = QGridLayout(frame)
        row.setContentsMargins(0, 0, 0, 0)
        row.setColumnStretch(0, 1)
        row.setColumnStretch(1, 20)
        row.setColumnStretch(2, 1)
        row.addWidget(inside, 0, 1)
        self.setWidget(frame)

    def _grid(self) -> QGridLayout:
        grid = QGridLayout()
        grid.setSpacing(10)
        for number, button in enumerate(self.buttons):
            path = button.example.path
            button.clicked.connect(lambda _checked=False, path=path: self.example_chosen.emit(path))
            grid.addWidget(button, number // 2, number % 2)
        return grid

    def set_theme(self, theme: Theme) -> None:
        """Repaint the buttons."""
        for button in self.buttons:
            button.set_theme(theme)


def _text(text: str, role: str, parent: QWidget) -> QLabel:
    label = QLabel(text, parent)
    label.setProperty("role", role)
    label.setWordWrap(True)
    return label
