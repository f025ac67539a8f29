"""The right column: machines and their speeds, orders checked, what was not checked, notes."""

from itertools import pairwise
from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import (
    QFrame,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QScrollArea,
    QSizePolicy,
    QToolButton,
    QVBoxLayout,
    QWidget,
)

from modalview.model.parts import Machine, Model
from modalview.ui.analysis import Analysis
from modalview.ui.checkcard import CheckCard
from modalview.ui.document import Document
from modalview.ui.doubts import Doubts
from modalview.ui.entry import EntryField
from modalview.ui.theme import LIGHT, Theme
from modalview.ui.values import ValueRow, machine_rows

_NO_MACHINE = (
    "Nothing is checked yet: no machine runs here. Take the tool F and click on a body where an order of a "
    "machine's speed, or a fixed frequency, acts; give its speed and the margin wanted."
)


def _heading(text: str, parent: QWidget) -> QLabel:
    label = QLabel(text, parent)
    label.setProperty("role", "heading")
    label.setWordWrap(True)
    return label


def _small_button(text: str, tip: str, parent: QWidget) -> QToolButton:
    button = QToolButton(parent)
    button.setText(text)
    button.setToolTip(tip)
    button.setAutoRaise(True)
    button.setProperty("role", "small")
    button.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    return button


class MachineForm(QFrame):
    """Speed and margin of one machine, edited in place."""

    def __init__(self, machine: Machine, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 6)
        self._layout.setSpacing(4)
        head = QHBoxLayout()
        head.setSpacing(2)
        self.heading = _heading("", self)
        head.addWidget(self.heading, 1)
        self.change = _small_button("Change", "Type all values of this machine and its orders", self)
        self.remove = _small_button("Remove", "Take this machine and its orders away", self)
        head.addWidget(self.change)
        head.addWidget(self.remove)
        self._layout.addLayout(head)
        self.show_name(machine)
        self.fields: dict[tuple[str | int, ...], EntryField] = {}

    def show_name(self, machine: Machine) -> None:
        """Show the machine's name."""
        called = machine.name or machine.id
        self.heading.setText(f"Machine: {called}")
        self.change.setAccessibleName(f"Change machine {called}")
        self.remove.setAccessibleName(f"Remove machine {called}")

    def show_rows(self, rows: list[ValueRow]) -> None:
        """Show the values; fields are kept while the machine has the same ones."""
        if [row.address for row in rows] != list(self.fields):
            self._rebuild(rows)
        for row in rows:
            self.fields[row.address].show_value(row.text, row.converted)

    def _rebuild(self, rows: list[ValueRow]) -> None:
        for old in self.fields.values():
            self._layout.removeWidget(old)
            old.deleteLater()
        self.fields = {row.address: self._field(row) for row in rows}
        width = max(one.label.sizeHint().width() for one in self.fields.values()) if self.fields else 0
        for field in self.fields.values():
            field.label.setMinimumWidth(width)

    def _field(self, row: ValueRow) -> EntryField:
        field = EntryField(row.what, lambda text: self._document.type_value(row.address, text), self)
        self._layout.addWidget(field)
        return field


class Results(QScrollArea):
    """The column; a long one scrolls."""

    force_asked = Signal()
    change_asked = Signal(str)  # machine
    removal_asked = Signal(str, str)  # machine, and an order of it or "" for the whole

    def __init__(self, document: Document, analysis: Analysis, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document, self._analysis = document, analysis
        self._theme: Theme = LIGHT
        self._machines: dict[str, MachineForm] = {}
        self._cards: list[CheckCard] = []
        self._led: list[QWidget] = []
        self.setObjectName("results")
        self.setWidgetResizable(True)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setMinimumWidth(250)
        self._inside = QWidget(self)
        self._inside.setObjectName("resultsInside")
        self._column = QVBoxLayout(self._inside)
        self._column.setContentsMargins(14, 10, 12, 10)
        self._column.setSpacing(6)
        self._forms = self._part()
        self._heading = _heading("Orders checked", self._inside)
        self._column.addWidget(self._heading)
        self._checks = self._part()
        self.none_yet = QLabel(_NO_MACHINE, self._inside)
        self.none_yet.setWordWrap(True)
        self.none_yet.setProperty("role", "small")
        self._column.addWidget(self.none_yet)
        self.add = QPushButton("Add an order or frequency…", self._inside)
        self.add.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        self.add.setToolTip("Ask what acts on the chosen body; the tool F asks at any place on a body.")
        self.add.clicked.connect(self.force_asked)
        self._column.addWidget(self.add)
        self.doubts = Doubts(self._inside)
        self._column.addWidget(self.doubts)
        self.not_checked = self._words("Not checked")
        self.notes = self._words("Notes on the model")
        self.story = self._words("About this model")
        self._column.addStretch(1)
        self.setWidget(self._inside)

    def _part(self) -> QVBoxLayout:
        part = QVBoxLayout()
        part.setSpacing(6)
        self._column.addLayout(part)
        return part

    def _words(self, heading: str) -> QLabel:
        title = _heading(heading, self._inside)
        words = QLabel(self._inside)
        words.setWordWrap(True)
        words.setProperty("role", "small")
        words.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        words.setAccessibleName(heading)
        words.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Minimum)
        title.setBuddy(words)
        self._column.addWidget(title)
        self._column.addWidget(words)
        words.setProperty("title", title)
        return words

    def set_theme(self, theme: Theme) -> None:
        """Repaint the signs."""
        self._theme = theme
        self.show_results()

    def show_model(self, model: Model, system: str = "SI") -> None:
        """Show the machines and the story of a model."""
        for gone in set(self._machines) - {machine.id for machine in model.machines}:
            self._machines.pop(gone).deleteLater()
        for machine in model.machines:
            if machine.id not in self._machines:
                form = self._machines[machine.id] = MachineForm(machine, self._document, self._inside)
                form.remove.clicked.connect(
                    lambda _checked=False, name=machine.id: self.removal_asked.emit(name, "")
                )
                form.change.clicked.connect(
                    lambda _checked=False, name=machine.id: self.change_asked.emit(name)
                )
                self._forms.addWidget(form)
            self._machines[machine.id].show_name(machine)
            self._machines[machine.id].show_rows(machine_rows(model, machine, system))
        self.none_yet.setVisible(not any(machine.excitations for machine in model.machines))
        _say(self.story, (model.notes,) if model.notes else ())

    def forget_machines(self) -> None:
        """Start anew for another model: refused entries of the old one go."""
        for form in self._machines.values():
            form.deleteLater()
        self._machines.clear()

    def show_results(self) -> None:
        """Show the checks: with their nearest modes once these are found."""
        current = self._analysis.solution_current
        known: Any = self._analysis.solution if current else self._analysis.outlook
        checks = known.checks if known is not None else ()
        self._heading.setVisible(bool(checks))
        while len(self._cards) < len(checks):
            card = CheckCard(self._inside)
            card.change_asked.connect(self.change_asked)
            card.removal_asked.connect(self.removal_asked)
            self._cards.append(card)
            self._checks.addWidget(card)
        machines = self._document.model.machines if self._document.model is not None else ()
        names = {one.id: one.name or one.id for one in machines} if len(machines) > 1 else {}
        for card, check in zip(self._cards, checks, strict=False):
            machine = names.get(check.band.machine, "")
            card.show_check(check, self._theme, current=current, machine=machine)
        for number, card in enumerate(self._cards):
            card.setVisible(number < len(checks))
        outlook = self._analysis.outlook
        self.show_doubts()
        _say(self.not_checked, outlook.not_checked if outlook else ())
        _say(self.notes, outlook.notes if outlook else ())
        self._lead_tab_key()

    def show_doubts(self) -> None:
        """Show the doubts, which come after the verdict."""
        self.doubts.show_known(self._document.model, self._analysis)
        self._lead_tab_key()

    def _lead_tab_key(self) -> None:
        """Let the Tab key go down the column; what was made last would come after all else of the window."""
        places: list[QWidget] = []
        for form in self._machines.values():
            places += [form.change, form.remove, *(field.line for field in form.fields.values())]
        places += [*self._cards, self.add, *self.doubts.entries]
        if places != self._led:
            self._led = places
            for before, after in pairwise([self, *places]):
                QWidget.setTabOrder(before, after)


def _say(label: QLabel, lines: tuple[str, ...]) -> None:
    label.setText("\n".join(lines) if len(lines) < 2 else "\n".join(f"· {line}" for line in lines))
    label.setVisible(bool(lines))
    label.property("title").setVisible(bool(lines))
