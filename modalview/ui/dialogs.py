"""Questions and messages; none of them runs an event loop of its own."""

from collections.abc import Callable, Sequence

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QFontMetrics, QGuiApplication
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QLabel,
    QMessageBox,
    QPlainTextEdit,
    QTextBrowser,
    QVBoxLayout,
    QWidget,
)

Choice = tuple[str, Callable[[], None] | None]


def ask(parent: QWidget, text: str, more: str, choices: Sequence[Choice]) -> QMessageBox:
    """Ask with one button for each choice; the first is the default, the last is what Esc does."""
    box = QMessageBox(parent)
    box.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
    box.setIcon(QMessageBox.Icon.NoIcon)
    box.setWindowTitle("Keepclear")
    box.setText(text)
    box.setInformativeText(more)
    # One role for all keeps the order given, on every desktop.
    buttons = [box.addButton(label, QMessageBox.ButtonRole.ActionRole) for label, _ in choices]
    box.setDefaultButton(buttons[0])
    box.setEscapeButton(buttons[-1])
    actions = {id(button): action for button, (_, action) in zip(buttons, choices, strict=True)}

    def on_clicked(button: QWidget) -> None:
        action = actions.get(id(button))
        box.close()
        if action is not None:
            action()

    box.buttonClicked.connect(on_clicked)
    box.open()
    return box


def _room(parent: QWidget | None, wide: float, high: float) -> QSize:
    """Return a size in heights of a line, as far as the screen has room for it."""
    line = QFontMetrics(QGuiApplication.font()).height()
    screen = (parent.screen() if parent is not None else QGuiApplication.primaryScreen()).availableGeometry()
    return QSize(min(round(wide * line), screen.width() - 40), min(round(high * line), screen.height() - 60))


class TextDialog(QDialog):
    """A lead sentence over a text that can be copied: faults of a file, an unexpected error."""

    def __init__(self, title: str, lead: str, text: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(title)
        self.resize(_room(parent, 46, 24))
        words = QLabel(lead, self)
        words.setWordWrap(True)
        self.text = QPlainTextEdit(text, self)
        self.text.setReadOnly(True)
        self.text.setAccessibleName("Details")
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close, self)
        copy = buttons.addButton("Copy text", QDialogButtonBox.ButtonRole.ActionRole)
        copy.clicked.connect(lambda: QGuiApplication.clipboard().setText(text))
        buttons.button(QDialogButtonBox.StandardButton.Close).setDefault(True)  # Enter closes
        buttons.rejected.connect(self.close)
        layout = QVBoxLayout(self)
        layout.addWidget(words)
        layout.addWidget(self.text, 1)
        layout.addWidget(buttons)


class ReadingDialog(QDialog):
    """A text to be read: About, the keyboard."""

    def __init__(self, title: str, markdown: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(title)
        self.resize(_room(parent, 47, 40))
        self.reader = QTextBrowser(self)
        self.reader.setMarkdown(markdown)
        self.reader.setAccessibleName(title)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close, self)
        buttons.rejected.connect(self.close)
        layout = QVBoxLayout(self)
        layout.addWidget(self.reader, 1)
        layout.addWidget(buttons)
