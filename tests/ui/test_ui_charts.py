"""The pages of charts follow the model while in sight, are read by pointer and keys, say what is missing."""

from dataclasses import replace
from threading import Event

import pytest
from conftest import FAN, PUMP, settle
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest

from modalview.errors import CancelledError, InputError, KeepclearError
from modalview.model.parts import Body, Model, Motion
from modalview.places import demo_models
from modalview.store import read_model
from modalview.ui import settings as names
from modalview.ui.aside import answer_aside
from modalview.ui.figuretable import FigureTable
from modalview.ui.inquiry import Inquiry
from modalview.ui.questions import mounts, response, speeds
from modalview.ui.theme import DARK

GENERATOR = demo_models() / "4-standby-generator-set" / "raised-mounts.keepclear"
TRAIN = demo_models() / "3-air-compressor-train" / "as-built.keepclear"


@pytest.fixture(scope="session", autouse=True)
def _cores_loaded(_study_loaded):
    """Import and work once what the pages ask, outside of any test's time."""
    model = read_model(PUMP)
    for question in (response, speeds, mounts):
        question(model, (), lambda: False)


def show(window, qtbot, name: str, path=None):
    """Open a page and wait for its answer."""
    if path is not None:
        window.document.open(path, example=True)
        settle(qtbot, window)
    window.below.show_page(name)
    page = window.charts.pages[name]
    answered(qtbot, page)
    return page


def answered(qtbot, page):
    qtbot.waitUntil(lambda: page.inquiry.current and not page.inquiry.busy, timeout=5000)


# The inquiry


@pytest.fixture
def ask(qapp):
    """Return a function that makes inquiries; their threads have ended afterwards."""
    del qapp
    made = []

    def make(question):
        made.append(Inquiry("asking", question))
        return made[-1]

    yield make
    for one in made:
        one.close()


def test_nothing_is_asked_while_out_of_sight(ask, qtbot):
    asked = []
    inquiry = ask(lambda model, *_: asked.append(model))
    inquiry.follow(Model())
    assert not inquiry.busy
    inquiry.show(in_sight=True)
    assert inquiry.busy
    qtbot.waitUntil(lambda: not inquiry.busy)
    assert len(asked) == 1


def test_an_answer_of_an_older_model_is_kept_and_pale(ask, qtbot):
    go_on = Event()
    one, other = Model(title="one"), Model(title="other")

    def question(model, *_):
        if model is other:
            go_on.wait(5)
        return model.title

    inquiry = ask(question)
    inquiry.show(in_sight=True)
    inquiry.follow(one)
    qtbot.waitUntil(lambda: inquiry.current)
    assert inquiry.result == "one"
    assert not inquiry.pale
    inquiry.follow(other)
    assert inquiry.result == "one"
    assert not inquiry.current
    assert not inquiry.pale  # it may come in a blink
    qtbot.waitUntil(lambda: inquiry.pale)
    go_on.set()
    qtbot.waitUntil(lambda: inquiry.current)
    assert (inquiry.result, inquiry.pale) == ("other", False)


def test_another_model_drops_what_was_known(ask, qtbot):
    inquiry = ask(lambda model, *_: model.title)
    inquiry.show(in_sight=True)
    inquiry.follow(Model(title="one"))
    qtbot.waitUntil(lambda: inquiry.current)
    inquiry.follow(Model(title="other"), anew=True)
    assert inquiry.result is None


def test_other_details_are_another_question(ask, qtbot):
    inquiry = ask(lambda _model, details, _stopped: details)
    model = Model()
    inquiry.show(in_sight=True)
    inquiry.follow(model, ("y",))
    qtbot.waitUntil(lambda: inquiry.current)
    inquiry.follow(model, ("x",))
    assert not inquiry.current
    qtbot.waitUntil(lambda: inquiry.current)
    assert inquiry.result == ("x",)


def test_a_refusal_is_told_and_an_error_of_the_program_too(ask, qtbot):
    def refuse(*_):
        raise InputError("no machine turns")

    inquiry = ask(refuse)
    inquiry.show(in_sight=True)
    inquiry.follow(Model())
    qtbot.waitUntil(lambda: bool(inquiry.refusal))
    assert inquiry.refusal == "no machine turns"
    failures = []
    broken = ask(lambda *_: 1 / 0)
    broken.failed.connect(failures.append)
    broken.show(in_sight=True)
    broken.follow(Model())
    qtbot.waitUntil(lambda: bool(failures))
    assert isinstance(failures[0], ZeroDivisionError)


def test_a_large_model_waits_until_somebody_wants_it(ask):
    large = Model(motion=Motion.PLANE, bodies=tuple(Body(id=f"b{n}") for n in range(150)))
    asked = []
    inquiry = ask(lambda model, *_: asked.append(model))
    inquiry.show(in_sight=True)
    inquiry.follow(large)
    assert inquiry.waits
    assert not inquiry.busy


def test_a_large_model_that_is_wanted_is_answered_aside(ask, qtbot, monkeypatch):
    large = Model(motion=Motion.PLANE, bodies=tuple(Body(id=f"b{n}") for n in range(150)))
    asked = []
    monkeypatch.setattr("modalview.ui.inquiry.answer_aside", lambda *given: asked.append(given) or "found")
    inquiry = ask(lambda *_: "in the thread")
    inquiry.show(in_sight=True)
    inquiry.follow(large)
    inquiry.want()
    qtbot.waitUntil(lambda: inquiry.current)
    assert inquiry.result == "found"
    assert asked[0][1] == (large, ())
    assert not inquiry.waits


@pytest.mark.slow
def test_a_process_of_its_own_answers_refuses_and_is_ended():
    model = read_model(GENERATOR)
    found = answer_aside(mounts, (model, ()), lambda: False)
    assert len(found.found.feet) == 6
    with pytest.raises(KeepclearError, match="only turns"):
        answer_aside(mounts, (read_model(TRAIN), ()), lambda: False)
    with pytest.raises(CancelledError):
        answer_aside(mounts, (model, ()), lambda: True)


# The response


def test_the_response_is_shown_with_unit_damping_and_limit(pump, qtbot):
    page = show(pump, qtbot, "response")
    content = page.canvas.content
    assert content.unit == "mm/s rms"
    assert "2 %" in content.damping
    assert content.running_rpm == (2950.0, 2950.0)
    assert page.amplitudes.rows_text()[1][:2] == ["1× unbalance", "6.70"]
    assert "exceeded" in page.reading.text()


def test_another_quantity_needs_no_new_answer(pump, qtbot):
    page = show(pump, qtbot, "response")
    before = page.inquiry.result
    page.choice.quantity.setCurrentIndex(page.choice.quantity.findData("displacement peak"))
    page.choice.quantity.activated.emit(page.choice.quantity.currentIndex())
    assert page.inquiry.result is before
    assert page.canvas.content.unit == "um peak"


def test_forces_in_supports_are_offered(pump, qtbot):
    page = show(pump, qtbot, "response")
    page.choice.quantity.setCurrentIndex(page.choice.quantity.findData("force peak"))
    page.choice.quantity.activated.emit(page.choice.quantity.currentIndex())
    assert page.canvas.content.unit == "N peak"


def test_another_body_is_looked_at_from_the_list_and_from_the_sheet(pump, qtbot):
    page = show(pump, qtbot, "response")
    assert page.canvas.content.place.startswith("motor")
    pump.sketching.hand.choose(("pump",))
    answered(qtbot, page)
    assert page.canvas.content.place.startswith("pump")
    page.choice.place.setCurrentIndex(0)
    page.choice.place.activated.emit(0)
    answered(qtbot, page)
    assert page.canvas.content.place.startswith("motor")


def test_the_chart_is_read_by_keys_and_esc_ends_it(pump, qtbot):
    page = show(pump, qtbot, "response")
    canvas = page.canvas
    canvas.setFocus()
    QTest.keyClick(canvas, Qt.Key.Key_PageDown)
    QTest.keyClick(canvas, Qt.Key.Key_PageDown)
    assert page.reading.text().endswith("mm/s rms")
    before = canvas.rpm
    QTest.keyClick(canvas, Qt.Key.Key_Right)
    assert canvas.rpm > before
    QTest.keyClick(canvas, Qt.Key.Key_Home)
    assert canvas.rpm == canvas.chart.frame.low_rpm
    QTest.keyClick(canvas, Qt.Key.Key_Escape)
    assert canvas.rpm is None
    assert not page.reading.text().endswith("mm/s rms")


def test_the_chart_stays_in_sight_while_it_is_read_by_keys(pump, qtbot):
    page = show(pump, qtbot, "response")
    before = page.canvas.grab().toImage()
    pump.activateWindow()
    page.canvas.setFocus()
    page.canvas.read_speed(2950.0)
    after = page.canvas.grab().toImage()
    places = [(x, y) for x in range(4, before.width(), 5) for y in range(4, before.height(), 5)]
    same = sum(before.pixel(x, y) == after.pixel(x, y) for x, y in places)
    assert same > 0.9 * len(places)


def test_the_pointer_reads_the_chart(pump, qtbot):
    page = show(pump, qtbot, "response")
    frame = page.canvas.chart.frame
    QTest.mouseMove(page.canvas, QPoint(round((frame.left + frame.right) / 2), round(frame.top) + 20))
    page.canvas.read_at((frame.left + frame.right) / 2, frame.top + 20)
    middle = (frame.low_rpm + frame.high_rpm) / 2
    assert page.canvas.rpm == pytest.approx(middle, rel=0.01)
    page.canvas.read_at(frame.left - 20, frame.top + 20)
    assert page.canvas.rpm is None


def test_the_sheet_moves_the_response_at_the_speed_chosen(pump, qtbot):
    page = show(pump, qtbot, "response")
    assert pump.sheet.mode is page.motion
    assert pump.play_bar.name.text() == "response to 1× unbalance at 2950 rpm"
    page.choose_speed(1000.0)
    answered(qtbot, page)
    assert pump.play_bar.name.text() == "response to 1× unbalance at 1000 rpm"
    assert page.motion.motion.shape == (3, 6)
    pump.below.show_page("modes")
    assert pump.sheet.mode is pump.modes.row.chosen()


def test_a_click_chooses_the_speed_under_it(pump, qtbot):
    page = show(pump, qtbot, "response")
    frame = page.canvas.chart.frame
    x = round(frame.x_of(2000.0))
    with qtbot.waitSignal(page.canvas.speed_chosen) as chosen:
        QTest.mouseClick(page.canvas, Qt.MouseButton.LeftButton, pos=QPoint(x, round(frame.bottom) - 10))
    assert chosen.args[0] == pytest.approx(2000.0, rel=0.01)
    answered(qtbot, page)


def test_the_response_follows_an_edit(pump, qtbot):
    page = show(pump, qtbot, "response")
    before = page.canvas.content.total.values.max()
    pump.document.type_value(("links", "k3", "stiffness"), "90 kN/mm")
    assert not page.inquiry.current
    answered(qtbot, page)
    assert page.canvas.content.total.values.max() != pytest.approx(before)
    assert not page.canvas.pale
    settle(qtbot, pump)


def test_new_modes_do_not_take_the_sheet_from_the_response(pump, qtbot):
    page = show(pump, qtbot, "response")
    pump.document.type_value(("links", "k3", "stiffness"), "90 kN/mm")
    settle(qtbot, pump)
    answered(qtbot, page)
    assert pump.sheet.mode is page.motion


def test_units_follow_the_setting(pump, qtbot):
    page = show(pump, qtbot, "response")
    pump.on_setting(names.UNITS, "inch-pound")
    assert page.canvas.content.unit == "in/s rms"
    assert page.amplitudes.rows_text()[0][1].endswith("in/s rms")


def test_a_logarithmic_chart(pump, qtbot):
    page = show(pump, qtbot, "response")
    page.choice.logarithmic.setChecked(True)
    assert page.canvas.chart.frame.logarithmic


def test_without_an_excitation_it_says_what_to_do_and_helps(window, qtbot):
    window.document.start(replace(read_model(PUMP), machines=()))
    settle(qtbot, window)
    window.below.show_page("response")
    page = window.charts.response
    qtbot.waitUntil(lambda: bool(page.missing.text()))
    assert "unbalance" in page.missing.text()
    assert page.help.text() == "Add an order or a frequency…"
    assert page.choice.isHidden()
    page.help.click()
    assert window.sketching.force.isVisible()
    window.sketching.force.hide_form()


def test_without_a_magnitude_it_asks_for_one(window, qtbot):
    model = read_model(PUMP)
    machine = model.machines[0]
    bare = tuple(replace(one, magnitude=None) for one in machine.excitations)
    window.document.start(replace(model, machines=(replace(machine, excitations=bare),)))
    settle(qtbot, window)
    page = show(window, qtbot, "response")
    assert page.missing.text().startswith("No excitation has a magnitude: give a force, an unbalance")
    page.help.click()
    assert window.sketching.form.isVisible()
    window.sketching.form.hide_form()


# The speeds


def test_the_speeds_that_remain_are_told_and_drawn(window, qtbot):
    page = show(window, qtbot, "speeds", FAN.parent / "steel-springs.keepclear")
    assert "500 of the 1200 rpm" in page.reading.text()
    assert page.runs.rows_text()[1][:3] == ["600", "676", "remains: clear in this model"]
    assert page.passed.rowCount() > 0


def test_meetings_are_named_by_keys_and_by_the_pointer(pump, qtbot):
    page = show(pump, qtbot, "speeds")
    canvas = page.canvas
    canvas.setFocus()
    QTest.keyClick(canvas, Qt.Key.Key_Right)
    first = canvas.meeting
    assert page.reading.text() == first.text
    QTest.keyClick(canvas, Qt.Key.Key_Right)
    assert canvas.meeting.rpm > first.rpm
    QTest.keyClick(canvas, Qt.Key.Key_Escape)
    assert canvas.meeting is None
    frame = canvas.chart.frame
    canvas.read_at(frame.x_of(first.rpm), frame.y_of(first.hz))
    assert canvas.meeting is first


def test_a_model_without_speed_says_so(window, qtbot):
    window.document.start(replace(read_model(PUMP), machines=()))
    settle(qtbot, window)
    page = show(window, qtbot, "speeds")
    assert "No machine has a speed" in page.missing.text()


# The mounts


def test_mounts_tell_loads_and_how_the_body_settles(window, qtbot):
    page = show(window, qtbot, "mounts", GENERATOR)
    assert "66.0 %" in page.reading.text()
    assert page.mounts.rowCount() == 6
    assert page.bodies.rows_text()[1][0] == "engine and alternator"
    assert page.canvas.chart is not None


def test_a_shaft_train_has_no_page_of_mounts(window, qtbot):
    window.document.open(TRAIN, example=True)
    settle(qtbot, window)
    tabs = window.below.tabs
    shown = [tabs.tabText(i) for i in range(tabs.count()) if tabs.isTabVisible(i)]
    assert {"Response", "Speeds"} <= set(shown)
    assert "Mounts" not in shown


def test_a_page_that_goes_with_another_model_leaves_the_modes_in_sight(window, qtbot):
    show(window, qtbot, "mounts", GENERATOR)
    window.document.open(TRAIN, example=True)
    settle(qtbot, window)
    assert window.below.current() == "modes"


# What they share


@pytest.mark.parametrize("name", ["changes", "response", "speeds", "mounts"])
def test_each_page_is_reached_by_the_menu_and_speaks(pump, qtbot, name):
    pump.menus.actions[f"on_go_to_{name}"].trigger()
    page = pump.charts.pages[name]
    assert pump.below.current() == name
    answered(qtbot, page)
    assert page.canvas.accessibleName()
    assert page.canvas.accessibleDescription()


def test_pages_take_colours_and_size_of_text(pump, qtbot):
    page = show(pump, qtbot, "response")
    light = page.canvas.grab().toImage().pixelColor(3, 3).lightness()
    pump.charts.set_theme(DARK, 1.5)
    assert page.canvas.text_scale == 1.5
    assert page.canvas.grab().toImage().pixelColor(3, 3).lightness() < light


def test_figures_are_copied_with_their_headings(qapp):
    del qapp
    table = FigureTable("figures")
    table.show_figures(("mount", "load"), [("left", "5 kN"), ("right", "4 kN")], ["a", "b"])
    table.selectRow(1)
    table.copy()
    assert QGuiApplication.clipboard().text() == "mount\tload\nright\t4 kN\n"
    assert table.item(0, 0).toolTip() == "a"
    table.show_figures((), ())
    assert table.isHidden()
    table.deleteLater()
