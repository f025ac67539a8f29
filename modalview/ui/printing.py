"""Sheet, scale and verdict on paper, or as a PDF file: one page across, all of it lines and letters."""

import time
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QBuffer, QIODevice, QLocale, QMarginsF, QObject, Qt
from PySide6.QtGui import QPagedPaintDevice, QPageLayout, QPageSize, QPainter, QPdfWriter
from PySide6.QtWidgets import QFileDialog

from modalview import __version__
from modalview.store.saving import put_in_place
from modalview.ui import settings as names
from modalview.ui.dialogs import ask
from modalview.ui.settings import Settings
from modalview.ui.status import CAUTION

if TYPE_CHECKING:
    from modalview.ui.window import Window

# One pixel of a drawing on paper: letters of 13 pixels come out at 9 points.
MM_PER_PIXEL = 0.7 * 25.4 / 72
MARGIN_MM = 10.0
RESOLUTION = 1200
# Of the page: the sheet, and the scale beside it; the words below take what they need, to this share.
_SHEET_SHARE, _MOST_WORDS = 0.68, 0.4
_PAD, _LINE = 10.0, 16.0
_LETTER = (
    QLocale.Country.UnitedStates,
    QLocale.Country.Canada,
    QLocale.Country.Mexico,
    QLocale.Country.Philippines,
)


@dataclass(frozen=True, slots=True)
class Content:
    """What goes on the page.

    Parameters
    ----------
    model : Model
    file : str
        Name of its file, or what stands in its place.
    outlook, solution : study results or None
        Of exactly this model; without an outlook the page says that nothing was checked.
    discs : bool
        Whether the Gershgorin bounds stand on the scale.
    printed : str
        Date and time.
    viewpoint : str
        From where a space model is seen (drawing.view.Viewpoint).
    """

    model: Any
    file: str
    outlook: Any = None
    solution: Any = None
    discs: bool = True
    printed: str = ""
    viewpoint: str = "turned"


Placed = tuple[float, float, Any]  # where a drawing stands on the page, pixels, and the drawing


def page(content: Content, width: float, height: float) -> tuple[Placed, ...]:
    """Lay a page out.

    Parameters
    ----------
    content : Content
    width, height : float
        Of the page within its margins, pixels of drawings.
    """
    from modalview.drawing import furniture, scale, scalecontent, sheet, view  # noqa: PLC0415  (numpy comes late)

    words = _words(content, width, height)
    below = words.bounds[3]
    high = height - below
    outlook = content.outlook
    if outlook is None:
        title = furniture.title_lines(content.model, checked="not checked")
        wide = width
    else:
        checked = str(outlook.verdict or "nothing to check")
        title = furniture.title_lines(content.model, checked=checked, freedoms=outlook.coordinates)
        wide = _SHEET_SHARE * width
    seen = view.Viewpoint(content.viewpoint)
    geometry = sheet.sheet_geometry(content.model, wide, high, viewpoint=seen)
    placed: list[Placed] = [
        (0.0, 0.0, sheet.sheet_drawing(geometry, title)),
        (0.0, high, words),
    ]
    if outlook is not None:
        known = scalecontent.scale_content(outlook, solution=content.solution)
        drawn = scale.scale_drawing(known, width - wide, high, discs=content.discs)
        placed.append((wide, 0.0, drawn.drawing))
    placed.append((0.0, 0.0, _frames(width, height, high, wide)))
    return tuple(placed)


def _words(content: Content, width: float, height: float) -> Any:
    """Return the strip below: the verdict's sentence, and where the page comes from."""
    from modalview.drawing.primitives import Drawing, Role, Size, Text  # noqa: PLC0415
    from modalview.drawing.textsize import text_width  # noqa: PLC0415

    known = content.solution or content.outlook
    sentence = known.sentence if known is not None else "This model was not checked."
    room = _SHEET_SHARE * width - 2 * _PAD
    most = int((_MOST_WORDS * height - 2 * _PAD) // _LINE)
    lines = wrapped(sentence, lambda text: text_width(text) <= room)
    if len(lines) > most:
        lines = [*lines[: most - 1], "… the rest is told by the command: keepclear check FILE"]
    side_room = (1 - _SHEET_SHARE) * width - 2 * _PAD
    side = [f"file: {content.file}", f"printed: {content.printed}, Keepclear {__version__}", CAUTION]
    side = [line for one in side for line in wrapped(one, lambda text: _small(text) <= side_room)]
    items = [
        Text(_PAD, _PAD + (row + 0.5) * _LINE, line, Role.INK, Size.NORMAL) for row, line in enumerate(lines)
    ]
    x = _SHEET_SHARE * width + _PAD
    items += [
        Text(x, _PAD + (row + 0.5) * _LINE, line, Role.INK, Size.SMALL) for row, line in enumerate(side)
    ]
    high = 2 * _PAD + max(len(lines), len(side)) * _LINE
    return Drawing(tuple(items), (0.0, 0.0, width, high))


def _small(text: str) -> float:
    from modalview.drawing.primitives import Size  # noqa: PLC0415
    from modalview.drawing.textsize import text_width  # noqa: PLC0415

    return text_width(text, Size.SMALL)


def wrapped(text: str, fits: Any) -> list[str]:
    """Return a text in lines that fit; a word that does not fit alone is cut into pieces.

    >>> wrapped("one two three", lambda text: len(text) <= 8)
    ['one two', 'three']
    >>> wrapped("abcdefghij", lambda text: len(text) <= 4)
    ['abcd', 'efgh', 'ij']
    """
    lines: list[str] = []
    for word in text.split():
        longer = f"{lines[-1]} {word}" if lines else word
        if fits(longer):
            lines[-1:] = [longer]
            continue
        pieces = [""]
        for sign in word:
            if pieces[-1] and not fits(pieces[-1] + sign):
                pieces.append("")
            pieces[-1] += sign
        lines += pieces
    return lines


def _frames(width: float, height: float, high: float, wide: float) -> Any:
    import numpy as np  # noqa: PLC0415

    from modalview.drawing.primitives import Box, Drawing, Lines, Role  # noqa: PLC0415

    inner = [[0.0, high, width, high], [_SHEET_SHARE * width, high, _SHEET_SHARE * width, height]]
    if wide < width:
        inner.append([wide, 0.0, wide, high])
    items = (
        Box(0.0, 0.0, width, height, 0.0, Role.INK, None, 1.0),
        Lines(np.array(inner), Role.INK, 1.0),
    )
    return Drawing(items, (0.0, 0.0, width, height))


def paint_page(device: QPagedPaintDevice, content: Content) -> bool:
    """Paint the page on a printer or a PDF; False where that could not begin."""
    from modalview.drawing import paint, palette  # noqa: PLC0415  (numpy comes late)
    from modalview.drawing.primitives import Role  # noqa: PLC0415

    inside = device.pageLayout().paintRect(QPageLayout.Unit.Millimeter)
    paper = {**palette.LIGHT, Role.PAPER: "#ffffff"}  # the paper is there already: no tint is printed
    painter = QPainter()
    if not painter.begin(device):
        return False
    dots = device.logicalDpiX() / 25.4 * MM_PER_PIXEL
    painter.scale(dots, dots)
    for x, y, drawing in page(content, inside.width() / MM_PER_PIXEL, inside.height() / MM_PER_PIXEL):
        painter.save()
        painter.translate(x, y)
        paint.paint(painter, drawing, paper)
        painter.restore()
    return painter.end()


def layout(paper: str) -> QPageLayout:
    """Return a page across of "A4" or "Letter", or by "system" as usual in the country."""
    if paper == "system":
        paper = "Letter" if QLocale.system().territory() in _LETTER else "A4"
    size = QPageSize(QPageSize.PageSizeId.Letter if paper == "Letter" else QPageSize.PageSizeId.A4)
    margins = QMarginsF(MARGIN_MM, MARGIN_MM, MARGIN_MM, MARGIN_MM)
    return QPageLayout(size, QPageLayout.Orientation.Landscape, margins, QPageLayout.Unit.Millimeter)


def pdf(content: Content, paper: str) -> bytes:
    """Return the page as a PDF file."""
    buffer = QBuffer()
    buffer.open(QIODevice.OpenModeFlag.WriteOnly)
    writer = QPdfWriter(buffer)
    writer.setResolution(RESOLUTION)
    writer.setPageLayout(layout(paper))
    writer.setTitle(content.model.title or content.file)
    writer.setCreator(f"Keepclear {__version__}")
    paint_page(writer, content)
    del writer
    return bytes(buffer.data().data())


def printer_names() -> Sequence[str]:
    """Return the printers of this computer."""
    from PySide6.QtPrintSupport import QPrinterInfo  # noqa: PLC0415  (seldom needed)

    return QPrinterInfo.availablePrinterNames()


class Printing(QObject):
    """Print and Print to PDF of one window."""

    def __init__(self, window: "Window", settings: Settings) -> None:
        super().__init__(window)
        self._window, self._settings = window, settings

    def content(self) -> Content:
        """Return what the window shows now; a verdict of an older model is left out."""
        analysis, document = self._window.analysis, self._window.document
        return Content(
            document.model,
            document.name,
            None if analysis.looking else analysis.outlook,
            analysis.solution if analysis.solution_current and not analysis.looking else None,
            discs=self._settings.get(names.DISCS),
            printed=time.strftime("%Y-%m-%d %H:%M"),
            viewpoint=self._window.sheet.viewpoint,
        )

    def print_(self) -> None:
        """Ask which printer, and print; where there is none say so, and offer a PDF file."""
        if not printer_names():
            ask(
                self._window,
                "No printer is set up on this computer.",
                "A PDF file can be printed elsewhere.",
                (("Print to PDF…", self.to_pdf), ("Close", None)),
            )
            return
        from PySide6.QtPrintSupport import QPrintDialog, QPrinter  # noqa: PLC0415  (seldom needed)

        printer = QPrinter(QPrinter.PrinterMode.HighResolution)
        printer.setPageLayout(layout(self._settings.get(names.PAPER)))
        printer.setDocName(self._window.document.name)
        dialog = QPrintDialog(printer, self._window)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.accepted.connect(lambda: self._print(printer))
        dialog.open()

    def _print(self, printer: Any) -> None:
        if not paint_page(printer, self.content()):
            name = printer.printerName() or "the printer"
            self._tell("It was not printed.", f"{name} does not answer or refused the page.")

    def to_pdf(self) -> None:
        """Ask for a place and write the page there."""
        dialog = QFileDialog(self._window, "Print to PDF", self._settings.get(names.FOLDER), "PDF (*.pdf)")
        dialog.setAcceptMode(QFileDialog.AcceptMode.AcceptSave)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.setDefaultSuffix("pdf")
        path = self._window.document.path
        dialog.selectFile(f"{path.stem if path else 'model'}.pdf")
        dialog.fileSelected.connect(lambda chosen: self.write_pdf(Path(chosen)))
        dialog.open()

    def write_pdf(self, path: Path) -> None:
        """Write the page, beside the old file and then in its place."""
        try:
            put_in_place(path, pdf(self.content(), self._settings.get(names.PAPER)))
        except OSError as fault:
            self._tell("The PDF file was not written.", f"{path}: {fault.strerror or fault}")
        else:
            self._window.tell(f"{path.name} was written")

    def _tell(self, text: str, more: str) -> None:
        ask(self._window, text, more, (("Close", None),))
