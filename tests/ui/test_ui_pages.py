from modalview.ui import settings as names


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


def test_a_part_chosen_on_the_sheet_does_not_hide_the_sheet(pump):
    pump.on_setting(names.TEXT_SIZE, 200)
    pump.on_part_chosen("pump")
    assert pump.below.current() == "sheet"
    assert pump.parts.lines.rows[pump.parts.currentIndex().row()].part_id == "pump"
