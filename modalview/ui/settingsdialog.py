"""The settings as a form, drawn from their table; what is chosen holds at once."""

from collections.abc import Callable
from typing import Any

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QGridLayout,
    QLabel,
    QVBoxLayout,
    QWidget,
)

from modalview.ui.settings import ASKED, Setting, Settings


class SettingsDialog(QDialog):
    """One line for each setting, with what it does below."""

    def __init__(
        self, settings: Settings, apply: Callable[[Setting, Any], None], parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.setWindowTitle("Settings")
        self._settings, self._apply = settings, apply
        self.fields: dict[str, QWidget] = {}
        grid = QGridLayout()
        grid.setColumnStretch(1, 1)
        grid.setHorizontalSpacing(14)
        for number, setting in enumerate(ASKED):
            self._add(grid, 2 * number, setting)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close, self)
        back = buttons.addButton("Back to defaults", QDialogButtonBox.ButtonRole.ResetRole)
        back.clicked.connect(self._go_back)
        buttons.rejected.connect(self.close)
        layout = QVBoxLayout(self)
        layout.addLayout(grid)
        layout.addStretch(1)
        layout.addWidget(buttons)
        self.setMinimumWidth(34 * self.fontMetrics().averageCharWidth() * 2)

    def _add(self, grid: QGridLayout, row: int, setting: Setting) -> None:
        field = self.fields[setting.name] = self._field(setting)
        field.setAccessibleName(setting.label)
        field.setAccessibleDescription(setting.text)
        label = QLabel(setting.label, self)
        label.setBuddy(field)
        help_ = QLabel(setting.text, self)
        help_.setProperty("role", "small")
        help_.setWordWrap(True)
        grid.addWidget(label, row, 0)
        grid.addWidget(field, row, 1)
        grid.addWidget(help_, row + 1, 1)

    def _field(self, setting: Setting) -> QWidget:
        now = self._settings.get(setting)
        if setting.kind is bool:
            box = QCheckBox(self)
            box.setChecked(now)
            box.toggled.connect(lambda value: self._apply(setting, value))
            return box
        choice = QComboBox(self)
        for value, name in setting.choices:
            choice.addItem(name, value)
        choice.setCurrentIndex(choice.findData(now))
        choice.currentIndexChanged.connect(lambda index: self._apply(setting, choice.itemData(index)))
        return choice

    def _go_back(self) -> None:
        for setting in ASKED:
            field = self.fields[setting.name]
            if isinstance(field, QCheckBox):
                field.setChecked(setting.default)
            else:
                field.setCurrentIndex(field.findData(setting.default))
