"""Sheet, scale and verdict on one page across, as lines and letters that can be read in grey."""

import errno
import re
import zlib

import pytest
from conftest import PUMP, settle
from PySide6.QtGui import QPageLayout
from PySide6.QtWidgets import QMessageBox

from modalview.drawing.primitives import Text
from modalview.store import read_model, saving
from modalview.ui import printing
from modalview.ui import settings as names
from modalview.ui.printing import Content, layout, page, pdf

POINTS = {"A4": (842, 595), "Letter": (792, 612)}


def streams(data):
    """Return the unpacked contents of a PDF file."""
    found = []
    for match in re.finditer(rb"stream\r?\n(.*?)endstream", data, re.DOTALL):
        try:
            found.append(zlib.decompress(match[1]))
        except zlib.error:
            continue
    return found


def texts(content, width=1122.0, height=769.0):
    return " ".join(
        item.text
        for _, _, drawing in page(content, width, height)
        for item in drawing.items
        if isinstance(item, Text)
    )


@pytest.mark.parametrize("paper", POINTS)
def test_a_page_across_of_either_paper_with_lines_and_letters(pump, paper):
    data = pdf(pump.printing.content(), paper)
    (box,) = re.findall(rb"/MediaBox \[\s*0 0 ([\d.]+) ([\d.]+)\s*\]", data)
    assert tuple(round(float(side)) for side in box) == POINTS[paper]
    assert len(re.findall(rb"/Type\s*/Page\b", data)) == 1
    assert re.search(rb"/Subtype\s*/Image", data) is None, "vectors only"
    drawn = max(streams(data), key=len)
    assert drawn.count(b"Tj") + drawn.count(b"TJ") > 40
    assert len(re.findall(rb"\bl\b", drawn)) > 100
    assert len(data) > 10_000


def test_it_says_what_was_checked_of_which_file_and_when(pump):
    content = pump.printing.content()
    said = texts(content)
    assert "Cooling-water pump P-3, as built" in said
    assert "mode in band" in said
    assert pump.analysis.solution.sentence.split(":")[0] in said
    assert "file: as-built.keepclear" in said
    assert f"printed: {content.printed}, Keepclear" in said
    assert "7× vane pass" in said
    assert "licensed" in said


def test_a_model_that_was_not_checked_says_so_and_has_no_scale():
    said = texts(Content(read_model(PUMP), "pump.keepclear"))
    assert "not checked" in said
    assert "rpm" not in said
    assert "620 kg" in said


def test_while_an_edit_is_being_counted_no_old_verdict_is_printed(pump, qtbot):
    pump.document.type_value(("links", "k3", "stiffness"), "340 kN/mm")
    content = pump.printing.content()
    assert (content.outlook, content.solution) == (None, None)
    settle(qtbot, pump)
    assert "clear" in texts(pump.printing.content())


def test_a_long_sentence_is_cut_with_a_hint_before_the_drawing_has_no_room():
    class Long:
        sentence = "word " * 4000

    lines = printing._words(Content(None, "x", solution=Long), 1122.0, 769.0)
    assert lines.bounds[3] <= 0.4 * 769.0 + 20
    assert "keepclear check" in " ".join(item.text for item in lines.items)


def test_what_is_printed_stays_on_the_page(pump):
    for x, y, drawing in page(pump.printing.content(), 1122.0, 769.0):
        _, _, width, height = drawing.bounds
        assert x + width <= 1122.0 + 1e-6
        assert y + height <= 769.0 + 1e-6


def test_paper_follows_the_country_or_the_setting():
    assert layout("A4").orientation() is QPageLayout.Orientation.Landscape
    assert layout("Letter").pageSize().name().startswith("Letter")
    assert layout("system").pageSize().name() in (layout("A4").pageSize().name(), "Letter")


def test_the_window_writes_the_file_in_the_paper_chosen(pump, tmp_path, settings):
    settings.set(names.PAPER, "Letter")
    path = tmp_path / "pump.pdf"
    pump.printing.write_pdf(path)
    assert b"792" in path.read_bytes()
    assert pump.statusBar().currentMessage() == "pump.pdf was written"


def test_a_full_disk_keeps_the_file_that_was_there(pump, tmp_path, monkeypatch):
    path = tmp_path / "pump.pdf"
    path.write_bytes(b"before")

    def fail(_):
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(saving, "_open_new", fail)
    pump.printing.write_pdf(path)
    (box,) = pump.findChildren(QMessageBox)
    assert "No space left on device" in box.informativeText()
    assert path.read_bytes() == b"before"
    box.close()


def test_without_a_printer_it_is_told_and_a_file_offered(pump, monkeypatch):
    monkeypatch.setattr(printing, "printer_names", list)
    asked = []
    monkeypatch.setattr(pump.printing, "to_pdf", lambda: asked.append(1))
    pump.on_print()
    (box,) = pump.findChildren(QMessageBox)
    assert "No printer" in box.text()
    next(one for one in box.buttons() if one.text() == "Print to PDF…").click()
    assert asked == [1]


def test_a_printer_that_refuses_is_told(pump, monkeypatch):
    from PySide6.QtPrintSupport import QPrinter

    monkeypatch.setattr(printing, "paint_page", lambda *_: False)
    pump.printing._print(QPrinter())
    (box,) = pump.findChildren(QMessageBox)
    assert "not printed" in box.text()
    box.close()


def test_a_printer_prints_the_same_page(pump, tmp_path):
    from PySide6.QtPrintSupport import QPrinter

    printer = QPrinter(QPrinter.PrinterMode.HighResolution)
    printer.setOutputFormat(QPrinter.OutputFormat.PdfFormat)
    printer.setOutputFileName(str(tmp_path / "printed.pdf"))
    printer.setPageLayout(layout("A4"))
    assert printing.paint_page(printer, pump.printing.content())
    drawn = max(streams((tmp_path / "printed.pdf").read_bytes()), key=len)
    assert drawn.count(b"Tj") + drawn.count(b"TJ") > 40


def test_without_a_model_there_is_nothing_to_print(window):
    assert not window.menus.actions["on_print"].isEnabled()
    assert not window.menus.actions["on_print_to_pdf"].isEnabled()
