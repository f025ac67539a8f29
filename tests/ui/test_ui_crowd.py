"""Crowded sheets are painted in a thread and look the same."""

import numpy as np
import pytest
from PySide6.QtWidgets import QApplication

from modalview.ui import crowd


@pytest.fixture
def crowded(pump, qtbot, monkeypatch):
    """The pump, painted as if it were crowded."""
    pump.on_move(False)
    pump.sheet.setFixedSize(pump.sheet.size())  # places still find their room elsewhere
    QApplication.processEvents()
    pump.sheet.direct = pump.sheet.grab().toImage()
    monkeypatch.setattr(crowd, "AT_ONCE", 0)
    pump.sheet.repaint()
    qtbot.waitUntil(lambda: pump.sheet.settled)
    return pump


def pixels(image):
    image = image.convertToFormat(image.Format.Format_RGB32)
    return np.frombuffer(image.constBits(), np.uint8).reshape(image.height(), -1).copy()


def test_a_crowded_sheet_looks_as_when_painted_at_once(crowded):
    assert (pixels(crowded.sheet.grab().toImage()) == pixels(crowded.sheet.direct)).all()


def test_a_frame_of_another_moment_follows(crowded, qtbot):
    before = pixels(crowded.sheet.grab().toImage())
    crowded.swing.put(2.0)
    crowded.sheet.repaint()
    assert not crowded.sheet.settled
    qtbot.waitUntil(lambda: crowded.sheet.settled)
    assert (pixels(crowded.sheet.grab().toImage()) != before).any()


def test_what_is_chosen_is_framed(crowded, qtbot):
    crowded.sheet.show_mode(None)
    crowded.sheet.repaint()
    qtbot.waitUntil(lambda: crowded.sheet.settled)
    before = pixels(crowded.sheet.grab().toImage())
    crowded.sketching.hand.choose(("base",))
    crowded.sheet.repaint()
    qtbot.waitUntil(lambda: crowded.sheet.settled)
    assert (pixels(crowded.sheet.grab().toImage()) != before).any()


def test_no_second_picture_is_painted_of_the_same_moment(crowded):
    crowded.sheet.repaint()
    assert crowded.sheet.settled


def test_another_model_does_not_show_the_picture_of_the_one_before(crowded):
    picture = crowded.sheet._crowd.picture(crowded.sheet._moment())
    assert picture is not None
    crowded.sheet.show_model(crowded.document.model, fit=True)
    assert crowded.sheet._crowd.picture(crowded.sheet._moment()) is None
