"""Threads pause while the window has something to show, but not for long, and the window never."""

from threading import Thread
from time import perf_counter

import pytest
from PySide6.QtCore import QCoreApplication

from modalview.drawing import pauses
from modalview.ui import front


@pytest.fixture(autouse=True)
def _free(qapp, qtbot):
    del qapp
    yield
    qtbot.waitUntil(front._free.is_set)


def in_thread(done):
    def work():
        front.give_way()
        done.append(perf_counter())

    thread = Thread(target=work)
    thread.start()
    return thread


def test_a_thread_pauses_until_the_window_got_round_to_its_events(qtbot, monkeypatch):
    monkeypatch.setattr(front, "PATIENCE_S", 5.0)
    shown, done = [], []
    front.window_first()
    thread = in_thread(done)
    qtbot.waitUntil(lambda: shown.append(perf_counter()) or front._free.is_set())
    thread.join(5)
    assert len(shown) > 1
    assert done[0] > shown[0]


def test_a_thread_waits_no_longer_than_its_patience(monkeypatch):
    monkeypatch.setattr(front, "PATIENCE_S", 0.001)
    done = []
    front.window_first()  # and no event loop runs
    in_thread(done).join(5)
    assert done
    assert not front._free.is_set()


def test_the_window_does_not_wait_for_itself(monkeypatch):
    monkeypatch.setattr(front, "PATIENCE_S", 5.0)
    front.window_first()
    start = perf_counter()
    front.give_way()
    assert perf_counter() - start < 1.0


def test_the_rounds_are_counted_by_one_timer():
    for _ in range(3):
        front.window_first()
    assert len(QCoreApplication.instance().findChildren(front._Rounds)) == 1


def test_a_sheet_is_laid_out_with_pauses_only_where_somebody_wants_them():
    paused = []
    with pauses.pausing(lambda: paused.append(1)):
        assert list(pauses.in_pieces(range(2 * pauses.PIECE))) == list(range(2 * pauses.PIECE))
        pauses.between_pieces()
    assert len(paused) == 3
    pauses.between_pieces()
    assert len(paused) == 3
