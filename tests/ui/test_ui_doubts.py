"""The list of doubts: counts, leads to the parts, follows edits, and is there for a refused model."""

import json

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QWidget

from modalview.advice.doubt import Doubt
from modalview.ui.doubts import Doubts

ONE = Doubt("value far off", ("k2",), "Spring k2 is 1.2e12 N/m; a power of ten?", "It acts as rigid.")
TWO = Doubt("same place", ("b", "a"), "Body b is drawn at the same place as a.", "One hides the other.")


@pytest.fixture
def shown(qtbot):
    """The list in a window of its own."""
    page = QWidget()
    qtbot.addWidget(page)
    made = Doubts(page)
    page.show()
    yield made
    page.hide()


def test_the_heading_counts_and_nothing_is_there_without_a_doubt(shown):
    assert shown.isHidden()
    shown.show_doubts((ONE, TWO))
    assert not shown.isHidden()
    assert shown.heading.text() == "Doubts (2)"
    shown.show_doubts((TWO,))
    assert shown.heading.text() == "Doubts (1)"
    assert [entry.isHidden() for entry in shown.entries] == [False, True]
    shown.show_doubts(())
    assert shown.isHidden()


def test_an_entry_says_what_and_what_it_means_to_eyes_and_ears(shown):
    shown.show_doubts((ONE,))
    [entry] = shown.entries
    assert entry.found.text().replace("\u00a0", " ") == ONE.text
    assert entry.effect.text() == ONE.effect
    assert (entry.accessibleName(), entry.accessibleDescription()) == (ONE.text, ONE.effect)


@pytest.mark.parametrize("key", [Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space])
def test_a_key_chooses_the_parts(shown, qtbot, key):
    shown.show_doubts((ONE, TWO))
    with qtbot.waitSignal(shown.parts_chosen) as told:
        qtbot.keyClick(shown.entries[1], key)
    assert told.args == [("b", "a")]


def test_a_click_on_the_words_chooses_the_parts_shown_now(shown, qtbot):
    shown.show_doubts((ONE,))
    shown.show_doubts((TWO,))
    with qtbot.waitSignal(shown.parts_chosen) as told:
        qtbot.mouseClick(shown.entries[0], Qt.MouseButton.LeftButton, pos=shown.entries[0].found.pos())
    assert told.args == [("b", "a")]


def test_entries_stand_one_after_the_other_for_the_tab_key(shown):
    shown.show_doubts((ONE, TWO))
    first, second = shown.entries
    first.setFocus()
    shown.focusNextChild()
    assert shown.window().focusWidget() is second


def chain(tmp_path, third, *, floating=False):
    """Write a chain of four masses, and a mass that nothing joins."""
    bodies = [{"id": f"m{i}", "mass": "100 kg"} for i in range(4 + floating)]
    ends = [{"support": "g"}, *({"body": one["id"]} for one in bodies)]
    links = [
        {"id": f"k{i}", "kind": "spring", "from": ends[i], "to": ends[i + 1], "stiffness": stiffness}
        for i, stiffness in enumerate(["4e8 N/m", "4e8 N/m", third, "4e8 N/m"])
    ]
    document = {"format": "keepclear", "version": 1, "title": "t", "motion": "single axis"}
    document |= {"bodies": bodies, "supports": [{"id": "g"}], "links": links}
    path = tmp_path / "chain.keepclear"
    path.write_text(json.dumps(document), encoding="utf-8")
    return path


def test_the_list_follows_an_edit_and_its_undoing(window, qtbot, tmp_path):
    window.document.open(chain(tmp_path, "4e8 N/m"))
    doubts = window.results.doubts
    qtbot.waitUntil(lambda: window.analysis.outlook is not None, timeout=5000)
    assert doubts.isHidden()
    window.document.type_value(("links", "k2", "stiffness"), "4e12 N/m")
    qtbot.waitUntil(lambda: not doubts.isHidden(), timeout=5000)
    assert doubts.heading.text() == "Doubts (1)"
    assert "10000 times" in doubts.entries[0].found.text()
    window.document.stack.undo()
    qtbot.waitUntil(doubts.isHidden, timeout=5000)


def test_a_doubt_leads_to_its_part_on_the_sheet_and_in_the_values(window, qtbot, tmp_path):
    window.document.open(chain(tmp_path, "4e12 N/m"))
    qtbot.waitUntil(lambda: not window.results.doubts.isHidden(), timeout=5000)
    window.results.doubts.entries[0].click()
    assert window.sketching.hand.chosen == ("k2",)


def test_a_model_that_cannot_be_analysed_still_has_its_doubts(window, qtbot, tmp_path):
    window.document.open(chain(tmp_path, "4e8 N/m", floating=True))
    qtbot.waitUntil(lambda: window.analysis.refusal is not None, timeout=5000)
    doubts = window.results.doubts
    assert not doubts.isHidden()
    assert doubts.entries[0].found.text() == "Body m4 floats: no link joins it to anything."


def test_the_tab_key_comes_to_the_doubts_after_machine_and_orders(window, qtbot, tmp_path):
    path = chain(tmp_path, "4e12 N/m")
    document = json.loads(path.read_text(encoding="utf-8"))
    excitation = {"id": "1x", "order": 1}
    document["machines"] = [{"id": "fan", "speed": "900 rpm", "margin": "10 %", "excitations": [excitation]}]
    path.write_text(json.dumps(document), encoding="utf-8")
    window.resize(1500, 900)
    window.document.open(path)
    qtbot.waitUntil(lambda: not window.results.doubts.isHidden(), timeout=5000)
    [form] = window.results._machines.values()
    last = list(form.fields.values())[-1]
    last.line.setFocus()
    passed = []
    for _ in range(3):
        window.results.focusNextChild()
        passed.append(window.focusWidget())
    assert passed == [window.results._cards[0], window.results.add, window.results.doubts.entries[0]]
