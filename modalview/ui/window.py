"""The window: puts the places together and passes on what was done in one to the others."""

from pathlib import Path
from typing import Any

from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QFontMetrics
from PySide6.QtWidgets import (
    QApplication,
    QHBoxLayout,
    QLabel,
    QMainWindow,
    QSplitter,
    QStackedWidget,
    QStyle,
    QTabBar,
    QVBoxLayout,
    QWidget,
)

from modalview.places import resources
from modalview.ui import settings as names
from modalview.ui.analysis import Analysis
from modalview.ui.banner import Banner
from modalview.ui.dialogs import ReadingDialog, TextDialog
from modalview.ui.document import Document
from modalview.ui.examples import bundled_examples, first_of_each
from modalview.ui.failure import error_text
from modalview.ui.filing import Filing
from modalview.ui.menus import Menus, keyboard_text
from modalview.ui.modes import Modes, evidence
from modalview.ui.parttable import PartTable
from modalview.ui.playbar import PlayBar
from modalview.ui.results import Results
from modalview.ui.scale import ScalePanel
from modalview.ui.settings import Settings
from modalview.ui.sheet import Sheet
from modalview.ui.status import StatusLine
from modalview.ui.theme import TEXT_PERCENTS, Theme, apply_theme
from modalview.ui.welcome import Welcome
from modalview.ui.worker import Worker

_SIZE = (1280, 800)
_COLOURS = {"As the system": "system", "Light": "light", "Dark": "dark"}
_ZOOM = 1.25
# In heights of a line, so that larger text keeps its room.
_RESULTS_WIDTH, _BELOW_HEIGHT = 17.5, 15.0


class Window(QMainWindow):
    """One model at a time."""

    closed = Signal()

    def __init__(self, settings: Settings, worker: Worker) -> None:
        super().__init__()
        self._settings, self._worker = settings, worker
        self.document = Document(self)
        self.analysis = Analysis(worker, self)
        self.filing = Filing(self.document, settings, self)
        self._theme: Theme | None = None
        self._may_close = False
        self._build()
        self.menus = Menus(self)
        self._connect()
        self._recall()
        self.show_document()

    # Building

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

    def _connect(self) -> None:
        self.document.opened.connect(self.on_opened)
        self.document.model_changed.connect(self.on_model_changed)
        self.document.clean_changed.connect(lambda clean: self.setWindowModified(not clean))
        self.document.saved.connect(self.on_saved)
        self.analysis.outlook_changed.connect(self.show_known)
        self.analysis.solution_changed.connect(self.show_modes)
        self.analysis.busy_changed.connect(self.show_busy)
        self.analysis.failed.connect(self.on_failed)
        self.banner.find_asked.connect(self.on_find)
        self.banner.cancel_asked.connect(self.analysis.cancel)
        self.modes.mode_chosen.connect(self.on_mode_chosen)
        self.parts.part_chosen.connect(self.sheet.select)
        self.sheet.part_chosen.connect(self.on_part_chosen)
        self.play_bar.moving_changed.connect(self.on_move)
        self.play_bar.amplitude_changed.connect(self.on_amplitude)
        self.welcome.open_asked.connect(self.on_open)
        self.welcome.example_chosen.connect(lambda path: self.filing.open(path, example=True))
        self.scale.discs_switched.connect(self.on_discs)
        self.menus.submenus["examples"].aboutToShow.connect(self._fill_examples)
        self.menus.submenus["recent"].aboutToShow.connect(self._fill_recent)

    def _recall(self) -> None:
        get = self._settings.get
        actions = self.menus.actions
        self.analysis.automatic = get(names.AUTOMATIC)
        actions["on_automatic"].setChecked(self.analysis.automatic)
        actions["on_discs"].setChecked(get(names.DISCS))
        self.scale.discs.setChecked(get(names.DISCS))
        self.play_bar.slider.setValue(get(names.AMPLITUDE))
        self.sheet.set_amplitude(get(names.AMPLITUDE) / 100)
        self._move(get(names.MOVE) and not _motion_unwanted())
        self.menus.offer("themes", _COLOURS, get(names.THEME), self.on_theme)
        sizes = {f"{percent} %": percent for percent in TEXT_PERCENTS}
        self.menus.offer("text_sizes", sizes, get(names.TEXT_SIZE), self.on_text_size)
        if not get(names.GEOMETRY).isEmpty():
            self.restoreGeometry(get(names.GEOMETRY))
        self.apply_theme()

    # Looks

    def apply_theme(self) -> None:
        """Dress the window as the settings say."""
        percent = self._settings.get(names.TEXT_SIZE)
        self._theme = apply_theme(QApplication.instance(), self._settings.get(names.THEME), percent)
        self.banner.set_theme(self._theme)
        self.sheet.set_theme(self._theme, percent / 100)
        self.scale.canvas.set_theme(self._theme, percent / 100)
        self.modes.set_theme(self._theme)
        self.results.set_theme(self._theme)
        self.parts.lines.set_theme(self._theme)
        self.parts.fit_columns()
        self.play_bar.set_theme(self._theme)
        line = QFontMetrics(QApplication.font()).height()
        self.results.setMinimumWidth(round(_RESULTS_WIDTH * line))
        self.below.setMinimumHeight(round(_BELOW_HEIGHT * line))
        self.welcome.set_theme(self._theme)

    def on_theme(self, choice: Any) -> None:
        """Light, dark or the system's."""
        self._settings.set(names.THEME, choice)
        self.apply_theme()

    def on_text_size(self, percent: Any) -> None:
        """Enlarge all text."""
        self._settings.set(names.TEXT_SIZE, percent)
        self.apply_theme()

    # The model

    def start_worker(self) -> None:
        """Let the thread begin; models opened before wait for it."""
        self._worker.start()

    def show_document(self) -> None:
        """Show the open model, or what to do without one."""
        there = self.document.model is not None
        self.pages.setCurrentWidget(self.work if there else self.welcome)
        for name in ("on_save", "on_save_as", "on_find", "on_fit", "on_zoom_in", "on_zoom_out"):
            self.menus.actions[name].setEnabled(there)
        if there:
            title = self.document.model.title or self.document.name
            file = "example" if self.document.example else self.document.name
            self.setWindowTitle(f"{title} ({file})[*] - Keepclear")
        else:
            self.setWindowTitle("Keepclear[*]")
        self.status.show_state(self.document, self.analysis)

    def on_opened(self) -> None:
        """Another model: everything anew."""
        self.setWindowModified(False)
        self.analysis.forget()
        self.results.forget_machines()
        self.show_document()
        self._show_model(anew=True)

    def on_model_changed(self) -> None:
        """Let sheet and tables follow at once, scale and verdict as soon as counted."""
        self._show_model(anew=False)

    def _show_model(self, *, anew: bool) -> None:
        model = self.document.model
        self.sheet.show_model(model, fit=anew)
        self.parts.show_model(model, anew=anew)
        self.results.show_model(model)
        self.analysis.follow(model)

    def _show_title(self, checked: str, freedoms: int) -> None:
        from modalview.drawing import furniture  # noqa: PLC0415  (numpy comes after the first paint)

        self.sheet.show_title(furniture.title_lines(self.document.model, checked=checked, freedoms=freedoms))

    def on_saved(self) -> None:
        """Show the file's name, which may be new."""
        self.show_document()

    # What is known

    def show_known(self) -> None:
        """Show bounds, counts and verdict."""
        solution = self.analysis.solution if self.analysis.solution_current else None
        outlook = self.analysis.outlook
        self.scale.canvas.show_results(outlook, solution)
        if outlook is not None:
            self._show_title(str(outlook.verdict or "nothing to check"), outlook.assembly.pencil().n)
        self.banner.show_analysis(self.analysis)
        if self.analysis.solution is None:
            self.modes.show_analysis(self.analysis)
        self.results.show_results()
        self.status.show_state(self.document, self.analysis)

    def show_modes(self) -> None:
        """Show the modes found, and mark those of an older model."""
        self.modes.show_analysis(self.analysis)
        self.proof.setText(evidence(self.analysis))
        self.proof.setToolTip("\n".join(self.analysis.solution.evidence) if self.analysis.solution else "")
        self._show_play_bar()
        if not self.analysis.looking:
            self.show_known()

    def on_mode_chosen(self, mode: Any) -> None:
        """Move the chosen mode on the sheet."""
        self.sheet.show_mode(mode)
        self._show_play_bar()

    def _show_play_bar(self) -> None:
        self.play_bar.show_mode(self.modes.row.chosen(), current=self.analysis.solution_current)

    def show_busy(self) -> None:
        """Show progress while modes are being found."""
        self.banner.show_busy(self.analysis)

    def on_failed(self, error: Exception) -> None:
        """Tell of an error the program made while studying, and go on."""
        lead = "An unexpected error came up while the model was studied. The model and the window are kept."
        TextDialog("Unexpected error", lead, error_text(error), self).open()

    # Commands of the menus

    def on_open(self) -> None:
        """Open a file."""
        self.filing.choose()

    def on_save(self) -> None:
        """Save."""
        self.filing.save()

    def on_save_as(self) -> None:
        """Save elsewhere."""
        self.filing.save_as()

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

    def on_find(self) -> None:
        """Find the modes."""
        self.analysis.find()

    def on_automatic(self, automatic: bool) -> None:  # noqa: FBT001  (a slot)
        """Find modes after each edit, or only when asked."""
        self._settings.set(names.AUTOMATIC, automatic)
        self.analysis.automatic = automatic
        if automatic and self.document.model is not None and not self.analysis.solution_current:
            self.analysis.follow(self.document.model)

    def on_next_mode(self) -> None:
        """Choose the next mode."""
        self.modes.row.step(1)

    def on_previous_mode(self) -> None:
        """Choose the previous mode."""
        self.modes.row.step(-1)

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

    def on_part_chosen(self, part: str) -> None:
        """Show the values of the part that was chosen on the sheet."""
        self.tabs.setCurrentIndex(1)
        self.parts.choose_part(part)

    def on_keyboard(self) -> None:
        """List the keys."""
        ReadingDialog("Keyboard", keyboard_text(), self).open()

    def on_about(self) -> None:
        """Say what the program is, and the cautions."""
        text = (resources() / "cautions.md").read_text(encoding="utf-8")
        ReadingDialog("About Keepclear", text, self).open()

    def _fill_examples(self) -> None:
        menu = self.menus.submenus["examples"]
        menu.clear()
        before: Path | None = None
        for example in bundled_examples():
            if before not in (None, example.path.parent):
                menu.addSeparator()
            before = example.path.parent
            action = menu.addAction(example.title.replace("&", "&&"))
            action.setToolTip(example.sentence)
            action.triggered.connect(
                lambda _checked=False, path=example.path: self.filing.open(path, example=True)
            )

    def _fill_recent(self) -> None:
        menu = self.menus.submenus["recent"]
        menu.clear()
        for place in self._settings.get(names.RECENT):
            action = menu.addAction(place.replace("&", "&&"))
            action.triggered.connect(lambda _checked=False, place=place: self.filing.open(Path(place)))
        if menu.isEmpty():
            menu.addAction("Nothing was opened yet").setEnabled(False)

    # Qt's own

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:  # noqa: N802  (Qt's name)
        """Take one local file."""
        if any(url.isLocalFile() for url in event.mimeData().urls()):
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:  # noqa: N802  (Qt's name)
        """Open what was dropped."""
        path = next(url.toLocalFile() for url in event.mimeData().urls() if url.isLocalFile())
        event.acceptProposedAction()
        self.filing.open(Path(path))

    def closeEvent(self, event: QCloseEvent) -> None:  # noqa: N802  (Qt's name)
        """Ask about unsaved changes; then let the thread end."""
        if self.document.modified and not self._may_close:
            event.ignore()
            self.filing.guard(self._close_unasked)
            return
        self._settings.set(names.GEOMETRY, self.saveGeometry())
        self._worker.close()
        self.closed.emit()
        super().closeEvent(event)

    def _close_unasked(self) -> None:
        self._may_close = True
        QTimer.singleShot(0, self.close)


def _motion_unwanted() -> bool:
    """Whether the desktop asks for no animation."""
    hint = QStyle.StyleHint.SH_Widget_Animation_Duration
    return QApplication.style().styleHint(hint) == 0
