from conftest import settle
from pen import Pen
from PySide6.QtCore import QPoint
from PySide6.QtWidgets import QApplication

from modalview.places import demo_models
from modalview.ui import settings as names
from modalview.ui.elided import ElidedLabel


def settled(window, *size) -> None:
    """Give a window a size and let its layouts follow."""
    window.resize(*size)
    for _ in range(3):
        QApplication.processEvents()


def left_edge(window, widget) -> int:
    return widget.mapTo(window, QPoint(0, 0)).x()


def test_a_small_window_with_large_text_puts_places_under_tabs_and_back(pump):
    pump.resize(1280, 800)
    assert not pump.side.has("scale")
    pump.on_setting(names.TEXT_SIZE, 200)
    assert pump.side.has("scale")
    assert pump.below.current() == "sheet"
    pump.on_go_to_results()
    assert pump.side.current() == "results"
    pump.on_go_to_modes()
    assert pump.below.current() == "modes"
    pump.on_setting(names.TEXT_SIZE, 100)
    assert not pump.side.has("scale")
    assert not pump.below.has("sheet")
    assert pump.scale.isVisible()
    assert pump.sheet.isVisible()


def test_a_part_chosen_on_the_sheet_does_not_hide_the_sheet(pump, qtbot):
    pump.on_setting(names.TEXT_SIZE, 200)
    settled(pump, 1280, 800)
    pen = Pen(pump, qtbot)
    pen.click(pen.part("pump"))
    assert pump.below.current() == "sheet"
    assert pump.parts.lines.rows[pump.parts.currentIndex().row()].part_id == "pump"


def test_in_a_very_small_window_every_place_is_under_the_same_tabs(pump):
    pump.on_setting(names.TEXT_SIZE, 200)
    settled(pump, 840, 540)
    assert pump.below.has("scale")
    assert pump.below.has("results")
    assert not pump.side.isVisible()
    pump.on_go_to_results()
    assert pump.results.isVisible()
    pump.on_setting(names.TEXT_SIZE, 100)
    settled(pump, 1280, 800)
    for place in (pump.sheet, pump.modes, pump.scale, pump.results):
        assert place.isVisible()


def test_a_window_of_800_by_600_shows_every_place_whole(pump):
    settled(pump, 800, 600)
    assert (pump.width(), pump.height()) == (800, 600)
    for place in (pump.sheet, pump.scale, pump.banner.find, pump.status.caution, pump.play_bar):
        corner = place.mapTo(pump, QPoint(place.width(), place.height()))
        assert corner.x() <= 800
        assert corner.y() <= 600


def test_larger_text_and_back_leaves_the_columns_and_tabs_as_they_were(pump):
    settled(pump, 1280, 800)
    before = [left_edge(pump, place) for place in (pump.scale, pump.results, pump.proof)]
    pump.on_setting(names.TEXT_SIZE, 200)
    settled(pump, 1280, 800)
    pump.on_setting(names.TEXT_SIZE, 100)
    settled(pump, 1280, 800)
    assert [left_edge(pump, place) for place in (pump.scale, pump.results, pump.proof)] == before


def test_a_wide_window_gives_scale_and_results_room_too_and_a_dragged_column_stays(pump):
    settled(pump, 1280, 800)
    small = (pump.scale.width(), pump.results.width(), pump.below.height())
    settled(pump, 1920, 1080)
    large = (pump.scale.width(), pump.results.width(), pump.below.height())
    assert all(more > less for more, less in zip(large, small, strict=True))
    pump.rooms.moveSplitter(900, 1)
    dragged = pump.rooms.sizes()[0]
    settled(pump, 1920, 1070)
    assert pump.rooms.sizes()[0] == dragged


def test_a_sentence_without_room_is_cut_at_a_word_and_told_whole_in_its_tool_tip(pump):
    sentence = pump.banner.sentence
    settled(pump, 1280, 800)
    assert "…" not in sentence.text()
    sentence.say("1× unbalance of 2950 rpm meets mode 1. " * 40)
    for _ in range(3):
        QApplication.processEvents()
    assert sentence.text().endswith(" …")
    assert sentence.whole in sentence.toolTip()
    assert sentence.height() <= 0.3 * pump.height()


def test_a_line_leaves_out_whole_parts_before_it_cuts_one(qtbot):
    line = ElidedLabel(None)
    qtbot.addWidget(line)
    line.show()
    line.setText("3 of 3 found · computed to 5e-15")
    line.resize(line.fontMetrics().horizontalAdvance("3 of 3 found · com"), 20)
    assert line.shown_text() == "3 of 3 found"
    assert line.toolTip() == "3 of 3 found · computed to 5e-15"
    line.resize(line.fontMetrics().horizontalAdvance(line.text()) + 2, 20)
    assert line.shown_text() == line.text()
    assert line.toolTip() == ""


def test_the_mode_in_a_band_is_looked_at_first(window, qtbot):
    train = demo_models() / "3-air-compressor-train" / "as-built.keepclear"
    window.document.open(train, example=True)
    settle(qtbot, window)
    assert window.modes.row.chosen().number == 2
    assert window.sheet.mode.number == 2


def test_the_fields_of_a_machine_end_at_one_line(pump):
    settled(pump, 1280, 800)
    (form,) = pump.results._machines.values()
    ends = {left_edge(pump, field.line) + field.line.width() for field in form.fields.values()}
    assert len(ends) == 1


def test_the_reasoning_covers_the_sheet_and_leaves_the_scale_in_sight(pump):
    settled(pump, 1280, 800)
    pump.on_why()
    settled(pump, 1280, 801)
    assert left_edge(pump, pump.reasons) + pump.reasons.width() <= left_edge(pump, pump.scale)
    text = pump.reasons.text.toPlainText()
    assert text.index("at values") < text.index("modes counted") < text.index("number")
    pump.on_why()
