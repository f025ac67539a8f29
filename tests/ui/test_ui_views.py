"""Space models seen and drawn from the front, the side and the top: what is not seen keeps its coordinate."""

import math

import numpy as np
import pytest
from conftest import settle
from pen import Pen
from PySide6.QtCore import QPoint, Qt

from modalview.model.parts import Model, Motion
from modalview.places import demo_models

SET = demo_models() / "4-standby-generator-set" / "dynamic-stiffness.keepclear"
CTRL = Qt.KeyboardModifier.ControlModifier
VIEWS = {"turned": Qt.Key.Key_1, "front": Qt.Key.Key_2, "side": Qt.Key.Key_3, "top": Qt.Key.Key_4}


class SpacePen(Pen):
    """A pen that also walks about the machine."""

    def look(self, view):
        """See the sheet from elsewhere, by the buttons on it."""
        self.window.viewing.switch.buttons[view].click()
        self.laid_out()

    @property
    def model(self):
        return self.window.document.model


@pytest.fixture
def space(window, qtbot):
    """An empty sheet of space, seen from the front."""
    window.document.start(Model(motion=Motion.SPACE))
    window.activateWindow()
    pen = SpacePen(window, qtbot)
    pen.laid_out()
    pen.look("front")
    return pen


@pytest.fixture
def generator(window, qtbot):
    """The generator set on six mounts."""
    window.document.open(SET, example=True)
    pen = SpacePen(window, qtbot)
    pen.laid_out()
    return pen


def place(part):
    return [one.si for one in part.position]


def offset(end):
    return [one.si for one in end.offset]


def draw_body(pen, corner=(-0.8, 0.0, 0.4), other=(0.8, 0.0, 1.2)):
    pen.tool("B")
    pen.drag(pen.at(*corner), pen.at(*other))
    pen.type("400 kg")
    pen.key(Qt.Key.Key_Escape)


def test_a_set_on_four_mounts_drawn_from_the_front_and_the_top_bounces_as_the_formula_says(space, qtbot):
    draw_body(space)
    space.look("top")
    for x, y in ((-0.6, -0.3), (0.6, -0.3), (-0.6, 0.3), (0.6, 0.3)):
        space.tool("T")
        space.click(space.at(x, y))
        space.click(space.at(x, y))
        space.key(Qt.Key.Key_Escape)
    (body,) = space.model.bodies
    assert place(body) == pytest.approx([0.0, 0.0, 0.8])
    assert [offset(link.from_) for link in space.model.links] == [
        [-0.6, -0.3, -0.4],
        [0.6, -0.3, -0.4],
        [-0.6, 0.3, -0.4],
        [0.6, 0.3, -0.4],
    ]
    settle(qtbot, space.window)
    modes = space.window.analysis.solution.modes
    bounce = math.sqrt(4 * 1e6 / 400) / (2 * math.pi)
    assert any(mode.frequency_hz == pytest.approx(bounce, rel=1e-9) for mode in modes)
    assert len(modes) == 6


def test_mounts_drawn_from_the_front_are_led_apart_from_above_and_keep_their_height(space, qtbot):
    draw_body(space)
    for x in (-0.6, 0.6):
        for _ in range(2):
            space.tool("T")
            space.drag(space.at(x, 0.0, 0.5), space.at(x, 0.0, 0.0))
            space.key(Qt.Key.Key_Escape)
    assert [offset(link.from_) for link in space.model.links] == [[-0.6, 0.0, -0.3]] * 2 + [
        [0.6, 0.0, -0.3]
    ] * 2
    space.look("top")
    for number, y in enumerate((-0.3, 0.3, -0.3, 0.3)):
        link = space.model.links[number]
        space.window.sketching.hand.choose((link.id,))
        x, middle = space.laid_out().link_ends[number, 0]
        grip = QPoint(round(x) - 13, round(middle))  # the left one of the two handles is the end on the body
        space.drag(grip, space.at(link.from_.offset[0].si, y, 0.5))
    assert [offset(link.from_)[1:] for link in space.model.links] == [[-0.3, -0.3], [0.3, -0.3]] * 2
    settle(qtbot, space.window)
    modes = space.window.analysis.solution.modes
    bounce = math.sqrt(4 * 1e6 / 400) / (2 * math.pi)
    assert any(mode.frequency_hz == pytest.approx(bounce, rel=1e-9) for mode in modes)


@pytest.mark.parametrize(
    ("view", "start", "stop", "expected"),
    [
        ("front", (0.0, 0.3, 0.8), (0.5, 0.3, 1.2), [0.5, 0.3, 1.2]),
        ("side", (0.0, 0.3, 0.8), (0.0, 0.9, 1.2), [0.0, 0.9, 1.2]),
        ("top", (0.0, 0.3, 0.8), (0.5, 0.9, 0.8), [0.5, 0.9, 0.8]),
        ("turned", (0.0, 0.3, 0.8), (0.5, 0.3, 1.2), [0.5, 0.3, 1.2]),
    ],
)
def test_a_part_that_is_moved_keeps_what_is_not_seen(space, view, start, stop, expected):
    space.look("top")
    space.tool("B")
    space.click(space.at(0.0, 0.3))
    space.key(Qt.Key.Key_Escape)
    space.look("front")
    space.sheet.setFocus()
    space.drag(space.at(0.0, 0.3, 0.0), space.at(0.0, 0.3, 0.8))
    assert place(space.model.bodies[0]) == pytest.approx([0.0, 0.3, 0.8])
    space.look(view)
    space.drag(space.at(*start), space.at(*stop))
    assert place(space.model.bodies[0]) == pytest.approx(expected, abs=0.026)
    hidden = {"front": 1, "side": 0, "top": 2, "turned": 1}[view]
    assert place(space.model.bodies[0])[hidden] == expected[hidden]


def test_arrow_keys_nudge_along_the_axes_seen(space):
    draw_body(space)
    space.look("side")
    space.click(space.part("b1"))
    space.key(Qt.Key.Key_Right)
    space.key(Qt.Key.Key_Up)
    x, y, z = place(space.model.bodies[0])
    assert x == 0.0
    assert y > 0.0
    assert z > 0.8


def test_what_is_drawn_beside_a_part_gets_its_depth_and_alone_none(space):
    space.look("top")
    space.tool("B")
    space.click(space.at(0.0, 0.4))
    space.key(Qt.Key.Key_Escape)
    space.look("front")
    space.tool("M")
    box = space.laid_out().boxes[0]
    space.click(QPoint(round(box[2]) + 20, round(box[1]) + 20))
    space.key(Qt.Key.Key_Escape)
    space.tool("M")
    space.click(QPoint(round(box[2]) + 180, round(box[3]) + 66))
    assert [place(body)[1] for body in space.model.bodies] == [0.4, 0.4, 0.0]


def test_a_body_drawn_in_any_view_is_drawn_as_it_was_dragged(space):
    for view, corner, other in (
        ("front", (-0.5, 0.0, 0.0), (0.5, 0.0, 0.4)),
        ("side", (0.0, -0.3, 1.0), (0.0, 0.3, 1.4)),
        ("top", (-0.5, 2.0, 0.0), (0.5, 2.6, 0.0)),
    ):
        space.look(view)
        space.tool("B")
        space.drag(space.at(*corner), space.at(*other))
        space.key(Qt.Key.Key_Escape)
        (x1, y1, x2, y2), view_ = space.laid_out().boxes[-1], space.laid_out().view
        drawn = view_.to_pixels(np.array([corner, other]))
        assert sorted((x1, x2)) == pytest.approx(sorted(drawn[:, 0]), abs=1.0)
        assert sorted((y1, y2)) == pytest.approx(sorted(drawn[:, 1]), abs=1.0)
    assert [body.drawn.width.si for body in space.model.bodies] == pytest.approx([1.0, 1.0, 1.0])


def test_a_link_is_attached_at_the_middle_of_a_body_and_to_a_known_point_at_its_depth(space):
    draw_body(space)
    space.look("top")
    space.tool("T")
    space.click(space.at(-0.6, 0.3))
    space.click(space.at(-0.6, 0.3))
    space.key(Qt.Key.Key_Escape)
    space.look("front")
    for x in (0.2, -0.6):  # the second where the mount is attached: at z = 0.4
        space.tool("S")
        space.drag(space.at(x, 0.0, 0.4), space.at(x, 0.0, 0.1))
        space.key(Qt.Key.Key_Escape)
    assert [offset(link.from_)[1] for link in space.model.links] == [0.3, 0.0, 0.3]
    supports = {one.id: one for one in space.model.supports}
    assert [place(supports[link.to.support])[1] for link in space.model.links] == [0.3, 0.0, 0.3]


def test_new_ground_is_as_deep_as_the_body_that_it_carries(space):
    space.look("top")
    space.tool("B")
    space.click(space.at(0.0, 0.4))
    space.key(Qt.Key.Key_Escape)
    space.look("front")
    space.tool("S")
    space.drag(space.at(0.1, 0.0, -1.0), space.part("b1", 0.5, 0.9))
    (link,), (support,) = space.model.links, space.model.supports
    assert place(support)[1] == 0.4
    assert offset(link.to)[1] == 0.0


def test_from_above_a_link_goes_down_to_the_body_below(space):
    draw_body(space, (-0.8, 0.0, 0.0), (0.8, 0.0, 0.2))
    draw_body(space, (-0.3, 0.0, 0.6), (0.3, 0.0, 1.0))
    space.look("top")
    space.tool("S")
    here = space.at(0.2, 0.1)
    space.click(here)
    space.double_click(here)  # the second press of two quick clicks
    space.let_go(here)
    (link,) = space.model.links
    assert (link.from_.body, link.to.body) == ("b2", "b1")
    assert (offset(link.from_), offset(link.to)) == ([0.2, 0.1, -0.2], [0.2, 0.1, 0.1])


def test_a_link_that_begins_and_ends_apart_on_one_body_is_still_refused(space):
    draw_body(space)
    space.look("top")
    space.tool("S")
    space.drag(space.at(-0.4, 0.0), space.at(0.4, 0.0))
    assert "both ends are on b1" in space.window.sketching.hand.hint
    assert space.model.links == ()


def test_mounts_one_behind_the_other_are_chosen_by_repeated_clicks(generator):
    hand = generator.window.sketching.hand
    generator.look("side")
    seen = []
    for middle in generator.laid_out().link_ends.mean(axis=1):  # spread beside each other
        generator.click(QPoint(*(round(one) for one in middle)))
        seen += hand.chosen
    assert seen == ["m1", "m2", "m3", "m4", "m5", "m6"]
    generator.look("top")
    here = QPoint(*(round(one) for one in generator.laid_out().link_ends[3, 0]))
    hand.choose(())
    seen = []
    for _ in range(4):
        generator.click(here)
        seen += hand.chosen
    assert seen == ["m4", "set", "g4", "m4"]


def test_a_double_click_asks_for_what_was_chosen_and_not_for_what_is_behind(generator):
    generator.look("top")
    here = QPoint(*(round(one) for one in generator.laid_out().link_ends[3, 0]))
    generator.click(here)
    generator.click(here)
    asked = []
    generator.window.sketching.hand.form_asked.connect(asked.append)
    generator.click(here)
    generator.double_click(here)
    assert asked == [("set",)]


def test_mirror_and_turn_act_about_the_axes_seen(generator):
    generator.look("top")
    editing = generator.window.sketching.editing
    editing.choose_all()
    before = [place(one) for one in generator.model.supports]
    editing.mirror_upright()
    after = [place(one) for one in generator.model.supports]
    assert [[x, -y, z] for x, y, z in before] == after
    editing.turn_left()
    across = {round(place(one)[0], 9) for one in generator.model.supports}
    assert max(across) - min(across) == pytest.approx(0.96)
    assert len(across) == 2


def test_parts_are_aligned_along_the_axes_seen(space):
    space.look("top")
    for x, y in ((-1.5, 0.5), (1.5, -0.5)):
        space.tool("M")
        space.click(space.at(x, y))
        space.key(Qt.Key.Key_Escape)
    space.window.sketching.editing.choose_all()
    space.window.sketching.editing.align_top()
    assert [place(body)[1] for body in space.model.bodies] == [0.5, 0.5]


def test_a_force_acts_at_the_depth_of_its_body(space):
    space.look("top")
    space.tool("B")
    space.click(space.at(0.0, 0.4))
    space.key(Qt.Key.Key_Escape)
    space.look("front")
    asked = []
    space.window.sketching.hand.force_asked.connect(lambda body, at: asked.append((body, at)))
    space.tool("F")
    space.click(space.part("b1"))
    assert asked == [("b1", (0.0, 0.4, 0.0))]


def test_the_view_is_chosen_by_keys_and_menu_and_remembered(generator, make_window):
    for view, key in VIEWS.items():
        generator.key(key, CTRL)
        assert generator.laid_out().view.viewpoint == view
        assert generator.window.viewing.switch.buttons[view].isChecked()
    assert "From above: x to the right, y up" in generator.window.statusBar().currentMessage()
    generator.window.menus.actions["viewing.side"].trigger()
    assert generator.laid_out().view.viewpoint == "side"
    other = make_window()
    other.document.open(SET, example=True)
    assert other.sheet.viewpoint == "side"
    other.menus.actions["viewing.top"].trigger()
    assert (generator.sheet.viewpoint, other.sheet.viewpoint) == ("side", "top")


def test_only_a_space_model_has_the_switch(generator):
    window = generator.window
    assert window.viewing.switch.isVisible()
    window.document.start(Model(motion=Motion.PLANE))
    generator.laid_out()
    assert not window.viewing.switch.isVisible()
    assert not window.menus.actions["viewing.front"].isEnabled()


def test_modes_move_on_the_sheet_and_the_cards_as_they_are_seen(generator, qtbot):
    settle(qtbot, generator.window)
    generator.look("front")
    card = generator.window.modes.row.card
    generator.window.grab()
    assert {small.view.viewpoint for small in card._small.values()} == {"front"}
    assert generator.sheet.moving_drawing().items


def test_a_page_is_printed_as_the_window_shows_it(generator):
    from modalview.ui.printing import page

    generator.look("top")
    sheet = page(generator.window.printing.content(), 1000, 700)[0][2]
    assert "top view" in [getattr(item, "text", "") for item in sheet.items]


def test_a_switch_of_the_view_leaves_off_what_was_begun(space):
    draw_body(space)
    space.tool("S")
    space.click(space.part("b1"))
    space.key(Qt.Key.Key_4, CTRL)
    assert not space.window.sketching.hand.at_work
    assert space.sheet.viewpoint == "top"


def test_handles_size_what_is_seen_but_not_the_depth(generator):
    from modalview.drawing import hits

    named = {}
    for view in VIEWS:
        generator.look(view)
        named[view] = {one.name for one in hits.handles(generator.laid_out(), ("set",))}
    assert named["front"] == named["turned"] == set(hits.CORNERS)
    assert (named["top"], named["side"]) == ({"e", "w"}, {"n", "s"})
    generator.look("top")
    generator.window.sketching.hand.choose(("set",))
    grip = next(one for one in hits.handles(generator.laid_out(), ("set",)) if one.name == "e")
    start = QPoint(round(grip.x), round(grip.y))
    generator.drag(start, start + QPoint(30, 0))
    drawn = generator.model.bodies[0].drawn
    assert drawn.width.si > 3.1
    assert drawn.height.text == "1.24 m"
