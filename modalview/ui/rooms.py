"""Which place stands where: side by side in a large window, under tabs in one too small for its text."""

from typing import NamedTuple

from PySide6.QtCore import QRect, Qt
from PySide6.QtWidgets import QSplitter, QWidget

from modalview.ui.pages import Pages

# In heights of a line, so that larger text keeps its room: narrower windows put scale and results under tabs
# beside the sheet, still narrower ones all places under the same tabs; lower ones sheet and modes.
THREE_COLUMNS, TWO_COLUMNS, TWO_ROWS = 72.0, 44.0, 44.0


class _Span(NamedTuple):
    """A share of the window, and the least and most of it in heights of a line."""

    share: float
    least: float
    most: float

    def of(self, whole: int, line: int) -> int:
        return round(min(max(self.share * whole, self.least * line), self.most * line))


RESULTS = _Span(0.24, 17.5, 26.0)
SCALE = _Span(0.245, 20.0, 36.0)
SIDE = _Span(0.42, 17.5, 44.0)  # scale or results under their tabs
BELOW = _Span(0.335, 13.5, 22.0)
HALF = 0.5
SHARED = ("scale", "results")
_TITLES = {"scale": "Scale", "results": "Results"}


class Rooms(QSplitter):
    """The columns and rows of the window; what a person drags stays until places change theirs."""

    def __init__(
        self, above: QWidget, below: Pages, side: tuple[QWidget, QWidget], parent: QWidget | None = None
    ) -> None:
        super().__init__(Qt.Orientation.Horizontal, parent)
        self._above, self.below = above, below
        self._shared = dict(zip(SHARED, side, strict=True))
        self.side = Pages("Frequency scale or results", self)
        self.side.hide()
        self._left = QSplitter(Qt.Orientation.Vertical, self)
        for widget in (above, below):
            self._left.addWidget(widget)
        for widget in (self._left, *side, self.side):
            self.addWidget(widget)
        for splitter in (self, self._left):
            splitter.setChildrenCollapsible(False)
        self._dragged = {self: False, self._left: False}
        self.splitterMoved.connect(lambda *_: self._dragged.update({self: True}))
        self._left.splitterMoved.connect(lambda *_: self._dragged.update({self._left: True}))
        self._line, self._half, self._much = 1, False, HALF

    @property
    def drawing(self) -> QRect:
        """Where sheet and modes stand."""
        return QRect(self.mapTo(self.parentWidget(), self._left.pos()), self._left.size())

    def arrange(self, width: int, height: int, line: int) -> None:
        """Put the places side by side or under tabs.

        Parameters
        ----------
        width, height : int
            Pixels of the window.
        line : int
            Height of a line of text in pixels.
        """
        self._line = line
        for pages in (self.below, self.side):
            pages.refit()
        if width < TWO_COLUMNS * line:
            self._put_shared(self.below)
        elif width < THREE_COLUMNS * line:
            self._put_shared(self.side)
        else:
            self._put_shared(None)
        together = height < TWO_ROWS * line or width < TWO_COLUMNS * line
        self._share_rows(shared=together)
        self.below.setMinimumHeight(0 if together else round(BELOW.least * line))
        self._shared["results"].setMinimumWidth(round(min(RESULTS.least * line, width - line)))
        self._fit()

    def show_place(self, name: str) -> None:
        """Bring scale or results to the front, where they stand under tabs."""
        for pages in (self.side, self.below):
            if pages.has(name):
                pages.show_page(name)

    def give_half(self, *, wanted: bool, much: float = HALF) -> None:
        """Give what lies under the sheet half of the height, or so much of it."""
        if (wanted, much) != (self._half, self._much):
            self._half, self._much = wanted, much
            self._fit()

    def resizeEvent(self, event: object) -> None:  # noqa: N802  (Qt's name)
        """Share the new room out."""
        super().resizeEvent(event)
        self._fit()

    def _fit(self) -> None:
        """Share the room out; a splitter that was dragged keeps what it has."""
        if not self._dragged[self]:
            wide = self.width()
            results, scale, side = (
                0 if one.parentWidget() is not self or one.isHidden() else span.of(wide, self._line)
                for one, span in (
                    (self._shared["results"], RESULTS),
                    (self._shared["scale"], SCALE),
                    (self.side, SIDE),
                )
            )
            self.setSizes(self._in_order(max(wide - results - scale - side, 1), scale, results, side))
        if not self.below.has("sheet") and (self._half or not self._dragged[self._left]):
            high = self._left.height()
            below = round(self._much * high) if self._half else BELOW.of(high, self._line)
            self._left.setSizes([max(high - below, 1), below])

    def _in_order(self, left: int, scale: int, results: int, side: int) -> list[int]:
        sizes = {self._left: left, self.side: side}
        sizes |= {self._shared["scale"]: scale, self._shared["results"]: results}
        return [sizes[self.widget(number)] for number in range(self.count())]

    def _put_shared(self, home: Pages | None) -> None:
        """Put scale and results under the tabs of a home, or into columns of their own."""
        if all((home is pages) == pages.has("scale") for pages in (self.side, self.below)):
            return
        self._dragged[self] = False
        left_alone = self.below.current() in SHARED
        for number, name in enumerate(SHARED, start=1):
            place = self._shared[name]
            for pages in (self.side, self.below):
                pages.take(name)
            if home is None:
                self.insertWidget(number, place)
                place.show()
            else:
                home.add(name, _TITLES[name], place)
        self.side.setVisible(home is self.side)
        if left_alone:
            self.below.show_page("modes")

    def _share_rows(self, *, shared: bool) -> None:
        if shared == self.below.has("sheet"):
            return
        self._dragged[self._left] = False
        if shared:
            self.below.add("sheet", "Sheet", self._above, at=0)
            self.below.show_page("sheet")
        else:
            self._left.insertWidget(0, self.below.take("sheet"))
            self._above.show()
