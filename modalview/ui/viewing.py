"""From where a space model is seen: the switch on the sheet, menu items, and small pictures that follow."""

from typing import Any

from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtWidgets import QButtonGroup, QHBoxLayout, QToolButton, QWidget

from modalview.model.parts import Motion
from modalview.ui import settings as names

# Names of drawing.view.Viewpoint, with what is seen.
VIEWS = {
    "turned": "Three sides of the machine",
    "front": "Along y: x to the right, z up",
    "side": "From the end that x points to: y to the right, z up",
    "top": "From above: x to the right, y up",
}


class ViewSwitch(QWidget):
    """Four small buttons beside the axes of the sheet; only in space models."""

    asked = Signal(str)

    def __init__(self, sheet: QWidget) -> None:
        super().__init__(sheet)
        self.setObjectName("viewSwitch")
        self.setAccessibleName("View of the sheet")
        group = QButtonGroup(self)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(0)
        self.buttons: dict[str, QToolButton] = {}
        for number, (name, seen) in enumerate(VIEWS.items(), 1):
            button = self.buttons[name] = QToolButton(self)
            button.setText(name)
            button.setCheckable(True)
            button.setAutoRaise(True)
            button.setToolTip(f"{name.capitalize()} view (Ctrl+{number})\n{seen}.")
            button.setAccessibleName(f"{name.capitalize()} view")
            button.setAccessibleDescription(f"{seen}. Key Ctrl+{number}.")
            button.setFocusPolicy(Qt.FocusPolicy.TabFocus)
            button.clicked.connect(lambda _checked=False, name=name: self.asked.emit(name))
            group.addButton(button)
            row.addWidget(button)
        self.hide()

    def stand(self, x: float, y: float) -> None:
        """Stand at a place of the sheet, in pixels."""
        size = self.sizeHint()
        self.setGeometry(round(x), round(y), size.width(), size.height())


class Viewing(QObject):
    """Keeps the view of one window."""

    def __init__(self, window: Any) -> None:
        super().__init__(window)
        self._window = window
        self.switch = ViewSwitch(window.sheet)
        self.switch.asked.connect(self.look)
        window.sheet.laid_out.connect(self._on_laid_out)
        self._show(window._settings.get(names.VIEWPOINT))  # noqa: SLF001  (the window's own part)
        self._enable()

    def turned(self) -> None:
        """See three sides."""
        self.look("turned")

    def front(self) -> None:
        """Look along y."""
        self.look("front")

    def side(self) -> None:
        """Look from the end that x points to."""
        self.look("side")

    def top(self) -> None:
        """Look from above."""
        self.look("top")

    def look(self, viewpoint: str) -> None:
        """See the sheet and the small pictures from elsewhere, and remember it."""
        window = self._window
        model = window.document.model
        if model is None or model.motion is not Motion.SPACE:
            return
        window.sketching.hand.leave_off()
        window._settings.set(names.VIEWPOINT, viewpoint)  # noqa: SLF001  (see above)
        self._show(viewpoint)
        window.sheet.setFocus()
        window.tell(f"{viewpoint.capitalize()} view. {VIEWS[viewpoint]}.")

    def _show(self, viewpoint: str) -> None:
        self.switch.buttons[viewpoint].setChecked(True)
        self._window.sheet.look_from(viewpoint)
        for row in (self._window.modes.row, self._window.damped.row):
            row.card.look_from(viewpoint)
            row.viewport().update()

    def _enable(self) -> bool:
        model = self._window.document.model
        there = model is not None and model.motion is Motion.SPACE
        for name in VIEWS:
            self._window.menus.actions[f"viewing.{name}"].setEnabled(there)
        self.switch.setVisible(there)
        return there

    def _on_laid_out(self) -> None:
        if not self._enable():
            return
        from modalview.drawing.furniture import MARGIN, switch_room, title_size  # noqa: PLC0415  (numpy is late)

        geometry = self._window.sheet.geometry
        sheet = geometry.width, geometry.height
        wide = title_size(geometry.model.title, sheet, geometry.text_scale)[0]
        x, y, _, _ = switch_room(geometry.text_scale, geometry.width - 2 * MARGIN - wide)
        self.switch.stand(x, y)
        self.switch.lower()  # forms stand before it
