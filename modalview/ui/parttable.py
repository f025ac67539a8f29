"""The parts table: every value of every part, edited in place with its unit."""

from typing import Any

from PySide6.QtCore import QEvent, QModelIndex, Qt, Signal
from PySide6.QtGui import QGuiApplication, QKeySequence
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QLabel, QTableView, QVBoxLayout, QWidget

from modalview.ui.cells import cells_of, text_of
from modalview.ui.document import Document
from modalview.ui.partlines import CONVERTED, PART, TOLERANCE, TYPED, WHAT, PartTableModel

__all__ = ["CONVERTED", "PART", "TOLERANCE", "TYPED", "WHAT", "PartTable", "PartTablePage"]


class PartTable(QTableView):
    """The table itself: Enter or F2 edits, Tab goes on, Esc cancels; blocks are copied and pasted."""

    part_chosen = Signal(str)
    told = Signal(str)  # what a copy or a paste did

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.lines = PartTableModel(document, self)
        self.setModel(self.lines)
        self.setObjectName("partTable")
        self.setAccessibleName("Values of the parts")
        self.setAlternatingRowColors(True)
        self.setShowGrid(False)
        self.setWordWrap(False)
        self.setTabKeyNavigation(False)  # arrows move in the table, Tab leaves it
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectItems)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ContiguousSelection)
        triggers = QAbstractItemView.EditTrigger
        self.setEditTriggers(
            triggers.DoubleClicked
            | triggers.EditKeyPressed
            | triggers.AnyKeyPressed
            | triggers.SelectedClicked
        )
        self.verticalHeader().hide()
        head = self.horizontalHeader()
        head.setHighlightSections(False)
        head.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        head.setSectionResizeMode(QHeaderView.ResizeMode.Interactive)
        head.setStretchLastSection(False)
        head.setSectionResizeMode(CONVERTED, QHeaderView.ResizeMode.Stretch)
        self.selectionModel().currentChanged.connect(self._on_current_changed)
        self._wanted = ""  # id of the part whose lines are still being counted
        self.lines.modelAboutToBeReset.connect(self._on_reset_begun)
        self.lines.modelReset.connect(self._on_reset)

    def show_model(self, model: Any, *, anew: bool, system: str = "SI") -> None:
        """Show the values of a model."""
        self.lines.show_model(model, anew=anew, system=system)
        if anew:
            self._wanted = ""
            self.fit_columns()
            self._on_reset()
            self.horizontalScrollBar().setValue(0)

    def _on_reset_begun(self) -> None:
        current = self.currentIndex()
        if current.isValid() and not self._wanted:
            self._wanted = self.lines.rows[current.row()].part_id

    def _on_reset(self) -> None:
        """Stay at the part that was chosen, else begin at the first value; neither is anybody's new wish."""
        quiet = self.blockSignals(True)
        row = max(self.lines.row_of_part(self._wanted), 0)
        self.setCurrentIndex(self.lines.index(row, TYPED))
        self.blockSignals(quiet)
        if not self.lines.counting:
            self._wanted = ""

    def fit_columns(self) -> None:
        """Make columns and lines as large as the text needs."""
        wide = self.fontMetrics().averageCharWidth()
        self.verticalHeader().setDefaultSectionSize(round(1.55 * self.fontMetrics().height()))
        for column, characters in ((PART, 20), (WHAT, 24), (TYPED, 20), (TOLERANCE, 17)):
            self.setColumnWidth(column, characters * wide)

    def choose_part(self, part_id: str) -> None:
        """Go to the first value of a part; stay where one of its values is chosen already."""
        here = self.currentIndex()
        if here.isValid() and self.lines.rows[here.row()].part_id == part_id:
            return
        row = self.lines.row_of_part(part_id)
        if row >= 0:
            self.setCurrentIndex(self.lines.index(row, TYPED))
            self.scrollTo(self.currentIndex(), QAbstractItemView.ScrollHint.PositionAtTop)
        elif self.lines.counting:
            self._wanted = part_id

    def _on_current_changed(self, current: QModelIndex) -> None:
        if current.isValid():
            self.part_chosen.emit(self.lines.rows[current.row()].part_id)

    def _marked(self) -> list[QModelIndex]:
        marked = self.selectionModel().selectedIndexes() or [self.currentIndex()]
        return sorted((one for one in marked if one.isValid()), key=lambda one: (one.row(), one.column()))

    def copy(self) -> None:
        """Put the marked cells on the clipboard, lines and tabs as spreadsheets have them."""
        marked = self._marked()
        if not marked:
            return
        rows: dict[int, list[str]] = {}
        for one in marked:
            rows.setdefault(one.row(), []).append(self.lines.text_at(one.row(), one.column()))
        QGuiApplication.clipboard().setText(text_of(list(rows.values())))
        self.told.emit(f"{len(marked)} cell{'s' if len(marked) > 1 else ''} copied")

    def paste(self) -> None:
        """Type what is on the clipboard from the first marked cell on; one text fills all marked cells."""
        cells, marked = cells_of(QGuiApplication.clipboard().text()), self._marked()
        if not cells or not marked:
            return
        first, last = marked[0], marked[-1]
        if len(cells) == 1 and len(cells[0]) == 1:
            height, width = last.row() - first.row() + 1, last.column() - first.column() + 1
            cells = [cells[0] * width for _ in range(height)]
        taken, refused, outside = self.lines.type_block(first.row(), first.column(), cells)
        words = [f"{taken} value{'' if taken == 1 else 's'} pasted"]
        if refused:
            words.append(f"{refused} cannot be read and stand in red with the reason")
        if outside:
            words.append(f"{outside} lie beyond the table")
        self.told.emit("; ".join(words))

    def moveCursor(self, action: Any, modifiers: Any) -> QModelIndex:  # noqa: N802  (Qt's name)
        """Home and End go to what can be typed, with Ctrl in the whole table; Tab to the next such cell."""
        here, actions = self.currentIndex(), QAbstractItemView.CursorAction
        last = self.lines.rowCount() - 1
        if not here.isValid():
            return super().moveCursor(action, modifiers)
        ctrl = bool(modifiers & Qt.KeyboardModifier.ControlModifier)
        if action == actions.MoveHome:
            return self.lines.index(0 if ctrl else here.row(), TYPED)
        if action == actions.MoveEnd:
            row = last if ctrl else here.row()
            return self.lines.index(row, TYPED if ctrl else self._last_typed(row))
        if action in (actions.MoveNext, actions.MovePrevious):
            return self._next_typed(here, 1 if action == actions.MoveNext else -1)
        return super().moveCursor(action, modifiers)

    def _last_typed(self, row: int) -> int:
        return TOLERANCE if self.lines.rows[row].tolerance_address else TYPED

    def _next_typed(self, here: QModelIndex, step: int) -> QModelIndex:
        """Return the next cell that can be typed in, line by line; the same at either end of the table."""
        row, column = here.row(), here.column()
        if step > 0 and column < TYPED:
            column = TYPED
        elif step > 0 and column < self._last_typed(row):
            column = TOLERANCE
        elif step < 0 and column > TYPED:
            column = TYPED
        elif 0 <= row + step < self.lines.rowCount():
            row += step
            column = TYPED if step > 0 else self._last_typed(row)
        return self.lines.index(row, column)

    def event(self, event: Any) -> bool:
        """Take Ctrl+Z where a refused entry stands: that is what was typed last."""
        undo = event.type() == QEvent.Type.ShortcutOverride and event.matches(QKeySequence.StandardKey.Undo)
        if undo and self.lines.has_refusals:
            event.accept()
            return True
        return super().event(event)

    def keyPressEvent(self, event: Any) -> None:  # noqa: N802  (Qt's name)
        """Enter edits, as F2 does; Delete empties; copy and paste; Ctrl+Z takes a refused entry back."""
        keys = (
            (QKeySequence.StandardKey.Copy, self.copy),
            (QKeySequence.StandardKey.Paste, self.paste),
            (QKeySequence.StandardKey.Undo, self.lines.forget_last_refusal),
        )
        for key, do in keys:
            if event.matches(key):
                do()
                return
        plain = event.modifiers() in (Qt.KeyboardModifier.NoModifier, Qt.KeyboardModifier.KeypadModifier)
        if plain and self.state() != QAbstractItemView.State.EditingState:
            if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
                self._edit_line()
                return
            if event.key() == Qt.Key.Key_Delete:
                self.lines.setData(self.currentIndex(), "")
                return
        super().keyPressEvent(event)

    def _edit_line(self) -> None:
        """Edit the current cell; in a column that cannot be typed in, the value of its line."""
        here = self.currentIndex()
        if here.isValid() and not self.lines.flags(here) & Qt.ItemFlag.ItemIsEditable:
            self.setCurrentIndex(here.siblingAtColumn(TYPED))
        self.edit(self.currentIndex())


class PartTablePage(QWidget):
    """The table, and below it the whole reason where the chosen line holds an entry that is refused."""

    def __init__(self, table: PartTable, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._table = table
        self.reason = QLabel(self)
        self.reason.setWordWrap(True)
        self.reason.setMargin(6)
        self.reason.setProperty("role", "refusal")
        self.reason.setAccessibleName("Why the entry is refused")
        self.reason.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.reason.hide()
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addWidget(table, 1)
        layout.addWidget(self.reason)
        self.setFocusProxy(table)
        table.selectionModel().currentChanged.connect(self._tell)
        table.lines.refusals_changed.connect(self._tell)
        table.lines.modelReset.connect(self._tell)

    def _tell(self) -> None:
        reason = self._table.lines.reason_at(self._table.currentIndex())
        self.reason.setText(reason)
        self.reason.setVisible(bool(reason))
