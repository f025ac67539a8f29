"""Drawing on the sheet: each tool, moving, sizing, choosing, numbers typed over, undo of all of it."""

import numpy as np
import pytest
from conftest import FAN, settle
from pen import Pen
from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication

from modalview.drawing.overlay import note_items
from modalview.drawing.primitives import Box, Lines
from modalview.model.parts import Model, Motion
from modalview.model.values import STARTING
from modalview.ui import settings as names
from modalview.ui.sketch.asking import AskText

SHIFT, CTRL, ALT = (
    Qt.KeyboardModifier.ShiftModifier,
    Qt.KeyboardModifier.ControlModifier,
    Qt.KeyboardModifier.AltModifier,
)


@pytest.fixture
def sketch(window, qtbot):
    """An empty sheet of a single axis, with a pen over it."""
    window.document.start(Model(motion=Motion.SINGLE_AXIS))
    window.activateWindow()
    window.sheet.setFocus()
    return Pen(window, qtbot)


@pytest.fixture
def plane(window, qtbot):
    """An empty sheet of a plane."""
    window.document.start(Model(motion=Motion.PLANE))
    window.activateWindow()
    window.sheet.setFocus()
    return Pen(window, qtbot)


def model(pen) -> Model:
    return pen.window.document.model


def place(part):
    return [one.si for one in part.position]


def hint(pen):
    return pen.window.sketching.hand.hint


def test_a_mass_is_drawn_as_large_as_it_is_dragged_and_its_value_asked_for(sketch):
    sketch.tool("M")
    sketch.drag(sketch.at(-0.5, 1.0), sketch.at(0.5, 1.4))
    (body,) = model(sketch).bodies
    assert (body.drawn.width.si, body.drawn.height.si) == (1.0, 0.4)
    assert place(body) == pytest.approx([0.0, 1.2])
    assert body.mass.source == STARTING
    sketch.type("620 kg", "3 %", "motor")
    (body,) = model(sketch).bodies
    assert (body.mass.text, body.name) == ("620 kg", "motor")
    assert body.mass.tolerance.both.text == "3 %"
    assert body.mass.source is None
    assert QApplication.focusWidget() is sketch.sheet


def test_a_click_puts_a_mass_of_the_usual_size(sketch):
    sketch.tool("m")
    sketch.click(sketch.at(0.0, 0.5))
    (body,) = model(sketch).bodies
    assert place(body) == [0.0, 0.5]
    assert body.drawn.width.si > body.drawn.height.si > 0
    assert sketch.window.sketching.hand.kind.name == "choose"


def test_escape_leaves_off_first_the_drag_then_the_tool_then_what_is_chosen(sketch):
    sketch.tool("M")
    sketch.drag(sketch.at(-0.5, 1.0), sketch.at(0.5, 1.4), let_go=False)
    sketch.key(Qt.Key.Key_Escape)
    sketch.let_go(sketch.at(0.5, 1.4))
    assert model(sketch).bodies == ()
    assert sketch.window.sketching.hand.kind.name == "mass"
    sketch.key(Qt.Key.Key_Escape)
    assert sketch.window.sketching.hand.kind.name == "choose"


def test_undo_goes_back_from_within_the_form_while_nothing_is_being_typed(sketch):
    sketch.tool("M")
    sketch.drag(sketch.at(-0.5, 1.0), sketch.at(0.5, 1.4))
    sketch.type("620 kg")
    sketch.key(Qt.Key.Key_Z, CTRL)  # the mass that was typed
    assert model(sketch).bodies[0].mass.source == STARTING
    sketch.type_on("3 %")
    sketch.key(Qt.Key.Key_Z, CTRL)  # what is being typed here
    assert len(model(sketch).bodies) == 1
    sketch.key(Qt.Key.Key_Escape)
    sketch.key(Qt.Key.Key_Z, CTRL)
    assert model(sketch).bodies == ()


def test_numbers_typed_over_a_drag_hold_whatever_the_pointer_does(sketch):
    sketch.tool("M")
    sketch.drag(sketch.at(-0.5, 1.0), sketch.at(0.5, 1.4), let_go=False)
    sketch.key(Qt.Key.Key_8)
    sketch.type_on("50 mm")
    sketch.let_go(sketch.at(0.9, 1.9))
    assert model(sketch).bodies == ()  # still being typed
    sketch.key(Qt.Key.Key_Return)
    (body,) = model(sketch).bodies
    assert body.drawn.width.text == "0.85 m"
    sketch.type("620 kg", "", "motor")  # the keyboard has gone on to the values of what was made
    assert model(sketch).bodies[0].name == "motor"


@pytest.mark.parametrize("stop", [(2.6, 1.9), (-1.5, 1.9), (2.6, -1.2), (-1.5, -1.2)])
def test_the_fields_of_numbers_stand_beside_what_is_drawn_not_over_it(sketch, stop):
    sketch.tool("M")
    sketch.drag(sketch.at(1.0, 0.0), sketch.at(*stop), let_go=False)
    sketch.key(Qt.Key.Key_8)
    entry, outline = sketch.window.sketching.numbers, sketch.window.sketching.hand.dragged_over()
    for text in ("8 kg", "80 cm"):  # refused: it grows by the reason
        sketch.over_number(text)
        assert sketch.sheet.rect().contains(entry.geometry())
        assert not entry.geometry().intersects(outline)
    sketch.key(Qt.Key.Key_Escape)


def test_a_note_beside_the_pointer_lies_on_the_sheet_however_long_it_is():
    for x in (10.0, 300.0, 590.0):
        box = note_items(
            x, 100.0, ("both ends are on the left one; lead the spring to another",), 1.5, (600.0, 400.0)
        )[0]
        assert box.x >= 0


def test_the_link_is_seen_while_its_end_is_led_and_no_mode_moves_meanwhile(pump, qtbot):
    pen = Pen(pump, qtbot)
    pump.activateWindow()
    pump.sketching.hand.choose(("k2",))
    ends = pen.laid_out().link_ends[1]
    start = QPoint(*(round(one) for one in ends[0]))
    pen.drag(start, pen.part("motor", 0.8, 0.8), let_go=False)
    assert pump.sheet.still
    drawn = [item for item in pump.sketching.hand.items() if isinstance(item, Lines)]
    near = [np.abs(item.segments - np.tile(ends[1], 2)).min() for item in drawn]
    assert min(near) < 1e-6  # from the other end
    pen.key(Qt.Key.Key_Escape)
    pen.let_go(start)
    assert not pump.sheet.still


def test_form_and_numbers_beside_a_drag_follow_the_units_that_are_shown(pump, qtbot):
    pen = Pen(pump, qtbot)
    pump.activateWindow()
    pen.double_click(pen.part("motor"))
    mass = pump.sketching.form.row("mass")
    assert (mass.value.text(), mass.converted.text()) == ("620 kg", "")
    pump.on_setting(names.UNITS, "inch-pound")
    assert (mass.value.text(), mass.converted.text()) == ("620 kg", "1366.9 lb")
    pen.key(Qt.Key.Key_Escape)
    start = pen.part("motor")
    pen.drag(start, start + QPoint(0, -40), let_go=False)
    pen.key(Qt.Key.Key_1)
    fields = pump.sketching.numbers.fields
    assert fields["y"].text().endswith(" in")
    pen.over_number("10")
    assert pump.document.model.bodies[0].position[0].si == pytest.approx(0.254)
    pen.key(Qt.Key.Key_Escape)
    pump.on_setting(names.UNITS, "SI")


def two_masses(pen):
    for x, name in ((-1.0, "left"), (1.0, "right")):
        pen.tool("M")
        pen.click(pen.at(x, 1.0))
        pen.type("100 kg", "", name)


def test_a_spring_joins_two_bodies_and_one_to_the_ground_makes_its_support(sketch):
    two_masses(sketch)
    sketch.tool("S")
    sketch.drag(sketch.part("left"), sketch.part("right"))
    sketch.type("4.0e8 N/m", "10 %", "")
    sketch.tool("S")
    sketch.drag(sketch.part("left", down=0.9), sketch.at(-1.0, -0.5))
    sketch.key(Qt.Key.Key_Escape)
    first, second = model(sketch).links
    assert (first.from_.body, first.to.body) == tuple(body.id for body in model(sketch).bodies)
    assert first.stiffness.text == "4.0e8 N/m"
    (support,) = model(sketch).supports
    assert second.to.support == support.id


def test_a_link_may_be_made_by_two_clicks(sketch):
    two_masses(sketch)
    sketch.tool("S")
    sketch.click(sketch.part("left"))
    assert hint(sketch).startswith("Spring: now click on another part, or on empty ground.")
    assert sketch.window.sketching.hand.tool.notes() == ("now the other end",)
    sketch.click(sketch.part("right"))
    assert len(model(sketch).links) == 1


def test_what_cannot_be_joined_says_why_and_changes_nothing(sketch):
    two_masses(sketch)
    before = model(sketch)
    sketch.tool("S")
    sketch.drag(sketch.at(-1.0, -1.0), sketch.at(1.0, -1.0))
    assert "needs a body that moves" in hint(sketch)
    sketch.tool("L")
    sketch.drag(sketch.part("left"), sketch.at(0.0, -1.0))
    assert "joins two bodies" in hint(sketch)
    sketch.key(Qt.Key.Key_Escape)
    sketch.tool("S")
    sketch.drag(sketch.part("left", 0.1), sketch.part("left", 0.9))
    assert "both ends are on left" in hint(sketch)
    assert model(sketch) is before


def test_a_tool_without_a_meaning_in_the_motion_is_absent(sketch):
    sketch.tool("E")
    assert sketch.window.sketching.hand.kind.name == "choose"
    assert sketch.window.palette_of_tools.buttons["beam"].isHidden()
    assert not sketch.window.palette_of_tools.buttons["spring"].isHidden()


def test_a_tool_taken_with_shift_stays_in_hand(sketch):
    sketch.key(Qt.Key.Key_M, SHIFT)
    sketch.window.sketching.hand.take("mass", locked=True)
    sketch.click(sketch.at(-1.0, 1.0))
    sketch.sheet.setFocus()
    sketch.click(sketch.at(1.0, 1.0))
    assert len(model(sketch).bodies) == 2


def test_a_body_is_moved_by_dragging_and_takes_one_step_to_undo(sketch):
    two_masses(sketch)
    before = model(sketch)
    sketch.drag(sketch.part("left"), sketch.part("left") + QPoint(0, -100))
    assert place(model(sketch).bodies[0]) == pytest.approx([-1.0, 2.0])
    sketch.window.document.stack.undo()
    assert model(sketch) == before


def test_what_is_dragged_follows_the_pointer_while_the_sheet_is_still_to_be_laid_out(sketch, monkeypatch):
    two_masses(sketch)
    start = sketch.part("left")
    x1, y1, x2, y2 = sketch.laid_out().boxes[0].tolist()
    monkeypatch.setattr(sketch.sheet, "draw_now", lambda: None)
    sketch.drag(start, start + QPoint(0, -100), let_go=False)
    hand = sketch.window.sketching.hand
    assert sketch.sheet.geometry.model is not model(sketch)
    went = hand.tool._work._at.y - hand.tool._work._from[1]
    boxes = [item for item in hand.items() if isinstance(item, Box)]
    assert went < -60
    assert any((box.x, box.y, box.width, box.height) == (x1, y1 + went, x2 - x1, y2 - y1) for box in boxes)
    monkeypatch.undo()
    sketch.let_go(start + QPoint(0, -100))


def test_escape_puts_a_tool_away_while_the_keyboard_is_on_another_place(pump):
    pump.activateWindow()
    pump.sketching.hand.take("spring")
    pump.modes.row.setFocus()
    QTest.keyClick(pump.modes.row, Qt.Key.Key_Escape)
    assert pump.sketching.hand.kind.name == "choose"


def test_escape_gives_back_what_was_dragged(sketch):
    two_masses(sketch)
    before, steps = model(sketch), sketch.window.document.stack.count()
    sketch.drag(sketch.part("left"), sketch.at(0.0, 2.0), let_go=False)
    assert model(sketch) != before
    sketch.key(Qt.Key.Key_Escape)
    sketch.let_go(sketch.at(0.0, 2.0))
    assert model(sketch) == before
    assert sketch.window.document.stack.count() == steps


def test_arrow_keys_nudge_and_nudges_are_one_step(sketch):
    two_masses(sketch)
    sketch.click(sketch.part("left"))
    before, steps = model(sketch), sketch.window.document.stack.count()
    for _ in range(3):
        sketch.key(Qt.Key.Key_Right)
    sketch.key(Qt.Key.Key_Up, SHIFT)
    assert place(model(sketch).bodies[0]) == pytest.approx([-0.7, 2.0])
    assert sketch.window.document.stack.count() == steps + 1
    sketch.window.document.stack.undo()
    assert model(sketch) == before


def test_a_handle_sizes_a_body_about_its_centre_without_changing_a_number(sketch):
    sketch.tool("M")
    sketch.drag(sketch.at(-0.5, 1.0), sketch.at(0.5, 1.4))
    sketch.key(Qt.Key.Key_Escape)
    sketch.click(sketch.at(0.0, 1.2))
    grip = sketch.part("m1", 1.0, 0.5) + QPoint(5, 0)
    sketch.drag(grip, grip + QPoint(50, 0))
    (body,) = model(sketch).bodies
    assert body.drawn.width.si == pytest.approx(2.1)
    assert place(body) == pytest.approx([0.0, 1.2])
    assert body.drawn.height.si == 0.4


def test_the_end_of_a_link_is_led_elsewhere(sketch):
    two_masses(sketch)
    sketch.tool("S")
    sketch.drag(sketch.part("left", down=0.9), sketch.at(-1.0, -0.5))
    sketch.key(Qt.Key.Key_Escape)
    link = model(sketch).links[0]
    assert sketch.window.sketching.hand.chosen == (link.id,)
    foot = sketch.laid_out().link_ends[0, 1].tolist()
    sketch.drag(QPoint(round(foot[0]), round(foot[1])), sketch.part("right"))
    assert model(sketch).links[0].to.body == "m2"


def test_a_rubber_band_chooses_what_lies_inside_and_ctrl_adds(sketch):
    two_masses(sketch)
    hand = sketch.window.sketching.hand
    sketch.drag(sketch.at(-2.0, 1.8), sketch.at(0.0, 0.2))
    assert hand.chosen == ("m1",)
    sketch.click(sketch.part("right"), CTRL)
    assert hand.chosen == ("m1", "m2")
    sketch.click(sketch.at(0.0, 2.0))
    assert hand.chosen == ()


def test_delete_takes_what_hangs_on_a_body_with_it(sketch):
    two_masses(sketch)
    sketch.tool("S")
    sketch.drag(sketch.part("left"), sketch.part("right"))
    sketch.key(Qt.Key.Key_Escape)
    sketch.click(sketch.part("left"))
    sketch.key(Qt.Key.Key_Delete)
    assert [body.id for body in model(sketch).bodies] == ["m2"]
    assert model(sketch).links == ()
    sketch.window.document.stack.undo()
    assert len(model(sketch).links) == 1


def test_parts_are_copied_and_pasted_also_into_another_window(sketch, make_window, qtbot):
    two_masses(sketch)
    sketch.key(Qt.Key.Key_A, CTRL)
    sketch.key(Qt.Key.Key_C, CTRL)
    sketch.key(Qt.Key.Key_V, CTRL)
    assert len(model(sketch).bodies) == 4
    assert len({body.id for body in model(sketch).bodies}) == 4
    other = make_window()
    other.document.start(Model(motion=Motion.SINGLE_AXIS))
    pen = Pen(other, qtbot)
    pen.laid_out()
    other.sketching.editing.paste()
    assert [body.name for body in other.document.model.bodies] == ["left", "right"]


def test_what_is_no_part_on_the_clipboard_is_told(sketch):
    sketch.laid_out()
    QGuiApplication.clipboard().setText("hello")
    sketch.window.sketching.editing.paste()
    assert "cannot be pasted" in hint(sketch)


def test_the_cross_of_the_keyboard_draws_too(sketch):
    sketch.laid_out()
    sketch.tool("M")
    sketch.key(Qt.Key.Key_Up, SHIFT)
    sketch.key(Qt.Key.Key_Return)
    sketch.type("200 kg", "", "machine")
    sketch.tool("S")
    sketch.key(Qt.Key.Key_PageDown)
    assert hint(sketch) == "The cross is on machine"
    sketch.key(Qt.Key.Key_Return)
    for _ in range(2):
        sketch.key(Qt.Key.Key_Down, SHIFT)
    sketch.key(Qt.Key.Key_Return)
    (link,) = model(sketch).links
    assert link.from_.body == "m1"
    assert link.to.support == model(sketch).supports[0].id


def test_alignment_and_mirror_from_the_menu_keep_the_frequencies(window, qtbot):
    window.document.open(FAN, example=True)
    settle(qtbot, window)
    before = [mode.frequency_hz for mode in window.analysis.solution.modes]
    editing = window.sketching.editing
    editing.choose_all()
    for change in (editing.mirror_sideways, editing.turn_left, editing.turn_right):
        change()
        settle(qtbot, window)
        after = [mode.frequency_hz for mode in window.analysis.solution.modes]
        assert after == pytest.approx(before, rel=1e-9)


def test_a_body_moved_in_a_plane_changes_the_verdict_as_it_goes(plane, qtbot):
    plane.tool("B")
    plane.drag(plane.at(-0.8, 0.4), plane.at(0.8, 1.2))
    plane.key(Qt.Key.Key_Escape)
    for x in (-0.6, 0.6):
        plane.tool("T")
        plane.drag(plane.at(x, 0.45), plane.at(x, -0.4))
        plane.key(Qt.Key.Key_Escape)
    window = plane.window
    settle(qtbot, window)
    first = window.analysis.outlook
    assert first.verdict is None
    plane.drag(plane.part("b1", 0.3, 0.3), plane.part("b1", 0.3, 0.3) + QPoint(0, -40), let_go=False)
    settle(qtbot, window)
    assert window.analysis.outlook is not first
    plane.let_go(plane.part("b1", 0.3, 0.3))


def test_a_mount_is_moved_along_its_body_by_dragging_it_and_by_arrow_keys(plane):
    plane.tool("B")
    plane.drag(plane.at(-0.8, 0.4), plane.at(0.8, 1.2))
    plane.key(Qt.Key.Key_Escape)
    plane.tool("T")
    plane.drag(plane.at(-0.6, 0.5), plane.at(-0.6, -0.4))
    plane.key(Qt.Key.Key_Escape)
    before, steps = model(plane), plane.window.document.stack.count()
    plane.click(plane.at(0.4, -0.3))  # nothing is chosen any more
    plane.drag(plane.at(-0.6, 0.0), plane.at(-0.3, 0.0))
    after = model(plane)
    assert plane.window.document.stack.undoText() == "Move mt1"
    assert after.links[0].from_.offset[0].si - before.links[0].from_.offset[0].si == pytest.approx(0.3)
    assert place(after.supports[0])[0] - place(before.supports[0])[0] == pytest.approx(0.3)
    assert place(after.supports[0])[1] == place(before.supports[0])[1]
    assert after.bodies == before.bodies
    plane.key(Qt.Key.Key_Right)
    assert place(model(plane).supports[0])[0] > place(after.supports[0])[0]
    for _ in range(2):
        plane.window.document.stack.undo()
    assert model(plane) == before
    assert plane.window.document.stack.index() == steps


def test_a_double_click_asks_for_the_values_of_a_part(sketch):
    two_masses(sketch)
    where = sketch.part("right")
    sketch.double_click(where)
    sketch.type("750 kg")
    assert model(sketch).bodies[1].mass.text == "750 kg"


def test_the_title_is_asked_at_its_block_and_in_the_menu_and_can_be_undone(sketch):
    window = sketch.window
    corner = QPoint(round(sketch.laid_out().width) - 40, 30)
    sketch.double_click(corner)
    (dialog,) = (one for one in window.findChildren(AskText) if one.isVisible())
    dialog.line.setText(" Pump P-3,  as built ")
    sketch.key_on(dialog.line, Qt.Key.Key_Return)
    assert model(sketch).title == "Pump P-3, as built"
    assert window.windowTitle().startswith("Pump P-3, as built")
    window.document.stack.undo()
    assert model(sketch).title == ""
    sketch.double_click(QPoint(40, round(sketch.laid_out().height) - 40))  # elsewhere nothing is asked
    assert [one for one in window.findChildren(AskText) if one.isVisible()] == []
    window.menus.actions["sketching.ask_title"].trigger()
    (dialog,) = (one for one in window.findChildren(AskText) if one.isVisible())
    dialog.close()


def test_find_shows_the_part_that_is_named(sketch):
    two_masses(sketch)
    sketch.window.sketching.editing.find()
    dialog = sketch.window.sheet.findChild(type_of_find())
    dialog.line.setText("righ")
    assert dialog.list.count() == 1
    sketch.key_on(dialog.line, Qt.Key.Key_Return)
    assert sketch.window.sketching.hand.chosen == ("m2",)


def type_of_find():
    from modalview.ui.sketch.asking import FindPart

    return FindPart


def test_an_order_is_removed_from_its_card_and_comes_back_by_undo(pump, qtbot):
    card = pump.results._cards[1]
    card.setFocus()
    pen = Pen(pump, qtbot)
    pen.key_on(card, Qt.Key.Key_Delete)
    assert [one.id for one in pump.document.model.machines[0].excitations] == ["1x", "vane"]
    pump.document.stack.undo()
    assert len(pump.document.model.machines[0].excitations) == 3


def test_a_card_asks_for_the_values_of_its_machine(pump, qtbot):
    pen = Pen(pump, qtbot)
    pen.key_on(pump.results._cards[0], Qt.Key.Key_Return)
    assert pump.sketching.form.ids == ("pump set",)
    assert pump.sketching.form.isVisible()


def test_a_machine_is_removed_with_its_orders(pump):
    pump.results._machines["pump set"].remove.click()
    assert pump.document.model.machines == ()
    assert pump.results.none_yet.isVisible()


def test_undo_in_the_middle_of_a_drag_ends_the_drag(sketch):
    two_masses(sketch)
    sketch.drag(sketch.part("left"), sketch.part("left") + QPoint(0, -60), let_go=False)
    sketch.window.document.stack.undo()
    undone = model(sketch)
    sketch.let_go(sketch.at(0.0, 2.4))
    assert model(sketch) == undone
