"""The row of found modes under the sheet; the chosen one moves there."""

from time import perf_counter
from typing import Any

from PySide6.QtCore import QModelIndex, Qt, QTimer, Signal
from PySide6.QtGui import QPaintEvent, QResizeEvent
from PySide6.QtWidgets import QAbstractItemView, QFrame, QLabel, QListView, QStackedLayout, QWidget

from modalview.model.parts import Model
from modalview.ui.analysis import Analysis
from modalview.ui.modecard import ModeCard
from modalview.ui.modelist import ModeList
from modalview.ui.swing import Swing
from modalview.ui.theme import Theme

# The small pictures need fewer frames than the sheet.
FRAME_MS = 40
# Painting them takes at most this share of the time.
MOST_SHARE = 0.12


class ModeRow(QListView):
    """Cards side by side; arrow keys choose."""

    mode_chosen = Signal(object)  # study.FoundMode or None

    def __init__(self, swing: Swing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._swing = swing
        self.modes = ModeList(self)
        self.card = ModeCard(swing, self)
        self.card.laid_out.connect(self.viewport().update)
        self.setModel(self.modes)
        self.setItemDelegate(self.card)
        self.setObjectName("modeRow")
        self.setAccessibleName("Modes found")
        self.setFlow(QListView.Flow.LeftToRight)
        self.setWrapping(False)
        self.setUniformItemSizes(True)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.selectionModel().currentChanged.connect(self._on_current_changed)
        self._timer = QTimer(self, interval=FRAME_MS)
        self._timer.timeout.connect(self.viewport().update)
        swing.running_changed.connect(self._run)
        swing.moved.connect(self.viewport().update)

    def chosen(self) -> Any:
        """Return the chosen mode, or None."""
        return self.modes.mode(self.currentIndex().row())

    def choose(self, row: int) -> None:
        """Choose the mode of a row, as far as there is one."""
        if 0 <= row < self.modes.rowCount():
            self.setCurrentIndex(self.modes.index(row))

    def show_found(self, solution: Any) -> None:
        """Show the modes of a model; None shows none.

        The place of the chosen one is kept while there are as many of each kind: another part shifts all.
        """
        row, kinds = self.currentIndex().row(), self._kinds()
        self.card.set_model(None if solution is None else _model_of(solution))
        silent = self.blockSignals(True)  # not every step of the exchange is a choice
        self.modes.show_solution(solution, current=True)
        kept = row >= 0 and kinds == self._kinds()
        self.choose(row if kept else self.modes.worst_row())
        self.blockSignals(silent)
        self.fit_cards()

    def _kinds(self) -> list[str]:
        return [self.modes.mode(row).kind for row in range(self.modes.rowCount())]

    def step(self, by: int) -> None:
        """Choose the next or the previous mode, round the end."""
        count = self.modes.rowCount()
        if count:
            self.choose((self.currentIndex().row() + by) % count)

    def _run(self) -> None:
        if self._swing.running and self.isVisible() and self.modes.rowCount():
            self._timer.start()
        else:
            self._timer.stop()

    def showEvent(self, event: Any) -> None:  # noqa: N802  (Qt's name)
        """Move again."""
        super().showEvent(event)
        self._run()

    def hideEvent(self, event: Any) -> None:  # noqa: N802  (Qt's name)
        """Do not move unseen."""
        super().hideEvent(event)
        self._timer.stop()

    def paintEvent(self, event: QPaintEvent) -> None:  # noqa: N802  (Qt's name)
        """Paint, and move slower where that takes long: the rest of the window comes first."""
        start = perf_counter()
        super().paintEvent(event)
        took_ms = 1000 * (perf_counter() - start)
        self._timer.setInterval(max(FRAME_MS, round(took_ms / MOST_SHARE)))

    def _on_current_changed(self, current: QModelIndex) -> None:
        self.mode_chosen.emit(self.modes.mode(current.row()))

    def resizeEvent(self, event: QResizeEvent) -> None:  # noqa: N802  (Qt's name)
        """Make the cards as tall as the row, its scroll bar left out."""
        super().resizeEvent(event)
        self.fit_cards()

    def fit_cards(self) -> None:
        """Lay the cards out for the height and the text size of now."""
        bar = self.horizontalScrollBar().sizeHint().height()
        count = max(self.modes.rowCount(), 1)
        self.card.set_room(self.viewport().width() // count, max(self.height() - bar - 14, 60))
        self.doItemsLayout()
        self.scrollTo(self.currentIndex())
        self._run()


class Modes(QWidget):
    """The row, or one sentence where no modes are found yet."""

    mode_chosen = Signal(object)

    def __init__(self, swing: Swing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.row = ModeRow(swing, self)
        self.row.mode_chosen.connect(self.mode_chosen)
        self.invitation = QLabel(self)
        self.invitation.setWordWrap(True)
        self.invitation.setMargin(24)
        self.invitation.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self.invitation.setProperty("role", "quiet")
        self._stack = QStackedLayout(self)
        self._stack.addWidget(self.invitation)
        self._stack.addWidget(self.row)

    def set_theme(self, theme: Theme) -> None:
        """Repaint the cards."""
        self.row.card.set_theme(theme)
        self.row.fit_cards()
        self.row.viewport().update()

    def show_analysis(self, analysis: Analysis) -> None:
        """Show the modes that are found; those of an older model are pale until found again."""
        solution = analysis.solution
        if solution is None:
            self.invitation.setText(_invitation(analysis))
            if self.row.modes.rowCount():
                self.row.modes.show_solution(None, current=True)
            if self._stack.currentWidget() is not self.invitation:
                self._stack.setCurrentWidget(self.invitation)
                self.mode_chosen.emit(None)
            return
        self._stack.setCurrentWidget(self.row)
        if analysis.solution_current:
            self._show_found(solution)
        else:
            self.row.modes.mark_old(analysis.foretold)

    def _show_found(self, solution: Any) -> None:
        self.row.show_found(solution)
        self.mode_chosen.emit(self.row.chosen())


class DampedModes(QWidget):
    """The roots of a model with dashpots: damped frequency, ratio and decay; they move with their phase."""

    mode_chosen = Signal(object)

    def __init__(self, swing: Swing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.row = ModeRow(swing, self)
        self.row.setAccessibleName("Damped modes found")
        self.row.mode_chosen.connect(self.mode_chosen)
        layout = QStackedLayout(self)
        layout.addWidget(self.row)

    def set_theme(self, theme: Theme) -> None:
        """Repaint the cards."""
        self.row.card.set_theme(theme)
        self.row.fit_cards()
        self.row.viewport().update()

    def show_analysis(self, analysis: Analysis) -> None:
        """Show the damped modes; those of an older model are pale until found again."""
        if analysis.damped is None:
            self.row.show_found(None)
        elif analysis.damped_current:
            self.row.show_found(analysis.damped)
        else:
            self.row.modes.mark_old({})


def _model_of(solution: Any) -> Model:
    return solution.outlook.request.model


def _invitation(analysis: Analysis) -> str:
    if analysis.finding:
        return f"Finding the modes… {analysis.progress[0]}"
    if analysis.outlook is None:
        return ""
    return (
        "What the scale and the verdict say is proven without them. "
        "Find modes (Ctrl+Enter) adds which mode lies where, how it moves and what governs it."
    )


def evidence(analysis: Analysis) -> str:
    """Return why the modes shown can be believed, or that they are of an older model."""
    if analysis.solution is None:
        return ""
    if not analysis.solution_current:
        if analysis.foretold:
            return "Out of date: of before the last edit; frequencies foretold"
        return "Out of date: these modes are of the model before the last edit"
    return " · ".join(analysis.solution.evidence[:2])


def damped_evidence(analysis: Analysis) -> str:
    """Return why the damped modes shown can be believed, or that they are of an older model."""
    if analysis.damped is None:
        return ""
    if not analysis.damped_current:
        return "Out of date: these roots are of the model before the last edit"
    return " · ".join((*analysis.damped.evidence[:1], *analysis.damped.notes[-1:]))
