"""Asks for a tuned absorber: on which body, along which direction, how heavy, with or without a damper."""

from PySide6.QtCore import Signal
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QPushButton,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from modalview.model.parts import FREEDOMS, Model, Motion
from modalview.ui.questions import WantedAbsorber

RATIO = "10 %"


class AbsorberLine(QWidget):
    """Two lines under the axis of a value; what is asked for stands first among the options."""

    asked = Signal(object)  # WantedAbsorber

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._model: Model | None = None  # not offered yet: a large one has many bodies
        self.body, self.direction = QComboBox(self), QComboBox(self)
        self.body.setAccessibleName("Body that the absorber sits on")
        self.body.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.body.setMinimumContentsLength(12)
        self.body.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.direction.setAccessibleName("Direction of the absorber")
        self.ratio = QLineEdit(RATIO, self)
        self.ratio.setAccessibleName("Mass of the absorber over the mass it works on")
        self.ratio.setToolTip("Mass of the absorber over the mass it works on; 5 to 15 % is common practice")
        self.ratio.setFixedWidth(6 * self.fontMetrics().height())
        self.damped = QCheckBox("with damper", self)
        self.damped.setToolTip(
            "Den Hartog's best damper: it keeps the response of a mode low over all speeds"
        )
        self.show_it = QPushButton("Work it out", self)
        self.show_it.setAccessibleName("Work out this absorber and show it among the options")
        self.show_it.clicked.connect(self._ask)
        self.ratio.returnPressed.connect(self._ask)
        heading = QLabel("Tuned absorber on", self)
        heading.setProperty("role", "strong")
        above, below = QHBoxLayout(), QHBoxLayout()
        above.addWidget(heading)
        above.addWidget(self.body, 1)
        above.addWidget(QLabel("along", self))
        above.addWidget(self.direction)
        below.addWidget(QLabel("mass ratio", self))
        below.addWidget(self.ratio)
        below.addWidget(self.damped)
        below.addStretch(1)
        below.addWidget(self.show_it)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 2, 0, 2)
        layout.setSpacing(2)
        layout.addLayout(above)
        layout.addLayout(below)

    def show_model(self, model: Model) -> None:
        """Offer a model's bodies and directions once in sight; what is chosen stays where it is there."""
        self._model = model
        if self.isVisible():
            self._offer_model()

    def showEvent(self, event: QShowEvent) -> None:  # noqa: N802  (Qt's name)
        """Offer what the model of today has."""
        super().showEvent(event)
        self._offer_model()

    def _offer_model(self) -> None:
        model, self._model = self._model, None
        if model is None:
            return
        known = FREEDOMS[model.motion]
        ways = known if model.motion is Motion.SHAFT_TRAIN else tuple(one for one in known if one in "xyz")
        bodies = [(one.name or one.id, one.id) for one in model.bodies]
        _offer(self.body, bodies)
        _offer(self.direction, [(one, one) for one in ways])

    def fit(self) -> None:
        """Follow the size of text."""
        self.ratio.setFixedWidth(6 * self.fontMetrics().height())

    def _ask(self) -> None:
        if self.body.currentData() is not None:
            wanted = WantedAbsorber(
                self.body.currentData(),
                self.direction.currentData(),
                self.ratio.text(),
                self.damped.isChecked(),
            )
            self.asked.emit(wanted)


def _offer(box: QComboBox, offered: list[tuple[str, str]]) -> None:
    known = [(box.itemText(row), box.itemData(row)) for row in range(box.count())]
    if known == offered:
        return
    chosen = box.currentData()
    box.clear()
    for text, data in offered:
        box.addItem(text, data)
    box.setCurrentIndex(max(box.findData(chosen), 0))
