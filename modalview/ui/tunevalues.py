"""Which values are to be tuned, each with the range it may take: a list to tick."""

from collections.abc import Sequence
from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QWidget

from modalview.ui.peaktable import TypedTable

VALUE, TYPED, RANGE = range(3)
HEADINGS = ("tune", "as typed", "within")
RANGE_TIP = (
    "The range it may take, such as 50 to 500 kN/mm: that of its tolerance until another one is typed; empty "
    "gives that back"
)


class TuneValues(TypedTable):
    """Space ticks a value, Enter types its range."""

    chosen_changed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Values to tune", parent)
        self._lines: tuple[Any, ...] = ()
        self._ticked: set[str] = set()
        self._ranges: dict[str, str] = {}
        self.typed.connect(self._on_typed)

    def forget(self) -> None:
        """Tick nothing: it is another model."""
        self._ticked.clear()
        self._ranges.clear()
        self.show_lines(())

    def show_lines(self, lines: Sequence[Any]) -> None:
        """Show the values (drawing.tunecontent.ValueLine); what was ticked and typed stays."""
        self._lines = tuple(lines)
        self.show_cells(
            HEADINGS, [(one.label, one.typed, self._ranges.get(one.name, one.span)) for one in lines]
        )
        kept = self.blockSignals(True)
        fixed = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable
        for row, one in enumerate(self._lines):
            ticked = one.name in self._ticked
            self.item(row, VALUE).setFlags(fixed | Qt.ItemFlag.ItemIsUserCheckable)
            self.item(row, VALUE).setCheckState(Qt.CheckState.Checked if ticked else Qt.CheckState.Unchecked)
            self.item(row, TYPED).setFlags(fixed)
            self.item(row, RANGE).setToolTip(RANGE_TIP)
        self.blockSignals(kept)

    def chosen(self) -> tuple[tuple[Any, str], ...]:
        """Return the ticked values, each with its range as typed; "" is that of its tolerance."""
        return tuple((one, self._ranges.get(one.name, "")) for one in self._lines if one.name in self._ticked)

    def tick(self, name: str, span: str = "") -> None:
        """Choose a value, with a range of its own."""
        self._ticked.add(name)
        if span:
            self._ranges[name] = span
        self.show_lines(self._lines)
        self.chosen_changed.emit()

    def _on_typed(self, row: int, column: int, text: str) -> None:
        line = self._lines[row]
        if column == VALUE:
            ticked = self.item(row, VALUE).checkState() == Qt.CheckState.Checked
            (self._ticked.add if ticked else self._ticked.discard)(line.name)
        elif text.strip() in ("", line.span):
            self._ranges.pop(line.name, None)
        else:
            self._ranges[line.name] = text.strip()
            self._ticked.add(line.name)  # who types a range wants it tuned
        self.show_lines(self._lines)
        self.chosen_changed.emit()
