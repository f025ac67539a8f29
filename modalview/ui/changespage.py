"""Changes that clear the model: options to try, and the windows of each value on its own axis."""

from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent, QShowEvent
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QLabel, QSizePolicy, QVBoxLayout, QWidget

from modalview.model.parts import Model
from modalview.ui.absorberline import AbsorberLine
from modalview.ui.changestable import OptionsTable
from modalview.ui.chartcanvas import ChartCanvas
from modalview.ui.chartpage import ChartPage
from modalview.ui.chartroom import ChartRoom
from modalview.ui.elided import PART
from modalview.ui.inquiry import Inquiry, Question
from modalview.ui.questions import changes

NO_MACHINE = (
    "Nothing is to be kept clear yet. Say at which speed a machine runs, which orders it excites, and the "
    "margin wanted."
)
_HIGH = 10.0  # of the axis, in heights of a line
_STEP = 1.01  # of the value that is read, at each press of an arrow key


class WindowsCanvas(ChartCanvas):
    """The axis of a value; pointer and keys read whether a value is clear."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Windows of a value", parent)
        self._value: float | None = None

    def draw(self) -> Any:
        """Draw the axis."""
        from modalview.drawing.windowschart import windows_chart  # noqa: PLC0415  (numpy is late)

        return windows_chart(self.content, self.width(), self.height(), text_scale=self.text_scale)

    def show_content(self, content: Any, *, pale: bool) -> None:
        """Show another value: what was read of the old one is read no more."""
        if content is not self.content:
            self._value = None
        super().show_content(content, pale=pale)

    def reading_items(self) -> tuple[Any, ...]:
        """Return the mark of the value that is read."""
        if self._value is None:
            return ()
        from modalview.drawing.windowschart import reading_line  # noqa: PLC0415  (numpy is late)

        return reading_line(self.chart, self._value)

    def read_value(self, value: float | None) -> None:
        """Read a value; None reads nothing."""
        self._value = value
        if value is None:
            self.read.emit("")
        else:
            said = "every check clear" if self.content.is_clear(value) else "some check not clear"
            self.read.emit(f"{self.content.label} {self.content.text_of(value)}: {said}")
        self.update()

    def read_at(self, x: float, y: float) -> None:
        """Read the value under the pointer."""
        del y
        self.read_value(self.chart.value_at(x))

    def stop_reading(self) -> None:
        """Read nothing."""
        self.read_value(None)

    def read_key(self, event: QKeyEvent) -> bool:
        """Go along by the arrow keys, from end to end of the windows by Page Up and Page Down."""
        here = self._value if self._value is not None else self.content.now
        ends = sorted(end for one in self.content.windows for end in (one.low, one.high) if 0 < end < 1e300)
        found = {
            Qt.Key.Key_Right: here * _STEP,
            Qt.Key.Key_Left: here / _STEP,
            Qt.Key.Key_PageUp: next((end for end in ends if end > here * (1 + 1e-9)), here),
            Qt.Key.Key_PageDown: next((end for end in reversed(ends) if end < here * (1 - 1e-9)), here),
            Qt.Key.Key_Home: self.content.now,
        }.get(event.key())
        if found is None:
            return False
        low, high = self.chart.ends
        self.read_value(min(max(found, low), high))
        return True


class ChangesRoom(ChartRoom):
    """The options first, then the axis of one value, its ceilings and the notes: all in one column."""

    def __init__(self, canvas: ChartCanvas, parent: QWidget | None = None) -> None:
        super().__init__(canvas, parent)
        self.options = OptionsTable("Options", self)
        self.value = QComboBox(self)
        self.value.setAccessibleName("Value whose windows are shown")
        self.value.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.value.setMinimumContentsLength(24)
        self.value.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.ceilings = QLabel(self)
        self.ceilings.setWordWrap(True)
        self.ceilings.setProperty("role", "small")
        self.absorber = AbsorberLine(self)
        heading = QLabel("Windows of", self)
        heading.setProperty("role", "strong")
        heading.setBuddy(self.value)
        row = QHBoxLayout()
        row.addWidget(heading)
        row.addWidget(self.value, 1)
        column = QVBoxLayout()
        column.setContentsMargins(8, 2, 8, 2)
        column.addWidget(self.options)
        column.addLayout(row)
        column.addWidget(canvas)
        column.addWidget(self.ceilings)
        column.addWidget(self.absorber)
        self._layout.insertLayout(0, column)

    def fit(self) -> None:
        """Give the axis its height; all stands in one column."""
        self._layout.setDirection(self._layout.Direction.TopToBottom)
        self.canvas.setFixedHeight(round(_HIGH * self.fontMetrics().height()))
        self.options.fit()
        self.absorber.fit()


class ChangesPage(ChartPage):
    """What clears the model, or by how much it is clear."""

    tried = Signal(object, str)  # the edit of an option, and what it does

    def __init__(self, parent: QWidget | None = None, question: Question = changes) -> None:
        canvas = WindowsCanvas()
        room = ChangesRoom(canvas)
        super().__init__(canvas, Inquiry("looking for changes that clear it", question), parent, room)
        self.options, self.value = room.options, room.value
        self.said = QLabel(self)
        self.said.setWordWrap(True)
        self.said.setProperty("role", "strong")
        self.said.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.controls.addWidget(self.said, 1)
        self.options.tried.connect(self._on_tried)
        self.options.currentCellChanged.connect(lambda *_: self._show_value_of_option())
        self.value.currentIndexChanged.connect(lambda _: self._show_axis())
        self._shown: Any = None
        self._wanted: tuple[Any, ...] = ()
        room.absorber.asked.connect(self._on_absorber)
        self.setFocusProxy(self.options)

    def follow(self, model: Model | None, *, anew: bool) -> None:
        """Ask about a model; an absorber that was wanted is wanted of it alone."""
        if model is not self.inquiry.model:
            self._wanted = ()
        if model is not None:
            self.room.absorber.show_model(model)
        self.inquiry.follow(model, self._wanted, anew=anew)

    def _on_absorber(self, wanted: Any) -> None:
        self._wanted = tuple(wanted)
        self.inquiry.follow(self.inquiry.model, self._wanted)

    def show_result(self) -> None:
        """Show the answer."""
        model, content = self.inquiry.model, self.inquiry.result
        self.said.setVisible(content is not None)
        if model is not None and not any(one.excitations for one in model.machines):
            self.said.hide()
            self.show_missing(NO_MACHINE)
            return
        if self.inquiry.result is None and self.inquiry.busy:
            self.show_missing("Looking for changes that clear it…")
            return
        if self.told_of_none():
            return
        usable = self.inquiry.current
        self.said.setText(content.sentence)
        self.options.show_options(content.headings, content.options, usable=usable)
        if content is not self._shown:
            self._shown = content
            self._offer_values(content)
            self.room.notes.setText("\n".join(content.notes))
        self._show_axis()

    def showEvent(self, event: QShowEvent) -> None:  # noqa: N802  (Qt's name)
        """Say that it is being looked for."""
        super().showEvent(event)
        self.show_result()

    def _offer_values(self, content: Any) -> None:
        """Offer the values by name; the one shown stays, else that of the first option is shown."""
        wanted = self.value.currentData()
        known = [one.value for one in content.values]
        if wanted not in known:
            wanted = next((one.value for one in content.options if one.value in known), None)
        kept = self.value.blockSignals(True)
        self.value.clear()
        for one in content.values:
            now = f" ({one.now_text})" if one.now_text else ""
            self.value.addItem(f"{one.label}{now}{_sign(one)}", one.value)
        self.value.setCurrentIndex(max(self.value.findData(wanted), 0))
        self.value.blockSignals(kept)

    def _show_value_of_option(self) -> None:
        row = self.options.currentRow()
        if self._shown is not None and 0 <= row < len(self._shown.options):
            option = self._shown.options[row]
            index = self.value.findData(option.value)
            if index >= 0:
                self.value.setCurrentIndex(index)
            self.reading.setText(option.detail.replace("\n", PART))

    def _show_axis(self) -> None:
        content = self._shown
        if content is None or not content.values:
            self.show_missing(content.sentence if content is not None else "")
            return
        axis = content.values[max(self.value.currentIndex(), 0)]
        self.room.ceilings.setText(_in_words(axis))
        self.show_chart(axis, _windows_in_words(axis))

    def sentence(self) -> str:
        """Say how to read the axis."""
        told = "Move over the axis to read it"
        return f"{told} · Enter in a line tries its option" if self.options.rowCount() else told

    def _on_tried(self, row: int) -> None:
        option = self._shown.options[row]
        if self.inquiry.current and option.edit is not None:
            self.tried.emit(option.edit, option.text)


def _sign(axis: Any) -> str:
    if not axis.windows:
        return ": no window"
    return f": {len(axis.windows)} windows" if len(axis.windows) > 1 else ": 1 window"


def _in_words(axis: Any) -> str:
    return f"By this alone: {'; '.join(axis.ceilings)}." if axis.ceilings else ""


def _windows_in_words(axis: Any) -> str:
    """Say what the axis shows, for those who hear the window."""
    if not axis.windows:
        return f"{axis.label}, {axis.today}: no value of it alone clears every check"
    found = "; ".join(f"{one.low_text or 'nothing'} to {one.high_text or 'any'}" for one in axis.windows)
    return f"{axis.label}, {axis.today}: every check is clear from {found}"
