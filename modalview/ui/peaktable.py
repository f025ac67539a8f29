"""Measured peaks as a table: typed in place, added, pasted from a spreadsheet, removed; each is one edit."""

from collections.abc import Sequence

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QBrush, QColor, QGuiApplication, QKeyEvent, QKeySequence
from PySide6.QtWidgets import (
    QAbstractItemView,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QTableWidgetItem,
    QVBoxLayout,
    QWidget,
)

from modalview.errors import FaultsError, InputError
from modalview.model import typed_peaks as peaks
from modalview.model.differences import Rewrite
from modalview.model.parts import Model
from modalview.ui.cells import cells_of
from modalview.ui.figuretable import FigureTable
from modalview.ui.theme import LIGHT, Theme

MODE = len(peaks.COLUMNS)  # column of the mode that a peak is to be taken for; it is no part of the model
HEADINGS = (*peaks.COLUMNS, "take for mode")
MODE_TIP = "Number of the mode that this peak is to be taken for; empty leaves it to frequency and shape"
NONE = (
    "No measured peaks yet. Add one, or paste lines from a spreadsheet: peak, frequency, uncertainty, body, "
    "direction, or frequencies alone."
)
NEW = "A new peak: type its frequency, such as 17 Hz."


class TypedTable(FigureTable):
    """A table of few lines whose cells can be typed in."""

    typed = Signal(int, int, str)
    pasted = Signal(str)

    def __init__(self, accessible_name: str, parent: QWidget | None = None) -> None:
        super().__init__(accessible_name, parent)
        triggers = QAbstractItemView.EditTrigger
        self.setEditTriggers(triggers.DoubleClicked | triggers.EditKeyPressed | triggers.AnyKeyPressed)
        self.itemChanged.connect(self._on_changed)

    def _on_changed(self, item: QTableWidgetItem) -> None:
        self.typed.emit(item.row(), item.column(), item.text())

    def show_cells(self, headings: Sequence[str], rows: Sequence[Sequence[str]]) -> None:
        """Show texts; the items stay, so that one that is being typed is not taken away."""
        kept = self.blockSignals(True)
        self.setColumnCount(len(headings))
        self.setHorizontalHeaderLabels(list(headings))
        self.setRowCount(len(rows))
        for row, texts in enumerate(rows):
            for column, text in enumerate(texts):
                item = self.item(row, column)
                if item is None:
                    item = QTableWidgetItem()
                    self.setItem(row, column, item)
                item.setText(text)
        self.blockSignals(kept)
        self.setVisible(bool(rows))
        self.fit()

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Enter types, Delete empties the cell, Ctrl+V pastes."""
        item = self.currentItem()
        typing = self.state() == QAbstractItemView.State.EditingState  # its keys come by here, too
        editable = item is not None and not typing and bool(item.flags() & Qt.ItemFlag.ItemIsEditable)
        if event.matches(QKeySequence.StandardKey.Paste):
            self.pasted.emit(QGuiApplication.clipboard().text())
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and editable:
            self.editItem(item)
        elif event.key() == Qt.Key.Key_Delete and editable:
            item.setText("")
        else:
            super().keyPressEvent(event)


class PeakPanel(QWidget):
    """The table with its buttons; what is refused stays in red, with the reason below."""

    edited = Signal(object)  # Rewrite
    pairs_changed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.table = TypedTable("Measured peaks", self)
        self.add = QPushButton("Add a peak", self)
        self.paste = QPushButton("Paste peaks", self)
        self.paste.setToolTip("Add the lines that were copied in a spreadsheet as peaks")
        self.remove = QPushButton("Remove", self)
        self.remove.setAccessibleName("Remove the chosen peaks")
        self.reason = QLabel(self)
        self.reason.setWordWrap(True)
        self.reason.setAccessibleName("What of the peaks is not used")
        self._model = Model()
        self._draft: list[str] | None = None
        self._refusals: dict[tuple[str, int], tuple[str, str]] = {}
        self._left_out: tuple[str, ...] = ()
        self._modes: dict[str, str] = {}
        self._theme: Theme = LIGHT
        heading = QLabel("Measured peaks", self)
        heading.setProperty("role", "strong")
        heading.setBuddy(self.table)
        row = QHBoxLayout()
        row.addWidget(self.add)
        row.addWidget(self.paste)
        row.addWidget(self.remove)
        row.addStretch(1)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        for one in (heading, self.table, self.reason):
            layout.addWidget(one)
        layout.addLayout(row)
        self.table.typed.connect(self._on_typed)
        self.table.pasted.connect(self._on_pasted)
        self.table.currentCellChanged.connect(lambda *_: self._tell())
        self.add.clicked.connect(self.begin)
        self.paste.clicked.connect(lambda: self.paste_lines(QGuiApplication.clipboard().text()))
        self.remove.clicked.connect(self.remove_chosen)

    def show_model(self, model: Model, *, anew: bool) -> None:
        """Show the peaks of a model; ``anew`` drops what was typed of another one."""
        if anew:
            self._draft = None
            self._modes.clear()
            self._refusals.clear()
            self._left_out = ()
        self._model = model
        self._show()

    def set_theme(self, theme: Theme) -> None:
        """Colour refusals."""
        self._theme = theme
        self._show()

    def pairs(self) -> tuple[tuple[str, int], ...]:
        """Return the peaks that are to be taken for a mode of their own."""
        return tuple(
            (one.id, int(self._modes[one.id])) for one in self._model.measured if one.id in self._modes
        )

    def _keys(self) -> list[str]:
        return [one.id for one in self._model.measured] + ([""] if self._draft is not None else [])

    def _show(self) -> None:
        keys = self._keys()
        self._refusals = {key: kept for key, kept in self._refusals.items() if key[0] in keys}
        rows = [
            [*peaks.peak_texts(self._model, one), self._modes.get(one.id, "")] for one in self._model.measured
        ]
        rows += [[*self._draft, ""]] if self._draft is not None else []
        for (key, column), (text, _) in self._refusals.items():
            rows[keys.index(key)][column] = text
        self.table.show_cells(HEADINGS, rows)
        kept = self.table.blockSignals(True)
        for row, key in enumerate(keys):
            for column in range(len(HEADINGS)):
                self._dress(self.table.item(row, column), self._refusals.get((key, column)), column)
        self.table.blockSignals(kept)
        self.remove.setEnabled(bool(keys))
        self._tell()

    def _dress(self, item: QTableWidgetItem, refusal: tuple[str, str] | None, column: int) -> None:
        item.setForeground(QBrush(QColor(self._theme.in_band)) if refusal else QBrush())
        told = refusal[1] if refusal else MODE_TIP if column == MODE else ""
        item.setToolTip(told)
        item.setData(Qt.ItemDataRole.AccessibleDescriptionRole, told)

    def _tell(self) -> None:
        """Say why entries are refused; else what to do."""
        said = [f"{key or 'New peak'}: not used. {why}" for (key, _), (_, why) in self._refusals.items()]
        said += [f"Left out: {one}." for one in self._left_out]
        quiet = NEW if self._draft is not None else "" if self._model.measured else NONE
        self.reason.setProperty("role", "refusal" if said else "small")
        self.reason.style().unpolish(self.reason)
        self.reason.style().polish(self.reason)
        self.reason.setText("\n".join(said) or quiet)
        self.reason.setVisible(bool(self.reason.text()))

    # What is typed

    def _on_typed(self, row: int, column: int, text: str) -> None:
        keys = self._keys()
        key, text = keys[row], text.strip()
        refused = self._refusals.pop((key, column), None)
        self._left_out = ()
        try:
            new = row == len(self._model.measured)
            if new or text or not refused:  # an emptied refusal gives back what was
                self._take(row, column, text)
        except InputError as error:
            self._refusals[key, column] = text, _why(error)
        self._show()

    def _take(self, row: int, column: int, text: str) -> None:
        if row == len(self._model.measured):
            self._take_draft(column, text)
        elif column == MODE:
            self._take_mode(self._model.measured[row].id, text)
        else:
            old = self._model.measured[row].id
            edit = peaks.retyped_peak(self._model, row, column, text)
            if column == peaks.ID and old in self._modes:
                self._modes[text] = self._modes.pop(old)
            self._make(edit)

    def _take_draft(self, column: int, text: str) -> None:
        if column == MODE or self._draft is None:
            return
        draft = self._draft
        draft[column] = text
        if draft[peaks.FREQUENCY_AT]:
            edit = peaks.added_peak(self._model, draft)
            self._draft = None
            self._make(edit)

    def _take_mode(self, peak: str, text: str) -> None:
        if text and not (text.isdecimal() and int(text) > 0):
            raise InputError(f'the number of a mode is 1, 2, 3, ...; found "{text}"')
        before = self.pairs()
        if text:
            self._modes[peak] = text
        else:
            self._modes.pop(peak, None)
        if self.pairs() != before:
            self.pairs_changed.emit()

    def _make(self, edit: Rewrite | None) -> None:
        if edit:
            self.edited.emit(edit)

    # What the buttons do

    def begin(self) -> None:
        """Begin a new peak: a line that waits for its frequency."""
        if self._draft is None:
            self._draft = [""] * len(peaks.COLUMNS)
        self._show()
        self.table.setFocus()
        self.table.setCurrentCell(self.table.rowCount() - 1, peaks.FREQUENCY_AT)

    def _on_pasted(self, text: str) -> None:
        """Type one text into the cell; lines of more become peaks of their own."""
        cells, item = cells_of(text), self.table.currentItem()
        if len(cells) == 1 and len(cells[0]) == 1 and item is not None:
            item.setText(cells[0][0])
        else:
            self.paste_lines(text)

    def paste_lines(self, text: str) -> None:
        """Add the lines of a spreadsheet as peaks, in one edit; those that cannot be read are told."""
        cells = cells_of(text)
        edit, self._left_out = peaks.pasted_peaks(self._model, cells)
        if edit is None and not self._left_out:
            self._left_out = ("nothing on the clipboard is a line of peaks",)
        self._make(edit)
        self._show()

    def remove_chosen(self) -> None:
        """Remove the chosen peaks, in one edit."""
        rows = {one.row() for one in self.table.selectedIndexes()} or {self.table.currentRow()}
        if len(self._model.measured) in rows:
            self._draft = None
        self._left_out = ()
        rows = {row for row in rows if 0 <= row < len(self._model.measured)}
        if rows:
            self._make(peaks.without_peaks(self._model, rows))
        self._show()


def _why(error: InputError) -> str:
    """Return the reason without the place, which the line says already."""
    return "; ".join(one.reason for one in error.faults) if isinstance(error, FaultsError) else str(error)
