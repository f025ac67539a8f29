"""A drawing that goes on is told as unfinished, with what to do next; an empty sheet says how to begin."""

from dataclasses import replace

import pytest
from conftest import settle
from pen import Pen
from PySide6.QtCore import Qt

from modalview.drawing.primitives import Text
from modalview.errors import Fault, InputError, ModelFaultsError
from modalview.model.parts import Body, Model, Motion
from modalview.store import save_model
from modalview.ui.unfinished import invitation, missing, refusal_text, unchecked

FILE_TALK = ("[", "]", '"', "dof", "bodies:", "floats")


@pytest.fixture
def pen(window, qtbot):
    window.activateWindow()
    return Pen(window, qtbot)


def said(pen, qtbot):
    settle(qtbot, pen.window)
    return pen.window.banner.word.text(), pen.window.banner.sentence.whole


def over_the_sheet(pen):
    return [item.text for item in pen.window.sketching.hand.items() if isinstance(item, Text)]


@pytest.mark.parametrize("motion", Motion)
def test_an_empty_sheet_says_what_to_do_until_a_tool_is_in_hand(pen, qtbot, motion):
    pen.window.document.start(Model(motion=motion))
    pen.laid_out()
    first = invitation(motion)[0]
    assert first in over_the_sheet(pen)
    assert first in pen.sheet.accessibleDescription()
    assert said(pen, qtbot) == ("Not finished", f"Nothing is drawn yet. {first}.")
    pen.tool(first.split()[1])  # the key that it names
    assert pen.window.sketching.hand.kind.name in first
    assert first not in over_the_sheet(pen)
    pen.key(Qt.Key.Key_Escape)
    assert first in over_the_sheet(pen)


def test_the_banner_leads_from_part_to_part_without_talk_of_files(pen, qtbot):
    pen.window.document.start(Model(motion=Motion.SINGLE_AXIS))
    pen.tool("M")
    pen.click(pen.at(0.0, 1.0))
    pen.type("620 kg", "", "motor")
    assert not over_the_sheet(pen)
    word, sentence = said(pen, qtbot)
    assert word == "Not finished"
    assert sentence.startswith("Motor hangs on nothing yet: press S")
    assert not any(talk in sentence for talk in FILE_TALK)
    pen.tool("S")
    pen.drag(pen.part("motor"), pen.at(0.0, -0.5))
    pen.key(Qt.Key.Key_Escape)
    word, sentence = said(pen, qtbot)
    assert (word, sentence[:30]) == ("", "Nothing to check yet: press F ")


def test_several_loose_parts_are_one_sentence_and_what_is_held_is_not_loose():
    bodies = (Body(id="a"), Body(id="b", name="pump"), Body(id="c", dof=()))
    assert missing(Model(bodies=bodies)).startswith("Body a and pump hang on nothing yet")
    assert missing(Model(bodies=bodies[2:])) == ""
    train = Model(motion=Motion.SHAFT_TRAIN, bodies=bodies[1:2])
    assert missing(train) == "Pump hangs on nothing yet: press H and drag from it to another disc."


def test_what_is_wrong_with_the_whole_is_told_without_a_place():
    assert refusal_text(ModelFaultsError((Fault("model", "no mass moves"),))) == "no mass moves"
    told = ModelFaultsError((Fault('gear "g"', "has no teeth"), Fault('gear "h"', "has no teeth")))
    assert refusal_text(told) == 'gear "g": has no teeth; gear "h": has no teeth'
    assert refusal_text(InputError("too\nlarge")) == "too large"
    assert missing(None) == unchecked(None) == ""


def test_what_was_known_of_a_model_that_lacks_a_part_now_is_told_as_old(pump, qtbot):
    pump.sketching.editing.choose_all()
    pump.sketching.hand.delete()
    settle(qtbot, pump)
    assert pump.banner.word.text() == "Not finished"
    assert pump.sheet._title.checked == "not yet"
    assert pump.sheet._title.motion == "single axis · 0 DOF"
    assert pump.play_bar.name.text().endswith("(out of date)")


def test_a_verdict_on_values_that_nobody_gave_says_so_first(pen, qtbot):
    pen.window.document.start(Model(motion=Motion.SINGLE_AXIS))
    pen.tool("M")
    pen.click(pen.at(0.0, 1.0))
    pen.type("", "", "fan")
    pen.tool("S")
    pen.drag(pen.part("fan"), pen.at(0.0, -0.5))
    pen.type("1e6 N/m", "", "leg")
    pen.tool("F")
    pen.click(pen.part("fan"))
    pen.type("drive", "9000 rpm", "20 %", "1", "", "", "unbalance")
    word, sentence = said(pen, qtbot)
    assert word == "Clear"
    assert sentence.startswith("With starting values of fan that nobody has given yet: 1× unbalance of")


def test_the_title_bar_names_a_model_without_a_title_once(pump, tmp_path):
    path = tmp_path / "fan.keepclear"
    save_model(replace(pump.document.model, title=""), path, known=None)
    pump.document.open(path)
    assert pump.windowTitle() == "fan.keepclear[*] - Keepclear"
    pump.document.start(Model(motion=Motion.SINGLE_AXIS))
    assert pump.windowTitle() == "untitled (not saved yet)[*] - Keepclear"
