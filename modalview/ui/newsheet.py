"""Beginning a model: an empty sheet in one of the motions, or a starting point from a few numbers."""

from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise

from PySide6.QtCore import Qt
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QGridLayout,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QScrollArea,
    QVBoxLayout,
    QWidget,
)

from modalview.errors import FaultsError
from modalview.model.parts import Model, Motion
from modalview.model.templates import MACHINE_FIELDS, TEMPLATES, Template, TemplateField, build

# Of a character's mean width: a value with its unit, such as "4*1.75e8 N/m".
_VALUE_WIDE = 17


@dataclass(frozen=True, slots=True)
class Choice:
    """One line of the list: an empty sheet, or a starting point."""

    title: str
    sentence: str
    motion: Motion
    template: Template | None = None


_EMPTY = (
    Choice(
        "Empty sheet, single axis",
        "Every part moves along one axis: up and down, most often.",
        Motion.SINGLE_AXIS,
    ),
    Choice("Empty sheet, plane", "Parts move up, sideways and turn in the plane of the sheet.", Motion.PLANE),
    Choice(
        "Empty sheet, shaft train", "Discs turn about their shafts: torsion, with gears.", Motion.SHAFT_TRAIN
    ),
    Choice("Empty sheet, space", "Parts move and turn in all three directions.", Motion.SPACE),
)
CHOICES = (*_EMPTY, *(Choice(one.title, one.sentence, one.motion, one) for one in TEMPLATES))


class NewSheet(QDialog):
    """Asks where to begin; Enter on a line, or the button, begins."""

    def __init__(self, begin: Callable[[Model], None], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle("New model")
        self._begin = begin
        self.list = QListWidget(self)
        self.list.setAccessibleName("Where to begin")
        for choice in CHOICES:
            QListWidgetItem(choice.title, self.list)
        self.list.setMinimumWidth(self.list.sizeHintForColumn(0) + 2 * self.fontMetrics().height())
        self.sentence = QLabel(self)
        self.sentence.setWordWrap(True)
        self._form = QWidget(self)
        self._grid = QGridLayout(self._form)
        self._grid.setContentsMargins(0, 0, 8, 0)
        scroll = QScrollArea(self)
        scroll.setWidgetResizable(True)
        scroll.setFrameShape(QScrollArea.Shape.NoFrame)
        scroll.setFocusPolicy(Qt.FocusPolicy.NoFocus)  # Tab leads to its lines, not to it
        scroll.setWidget(self._form)
        self.fields: dict[str, QLineEdit] = {}
        self.reasons: dict[str, QLabel] = {}
        self._kept: dict[tuple[str, str], str] = {}  # typed before, by starting point and field
        self.buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel, self)
        self.go = self.buttons.addButton("Begin", QDialogButtonBox.ButtonRole.AcceptRole)
        self.go.setDefault(True)
        self.buttons.accepted.connect(self.accept_choice)
        self.buttons.rejected.connect(self.close)
        right = QVBoxLayout()
        right.addWidget(self.sentence)
        right.addWidget(scroll, 1)
        row = QHBoxLayout()
        row.addWidget(self.list, 2)
        row.addLayout(right, 3)
        layout = QVBoxLayout(self)
        layout.addLayout(row, 1)
        layout.addWidget(self.buttons)
        self.list.currentRowChanged.connect(self._show)
        self.list.itemDoubleClicked.connect(lambda _item: self._on_activated())
        self.list.setCurrentRow(0)
        character = self.fontMetrics().averageCharWidth()
        self.resize(110 * character, 30 * self.fontMetrics().height())

    @property
    def choice(self) -> Choice:
        """What is marked in the list."""
        return CHOICES[max(self.list.currentRow(), 0)]

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Let Enter on a starting point lead to its numbers: it must not begin before they are seen."""
        enter = event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter)
        if enter and self.list.hasFocus():
            self._on_activated()
        else:
            super().keyPressEvent(event)

    def _on_activated(self) -> None:
        """Begin an empty sheet; go to the first number of a starting point."""
        if self.choice.template is None:
            self.accept_choice()
        else:
            first = next(iter(self.fields.values()))
            first.setFocus()
            first.selectAll()

    def _show(self) -> None:
        self.sentence.setText(self.choice.sentence)
        while self._grid.count():
            widget = self._grid.takeAt(0).widget()
            if widget is not None:
                widget.hide()
                widget.deleteLater()
        self.fields, self.reasons = {}, {}
        template = self.choice.template
        asked = () if template is None else (*template.fields, *MACHINE_FIELDS)
        for number, field in enumerate(asked):
            self._add(number, field)
        for one, following in pairwise((self.list, *self.fields.values(), self.go)):
            QWidget.setTabOrder(one, following)
        self._grid.setRowStretch(2 * len(CHOICES) + 2 * 24, 1)

    def _add(self, number: int, field: TemplateField) -> None:
        label = QLabel(field.label, self._form)
        line = QLineEdit(self._kept.get((self.choice.title, field.name), field.default), self._form)
        line.setAccessibleName(field.label)
        line.setMinimumWidth(_VALUE_WIDE * self.fontMetrics().averageCharWidth())
        if field.quantity is not None:
            line.setPlaceholderText(field.quantity.example)
        label.setBuddy(line)
        title = self.choice.title
        line.textEdited.connect(lambda text: self._kept.__setitem__((title, field.name), text))
        reason = QLabel(self._form)
        reason.setProperty("role", "refusal")
        reason.setWordWrap(True)
        reason.hide()
        self._grid.addWidget(label, 2 * number, 0)
        self._grid.addWidget(line, 2 * number, 1)
        self._grid.addWidget(reason, 2 * number + 1, 0, 1, 2)
        self.fields[field.name], self.reasons[field.name] = line, reason

    def accept_choice(self) -> None:
        """Begin, or tell which number cannot be read and why."""
        choice = self.choice
        if choice.template is None:
            self._done(Model(motion=choice.motion))
            return
        for reason in self.reasons.values():
            reason.hide()
        try:
            model = build(choice.template, {name: line.text() for name, line in self.fields.items()})
        except FaultsError as error:
            self._refuse(error)
        else:
            self._done(model)

    def _refuse(self, error: FaultsError) -> None:
        first: QLineEdit | None = None
        for fault in error.faults:
            name = fault.path if fault.path in self.fields else next(iter(self.fields))
            self.reasons[name].setText(fault.reason if name == fault.path else str(fault))
            self.reasons[name].show()
            first = first or self.fields[name]
        if first is not None:
            first.setFocus()
            first.selectAll()

    def _done(self, model: Model) -> None:
        self.close()
        self._begin(model)
