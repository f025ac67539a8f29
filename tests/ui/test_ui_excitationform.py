"""The form that asks what acts at a place: nothing changes until all that is needed is typed."""

import math

import pytest
from PySide6.QtCore import QRect, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QComboBox, QLineEdit, QPushButton, QToolButton, QWidget

from modalview.model.adding import add_body
from modalview.model.parts import End, Model, Motion
from modalview.model.rules import faults
from modalview.places import demo_models
from modalview.ui.document import Document
from modalview.ui.sketch.excitationform import ExcitationForm
from modalview.ui.values import converted
from modalview.units.quantities import FREQUENCY, SPEED

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"
BESIDE = QRect(100, 100, 80, 60)


@pytest.fixture
def sheet(qtbot):
    widget = QWidget()
    widget.resize(1000, 700)
    widget.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    qtbot.addWidget(widget)
    widget.show()
    widget.activateWindow()
    qtbot.waitUntil(widget.isActiveWindow)
    yield widget
    widget.hide()


@pytest.fixture
def document(qapp):
    del qapp
    made = Document()
    made.model = Model(motion=Motion.PLANE)
    made.model, _ = add_body(made.model, "mass", (0.0, 1.0))
    return made


@pytest.fixture
def form(document, sheet):
    return ExcitationForm(document, sheet)


def fill(form, **texts):
    for key, text in texts.items():
        line = form.row(key.replace("_", " ")).value
        line.setFocus()
        line.selectAll()
        QTest.keyClicks(line, text)


def by_keyboard(sheet, *texts):
    """Type each text where the keyboard is, with Enter after it."""
    for text in texts:
        field = sheet.window().focusWidget()
        if isinstance(field, QLineEdit):
            QTest.keyClicks(field, text)
        QTest.keyClick(field, Qt.Key.Key_Return)


def test_a_new_machine_and_its_excitation_are_typed_by_keyboard_and_are_one_edit(
    document, sheet, form, qtbot
):
    before = document.model
    form.show_at("m1", (0.3, 1.25), BESIDE)
    with qtbot.waitSignal(form.made) as made:
        by_keyboard(
            sheet, "fan", "600 to 1800 rpm", "20 %", "", "1x", "rotating", "G 6.3 of 320 kg", "unbalance"
        )
    machine = document.model.machines[0]
    excitation = machine.excitations[0]
    assert made.args == [machine.id, excitation.id]
    assert (machine.name, machine.speed.to.text, machine.margin.text) == ("fan", "1800 rpm", "20 %")
    assert (excitation.order, excitation.direction, excitation.name) == (1.0, "rotating", "unbalance")
    assert excitation.magnitude.rotor_mass.text == "320 kg"
    assert [one.si for one in excitation.at.offset] == pytest.approx([0.3, 0.25])
    assert faults(document.model) == ()
    assert form.isHidden()
    assert sheet.hasFocus()
    assert document.stack.count() == 1
    document.stack.undo()
    assert document.model == before


@pytest.mark.parametrize(
    ("texts", "key", "words"),
    [
        ({}, "speed", "needs the machine's speed"),
        ({"speed": "2950 rpm"}, "margin", "no default"),
        ({"speed": "2950 rpm", "margin": "15 %"}, "rate", 'such as "1x"'),
        ({"speed": "2950", "margin": "15 %", "rate": "1x"}, "speed", "the unit is missing"),
        ({"speed": "2950 rpm", "margin": "150 %", "rate": "1x"}, "margin", "below 100 %"),
        ({"speed": "2950 rpm", "margin": "15 %", "rate": "-1"}, "rate", "cannot be read"),
        ({"speed": "2950 rpm", "margin": "15 %", "rate": "1", "direction": "z"}, "direction", "in plane is"),
        ({"speed": "2950 rpm", "margin": "15 %", "rate": "1", "magnitude": "5 kg"}, "magnitude", "kg"),
        ({"speed": "1,200 rpm", "margin": "15 %", "rate": "1"}, "speed", "can be read as"),
    ],
)
def test_the_first_line_that_is_refused_or_missing_tells_why_and_nothing_changes(
    document, sheet, form, texts, key, words
):
    before = document.model
    form.show_at("m1", (0.0, 1.0), BESIDE)
    fill(form, **texts)
    form.add_button.click()
    assert words in form.row(key).reason.text()
    assert not form.row(key).reason.isHidden()
    assert form.row(key).value.property("refused")
    assert words in form.row(key).value.accessibleDescription()
    assert sheet.window().focusWidget() is form.row(key).value
    assert document.model is before
    assert document.stack.count() == 0


def test_what_the_rules_refused_is_tried_anew_when_another_line_is_mended(document, form):
    form.show_at("m1", (0.0, 1.0), BESIDE)
    fill(form, speed="2950 rpm", margin="15 %", rate="1x", direction="rz")
    form.add_button.click()
    assert "needs a torque as magnitude" in form.row("direction").reason.text()
    fill(form, magnitude="150 N m")
    form.add_button.click()
    assert document.model.machines[0].excitations[0].magnitude.torque.text == "150 N m"


def test_a_margin_out_of_range_is_refused_before_the_next_line_is_reached(sheet, form):
    form.show_at("m1", (0.0, 1.0), BESIDE)
    by_keyboard(sheet, "fan", "900 rpm", "20")
    assert sheet.window().focusWidget() is form.row("margin").value
    assert 'which is 2000 %; write "20 %"' in form.row("margin").reason.text()


def test_along_one_axis_it_is_the_body_on_which_something_acts_wherever_it_was_clicked(document, form):
    document.model = Model(motion=Motion.SINGLE_AXIS)
    document.model, _ = add_body(document.model, "mass", (0.0, 1.0))
    form.show_at("m1", (0.1, 1.1), BESIDE)
    fill(form, machine_name="pump", speed="2950 rpm", margin="15 %", rate="1")
    form.add_button.click()
    assert document.model.machines[0].excitations[0].at == End(body="m1")


def test_an_existing_machine_is_offered_and_asked_nothing_again(document, form):
    document.open(PUMP, example=True)
    form.show_at("motor", (0.0, 1.0), BESIDE)
    machine = document.model.machines[0]
    assert form.row("machine").value.word == machine.id
    assert form.row("speed").value.isHidden()
    fill(form, rate="100 Hz", name="mains")
    form.add_button.click()
    added = document.model.machines[0].excitations[-1]
    assert (added.frequency.text, added.direction, added.at.body) == ("100 Hz", "y", "motor")
    assert len(document.model.machines[0].excitations) == len(machine.excitations) + 1


def test_a_new_machine_beside_an_existing_one_is_asked_about(document, form):
    document.open(PUMP, example=True)
    form.show_at("motor", (0.0, 1.0), BESIDE)
    choice = form.row("machine").value
    choice.setCurrentIndex(0)
    choice.activated.emit(0)
    assert not form.row("margin").value.isHidden()
    fill(form, speed="980 rpm", margin="15 %", rate="2x")
    form.add_button.click()
    assert [one.speed.text for one in document.model.machines][-1] == "980 rpm"


def test_a_fixed_frequency_needs_no_speed(document, form):
    form.show_at("m1", (0.0, 1.0), BESIDE)
    fill(form, margin="10 %", rate="100 Hz", direction="y")
    form.add_button.click()
    machine = document.model.machines[0]
    assert (machine.speed, machine.excitations[0].frequency.text) == (None, "100 Hz")


def test_converted_values_stand_beside(form):
    form.show_at("m1", (0.0, 1.0), BESIDE)
    fill(form, speed="600 to 1800 rpm", rate="6000 cpm")
    form.row("rate").value.enter()
    low, high = (converted(2 * math.pi * hertz, SPEED) for hertz in (10, 30))
    assert form.row("speed").converted.text() == f"{low.removesuffix(' Hz')} to {high}"
    assert form.row("rate").converted.text() == converted(200 * math.pi, FREQUENCY)


def test_esc_leaves_it_off(document, sheet, form):
    before = document.model
    form.show_at("m1", (0.0, 1.0), BESIDE)
    fill(form, speed="2950 rpm")
    QTest.keyClick(sheet.window().focusWidget(), Qt.Key.Key_Escape)
    assert form.isHidden()
    assert sheet.hasFocus()
    assert document.model is before


def test_every_control_says_what_it_is(document, form):
    document.open(PUMP, example=True)
    form.show_at("motor", (0.0, 1.0), BESIDE)
    kinds = (QLineEdit, QComboBox, QToolButton, QPushButton)
    controls = [one for kind in kinds for one in form.findChildren(kind) if one.isVisible()]
    assert all(one.accessibleName() for one in controls)
    assert form.row("rate").value.accessibleName() == "order or frequency of what acts on motor"
