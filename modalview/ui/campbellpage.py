"""The speeds: orders over modes, where they meet, and which speeds remain."""

from typing import Any

from PySide6.QtCore import Qt
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QComboBox, QWidget

from modalview.ui.chartcanvas import ChartCanvas
from modalview.ui.chartpage import ChartPage
from modalview.ui.inquiry import Inquiry, Question
from modalview.ui.questions import speeds

NOTHING = "No machine has a speed and an order: say at which speed it runs and which orders it excites."


class SpeedsCanvas(ChartCanvas):
    """The chart of speeds; pointer and arrow keys name the meetings."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Orders and modes over machine speed", parent)
        self.meeting: Any = None

    def draw(self) -> Any:
        """Draw the chart."""
        from modalview.drawing.campbellchart import speeds_chart  # noqa: PLC0415  (numpy is late)

        return speeds_chart(self.content, self.width(), self.height(), text_scale=self.text_scale)

    def show_content(self, content: Any, *, pale: bool) -> None:
        """Show another content: what was read of the old one is read no more."""
        if content is not self.content:
            self.meeting = None
        super().show_content(content, pale=pale)

    def reading_items(self) -> tuple[Any, ...]:
        """Return the marks of the meeting that is read."""
        if self.meeting is None:
            return ()
        from modalview.drawing.campbellchart import chosen_items  # noqa: PLC0415  (numpy is late)

        return chosen_items(self.chart, self.meeting)

    def read_meeting(self, meeting: Any) -> None:
        """Name a meeting; None names nothing."""
        if meeting is not self.meeting:
            self.meeting = meeting
            self.read.emit("" if meeting is None else meeting.text)
            self.update()

    def read_at(self, x: float, y: float) -> None:
        """Name the meeting under the pointer."""
        self.read_meeting(self.chart.nearest(x, y))

    def stop_reading(self) -> None:
        """Name nothing."""
        self.read_meeting(None)

    def read_key(self, event: QKeyEvent) -> bool:
        """Go from meeting to meeting by the arrow keys."""
        steps = {Qt.Key.Key_Right: 1, Qt.Key.Key_Left: -1}
        content = self.content
        found = [
            one for one in content.meetings if one.rpm <= content.highest_rpm and one.hz <= content.highest_hz
        ]
        if event.key() not in steps or not found:
            return False
        step = steps[event.key()]
        here = found.index(self.meeting) if self.meeting in found else (-1 if step > 0 else 0)
        self.read_meeting(found[(here + step) % len(found)])
        return True


class SpeedsPage(ChartPage):
    """Chart and tables of the speeds of a machine."""

    def __init__(self, parent: QWidget | None = None, question: Question = speeds) -> None:
        super().__init__(SpeedsCanvas(), Inquiry("holding the speeds against the modes", question), parent)
        self.machine = QComboBox(self)
        self.machine.setAccessibleName("Machine")
        self.machine.activated.connect(self.show_result)
        self.controls.addWidget(self.machine)
        self.controls.addStretch(1)
        self.machine.hide()
        self.runs = self.room.add_table("Speeds that remain")
        self.passed = self.room.add_table("Passed on run-up")

    def show_result(self) -> None:
        """Show the answer."""
        self.machine.setVisible(bool(self.inquiry.result) and len(self.inquiry.result) > 1)
        if self.told_of_none():
            return
        found = self.inquiry.result
        if not found:
            self.show_missing(NOTHING)
            return
        from modalview.drawing import campbellchartcontent as contents  # noqa: PLC0415  (numpy is late)

        self._offer(found)
        content = found[max(self.machine.currentIndex(), 0)]
        self.runs.show_figures(contents.RUN_HEADINGS, [contents.run_cells(one) for one in content.runs])
        self.passed.show_figures(contents.PASSAGE_HEADINGS, [one.cells for one in content.passages])
        self.room.notes.setText(
            "Speeds are proven clear by counts of modes; ends of what meets a mode are rounded outward. "
            "Passed on run-up carries no verdict."
        )
        self.show_chart(content, content.sentence)

    def _offer(self, found: Any) -> None:
        names = [one.label for one in found]
        if [self.machine.itemText(i) for i in range(self.machine.count())] != names:
            self.machine.clear()
            self.machine.addItems(names)

    def sentence(self) -> str:
        """Say what remains of the speeds."""
        content = self.canvas.content
        return content.sentence if content is not None else ""
