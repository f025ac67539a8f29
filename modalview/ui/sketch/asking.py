"""Small questions of the sheet: one text, or a part by its name."""

from collections.abc import Callable, Iterable

from PySide6.QtCore import Qt
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QLabel,
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QVBoxLayout,
    QWidget,
)

from modalview.errors import InputError
from modalview.model.parts import Model
from modalview.ui.sketch.kinds import kind_of

_ID = Qt.ItemDataRole.UserRole


class AskText(QDialog):
    """Asks for one text; what cannot be read stays, with its reason."""

    def __init__(
        self, title: str, label: str, text: str, take: Callable[[str], None], parent: QWidget
    ) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle(title)
        self._take = take
        words = QLabel(label, self)
        self.line = QLineEdit(text, self)
        self.line.selectAll()
        words.setBuddy(self.line)
        self.reason = QLabel(self)
        self.reason.setProperty("role", "refusal")
        self.reason.setWordWrap(True)
        self.reason.hide()
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel, self)
        go = buttons.addButton(title, QDialogButtonBox.ButtonRole.AcceptRole)
        go.setDefault(True)
        buttons.accepted.connect(self.take)
        buttons.rejected.connect(self.close)
        layout = QVBoxLayout(self)
        for widget in (words, self.line, self.reason, buttons):
            layout.addWidget(widget)
        self.setMinimumWidth(48 * self.fontMetrics().averageCharWidth())

    def take(self) -> None:
        """Hand the text over, or tell why it cannot be read."""
        try:
            self._take(self.line.text())
        except InputError as error:
            self.reason.setText(str(error))
            self.reason.show()
            self.line.selectAll()
        else:
            self.close()


def found(parts: Iterable[tuple[str, str]], text: str) -> list[tuple[str, str]]:
    """Return the parts whose words hold all that is typed; those that begin with it, or hold it whole, first.

    >>> found([("k2", "mount 1 left"), ("k3", "mount 2 left")], "mount 2")
    [('k3', 'mount 2 left')]
    >>> found([("mt2", "mount 1 left mt2"), ("mt4", "mount 2 left mt4")], "mount 2 left")[0]
    ('mt4', 'mount 2 left mt4')
    """
    whole = " ".join(text.casefold().split())
    holding = [one for one in parts if all(word in one[1].casefold() for word in whole.split())]
    return sorted(
        holding, key=lambda one: (not one[1].casefold().startswith(whole), whole not in one[1].casefold())
    )


class FindPart(QDialog):
    """Lists the parts whose name, id or kind holds what is typed; Enter shows the one marked."""

    def __init__(self, model: Model, show: Callable[[str], None], parent: QWidget) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle("Find a part")
        self._show = show
        self._parts = [
            (one.id, f"{one.name or one.id} · {kind_of(model, one.id)} {one.id if one.name else ''}".rstrip())
            for group in (model.bodies, model.links, model.supports)
            for one in group
        ]
        self.line = QLineEdit(self)
        self.line.setPlaceholderText("name, id or kind")
        self.line.setAccessibleName("Find a part")
        self.list = QListWidget(self)
        self.list.setAccessibleName("Parts found")
        self.line.textChanged.connect(self._filter)
        self.line.returnPressed.connect(self._go)
        self.list.itemActivated.connect(lambda _item: self._go())
        layout = QVBoxLayout(self)
        layout.addWidget(self.line)
        layout.addWidget(self.list)
        self._filter("")
        self.resize(56 * self.fontMetrics().averageCharWidth(), 20 * self.fontMetrics().height())

    def _filter(self, text: str) -> None:
        self.list.clear()
        for part, words in found(self._parts, text):
            item = QListWidgetItem(words, self.list)
            item.setData(_ID, part)
        self.list.setCurrentRow(0)

    def _go(self) -> None:
        item = self.list.currentItem()
        if item is not None:
            self.close()
            self._show(item.data(_ID))

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Let the arrows go through the list while the line has the keyboard."""
        if event.key() in (Qt.Key.Key_Down, Qt.Key.Key_Up) and self.line.hasFocus():
            step = 1 if event.key() == Qt.Key.Key_Down else -1
            row = min(max(self.list.currentRow() + step, 0), self.list.count() - 1)
            self.list.setCurrentRow(row)
        else:
            super().keyPressEvent(event)
