"""The window's places and looks: what a person sees before anything happens."""

from typing import Any

from PySide6.QtCore import Qt
from PySide6.QtGui import QFontMetrics
from PySide6.QtWidgets import (
    QApplication,
    QHBoxLayout,
    QLabel,
    QMainWindow,
    QSplitter,
    QStackedWidget,
    QTabBar,
    QVBoxLayout,
    QWidget,
)

from modalview import __version__
from modalview.places import resources
from modalview.ui import settings as names
from modalview.ui.analysis import Analysis
from modalview.ui.banner import Banner
from modalview.ui.dialogs import ReadingDialog
from modalview.ui.document import Document
from modalview.ui.examples import bundled_examples, first_of_each
from modalview.ui.menus import Menus, keyboard_text
from modalview.ui.modes import Modes
from modalview.ui.parttable import PartTable
from modalview.ui.playbar import PlayBar
from modalview.ui.results import Results
from modalview.ui.scale import ScalePanel
from modalview.ui.settings import Settings
from modalview.ui.sheet import Sheet
from modalview.ui.status import StatusLine
from modalview.ui.theme import apply_theme
from modalview.ui.welcome import Welcome

_SIZE = (1280, 800)
_ZOOM = 1.25
# In heights of a line, so that larger text keeps its room.
_RESULTS_WIDTH, _BELOW_HEIGHT = 17.5, 13.5


class Frame(QMainWindow):
    """Lays out the places, dresses them, and does what only concerns the looks."""

    def __init__(self, settings: Settings, document: Document, analysis: Analysis) -> None:
        super().__init__()
        self._settings = settings
        self.document, self.analysis = document, analysis
        self._build()
        self.menus = Menus(self)

    def _build(self) -> None:
        self.resize(*_SIZE)
        self.setMinimumSize(840, 540)
        self.setAcceptDrops(True)
        self.banner = Banner(self)
        self.sheet = Sheet(self)
        self.play_bar = PlayBar(self)
        self.scale = ScalePanel(self)
        self.results = Results(self.document, self.analysis, self)
        self.modes = Modes(self)
        self.parts = PartTable(self.document, self)
        self.status = StatusLine(self.statusBar())
        self.welcome = Welcome(first_of_each(bundled_examples()), self)
        self.work = QWidget(self)
        column = QVBoxLayout(self.work)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.banner)
        column.addWidget(self._places(), 1)
        self.pages = QStackedWidget(self)
        self.pages.addWidget(self.welcome)
        self.pages.addWidget(self.work)
        self.setCentralWidget(self.pages)

    def _places(self) -> QSplitter:
        left = QSplitter(Qt.Orientation.Vertical, self)
        left.addWidget(self._drawing())
        left.addWidget(self._tabs())
        left.setStretchFactor(0, 1)
        left.setSizes([440, 236])
        left.setChildrenCollapsible(False)
        places = QSplitter(Qt.Orientation.Horizontal, self)
        for widget in (left, self.scale, self.results):
            places.addWidget(widget)
        places.setStretchFactor(0, 3)
        places.setStretchFactor(1, 1)
        places.setSizes([652, 322, 306])
        places.setChildrenCollapsible(False)
        return places

    def _drawing(self) -> QWidget:
        above = QWidget(self)
        above.setObjectName("drawing")
        layout = QVBoxLayout(above)
        layout.setContentsMargins(0, 0, 0, 4)
        layout.setSpacing(0)
        layout.addWidget(self.sheet, 1)
        layout.addWidget(self.play_bar)
        return above

    def _tabs(self) -> QWidget:
        below = self.below = QWidget(self)
        self.tabs = QTabBar(below)
        self.tabs.setDrawBase(False)
        self.tabs.addTab("Modes")
        self.tabs.addTab("Values")
        self.tabs.setAccessibleName("Modes or values")
        self.proof = QLabel(below)
        self.proof.setProperty("role", "small")
        self.proof.setWordWrap(True)
        self._pages = QStackedWidget(below)
        self._pages.addWidget(self.modes)
        self._pages.addWidget(self.parts)
        self.tabs.currentChanged.connect(self._pages.setCurrentIndex)
        top = QHBoxLayout()
        top.setContentsMargins(8, 0, 12, 0)
        top.addWidget(self.tabs)
        top.addWidget(self.proof, 1)
        layout = QVBoxLayout(below)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addLayout(top)
        layout.addWidget(self._pages, 1)
        return below

    # Looks

    def apply_theme(self) -> None:
        """Dress the window as the settings say."""
        percent = self._settings.get(names.TEXT_SIZE)
        theme = apply_theme(QApplication.instance(), self._settings.get(names.THEME), percent)
        self.banner.set_theme(theme)
        self.sheet.set_theme(theme, percent / 100)
        self.scale.canvas.set_theme(theme, percent / 100)
        self.modes.set_theme(theme)
        self.results.set_theme(theme)
        self.parts.lines.set_theme(theme)
        self.parts.fit_columns()
        self.play_bar.set_theme(theme)
        line = QFontMetrics(QApplication.font()).height()
        self.results.setMinimumWidth(round(_RESULTS_WIDTH * line))
        self.below.setMinimumHeight(round(_BELOW_HEIGHT * line))
        self.welcome.set_theme(theme)

    def on_theme(self, choice: Any) -> None:
        """Light, dark or the system's."""
        self._settings.set(names.THEME, choice)
        self.apply_theme()

    def on_text_size(self, percent: Any) -> None:
        """Enlarge all text."""
        self._settings.set(names.TEXT_SIZE, percent)
        self.apply_theme()

    # On the sheet and between the places

    def on_fit(self) -> None:
        """Show the whole model."""
        self.sheet.fit()

    def on_zoom_in(self) -> None:
        """Enlarge the sheet."""
        self.sheet.zoom(_ZOOM)

    def on_zoom_out(self) -> None:
        """Show more of the sheet."""
        self.sheet.zoom(1 / _ZOOM)

    def on_go_to_sheet(self) -> None:
        """Give the keyboard to the sheet."""
        self.sheet.setFocus()

    def on_go_to_modes(self) -> None:
        """Give the keyboard to the row of modes."""
        self.tabs.setCurrentIndex(0)
        self.modes.row.setFocus()

    def on_go_to_values(self) -> None:
        """Give the keyboard to the parts table."""
        self.tabs.setCurrentIndex(1)
        self.parts.setFocus()

    def on_go_to_results(self) -> None:
        """Give the keyboard to the first field of the results."""
        self.results.setFocus()
        self.results.focusNextChild()

    def on_move(self, moving: bool) -> None:  # noqa: FBT001  (a slot)
        """Let the modes move, or stand still at their largest."""
        self._settings.set(names.MOVE, moving)
        self._move(moving)

    def _move(self, moving: bool) -> None:  # noqa: FBT001  (as the slot)
        action = self.menus.actions["on_move"]
        kept = action.blockSignals(True)
        action.setChecked(moving)
        action.blockSignals(kept)
        kept = self.play_bar.blockSignals(True)
        self.play_bar.set_moving(moving)
        self.play_bar.blockSignals(kept)
        self.sheet.set_moving(moving)
        self.modes.row.set_moving(moving)

    def on_amplitude(self, percent: int) -> None:
        """Move the mode farther or less."""
        self._settings.set(names.AMPLITUDE, percent)
        self.sheet.set_amplitude(percent / 100)

    def on_discs(self, shown: bool) -> None:  # noqa: FBT001  (a slot)
        """Show or fold the Gershgorin bounds."""
        self._settings.set(names.DISCS, shown)
        self.scale.discs.setChecked(shown)
        self.menus.actions["on_discs"].setChecked(shown)

    def on_keyboard(self) -> None:
        """List the keys."""
        ReadingDialog("Keyboard", keyboard_text(), self).open()

    def on_about(self) -> None:
        """Say what the program is, and the cautions."""
        text = (resources() / "cautions.md").read_text(encoding="utf-8")
        version = f"\nVersion {__version__}. MIT licence, without any warranty.\n"
        ReadingDialog("About Keepclear", text + version, self).open()
