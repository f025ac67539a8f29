"""The window: puts the places together and passes on what was done in one to the others."""

from pathlib import Path
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QEvent, Qt, QTimer, Signal
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QKeyEvent

from modalview.model.parts import Model
from modalview.ui import settings as names
from modalview.ui.analysis import Analysis
from modalview.ui.autosave import Autosave
from modalview.ui.dialogs import TextDialog
from modalview.ui.document import Document
from modalview.ui.examples import bundled_examples
from modalview.ui.failure import error_text
from modalview.ui.filing import Filing
from modalview.ui.frame import Frame
from modalview.ui.modelist import is_damped
from modalview.ui.modes import damped_evidence, evidence
from modalview.ui.newsheet import NewSheet
from modalview.ui.ondisk import DiskStrip, FileWatch
from modalview.ui.printing import Printing
from modalview.ui.settings import Setting, Settings
from modalview.ui.sketch.sketching import Sketching
from modalview.ui.trying import Trying
from modalview.ui.viewing import Viewing
from modalview.ui.worker import Worker

if TYPE_CHECKING:
    from modalview.ui.windows import Windows

_TOLD_MS = 6000
_BLINK_MS = 150
_NEED_A_MODEL = (
    "on_save",
    "on_save_as",
    "on_print",
    "on_print_to_pdf",
    "on_find",
    "on_fit",
    "on_zoom_in",
    "on_zoom_out",
)


class Window(Frame):
    """One model at a time."""

    closed = Signal()

    def __init__(self, settings: Settings, worker: Worker, windows: "Windows | None" = None) -> None:
        super().__init__(settings, Document(), Analysis(worker))
        self.document.setParent(self)
        self.analysis.setParent(self)
        self._worker = worker
        self.windows = windows  # the others of the program; None stands alone
        self.filing = Filing(self.document, settings, self)
        self.autosave: Autosave | None = None
        self.watch = FileWatch(self.document)
        self.disk_strip = DiskStrip(self.watch, self.document, self.filing, self.work)
        self.work.layout().insertWidget(1, self.disk_strip)
        self.printing = Printing(self, settings)
        self._may_close = False
        # A file that is read in a blink is not told of.
        self._patience = QTimer(self, singleShot=True, interval=_BLINK_MS)
        self._connect()
        self.sketching = Sketching(self)  # hears of a change after the sheet was told
        self.sketching.hand.chosen_changed.connect(self.charts.on_chosen)
        self.viewing = Viewing(self)
        self.trying = Trying(self)
        self._recall()
        self.show_document()

    def _connect(self) -> None:
        self.document.opened.connect(self.on_opened)
        self.document.model_changed.connect(self.on_model_changed)
        self.document.clean_changed.connect(lambda clean: self.setWindowModified(not clean))
        self.document.saved.connect(self.on_saved)
        self.filing.reading.busy_changed.connect(self.show_reading)
        self.filing.saving.busy_changed.connect(self.show_reading)
        self._patience.timeout.connect(lambda: self._tell_reading(self._patience.property("what")))
        self.analysis.outlook_changed.connect(self.show_known)
        self.analysis.verdict_known.connect(lambda: self.banner.show_analysis(self.analysis))
        self.analysis.doubts_changed.connect(self.results.show_doubts)
        self.analysis.doubts_changed.connect(lambda: self.banner.show_analysis(self.analysis))
        self.analysis.solution_changed.connect(self.show_modes)
        self.analysis.damped_changed.connect(self.show_damped)
        self.analysis.busy_changed.connect(self.show_busy)
        self.analysis.failed.connect(self.on_failed)
        self.banner.why_asked.connect(self.on_why)
        self.reasons.folded.connect(lambda: self.banner.why.setChecked(False))
        self.banner.find_asked.connect(self.on_find)
        self.banner.cancel_asked.connect(self.analysis.cancel)
        self.modes.mode_chosen.connect(self.on_mode_chosen)
        self.damped.mode_chosen.connect(self.on_mode_chosen)
        self.below.shown.connect(self.on_page_shown)
        self.charts.failed.connect(self.on_failed)
        self.charts.response.motion_changed.connect(self._show_motion)
        self.charts.response.magnitude_asked.connect(self._ask_magnitude)
        self.charts.measured.edited.connect(self.document.push)
        self.parts.told.connect(lambda words: self.statusBar().showMessage(words, _TOLD_MS))
        self.play_bar.moving_changed.connect(self.on_move)
        self.play_bar.speed_changed.connect(self.on_speed)
        self.play_bar.amplitude_changed.connect(self.on_amplitude)
        self.welcome.open_asked.connect(self.on_open)
        self.welcome.new_asked.connect(self.on_new)
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
        self.play_bar.amplitude.setValue(get(names.AMPLITUDE))
        self.play_bar.speed.setValue(get(names.SPEED))
        self.sheet.set_amplitude(get(names.AMPLITUDE) / 100)
        self._move(self.motion_wanted())
        if not get(names.GEOMETRY).isEmpty():
            self.restoreGeometry(get(names.GEOMETRY))
        self.apply_theme()

    # The model

    def show_reading(self, what: str) -> None:
        """Say that a file is being read or written, if that takes long; the window stays in use."""
        self._patience.setProperty("what", what)
        if what:
            self._patience.start()
        else:
            self._patience.stop()
            self._tell_reading("")

    def _tell_reading(self, what: str) -> None:
        if what:
            self.statusBar().showMessage(what)
            self.setCursor(Qt.CursorShape.BusyCursor)
        else:
            self.statusBar().clearMessage()
            self.unsetCursor()

    def start_worker(self) -> None:
        """Let the thread begin; models opened before wait for it."""
        self._worker.start()

    def keep_with(self, autosave: Autosave) -> None:
        """Keep what the window holds beyond its file in a recovery file."""
        self.autosave = autosave
        self.filing.put_aside = autosave.put_aside
        autosave.failed.connect(
            lambda why: self.tell(f"No recovery copy could be written ({why}): save the model soon.")
        )

    def tell(self, words: str) -> None:
        """Say something in the status line for a while."""
        self.statusBar().showMessage(words, _TOLD_MS)

    def new_model(self, model: Model) -> None:
        """Begin a model without a file, after asking about unsaved changes; it is unmodified until edited."""
        self.filing.guard(lambda: self.document.start(model))

    def show_document(self) -> None:
        """Show the open model, or what to do without one."""
        there = self.document.model is not None
        self.pages.setCurrentWidget(self.work if there else self.welcome)
        for name in _NEED_A_MODEL:
            self.menus.actions[name].setEnabled(there)
        for name in ("on_new_window", "on_recovered"):
            self.menus.actions[name].setEnabled(self.windows is not None)
        self._show_name()
        self.status.show_state(self.document, self.analysis)

    def _show_name(self) -> None:
        """Name model and file in the title bar."""
        document = self.document
        if document.model is None:
            self.setWindowTitle("Keepclear[*]")
            return
        title = document.model.title
        file = "example" if document.example else document.name
        file += ", recovered" if document.recovered else ""
        if title or not document.path:
            self.setWindowTitle(f"{title or 'untitled'} ({file})[*] - Keepclear")
        else:
            self.setWindowTitle(f"{file}[*] - Keepclear")

    def on_opened(self) -> None:
        """Another model: everything anew."""
        self.setWindowModified(self.document.modified)
        self.analysis.forget()
        self.results.forget_machines()
        self.show_document()
        self._show_model(anew=True)
        self.sheet.setFocus()

    def on_model_changed(self) -> None:
        """Let sheet and tables follow at once, scale and verdict as soon as counted."""
        self._show_name()
        self._show_model(anew=False)

    def _show_model(self, *, anew: bool) -> None:
        model = self.document.model
        self.sheet.show_model(model, fit=anew)
        self.analysis.follow(model)  # first, so that the study goes on while the rest is shown
        self.parts.show_model(model, anew=anew, system=self.system_of_units())
        self.results.show_model(model, self.system_of_units())
        self.charts.show_model(model, self.system_of_units(), anew=anew)

    def system_of_units(self) -> str:
        """Return the system of units that values are shown in."""
        chosen = self._settings.get(names.UNITS)
        return (self.document.model.units or "SI") if chosen == "file" else chosen

    def show_units(self) -> None:
        """Show converted values in the units chosen."""
        if self.document.model is not None:
            self.parts.show_model(self.document.model, anew=False, system=self.system_of_units())
            self.results.show_model(self.document.model, self.system_of_units())
            self.sketching.show_units(self.system_of_units())
            self.charts.set_system(self.system_of_units())

    def _show_title(self, checked: str = "not yet", freedoms: int | None = None) -> None:
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
        self.scale.canvas.show_results(outlook, solution, self.analysis.foretold)
        if outlook is not None:
            self._show_title(str(outlook.verdict or "nothing to check"), outlook.coordinates)
        elif self.analysis.refusal is not None and self.document.model is not None:
            self._show_title()
        self.banner.show_analysis(self.analysis)
        self.reasons.show_known(outlook, solution)
        if self.analysis.solution is None:
            self.modes.show_analysis(self.analysis)
        self.results.show_results()
        self.status.show_state(self.document, self.analysis)
        self.sheet.catch_up()

    def show_modes(self) -> None:
        """Show the modes found, and mark those of an older model."""
        self.modes.show_analysis(self.analysis)
        self._show_proof()
        self._show_play_bar()
        if self.analysis.looking:
            self.banner.show_analysis(self.analysis)
        else:
            self.show_known()

    def show_damped(self) -> None:
        """Show damped modes and complex plane, and which of them there are."""
        analysis = self.analysis
        there = analysis.damped is not None
        if not there and self.below.current() == "damped":
            self.below.show_page("modes")
        self.below.offer("damped", there=there)
        self.damped.show_analysis(analysis)
        self.plane.canvas.show_content(analysis.plane, analysis.plane_why)
        if self.below.current() == "damped":
            self.on_page_shown("damped")

    def on_page_shown(self, name: str) -> None:
        """Let the sheet follow the row of modes that is in sight."""
        self.give_room(name)
        rows = {"modes": self.modes.row, "damped": self.damped.row}
        if name in rows:
            self.on_mode_chosen(rows[name].chosen())
        self._show_motion()
        self._show_proof()

    def _show_proof(self) -> None:
        damped = self.below.current() == "damped" and self.analysis.damped is not None
        self.proof.setText(damped_evidence(self.analysis) if damped else evidence(self.analysis))
        known = self.analysis.damped if damped else self.analysis.solution
        more = (*known.evidence, *getattr(known, "notes", ())) if known is not None else ()
        self.proof.setToolTip("\n".join(more))

    def on_mode_chosen(self, mode: Any) -> None:
        """Move the chosen mode on the sheet."""
        if self.sender() is self.modes and self.below.current() in ("damped", "response"):
            return  # new natural modes came in while a damped one or a response is shown
        self.sheet.show_mode(mode)
        self._show_play_bar()

    def _show_motion(self) -> None:
        """Move the response at the speed chosen, while its chart is in sight."""
        if self.charts.motion is not None:
            self.on_mode_chosen(self.charts.motion)

    def _ask_magnitude(self, machine: str) -> None:
        if machine:
            self.sketching.change_machine(machine)
        else:
            self.sketching.add_force()

    def _show_play_bar(self) -> None:
        if self.sheet.mode is not None and self.sheet.mode is self.charts.motion:
            self.play_bar.show_mode(self.sheet.mode, current=self.charts.response.inquiry.current)
            return
        damped = self.sheet.mode is not None and is_damped(self.sheet.mode)
        current = self.analysis.damped_current if damped else self.analysis.solution_current
        self.play_bar.show_mode(self.sheet.mode, current=current)

    def show_busy(self) -> None:
        """Show progress while modes are being found."""
        self.banner.show_busy(self.analysis)
        if self.analysis.solution is None:
            self.modes.show_analysis(self.analysis)

    def on_failed(self, error: Exception) -> None:
        """Tell of an error the program made while studying, and go on."""
        lead = "An unexpected error came up while the model was studied. The model and the window are kept."
        TextDialog("Unexpected error", lead, error_text(error), self).open()

    # Commands of the menus

    def on_new(self) -> None:
        """Ask where to begin: an empty sheet, or a starting point."""
        NewSheet(self.new_model, self).open()

    def on_new_window(self) -> None:
        """Open an empty window beside this one."""
        self.windows.add_shown(self)

    def on_recovered(self) -> None:
        """List the models that were recovered or put aside."""
        self.windows.offer_recovered(self, asked=True)

    def on_print(self) -> None:
        """Print sheet and scale."""
        self.printing.print_()

    def on_print_to_pdf(self) -> None:
        """Write sheet and scale as a PDF file."""
        self.printing.to_pdf()

    def on_quit(self) -> None:
        """Close all windows."""
        if self.windows is not None:
            self.windows.quit()
        else:
            self.close()

    def on_setting(self, setting: Setting, value: Any) -> None:
        """Keep a setting and let it hold at once, in all windows."""
        super().on_setting(setting, value)
        if self.windows is not None:
            self.windows.share(self, setting, value)

    def on_open(self) -> None:
        """Open a file."""
        self.filing.choose()

    def on_save(self) -> None:
        """Save."""
        self.filing.save()

    def on_save_as(self) -> None:
        """Save elsewhere."""
        self.filing.save_as()

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
        self._row().step(1)

    def on_previous_mode(self) -> None:
        """Choose the previous mode."""
        self._row().step(-1)

    def _row(self) -> Any:
        return self.damped.row if self.below.current() == "damped" else self.modes.row

    def on_copy(self) -> None:
        """Copy what is marked in the values."""
        self.parts.copy()

    def on_paste(self) -> None:
        """Paste into the values, from the marked cell on."""
        self.parts.paste()

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
        for path, why in self.filing.recent():
            action = menu.addAction(str(path).replace("&", "&&") + (f" ({why})" if why else ""))
            action.setEnabled(not why)
            action.triggered.connect(lambda _checked=False, path=path: self.filing.open(path))
        if menu.isEmpty():
            menu.addAction("Nothing was opened yet").setEnabled(False)

    # Qt's own

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:  # noqa: N802  (Qt's name)
        """Take local files."""
        if any(url.isLocalFile() for url in event.mimeData().urls()):
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:  # noqa: N802  (Qt's name)
        """Open what was dropped: the first file here, the others in windows of their own."""
        paths = [Path(url.toLocalFile()) for url in event.mimeData().urls() if url.isLocalFile()]
        event.acceptProposedAction()
        self.filing.open(paths[0])
        if self.windows is not None:
            for path in paths[1:]:
                self.windows.open(path, self)

    def changeEvent(self, event: QEvent) -> None:  # noqa: N802  (Qt's name)
        """Look after the file when the window comes to the front: not every disk tells of changes."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.ActivationChange and self.isActiveWindow():
            self.watch.look()

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Let Esc put a tool away wherever the keyboard is."""
        hand = self.sketching.hand
        if event.key() != Qt.Key.Key_Escape or not hand.ready or not hand.escape():
            super().keyPressEvent(event)

    def closeEvent(self, event: QCloseEvent) -> None:  # noqa: N802  (Qt's name)
        """Ask about unsaved changes; then let the thread end."""
        if self.document.modified and not self._may_close:
            event.ignore()
            self.filing.guard(self.close_unasked)
            return
        self._settings.set(names.GEOMETRY, self.saveGeometry())
        if self.autosave is not None:
            self.autosave.close()
        self.filing.close()
        self.watch.close()
        self.disk_strip.close_thread()
        self._worker.close()
        for place in (self.sheet, self.parts.lines, self.modes.row.card, self.damped.row.card):
            place.close_threads()
        self.charts.close_threads()
        self.closed.emit()
        super().closeEvent(event)

    def close_unasked(self) -> None:
        """Close, now that unsaved changes were asked about."""
        self._may_close = True
        QTimer.singleShot(0, self.close)
