"""The form beside a part: what it shows, types, refuses and gives back, by keyboard alone."""

import pytest
from PySide6.QtCore import QRect, QSize, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QComboBox, QLineEdit, QToolButton, QWidget

from modalview.model.adding import add_body, add_link
from modalview.model.forms import part_of
from modalview.model.parts import End, Machine, Model, Motion, Support
from modalview.model.values import STARTING, Entry
from modalview.places import demo_models
from modalview.store import dump_model
from modalview.ui.document import Document
from modalview.ui.sketch.floating import kept_in_place, place_beside
from modalview.ui.sketch.formrow import SEVERAL
from modalview.ui.sketch.partform import PartForm

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"
FAN = demo_models() / "2-supply-fan" / "steel-legs.keepclear"
SET = demo_models() / "4-standby-generator-set" / "dynamic-stiffness.keepclear"
BESIDE = QRect(100, 100, 80, 60)


@pytest.fixture
def sheet(qtbot):
    widget = QWidget()
    widget.resize(1000, 700)
    widget.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    qtbot.addWidget(widget)
    widget.show()
    widget.activateWindow()
    widget.setFocus()
    qtbot.waitUntil(widget.hasFocus)
    yield widget
    widget.hide()


@pytest.fixture
def document(qapp):
    del qapp
    return Document()


@pytest.fixture
def form(document, sheet):
    return PartForm(document, sheet)


def press(widget, key, modifier=Qt.KeyboardModifier.NoModifier):
    QTest.keyClick(widget, key, modifier)


def type_over(line, text):
    line.setFocus()
    line.selectAll()
    QTest.keyClicks(line, text)


def part(document, one):
    return part_of(document.model, one)[1]


def drawn(document):
    """Return the id of a mass that was just drawn in an empty model."""
    document.model = Model(motion=Motion.PLANE)
    document.model, one = add_body(document.model, "mass", (0.0, 1.0))
    return one


def test_of_a_part_just_drawn_the_value_tolerance_and_name_are_typed_one_after_the_other(
    document, sheet, form
):
    one = drawn(document)
    form.show_parts((one,), BESIDE, fresh=True)
    QTest.keyClicks(sheet.window().focusWidget(), "4*155 kg")
    press(sheet.window().focusWidget(), Qt.Key.Key_Return)
    QTest.keyClicks(sheet.window().focusWidget(), "3 %")
    press(sheet.window().focusWidget(), Qt.Key.Key_Return)
    assert form.row("inertia").value.isHidden()  # a mass does not turn
    assert sheet.window().focusWidget() is form.row("name").value
    QTest.keyClicks(sheet.window().focusWidget(), "motor")
    press(sheet.window().focusWidget(), Qt.Key.Key_Return)
    body = part(document, one)
    assert (body.mass.si, body.mass.tolerance.both.text, body.mass.source, body.name) == (
        620.0,
        "3 %",
        None,
        "motor",
    )
    assert form.isHidden()
    assert sheet.hasFocus()


def test_a_body_that_turns_is_asked_for_its_inertia_at_once(document, form):
    document.model = Model(motion=Motion.PLANE)
    document.model, one = add_body(document.model, "body", (0.0, 1.0), (0.8, 0.4))
    form.show_parts((one,), BESIDE, fresh=True)
    assert not form.row("inertia").value.isHidden()


def in_space(document, form):
    """Show the form of a body in space that was just drawn; its inertias are starting values."""
    document.model = Model(motion=Motion.SPACE)
    document.model, one = add_body(document.model, "body", (0.0, 0.0, 1.0), (2.0, 1.0))
    form.show_parts((one,), BESIDE, fresh=True)
    return one


def enter(form, key, text):
    type_over(form.row(key).value, text)
    press(form.row(key).value, Qt.Key.Key_Return)


def test_inertias_that_are_only_right_together_wait_for_each_other(document, form):
    one = in_space(document, form)
    enter(form, "Ixx", "820 kg m2")  # more than both others together, which are still to come
    assert part(document, one).inertia.Ixx.source == STARTING
    assert form.row("Ixx").value.reason == ""
    assert form.row("Ixx").reason.text().startswith("not taken yet: ")
    enter(form, "Iyy", "3650 kg m2")
    enter(form, "Izz", "3720 kg m2")
    tensor = part(document, one).inertia
    assert [value.text for value in (tensor.Ixx, tensor.Iyy, tensor.Izz)] == [
        "820 kg m2",
        "3650 kg m2",
        "3720 kg m2",
    ]
    assert form.row("Ixx").reason.text() == form.row("Iyy").reason.text() == ""
    assert document.stack.count() == 1


def test_the_last_of_them_tells_why_when_they_are_wrong_together(document, form):
    one = in_space(document, form)
    for key, text in (("Ixx", "9000 kg m2"), ("Iyy", "100 kg m2"), ("Izz", "100 kg m2")):
        enter(form, key, text)
    assert "Ixx" in form.row("Izz").value.reason
    assert part(document, one).inertia.Ixx.source == STARTING


def test_a_tolerance_without_per_cent_is_told_in_words_of_the_form(document, form):
    document.open(PUMP, example=True)
    form.show_parts(("motor",), BESIDE)
    type_over(form.row("mass").tolerance, "3")
    press(form.row("mass").tolerance, Qt.Key.Key_Return)
    assert form.row("mass").tolerance.reason.startswith("tolerance of mass must be")


def test_what_waited_and_is_lost_by_closing_is_told(document, form, qtbot):
    in_space(document, form)
    enter(form, "Ixx", "820 kg m2")
    with qtbot.waitSignal(form.told) as told:
        form.close_button.click()
    assert told.args[0].startswith("Not taken: Ixx 820 kg m2")


def test_enter_on_a_starting_value_passes_on_and_gives_nothing(document, form):
    one = drawn(document)
    form.show_parts((one,), BESIDE, fresh=True)
    press(form.row("mass").value, Qt.Key.Key_Return)
    assert part(document, one).mass.source == STARTING
    assert document.stack.count() == 0


def test_tab_takes_what_was_typed_and_goes_to_the_tolerance(document, sheet, form):
    document.open(PUMP, example=True)
    form.show_parts(("motor",), BESIDE, fresh=True)
    type_over(form.row("mass").value, "0,7 t")
    press(form.row("mass").value, Qt.Key.Key_Tab)
    assert part(document, "motor").mass.text == "0.7 t"
    assert sheet.window().focusWidget() is form.row("mass").tolerance
    press(sheet.window().focusWidget(), Qt.Key.Key_Backtab, Qt.KeyboardModifier.ShiftModifier)
    assert sheet.window().focusWidget() is form.row("mass").value


def test_what_is_refused_stays_with_its_reason_and_changes_nothing(document, form):
    document.open(PUMP, example=True)
    form.show_parts(("motor",), BESIDE, fresh=True)
    before = document.model
    for text, words in (("620", "the unit is missing"), ("-5 kg", "mass must not be negative")):
        type_over(form.row("mass").value, text)
        press(form.row("mass").value, Qt.Key.Key_Return)
        assert form.row("mass").value.text() == text
        assert words in form.row("mass").reason.text()
        assert not form.row("mass").reason.isHidden()
        assert document.model is before
    assert form.row("mass").value.accessibleDescription() == form.row("mass").reason.text()
    type_over(form.row("mass").value, "630 kg")
    press(form.row("mass").value, Qt.Key.Key_Return)
    assert form.row("mass").reason.isHidden()


def test_a_refused_tolerance_stands_below_its_line(document, form):
    document.open(PUMP, example=True)
    form.show_parts(("motor",), BESIDE, fresh=True)
    type_over(form.row("mass").tolerance, "120 %")
    press(form.row("mass").tolerance, Qt.Key.Key_Return)
    assert "below 100 %" in form.row("mass").reason.text()
    assert form.row("mass").tolerance.property("refused")


def test_esc_closes_without_taking_what_was_typed_and_gives_the_keyboard_back(document, sheet, form, qtbot):
    document.open(PUMP, example=True)
    form.show_parts(("motor",), BESIDE, fresh=True)
    type_over(form.row("mass").value, "1 kg")
    with qtbot.waitSignal(form.closed):
        press(form.row("mass").value, Qt.Key.Key_Escape)
    assert form.isHidden()
    assert sheet.hasFocus()
    assert part(document, "motor").mass.text == "620 kg"


def test_of_several_parts_equal_texts_stand_and_different_ones_say_so(document, form):
    document.open(FAN, example=True)
    springs = [one.id for one in document.model.links if one.kind == "spring"][:4]
    form.show_parts(tuple(springs), BESIDE)
    stiffness = form.row("stiffness").value
    texts = {part(document, one).stiffness.text for one in springs}
    assert len(texts) > 1
    assert (stiffness.text(), stiffness.placeholderText()) == ("", SEVERAL)
    with pytest.raises(KeyError):
        form.row("name")
    type_over(stiffness, "50 kN/mm")
    press(stiffness, Qt.Key.Key_Return)
    assert {part(document, one).stiffness.text for one in springs} == {"50 kN/mm"}
    assert form.row("stiffness").value.text() == "50 kN/mm"
    assert document.stack.count() == 1
    document.stack.undo()
    assert {part(document, one).stiffness.text for one in springs} == texts
    assert form.row("stiffness").value.text() == ""


def test_parts_of_different_kinds_share_what_both_have(document, form):
    document.open(PUMP, example=True)
    form.show_parts(("motor", "ground"), BESIDE)
    keys = {row.key for row in form.rows}
    assert keys == {"position x", "position y"}


def test_a_direction_that_a_mount_has_not_can_be_given_and_taken_away(document, form):
    document.open(SET, example=True)
    mount = next(one.id for one in document.model.links if one.kind == "mount")
    form.show_parts((mount,), BESIDE)
    line = form.row("stiffness rz")
    assert line.value.text() == ""
    assert line.tolerance.isHidden()
    type_over(line.value, "12 kN m/rad")
    press(line.value, Qt.Key.Key_Return)
    assert part(document, mount).stiffness.rz.si == 12000.0
    assert not form.row("stiffness rz").tolerance.isHidden()
    type_over(form.row("stiffness rz").value, " ")
    press(form.row("stiffness rz").value, Qt.Key.Key_Return)
    assert part(document, mount).stiffness.rz is None


def test_moments_of_inertia_wait_for_each_other(document, form):
    document.model = Model(motion=Motion.SPACE)
    document.model, one = add_body(document.model, "mass", (0.0, 0.0, 0.0))
    form.show_parts((one,), BESIDE)
    assert part(document, one).inertia is None
    for key, waits in (("Ixx", "waits for Iyy and Izz"), ("Izz", "waits for Iyy")):
        type_over(form.row(key).value, "2 kg m2")
        press(form.row(key).value, Qt.Key.Key_Return)
        assert form.row(key).reason.text() == waits
        assert part(document, one).inertia is None
        assert form.row(key).value.text() == "2 kg m2"
    type_over(form.row("Iyy").value, "3 kg m2")
    press(form.row("Iyy").value, Qt.Key.Key_Return)
    inertia = part(document, one).inertia
    assert [inertia.Ixx.text, inertia.Iyy.text, inertia.Izz.text] == ["2 kg m2", "3 kg m2", "2 kg m2"]
    assert [(row.key, row.reason.text()) for row in form.rows if not row.reason.isHidden()] == []
    assert document.stack.count() == 1


def test_source_and_status_are_folded_away_until_asked_for(document, form):
    document.open(PUMP, example=True)
    form.show_parts(("motor",), BESIDE, fresh=True)
    row = form.row("mass")
    assert row.source.isHidden()
    assert row.status.isHidden()
    form.sources.click()
    type_over(row.source, "name plate")
    press(row.source, Qt.Key.Key_Return)
    row.status.setCurrentIndex(row.status.findData("measured"))
    row.status.activated.emit(row.status.currentIndex())
    mass = part(document, "motor").mass
    assert (mass.source, mass.status) == ("name plate", "measured")


def test_place_and_more_are_folded_away_for_a_part_just_drawn(document, form):
    document.open(PUMP, example=True)
    form.show_parts(("motor",), BESIDE, fresh=True)
    assert form.row("position x").value.isHidden()
    form.more.click()
    type_over(form.row("position x").value, "-25 in")
    press(form.row("position x").value, Qt.Key.Key_Return)
    assert part(document, "motor").position[0].text == "-25 in"


@pytest.mark.parametrize(
    ("system", "shown"), [("SI", "560.19 kg"), ("mm-t", "0.56019 t"), ("inch-pound", "1235 lb")]
)
def test_units_switch_at_any_time_and_change_nothing_typed(document, form, system, shown):
    document.open(PUMP, example=True)
    document.type_value(("bodies", "motor", "mass"), "1235 lb")
    form.show_parts(("motor",), BESIDE)
    before = dump_model(document.model)
    form.set_system(system)
    row = form.row("mass")
    assert row.value.text() == "1235 lb"
    assert row.converted.text() == ("" if shown == "1235 lb" else shown)
    assert dump_model(document.model) == before
    assert document.stack.count() == 1


def test_the_form_follows_undo_and_closes_when_its_part_is_gone(document, form):
    document.open(PUMP, example=True)
    form.show_parts(("motor",), BESIDE)
    document.type_value(("bodies", "motor", "mass"), "1 t")
    assert form.row("mass").value.text() == "1 t"
    document.stack.undo()
    assert form.row("mass").value.text() == "620 kg"
    document.replace_model(Model())
    assert form.isHidden()


def test_every_control_says_what_it_is(document, form):
    document.open(PUMP, example=True)
    link = document.model.links[0]
    form.show_parts((link.id,), BESIDE)
    controls = [
        one
        for kind in (QLineEdit, QComboBox, QToolButton)
        for one in form.findChildren(kind)
        if one.isVisible()
    ]
    assert controls
    assert all(one.accessibleName() for one in controls)
    row = form.row("stiffness")
    assert row.value.accessibleName() == f"stiffness of {link.name or link.id}"
    assert row.tolerance.accessibleName() == f"tolerance of stiffness of {link.name or link.id}"


def test_a_machine_has_its_speed_range_margins_and_excitations(document, form):
    document.open(FAN, example=True)
    machine = document.model.machines[0].id
    form.show_parts((machine,), BESIDE)
    speed = form.row("speed").value
    type_over(speed, "700 to 1750 rpm")
    press(speed, Qt.Key.Key_Return)
    type_over(form.row("margin").value, "-10 % / +15 %")
    press(form.row("margin").value, Qt.Key.Key_Return)
    found = part(document, machine)
    assert isinstance(found, Machine)
    assert (found.speed.from_.text, found.speed.to.text) == ("700 rpm", "1750 rpm")
    assert (found.margin.below.text, found.margin.above.text) == ("10 %", "15 %")
    key = f"{found.excitations[0].id}: order"
    type_over(form.row(key).value, "3")
    press(form.row(key).value, Qt.Key.Key_Return)
    assert part(document, machine).excitations[0].order == 3.0


def test_a_margin_cannot_be_taken_away_where_an_excitation_needs_it(document, form):
    document.open(FAN, example=True)
    form.show_parts((document.model.machines[0].id,), BESIDE)
    type_over(form.row("margin").value, " ")
    press(form.row("margin").value, Qt.Key.Key_Return)
    assert "a margin is required and has no default" in form.row("margin").reason.text()


def test_a_grade_waits_for_the_mass_of_the_rotor(document, form):
    document.open(PUMP, example=True)
    machine = document.model.machines[0]
    bare = next(one for one in machine.excitations if one.magnitude is None)
    form.show_parts((machine.id,), BESIDE)
    form.more.setChecked(True)
    row = form.row(f"{bare.id}: balance grade")
    type_over(row.value, "G 2.5")
    press(row.value, Qt.Key.Key_Return)
    assert row.reason.text() == "waits for rotor mass"
    rotor = form.row(f"{bare.id}: rotor mass")
    type_over(rotor.value, "190 kg")
    press(rotor.value, Qt.Key.Key_Return)
    found = next(one for one in part(document, machine.id).excitations if one.id == bare.id)
    assert (found.magnitude.grade.text, found.magnitude.rotor_mass.text) == ("G 2.5", "190 kg")


@pytest.mark.parametrize(
    "beside",
    [
        QRect(100, 100, 80, 60),
        QRect(900, 300, 80, 60),
        QRect(450, 10, 120, 40),
        QRect(300, 600, 400, 80),
    ],
)
def test_the_form_lies_inside_and_covers_nothing_where_there_is_room(beside):
    inside = QRect(0, 0, 1000, 700)
    placed = place_beside(QSize(380, 160), beside, inside)
    assert inside.contains(placed)
    assert not placed.intersects(beside)


def test_without_room_on_any_side_the_form_stays_inside():
    inside = QRect(0, 0, 400, 300)
    assert inside.contains(place_beside(QSize(390, 290), QRect(150, 100, 100, 100), inside))


def test_a_small_sheet_lets_the_lines_scroll(document, sheet, form):
    document.open(SET, example=True)
    sheet.resize(420, 260)
    mount = next(one.id for one in document.model.links if one.kind == "mount")
    form.show_parts((mount,), QRect(10, 10, 20, 20))
    assert sheet.rect().contains(form.geometry())


def test_a_link_just_drawn_asks_for_its_stiffness(document, sheet, form):
    one = drawn(document)
    ground = Support(id="g", position=(Entry("0 m", 0.0), Entry("0 m", 0.0)))
    document.model = Model(motion=Motion.PLANE, bodies=document.model.bodies, supports=(ground,))
    document.model, link = add_link(document.model, "spring", End(body=one), End(support="g"))
    form.show_parts((link,), BESIDE, fresh=True)
    QTest.keyClicks(sheet.window().focusWidget(), "35 mm under 4 x 225 kg")
    press(sheet.window().focusWidget(), Qt.Key.Key_Return)
    assert part(document, link).stiffness.si == pytest.approx(900 * 9.80665 / 0.035)
    assert form.row("stiffness").converted.text() == "252170 N/m"


def test_a_form_that_widens_while_it_is_typed_in_stands_still_unless_it_would_hide_its_part():
    part, inside = QRect(141, 155, 140, 60), QRect(6, 6, 582, 422)
    before = place_beside(QSize(322, 260), part, inside)
    assert (before.x(), before.y()) == (266, 155)
    wider = kept_in_place(before, QSize(340, 260), part, inside)
    assert (wider.x(), wider.y()) == (248, 155)
    taller = kept_in_place(before, QSize(322, 300), part, inside)
    assert (taller.x(), taller.y()) == (266, 128)
    over = kept_in_place(before, QSize(440, 100), part, inside)
    assert over == place_beside(QSize(440, 100), part, inside)
    assert not over.intersects(part)
