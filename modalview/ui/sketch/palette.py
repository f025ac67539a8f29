"""The tools beside the sheet: one button each, with its key."""

from PySide6.QtCore import QSize, Qt, Signal
from PySide6.QtGui import QIcon, QPainter, QPixmap, QResizeEvent
from PySide6.QtWidgets import QButtonGroup, QGridLayout, QToolButton, QWidget

from modalview.model.parts import Motion
from modalview.ui.canvas import paint_drawing
from modalview.ui.sketch.kinds import TOOLS, ToolKind
from modalview.ui.theme import LIGHT, Theme


class ToolButton(QToolButton):
    """One tool: a click takes it in hand, a double click keeps it there."""

    kept = Signal()

    def __init__(self, kind: ToolKind, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.kind = kind
        self.setCheckable(True)
        self.setAutoRaise(True)
        self.setText(kind.key)
        self.setToolButtonStyle(Qt.ToolButtonStyle.ToolButtonTextBesideIcon)
        self.setToolTip(
            f"{kind.name.capitalize()} ({kind.key})\n{kind.hint}.\nDouble-click keeps the tool in hand."
        )
        self.setAccessibleName(f"Tool: {kind.name}")
        self.setAccessibleDescription(f"{kind.hint}. Key {kind.key}.")
        self.setFocusPolicy(Qt.FocusPolicy.TabFocus)

    def set_theme(self, theme: Theme) -> None:
        """Draw the icon in other colours, sharp on this screen."""
        from modalview.drawing.toolicons import SIZE, tool_icon  # noqa: PLC0415  (numpy comes after the first paint)

        ratio = self.devicePixelRatioF()
        picture = QPixmap(round(SIZE * ratio), round(SIZE * ratio))
        picture.setDevicePixelRatio(ratio)
        picture.fill(Qt.GlobalColor.transparent)
        painter = QPainter(picture)
        drawing = tool_icon(self.kind.name)
        painter.translate(-drawing.bounds[0], -drawing.bounds[1])
        paint_drawing(painter, drawing, theme)
        painter.end()
        self.setIcon(QIcon(picture))
        self.setIconSize(QSize(round(SIZE), round(SIZE)))

    def mouseDoubleClickEvent(self, event: object) -> None:  # noqa: N802  (Qt's name)
        """Keep the tool in hand."""
        del event
        self.kept.emit()


class Palette(QWidget):
    """A column of tools beside the sheet, or two where it is low; those without a meaning are absent."""

    tool_taken = Signal(str, bool)  # name, whether it stays in hand

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("palette")
        self.setAccessibleName("Drawing tools")
        self._theme: Theme = LIGHT
        self._dressed = False
        self._group = QButtonGroup(self)
        self.buttons = {kind.name: ToolButton(kind, self) for kind in TOOLS}
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(3, 4, 2, 2)
        self._grid.setSpacing(0)
        for name, button in self.buttons.items():
            self._group.addButton(button)
            button.clicked.connect(lambda _checked=False, name=name: self.tool_taken.emit(name, False))
            button.kept.connect(lambda name=name: self.tool_taken.emit(name, True))
        self._shown: tuple[str, ...] = tuple(self.buttons)
        self._arranged: tuple[int, tuple[str, ...]] = (0, ())
        self.show_tool("choose")
        self._arrange()

    def set_theme(self, theme: Theme) -> None:
        """Draw the icons in other colours."""
        self._theme = theme
        self._dressed = False
        if self.isVisible():
            self._dress()

    def _dress(self) -> None:
        for button in self.buttons.values():
            button.set_theme(self._theme)
        self._dressed = True

    def showEvent(self, event: object) -> None:  # noqa: N802  (Qt's name)
        """Draw the icons when they are first seen."""
        super().showEvent(event)
        if not self._dressed:
            self._dress()
        self._arrange()

    def show_motion(self, motion: Motion) -> None:
        """Show the tools that have a meaning in a motion."""
        self._shown = tuple(kind.name for kind in TOOLS if motion in kind.motions)
        self._arrange()

    def show_tool(self, name: str) -> None:
        """Mark the tool in hand."""
        self.buttons[name].setChecked(True)

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Stand in as many columns as the height asks for."""
        super().resizeEvent(event)
        self._arrange()

    def _arrange(self) -> None:
        high = max(button.sizeHint().height() for button in self.buttons.values())
        rows = max((self.height() - 6) // high, 4)
        if self._arranged == (rows, self._shown):
            return
        self._arranged = rows, self._shown
        for name, button in self.buttons.items():
            self._grid.removeWidget(button)
            button.setVisible(name in self._shown)
        for number, name in enumerate(self._shown):
            self._grid.addWidget(self.buttons[name], number % rows, number // rows)
        for row in range(len(TOOLS) + 1):
            self._grid.setRowStretch(row, 1 if row == min(rows, len(self._shown)) else 0)
