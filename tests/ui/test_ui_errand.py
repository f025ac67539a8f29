"""Work in a thread that can be called off, and files that are read there."""

import gc
from threading import Event

import pytest
from conftest import FAN, PUMP, settle

from modalview.store import read_model
from modalview.ui import garbage
from modalview.ui.errand import Errand
from modalview.ui.later import Later


@pytest.fixture
def some(qapp):
    del qapp
    made = Errand()
    yield made
    made.close()


def test_a_result_comes_back_and_what_is_done_is_told_meanwhile(some, qtbot):
    told, ends = [], []
    some.busy_changed.connect(told.append)
    some.run("adding", lambda _stopped: 1 + 1, lambda *end: ends.append(end))
    qtbot.waitUntil(lambda: bool(ends))
    assert ends == [(2, None)]
    assert told == ["adding", ""]
    assert not some.busy


def test_an_error_comes_back(some, qtbot):
    ends = []
    some.run("dividing", lambda _stopped: 1 / 0, lambda *end: ends.append(end))
    qtbot.waitUntil(lambda: bool(ends))
    assert isinstance(ends[0][1], ZeroDivisionError)


def test_a_second_piece_of_work_calls_the_first_off(some, qtbot):
    first_began, ends = Event(), []

    def waits(stopped):
        first_began.set()
        while not stopped():
            pass
        return "first"

    some.run("first", waits, lambda *end: ends.append(end))
    assert first_began.wait(5)
    some.run("second", lambda _stopped: "second", lambda *end: ends.append(end))
    qtbot.waitUntil(lambda: bool(ends))
    assert ends == [("second", None)]


def test_closing_calls_off_and_waits(some):
    began, ended = Event(), Event()

    def waits(stopped):
        began.set()
        while not stopped():
            pass
        ended.set()

    some.run("waiting", waits, lambda *_: None)
    assert began.wait(5)
    some.close()
    assert ended.is_set()
    assert not some.busy


def test_many_objects_are_left_out_of_later_searches_for_garbage(monkeypatch):
    monkeypatch.setattr(garbage, "MANY_OBJECTS", 50)
    monkeypatch.setattr(garbage, "LONG_S", 60.0)
    frozen = gc.get_freeze_count()
    with garbage.few_collections():
        assert not gc.isenabled()
    assert gc.get_freeze_count() == frozen
    with garbage.few_collections():
        kept = [[] for _ in range(1000)]
    assert gc.isenabled()
    assert gc.get_freeze_count() >= frozen + len(kept)


def test_so_is_what_long_work_made(monkeypatch):
    monkeypatch.setattr(garbage, "LONG_S", 0.0)
    frozen = gc.get_freeze_count()
    with garbage.few_collections():
        kept = [[] for _ in range(1000)]
    assert gc.get_freeze_count() >= frozen + len(kept)


def test_searches_for_garbage_begin_when_the_last_thread_has_left():
    with garbage.few_collections():
        with garbage.few_collections():
            pass
        assert not gc.isenabled()
    assert gc.isenabled()


def test_of_two_files_opened_at_once_the_second_is_shown(window, qtbot):
    window.filing.open(PUMP, example=True)
    window.filing.open(FAN, example=True)
    assert window.filing.reading.busy
    settle(qtbot, window)
    assert window.document.path == FAN


def test_a_model_edited_while_another_is_read_is_not_lost_unasked(pump, qtbot):
    pump.filing.open(FAN, example=True)
    pump.document.type_value(("links", "k3", "stiffness"), "340 kN/mm")
    asked = []
    pump.filing.guard = asked.append
    qtbot.waitUntil(lambda: not pump.filing.reading.busy)
    assert pump.document.path == PUMP
    asked[0]()
    assert pump.document.model == read_model(FAN)
    settle(qtbot, pump)


def test_a_slow_reading_is_told_at_the_foot(pump):
    words = "Opening large.keepclear…"
    pump.show_reading(words)
    assert pump.statusBar().currentMessage() != words
    pump._patience.timeout.emit()
    assert pump.statusBar().currentMessage() == words
    pump.show_reading("")
    assert pump.statusBar().currentMessage() == ""


def test_pieces_of_work_of_several_places_are_done_one_at_a_time(qapp, qtbot):
    del qapp
    places, together, most, done = [Later() for _ in range(3)], [0], [0], []

    def work():
        together[0] += 1
        most[0] = max(most[0], together[0])
        sum(range(20_000))
        together[0] -= 1

    for place in places:
        place.done.connect(lambda key, _result: done.append(key))
        place.ask("work", work)
        assert place.waits_for("work")
    qtbot.waitUntil(lambda: len(done) == len(places))
    assert most == [1]
    for place in places:
        place.close()
