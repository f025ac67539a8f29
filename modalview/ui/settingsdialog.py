"""The settings as a form, drawn from their table; what is chosen holds at once."""

from collections.abc import Callable
from typing import Any

from PySide6.QtCore import QEvent, Qt, QTimer
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QFrame,
    QGridLayout,
    QLabel,
    QScrollArea,
    QVBoxLayout,
    QWidget,
)

from modalview.ui.settings import ASKED, Setting, Settings

_WIDTH = 34.0  # heights of a line


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
        self.form = QWidget(self)
        self.form.setObjectName("settingsForm")
        grid = QGridLayout(self.form)
        grid.setColumnStretch(1, 1)
        grid.setHorizontalSpacing(14)
        for number, setting in enumerate(ASKED):
            self._add(grid, 2 * number, setting)
        grid.setRowStretch(2 * len(ASKED), 1)
        self._scroll = QScrollArea(self)
        self._scroll.setObjectName("settingsScroll")
        self._scroll.setWidgetResizable(True)
        self._scroll.setFrameShape(QFrame.Shape.NoFrame)
        self._scroll.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self._scroll.setWidget(self.form)
        self._buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close, self)
        back = self._buttons.addButton("Back to defaults", QDialogButtonBox.ButtonRole.ResetRole)
        back.clicked.connect(self._go_back)
        back.setAutoDefault(False)
        self._buttons.rejected.connect(self.close)
        layout = QVBoxLayout(self)
        layout.addWidget(self._scroll, 1)
        layout.addWidget(self._buttons)
        # The text size may be changed here: the layouts have measured the new one when this comes.
        self._fitter = QTimer(self, singleShot=True, interval=0)
        self._fitter.timeout.connect(self._fit)
        self._fit()

    def _fit(self) -> None:
        """Be as large as the text asks for, as far as the screen has room; the rest scrolls."""
        screen = self.screen().availableGeometry()
        wide = min(round(_WIDTH * self.fontMetrics().height()), screen.width() - 40)
        self.form.ensurePolished()
        margins = self.layout().contentsMargins()
        inner = wide - margins.left() - margins.right() - self._scroll.verticalScrollBar().sizeHint().width()
        form = self.form.layout().heightForWidth(inner)
        high = form + self._buttons.sizeHint().height() + margins.top() + margins.bottom() + 12
        self.resize(wide, min(high, screen.height() - 60))

    def changeEvent(self, event: QEvent) -> None:  # noqa: N802  (Qt's name)
        """Follow the text size."""
        super().changeEvent(event)
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.StyleChange) and hasattr(self, "_fitter"):
            self._fitter.start()

    def _add(self, grid: QGridLayout, row: int, setting: Setting) -> None:
        field = self.fields[setting.name] = self._field(setting)
        field.setAccessibleName(setting.label)
        field.setAccessibleDescription(setting.text)
        label = QLabel(setting.label, self)
        label.setBuddy(field)
        help_ = QLabel(setting.text, self)
        help_.setProperty("role", "small")
        help_.setWordWrap(True)
        help_.setContentsMargins(0, 0, 0, 6)
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
