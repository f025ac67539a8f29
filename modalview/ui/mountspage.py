"""The mounts at rest: what each carries, how far it yields, how the machine tilts."""

from typing import Any

from PySide6.QtWidgets import QWidget

from modalview.ui.chartcanvas import ChartCanvas
from modalview.ui.chartpage import ChartPage
from modalview.ui.inquiry import Inquiry, Question
from modalview.ui.questions import mounts


class MountsCanvas(ChartCanvas):
    """The sketch of the mounts."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__("Mounts at rest", parent)

    def draw(self) -> Any:
        """Draw the sketch."""
        from modalview.drawing.mountschart import mounts_chart  # noqa: PLC0415  (numpy is late)

        return mounts_chart(self.content, self.width(), self.height(), text_scale=self.text_scale)

    def drawing_of(self, chart: Any) -> Any:
        """Return the sketch itself."""
        return chart


class MountsPage(ChartPage):
    """Sketch and tables."""

    def __init__(self, parent: QWidget | None = None, question: Question = mounts) -> None:
        super().__init__(MountsCanvas(), Inquiry("setting the machine on its mounts", question), parent)
        self.mounts = self.room.add_table("Mounts")
        self.bodies = self.room.add_table("How the bodies settle")
        self.system = "SI"
        self._shown: tuple[Any, str] = (None, "")

    def set_system(self, system: str) -> None:
        """Show figures in another system of units."""
        if system != self.system:
            self.system = system
            self.show_result()

    def show_result(self) -> None:
        """Show the answer."""
        if self.told_of_none():
            return
        from modalview.drawing import mountschartcontent as contents  # noqa: PLC0415  (numpy is late)

        content = self.canvas.content
        if self._shown != (self.inquiry.result, self.system):
            self._shown = self.inquiry.result, self.system
            content = contents.mounts_content(*self._shown)
            self.mounts.show_figures(content.headings, content.rows)
            self.bodies.show_figures(contents.SETTLED_HEADINGS, content.settled)
            centres = [one.text for one in content.centres]
            self.room.notes.setText("\n".join((*centres, *content.notes)))
        self.show_chart(content, content.sentence)

    def sentence(self) -> str:
        """Say what matters."""
        content = self.canvas.content
        return content.sentence if content is not None else ""
