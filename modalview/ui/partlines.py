"""What the parts table shows: every value of every part, and entries that were refused."""

from functools import partial
from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt, Signal
from PySide6.QtGui import QColor

from modalview.errors import InputError
from modalview.model.parts import Model
from modalview.ui.document import Document
from modalview.ui.later import Later
from modalview.ui.theme import LIGHT, Theme
from modalview.ui.values import Lines, ValueRow

# The lines of more bodies and links than this are counted in a thread.
AT_ONCE = 1000

_Index = QModelIndex | QPersistentModelIndex
PART, WHAT, TYPED, CONVERTED, TOLERANCE = range(5)
_HEADS = ("Part", "What", "Value as typed", "", "Tolerance")
_CONVERTED_HEADS = {"SI": "In SI", "mm-t": "In mm and t", "inch-pound": "In inch and lb"}
_TYPED = (TYPED, TOLERANCE)
_Role = Qt.ItemDataRole


class PartTableModel(QAbstractTableModel):
    """The lines of the table; a refused entry stays visible with its reason and changes nothing."""

    refused = Signal(str)
    refusals_changed = Signal()

    def __init__(self, document: Document, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self.rows = Lines(Model())
        self._background = Later(self)
        self._background.done.connect(lambda _key, lines: self._show(lines))
        self._system = "SI"
        # Oldest first, by address of the line and column: what was typed, and why it is refused.
        self._refusals: dict[tuple[Any, int], tuple[str, str]] = {}
        self._undone_to = 0
        document.stack.indexChanged.connect(self._on_stack_moved)
        self._theme: Theme = LIGHT

    def show_model(self, model: Any, *, anew: bool, system: str = "SI") -> None:
        """Show the lines of a model, converted; ``anew`` drops the refused entries of another one.

        The lines of a large model are counted in a thread; until then an edited one stands as it was.
        """
        if system != self._system:
            self._system = system
            self.headerDataChanged.emit(Qt.Orientation.Horizontal, CONVERTED, CONVERTED)
        if anew:
            self.forget_refusals()
            self._reset(Lines(Model()))
        count = partial(Lines, model, system, self.rows)
        if len(model.bodies) + len(model.links) <= AT_ONCE:
            self._background.forget()
            self._show(count())
        else:
            self._background.ask("lines", count)

    def _show(self, lines: Lines) -> None:
        if lines.like(self.rows):
            self.rows = lines
            self.dataChanged.emit(self.index(0, 0), self.index(len(lines) - 1, TOLERANCE))
        else:
            self._reset(lines)

    def _reset(self, lines: Lines) -> None:
        self.beginResetModel()
        self.rows = lines
        self.endResetModel()

    def set_theme(self, theme: Theme) -> None:
        """Colour refusals and second text."""
        self._theme = theme

    def row_of_part(self, part_id: str) -> int:
        """Return the first line of a part, -1 when it has none."""
        return self.rows.row_of_part(part_id)

    @property
    def counting(self) -> bool:
        """Whether the lines of a large model are being counted."""
        return self._background.waits_for("lines")

    def close_threads(self) -> None:
        """Wait for a count under way."""
        self._background.close()

    # Refused entries

    def _on_stack_moved(self, index: int) -> None:
        if index < self._undone_to:  # undone: what was typed after it goes too
            self.forget_refusals()
        self._undone_to = index

    @property
    def has_refusals(self) -> bool:
        """Whether any entry is refused."""
        return bool(self._refusals)

    def forget_refusals(self) -> None:
        """Give every value back that a refused entry stands over."""
        if self._refusals:
            self._refusals.clear()
            self._refusals_changed(0, len(self.rows) - 1)

    def forget_last_refusal(self) -> bool:
        """Give the value back that the last refused entry stands over; False where there is none."""
        if not self._refusals:
            return False
        self._refusals.popitem()
        self._refusals_changed(0, len(self.rows) - 1)
        return True

    def reason_at(self, index: _Index) -> str:
        """Return which entry of a line is refused, and why; "" where none is."""
        if not index.isValid():
            return ""
        row = self.rows[index.row()]
        for column in (TYPED, TOLERANCE):
            refusal = self._refusals.get((row.address, column))
            if refusal:
                what = "tolerance" if column == TOLERANCE else row.what
                return f"{row.part}, {what}: not used. {refusal[1]}"
        return ""

    def _refusals_changed(self, first: int, last: int) -> None:
        self.dataChanged.emit(self.index(first, 0), self.index(last, TOLERANCE))
        self.refusals_changed.emit()

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
        answer = self._ANSWERS.get(role) if index.isValid() else None
        return answer(self, index, self._refusal(index)) if answer else None

    def _explained(self, index: _Index, _refusal: Any) -> str | None:
        return self._row_reason(self.rows[index.row()]) or None

    _ANSWERS = {  # noqa: RUF012  (never changed)
        _Role.DisplayRole: lambda self, index, refusal: refusal[0] if refusal else self._shown(index),
        _Role.EditRole: lambda self, index, refusal: refusal[0] if refusal else self._own_text(index),
        _Role.AccessibleDescriptionRole: lambda _self, _index, refusal: refusal[1] if refusal else None,
        _Role.ToolTipRole: _explained,
        _Role.ForegroundRole: lambda self, index, refusal: self._colour(index, refused=refusal is not None),
    }

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
        self._refusals_changed(index.row(), index.row())
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
        self._refusals_changed(0, len(self.rows) - 1)
        return count - len(reasons), len(reasons), outside
