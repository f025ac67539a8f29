"""Places that share one room: a row of tabs over the one that is shown."""

from PySide6.QtCore import Signal
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QHBoxLayout, QSizePolicy, QStackedWidget, QTabBar, QVBoxLayout, QWidget

from modalview.ui.elided import ElidedLabel


class Pages(QWidget):
    """Places under tabs, each known by a name; a line of text stands beside the tabs."""

    shown = Signal(str)

    def __init__(self, accessible_name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.tabs = QTabBar(self)
        self.tabs.setDrawBase(False)
        self.tabs.setExpanding(False)
        self.tabs.setUsesScrollButtons(True)
        self.tabs.setAccessibleName(accessible_name)
        self.tabs.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Fixed)
        self.line = ElidedLabel(self)
        self.line.setProperty("role", "small")
        self._stack = QStackedWidget(self)
        self._places: dict[str, QWidget] = {}
        self.tabs.currentChanged.connect(self._on_changed)
        top = QHBoxLayout()
        top.setContentsMargins(8, 0, 12, 0)
        top.setSpacing(10)
        top.addWidget(self.tabs)
        top.addWidget(self.line, 1)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addLayout(top)
        layout.addWidget(self._stack, 1)

    def add(self, name: str, title: str, place: QWidget, at: int | None = None) -> None:
        """Add a place, at a position among the tabs or at the end."""
        if name in self._places:
            return
        self._places[name] = place
        self._stack.addWidget(place)
        index = self.tabs.insertTab(self.tabs.count() if at is None else at, title)
        self.tabs.setTabData(index, name)
        self.refit()
        self._on_changed(self.tabs.currentIndex())

    def take(self, name: str) -> QWidget | None:
        """Take a place out, for another room."""
        place = self._places.pop(name, None)
        if place is not None:
            self._stack.removeWidget(place)
            index = self._index(name)
            self.tabs.removeTab(index)
        return place

    def offer(self, name: str, *, there: bool) -> None:
        """Show or hide the tab of a place."""
        index = self._index(name)
        if index >= 0:
            self.tabs.setTabVisible(index, there)

    def has(self, name: str) -> bool:
        """Return whether a place is here."""
        return name in self._places

    def show_page(self, name: str) -> None:
        """Show a place."""
        index = self._index(name)
        if index >= 0:
            self.tabs.setCurrentIndex(index)

    def current(self) -> str:
        """Return the name of the place shown."""
        return self.tabs.tabData(self.tabs.currentIndex()) or ""

    def showEvent(self, event: QShowEvent) -> None:  # noqa: N802  (Qt's name)
        """Ask anew: the tabs have measured their texts by now."""
        super().showEvent(event)
        self.refit()

    def refit(self) -> None:
        """Give the tabs the room that their texts need now: hidden ones do not ask for it themselves."""
        self.tabs.updateGeometry()

    def _index(self, name: str) -> int:
        return next((i for i in range(self.tabs.count()) if self.tabs.tabData(i) == name), -1)

    def _on_changed(self, index: int) -> None:
        place = self._places.get(self.tabs.tabData(index) or "")
        if place is not None:
            self._stack.setCurrentWidget(place)
            self.shown.emit(self.current())
