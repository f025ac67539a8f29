"""The pages of one window that answer more than modes: they follow the model in sight."""

from typing import Any

from PySide6.QtCore import QObject, Signal

from modalview.model.parts import Model, Motion
from modalview.ui.campbellpage import SpeedsPage
from modalview.ui.changespage import ChangesPage
from modalview.ui.measuredpage import MeasuredPage
from modalview.ui.mountspage import MountsPage
from modalview.ui.pages import Pages
from modalview.ui.responsepage import ResponsePage
from modalview.ui.theme import Theme

NAMES = ("changes", "response", "speeds", "mounts", "measured")


class Charts(QObject):
    """Makes the pages and passes on what each needs to know and tells."""

    failed = Signal(object)

    def __init__(self, below: Pages, parent: QObject) -> None:
        super().__init__(parent)
        self._below = below
        self.changes, self.response = ChangesPage(below), ResponsePage(below)
        self.speeds, self.mounts = SpeedsPage(below), MountsPage(below)
        self.measured = MeasuredPage(below)
        self.pages = {
            "changes": self.changes,
            "response": self.response,
            "speeds": self.speeds,
            "mounts": self.mounts,
            "measured": self.measured,
        }
        for name, page in self.pages.items():
            title = name.capitalize()
            below.add(name, title, page)
            page.inquiry.failed.connect(self.failed)
        self.measured.failed.connect(self.failed)

    def show_model(self, model: Model, system: str, *, anew: bool) -> None:
        """Follow the model on the sheet."""
        self.set_system(system)
        there = model.motion is not Motion.SHAFT_TRAIN
        if not there and self._below.current() == "mounts":
            self._below.show_page("modes")
        self._below.offer("mounts", there=there)
        for page in self.pages.values():
            page.follow(model, anew=anew)

    def set_system(self, system: str) -> None:
        """Show figures in another system of units."""
        self.response.set_system(system)
        self.mounts.set_system(system)

    def set_theme(self, theme: Theme, text_scale: float) -> None:
        """Repaint in other colours and text size."""
        for page in self.pages.values():
            page.set_theme(theme, text_scale)

    @property
    def busy(self) -> bool:
        """Whether the page in sight still works something out."""
        page = self.pages.get(self._below.current())
        return page is not None and page.inquiry.busy

    @property
    def motion(self) -> Any:
        """What the sheet is to move while a page of charts is in sight, or None."""
        return self.response.motion if self._below.current() == "response" else None

    def on_chosen(self, parts: tuple[str, ...]) -> None:
        """Look at the body that is chosen on the sheet, while the response is in sight."""
        if parts and self._below.current() == "response":
            self.response.choose_body(parts[0])

    def close_threads(self) -> None:
        """Wait for what is being worked out."""
        for page in self.pages.values():
            page.close_threads()
