"""The window's places and looks: what a person sees before anything happens."""

from typing import Any

from PySide6.QtGui import QFontMetrics, QResizeEvent
from PySide6.QtWidgets import (
    QApplication,
    QHBoxLayout,
    QMainWindow,
    QStackedWidget,
    QStyle,
    QVBoxLayout,
    QWidget,
)

from modalview import __version__
from modalview.places import resources
from modalview.ui import settings as names
from modalview.ui.analysis import Analysis
from modalview.ui.banner import Banner
from modalview.ui.charts import NAMES, Charts
from modalview.ui.dialogs import ReadingDialog
from modalview.ui.document import Document
from modalview.ui.examples import bundled_examples, first_of_each
from modalview.ui.menus import Menus, keyboard_text
from modalview.ui.modes import DampedModes, Modes
from modalview.ui.pages import Pages
from modalview.ui.parttable import PartTable, PartTablePage
from modalview.ui.planeview import PlaneView
from modalview.ui.playbar import PlayBar, speed_of
from modalview.ui.reasons import Reasons
from modalview.ui.results import Results
from modalview.ui.rooms import HALF, THREE_COLUMNS, Rooms
from modalview.ui.scale import ScalePanel
from modalview.ui.settings import Setting, Settings, settings_text
from modalview.ui.settingsdialog import SettingsDialog
from modalview.ui.sheet import Sheet
from modalview.ui.sketch.palette import Palette
from modalview.ui.status import StatusLine
from modalview.ui.swing import FULL_TURN, Swing
from modalview.ui.theme import apply_theme
from modalview.ui.welcome import Welcome

_SIZE = (1280, 800)
_ZOOM = 1.25
CHARTS_SHARE = 0.58
_LEAST_SIZE = (640, 440)
_PHASE_STEP = FULL_TURN / 24


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
        self.setMinimumSize(*_LEAST_SIZE)
        self.setAcceptDrops(True)
        self.swing = Swing(self)
        self.banner = Banner(self)
        self.sheet = Sheet(self.swing, self)
        self.palette_of_tools = Palette(self)
        self.play_bar = PlayBar(self.swing, self)
        self.scale = ScalePanel(self)
        self.results = Results(self.document, self.analysis, self)
        self.modes = Modes(self.swing, self)
        self.damped = DampedModes(self.swing, self)
        self.plane = PlaneView(self)
        self.parts = PartTable(self.document, self)
        self.status = StatusLine(self.statusBar())
        self.welcome = Welcome(first_of_each(bundled_examples()), self)
        self.work = QWidget(self)
        self.reasons = Reasons(self.work)
        column = QVBoxLayout(self.work)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.banner)
        column.addWidget(self._places(), 1)
        self.pages = QStackedWidget(self)
        self.pages.addWidget(self.welcome)
        self.pages.addWidget(self.work)
        self.setCentralWidget(self.pages)

    def _places(self) -> Rooms:
        self.below = Pages("Places under the sheet", self)
        self.proof = self.below.line
        for name, title, place in (
            ("modes", "Modes", self.modes),
            ("damped", "Damped", self.damped),
            ("plane", "Complex plane", self.plane),
            ("values", "Values", PartTablePage(self.parts, self)),
        ):
            self.below.add(name, title, place)
        self.charts = Charts(self.below, self)
        self.below.offer("damped", there=False)
        self.rooms = Rooms(self._drawing(), self.below, (self.scale, self.results), self)
        self.side = self.rooms.side
        return self.rooms

    def _drawing(self) -> QWidget:
        above = QWidget(self)
        above.setObjectName("drawing")
        layout = QVBoxLayout(above)
        layout.setContentsMargins(0, 0, 0, 4)
        layout.setSpacing(0)
        row = QHBoxLayout()
        row.setSpacing(0)
        row.addWidget(self.palette_of_tools)
        row.addWidget(self.sheet, 1)
        layout.addLayout(row, 1)
        layout.addWidget(self.play_bar)
        return above

    # Room

    def give_room(self, name: str) -> None:
        """Give the complex plane half of the height while it is shown, charts with their controls more."""
        self.rooms.give_half(wanted=name in ("plane", *NAMES), much=CHARTS_SHARE if name in NAMES else HALF)

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Let places share tabs where there is no room for all of them."""
        super().resizeEvent(event)
        self.arrange()

    def arrange(self) -> None:
        """Put the places side by side, or under tabs in a window too small for its text."""
        line = QFontMetrics(QApplication.font()).height()
        narrow = self.width() < THREE_COLUMNS * line
        self.banner.fit(self.height(), narrow=narrow)
        self.scale.stand_alone(alone=not narrow)
        self.rooms.arrange(self.width(), self.height(), line)
        if not self.reasons.isHidden():
            self._lay_reasons()

    def _lay_reasons(self) -> None:
        self.reasons.lie_over(self.rooms.geometry(), self.rooms.drawing)

    # Looks

    def apply_theme(self) -> None:
        """Dress the window as the settings say."""
        percent = self._settings.get(names.TEXT_SIZE)
        theme = apply_theme(QApplication.instance(), self._settings.get(names.THEME), percent)
        self.banner.set_theme(theme)
        self.reasons.set_theme(theme)
        self.sheet.set_theme(theme, percent / 100)
        self.scale.canvas.set_theme(theme, percent / 100)
        self.modes.set_theme(theme)
        self.damped.set_theme(theme)
        self.plane.canvas.set_theme(theme, percent / 100)
        self.charts.set_theme(theme, percent / 100)
        self.results.set_theme(theme)
        self.parts.lines.set_theme(theme)
        self.parts.fit_columns()
        self.palette_of_tools.set_theme(theme)
        self.play_bar.set_theme(theme)
        self.welcome.set_theme(theme)
        self.arrange()

    def on_settings(self) -> None:
        """Ask for the settings."""
        SettingsDialog(self._settings, self.on_setting, self).open()

    def on_setting(self, setting: Setting, value: Any) -> None:
        """Keep a setting and let it hold at once."""
        self._settings.set(setting, value)
        if setting in (names.THEME, names.TEXT_SIZE):
            self.apply_theme()
        elif setting is names.DISCS:
            self.on_discs(value)
        elif setting is names.MOTION:
            self._move(self.motion_wanted())
        elif setting is names.UNITS:
            self.show_units()
        elif setting is names.AUTOMATIC:
            self.menus.actions["on_automatic"].setChecked(value)

    def motion_wanted(self) -> bool:
        """Return whether modes move by themselves: not where motion is to be reduced."""
        choice = self._settings.get(names.MOTION)
        reduced = choice == "on" or (choice == "system" and _motion_unwanted())
        return self._settings.get(names.MOVE) and not reduced

    def show_units(self) -> None:
        """Show converted values in the units chosen; the window knows the model."""
        raise NotImplementedError

    def on_settings_help(self) -> None:
        """Say what every setting does."""
        ReadingDialog("Settings", settings_text(), self).open()

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
        self.below.show_page("sheet")
        self.sheet.setFocus()

    def on_go_to_modes(self) -> None:
        """Give the keyboard to the row of modes."""
        self.below.show_page("modes")
        self.modes.row.setFocus()

    def on_go_to_values(self) -> None:
        """Give the keyboard to the parts table."""
        self.below.show_page("values")
        self.parts.setFocus()

    def on_go_to_plane(self) -> None:
        """Give the keyboard to the complex plane."""
        self.below.show_page("plane")
        self.plane.setFocus()

    def on_go_to_changes(self) -> None:
        """Give the keyboard to the options that clear the model."""
        self._go_to_chart("changes")

    def on_go_to_response(self) -> None:
        """Give the keyboard to the response chart."""
        self._go_to_chart("response")

    def on_go_to_speeds(self) -> None:
        """Give the keyboard to the chart of speeds."""
        self._go_to_chart("speeds")

    def on_go_to_mounts(self) -> None:
        """Give the keyboard to the sketch of the mounts."""
        self._go_to_chart("mounts")

    def on_go_to_measured(self) -> None:
        """Give the keyboard to the table of measured peaks."""
        self._go_to_chart("measured")

    def _go_to_chart(self, name: str) -> None:
        self.below.show_page(name)
        self.charts.pages[name].setFocus()

    def on_go_to_results(self) -> None:
        """Give the keyboard to the first field of the results."""
        self.rooms.show_place("results")
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
        self.swing.run(moving)

    def on_why(self) -> None:
        """Unfold the reasoning behind the verdict, or fold it."""
        if self.reasons.isHidden():
            self._lay_reasons()
            self.reasons.open()
        else:
            self.reasons.fold()
        self.banner.why.setChecked(not self.reasons.isHidden())

    def on_faster(self) -> None:
        """Let the mode move faster."""
        self.play_bar.speed.setValue(self.play_bar.speed.value() + self.play_bar.speed.pageStep())

    def on_slower(self) -> None:
        """Let the mode move slower."""
        self.play_bar.speed.setValue(self.play_bar.speed.value() - self.play_bar.speed.pageStep())

    def on_phase_on(self) -> None:
        """Stand still, a little further in the swing."""
        self._step_phase(_PHASE_STEP)

    def on_phase_back(self) -> None:
        """Stand still, a little back in the swing."""
        self._step_phase(-_PHASE_STEP)

    def _step_phase(self, by: float) -> None:
        phase = self.swing.phase
        self._move(False)
        self.swing.put(phase + by)

    def on_speed(self, steps: int) -> None:
        """Move the mode faster or slower."""
        self._settings.set(names.SPEED, steps)
        self.swing.set_speed(speed_of(steps))

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


def _motion_unwanted() -> bool:
    """Whether the desktop asks for no animation."""
    hint = QStyle.StyleHint.SH_Widget_Animation_Duration
    return QApplication.style().styleHint(hint) == 0
