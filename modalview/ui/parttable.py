"""The parts table: every value of every part, edited in place with its unit."""

from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt, Signal
from PySide6.QtGui import QColor, QGuiApplication, QKeySequence
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableView, QWidget

from modalview.errors import InputError
from modalview.ui.cells import cells_of, text_of
from modalview.ui.document import Document
from modalview.ui.theme import LIGHT, Theme
from modalview.ui.values import ValueRow, ValueRows

_Index = QModelIndex | QPersistentModelIndex
PART, WHAT, TYPED, CONVERTED, TOLERANCE = range(5)
_HEADS = ("Part", "What", "Value as typed", "", "Tolerance")
_CONVERTED_HEADS = {"SI": "In SI", "mm-t": "In mm and t", "inch-pound": "In inch and lb"}
_TYPED = (TYPED, TOLERANCE)
_Role = Qt.ItemDataRole


class PartTableModel(QAbstractTableModel):
    """The lines of the table; a refused entry stays visible with its reason and changes nothing."""

    refused = Signal(str)

    def __init__(self, document: Document, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self.rows: list[ValueRow] = []
        self._memory = ValueRows()
        self._system = "SI"
        self._refusals: dict[tuple[Any, int], tuple[str, str]] = {}
        self._theme: Theme = LIGHT

    def show_model(self, model: Any, *, anew: bool, system: str = "SI") -> None:
        """Show the lines of a model, converted; ``anew`` drops the refused entries of another one."""
        rows = self._memory.of(model, system)
        if system != self._system:
            self._system = system
            self.headerDataChanged.emit(Qt.Orientation.Horizontal, CONVERTED, CONVERTED)
        same = not anew and [row.address for row in rows] == [row.address for row in self.rows]
        if same:
            self.rows = rows
            self.dataChanged.emit(self.index(0, 0), self.index(len(rows) - 1, TOLERANCE))
            return
        self.beginResetModel()
        self.rows = rows
        if anew:
            self._refusals.clear()
        self.endResetModel()

    def set_theme(self, theme: Theme) -> None:
        """Colour refusals and second text."""
        self._theme = theme

    def row_of_part(self, part_id: str) -> int:
        """Return the first line of a part, -1 when it has none."""
        return next((n for n, row in enumerate(self.rows) if row.part_id == part_id), -1)

    def rowCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: N802, B008  (Qt's)
        """Return the number of lines."""
        return 0 if parent.isValid() else len(self.rows)

    def columnCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: N802, B008  (Qt's)
        """Return the number of columns."""
        return 0 if parent.isValid() else len(_HEADS)

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = _Role.DisplayRole) -> Any:  # noqa: N802
        """Return the heading of a column."""
        if orientation == Qt.Orientation.Horizontal and role == _Role.DisplayRole:
            return _CONVERTED_HEADS[self._system] if section == CONVERTED else _HEADS[section]
        return None

    def flags(self, index: _Index) -> Qt.ItemFlag:
        """Values and tolerances can be edited."""
        flags = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable
        return flags | Qt.ItemFlag.ItemIsEditable if self._address(index) else flags

    def _address(self, index: _Index) -> Any:
        if not index.isValid():
            return None
        row = self.rows[index.row()]
        return {TYPED: row.address, TOLERANCE: row.tolerance_address}.get(index.column())

    def _refusal(self, index: _Index) -> tuple[str, str] | None:
        """Return the refused text and its reason, if one stands in this cell."""
        return self._refusals.get((self.rows[index.row()].address, index.column()))

    def data(self, index: _Index, role: int = _Role.DisplayRole) -> Any:
        """Return what a cell shows."""
        if not index.isValid():
            return None
        refusal = self._refusal(index)
        if role == _Role.DisplayRole:
            return refusal[0] if refusal else self._shown(index)
        if role == _Role.EditRole:
            return refusal[0] if refusal else self._own_text(index)
        if role in (_Role.ToolTipRole, _Role.AccessibleDescriptionRole):
            return refusal[1] if refusal else None
        if role == _Role.ForegroundRole:
            return self._colour(index, refused=refusal is not None)
        return None

    def _own_text(self, index: _Index) -> str:
        row = self.rows[index.row()]
        return row.tolerance if index.column() == TOLERANCE else row.text

    def _shown(self, index: _Index) -> str:
        row = self.rows[index.row()]
        column = index.column()
        if column == PART:
            before = self.rows[index.row() - 1] if index.row() else None
            return row.part if before is None or before.part != row.part else ""
        if column == CONVERTED:
            reason = self._row_reason(row)
            return f"not used: {reason}" if reason else row.converted
        if column == TOLERANCE:
            return row.tolerance or row.inherited
        return row.what if column == WHAT else row.text

    def _row_reason(self, row: ValueRow) -> str:
        """Return why an entry of this line is refused, "" when none is."""
        for column in (TYPED, TOLERANCE):
            refusal = self._refusals.get((row.address, column))
            if refusal:
                return refusal[1]
        return ""

    def _colour(self, index: _Index, *, refused: bool) -> QColor | None:
        row = self.rows[index.row()]
        if refused or (index.column() == CONVERTED and self._row_reason(row)):
            return QColor(self._theme.in_band)
        quiet = index.column() in (WHAT, CONVERTED) or (index.column() == TOLERANCE and not row.tolerance)
        return QColor(self._theme.quiet) if quiet else None

    def setData(self, index: _Index, value: Any, role: int = _Role.EditRole) -> bool:  # noqa: N802  (Qt's)
        """Type into a cell; a refused text stays with its reason, an empty one gives back what was."""
        address = self._address(index)
        if role != _Role.EditRole or address is None:
            return False
        text = str(value).strip()
        key = (self.rows[index.row()].address, index.column())
        refusal = self._refusals.pop(key, None)
        try:
            if not (refusal and not text):
                self._document.type_value(address, text)
        except InputError as error:
            self._refusals[key] = (text, str(error))
            self.refused.emit(str(error))
        self.dataChanged.emit(self.index(index.row(), 0), self.index(index.row(), TOLERANCE))
        return True

    def text_at(self, row: int, column: int) -> str:
        """Return what a cell hands to the clipboard: a tolerance only where it is the value's own."""
        if column == PART:
            return self.rows[row].part
        return str(
            self.data(self.index(row, column), _Role.EditRole if column in _TYPED else _Role.DisplayRole)
        )

    def type_block(self, row: int, column: int, cells: list[list[str]]) -> tuple[int, int, int]:
        """Type a block of texts from a cell on, as one edit.

        Empty texts and those over what cannot be typed are passed over. Returns how many texts were taken,
        how many were refused (they stay in sight with their reasons), and how many found no place.
        """
        typed: dict[Any, tuple[tuple[Any, int], str]] = {}
        outside = 0
        for down, line in enumerate(cells):
            for across, text in enumerate(line):
                if not text.strip():
                    continue
                index = self.index(row + down, column + across)
                address = self._address(index)
                if address is not None:
                    key = (self.rows[index.row()].address, index.column())
                    typed[address] = key, text.strip()
                outside += not index.isValid()
        for key, _ in typed.values():
            self._refusals.pop(key, None)
        count = len(typed)
        reasons = self._document.type_values(
            [(address, text) for address, (_, text) in typed.items()], f"paste {count} values"
        )
        for address, error in reasons.items():
            key, text = typed[address]
            self._refusals[key] = text, str(error)
            self.refused.emit(str(error))
        self.dataChanged.emit(self.index(0, 0), self.index(len(self.rows) - 1, TOLERANCE))
        return count - len(reasons), len(reasons), outside


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

    def show_model(self, model: Any, *, anew: bool, system: str = "SI") -> None:
        """Show the values of a model."""
        self.lines.show_model(model, anew=anew, system=system)
        if anew:
            self.fit_columns()
            quiet = self.blockSignals(True)  # choosing the first value is nobody's wish to see that part
            self.setCurrentIndex(self.lines.index(0, TYPED))
            self.blockSignals(quiet)
            self.horizontalScrollBar().setValue(0)

    def fit_columns(self) -> None:
        """Make columns and lines as large as the text needs."""
        wide = self.fontMetrics().averageCharWidth()
        self.verticalHeader().setDefaultSectionSize(round(1.55 * self.fontMetrics().height()))
        for column, characters in ((PART, 20), (WHAT, 24), (TYPED, 20), (TOLERANCE, 17)):
            self.setColumnWidth(column, characters * wide)

    def choose_part(self, part_id: str) -> None:
        """Go to the first value of a part."""
        row = self.lines.row_of_part(part_id)
        if row >= 0:
            self.setCurrentIndex(self.lines.index(row, TYPED))
            self.scrollTo(self.currentIndex(), QAbstractItemView.ScrollHint.PositionAtTop)

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

    def keyPressEvent(self, event: Any) -> None:  # noqa: N802  (Qt's name)
        """Enter edits, as F2 does; copy and paste."""
        if event.matches(QKeySequence.StandardKey.Copy):
            self.copy()
            return
        if event.matches(QKeySequence.StandardKey.Paste):
            self.paste()
            return
        enter = event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter)
        plain = event.modifiers() in (Qt.KeyboardModifier.NoModifier, Qt.KeyboardModifier.KeypadModifier)
        if enter and plain and self.state() != QAbstractItemView.State.EditingState:
            self.edit(self.currentIndex())
        else:
            super().keyPressEvent(event)
