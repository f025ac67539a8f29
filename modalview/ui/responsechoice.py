"""What of the response is looked at: quantity, point and direction, machine."""

from typing import Any

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QCheckBox, QComboBox, QHBoxLayout, QWidget

from modalview.model.parts import FREEDOMS, Body, Model, Motion
from modalview.ui.questions import CHOSEN

LARGEST = "largest"
NAMED = "named"  # before a place that the model names itself: a limit's or an excitation's


class ResponseChoice(QWidget):
    """A row of lists; what a person chose stays while the model has it."""

    changed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.machine, self.quantity, self.place, self.direction = (
            _list(name, tip, self)
            for name, tip in (
                ("Machine", "Whose excitations act"),
                ("Quantity", "What is shown over the speed"),
                ("Place", "Where it is looked at: a body chosen on the sheet is taken too"),
                ("Direction", "Along which axis; largest: the larger axis of the ellipse of motion"),
            )
        )
        self.logarithmic = QCheckBox("logarithmic", self)
        self.logarithmic.setToolTip("Amplitudes by their logarithm")
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(8)
        for box, share in ((self.machine, 3), (self.quantity, 4), (self.place, 5), (self.direction, 2)):
            row.addWidget(box, share)
            box.activated.connect(self.changed)
        row.addWidget(self.logarithmic)

    def show_model(self, model: Model, *, anew: bool) -> None:
        """Offer the machines and bodies of a model."""
        _fill(self.machine, [(one.name or one.id, one.id) for one in model.machines], keep=not anew)
        self.machine.setVisible(len(model.machines) > 1)
        directions = _directions(model.motion)
        _fill(self.direction, [(name, name) for name in directions], keep=not anew)
        self.show_direction(there=self.body is not None)
        if anew:
            _fill(self.place, [], keep=False)

    def show_quantities(self, offered: list[tuple[str, str]], wanted: str) -> None:
        """Offer quantities: (words with unit, quantity)."""
        _fill(self.quantity, offered, keep=True, wanted=wanted)

    def show_places(self, named: list[tuple[str, str]], bodies: tuple[Body, ...]) -> None:
        """Offer what the answer names (label, id of a watch, or of a part), then every body."""
        offered = [(label, f"{NAMED} {one}") for label, one in named if one != CHOSEN]
        offered += [(body.name or body.id, body.id) for body in bodies]
        _fill(self.place, offered, keep=True)

    def show_parts(self, offered: list[tuple[str, str]]) -> None:
        """Offer supports and links, for forces."""
        _fill(self.place, [(label, f"{NAMED} {one}") for label, one in offered], keep=True)

    def show_direction(self, *, there: bool) -> None:
        """Offer directions, where there are several; a place that the answer names has its own."""
        self.direction.setVisible(there and self.direction.count() > 1)

    @property
    def body(self) -> str | None:
        """The body chosen beside what the answer names itself, or None."""
        chosen = self.place.currentData()
        return None if chosen is None or chosen.startswith(f"{NAMED} ") else chosen

    @property
    def named(self) -> str | None:
        """The place chosen of those that the answer names."""
        chosen = self.place.currentData() or ""
        return chosen.removeprefix(f"{NAMED} ") if chosen.startswith(f"{NAMED} ") else None

    @property
    def way(self) -> str | None:
        """The direction chosen; None is the largest."""
        chosen = self.direction.currentData()
        return None if chosen in (None, LARGEST) else chosen

    def choose_body(self, body: str) -> bool:
        """Look at a body; whether it is offered and was not looked at already."""
        index = self.place.findData(body)
        if index < 0 or index == self.place.currentIndex():
            return False
        self.place.setCurrentIndex(index)
        self.changed.emit()
        return True


def _directions(motion: Motion) -> tuple[str, ...]:
    """Return the directions to look along: where there are several, the largest comes first."""
    along = tuple(name for name in FREEDOMS[motion] if not name.startswith("r"))
    return (LARGEST, *along) if len(along) > 1 else (along or (LARGEST,))


def _list(name: str, tip: str, parent: QWidget) -> QComboBox:
    made = QComboBox(parent)
    made.setAccessibleName(name)
    made.setToolTip(tip)
    made.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
    made.setMinimumContentsLength(6)
    return made


def _fill(box: QComboBox, offered: list[tuple[str, Any]], *, keep: bool, wanted: Any = None) -> None:
    """Offer (words, data) in a list; what was chosen stays chosen where it is offered still."""
    before = box.currentData() if keep else None
    if [(box.itemText(i), box.itemData(i)) for i in range(box.count())] != offered:
        box.clear()
        for words, data in offered:
            box.addItem(words, data)
    index = box.findData(before) if before is not None else -1
    if index < 0 and wanted is not None:
        index = box.findData(wanted)
    box.setCurrentIndex(max(index, 0) if offered else -1)
    box.view().setMinimumWidth(box.view().sizeHintForColumn(0) + 24)
